//! The figures of a fit opened.

use super::Fit;
use crate::engine::Refusal;
use crate::engine::decision::side_by_side::ratio_difference_pct;
use crate::engine::working::Working;
use crate::study::law as rows;
use crate::study::unit::workings::of_heat;

impl Fit<'_> {
    /// States a figure of the fit.
    pub(in crate::study::unit) fn state(
        &self,
        w: &mut Working,
        place: &[&str],
    ) -> Result<(), Refusal> {
        match place {
            ["hv_difference_pct"] => {
                self.voltage_pct(w, |side| side.hv_kv);
            }
            ["lv_difference_pct"] => {
                self.voltage_pct(w, |side| side.lv_kv);
            }
            ["peak_pu"] => {
                self.peak_pu(w);
            }
            ["highest_peak_pu"] => {
                self.highest_peak_pu(w);
            }
            ["regulation_pct"] => {
                self.regulation_pct(w)?;
            }
            ["fault_level_mva"] => {
                self.fault_level_mva(w)?;
            }
            ["fault_current_a"] => {
                self.fault_current_a(w)?;
            }
            ["law", "limits", n, side] => {
                if let Some((verdict, _)) = self.verdict()? {
                    rows::state(w, verdict, n, side);
                }
            }
            ["thermal", quantity] => {
                if let (Some(place), Some(body)) = (&self.place, self.body()) {
                    let mut all = Working::default();
                    self.question.state_body(&mut all, place, &body, quantity)?;
                    w.append(of_heat(all, quantity));
                }
            }
            ["beside", quantity] => self.state_beside(w, quantity)?,
            _ => {}
        }
        Ok(())
    }

    fn state_beside(&self, w: &mut Working, quantity: &str) -> Result<(), Refusal> {
        match quantity {
            "ratio_difference_pct" => {
                if let Some(beside) = self.beside() {
                    ratio_difference_pct(w, &self.own(), &beside);
                }
            }
            "impedance_difference_pct" => {
                self.impedance_pct(w);
            }
            "circulating_pu" => {
                self.circulating_pu(w)?;
            }
            "load_kva" => {
                self.load_kva(w);
            }
            "bank_limit_kva" => {
                self.sharing(w)?;
            }
            _ => {
                let mut all = Working::default();
                self.sharing(&mut all)?;
                let one = if quantity == "loading_pu" { "1" } else { "2" };
                let (loadings, before): (Vec<_>, Vec<_>) =
                    all.into_steps().into_iter().partition(|step| step.formula.symbol == "loading");
                w.append(before.into_iter().filter(|step| step.formula.symbol != "S_max"));
                w.append(loadings.into_iter().filter(|step| step.of.ends_with(one)));
            }
        }
        Ok(())
    }
}
