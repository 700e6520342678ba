//! What else a planner is asked of a replacement: discounted payback, rate of return, equal yearly cost, and what a
//! tonne of CO2 costs that is not emitted.

use super::first_year::Replacement;
use crate::engine::Refusal;
use crate::engine::economics::interest::capital_recovery;
use crate::engine::economics::{Assumptions, capital, discounting, irr, payback};
use crate::engine::working::{Formula, Recorder};

const SOURCE: &str = "methods, section 7";

const PAID: Formula = Formula {
    name: "what is paid for the replacement",
    symbol: "C",
    formula: "P + removal_less_scrap",
    unit: "money",
    source: SOURCE,
};
const IRR_PCT: Formula = Formula {
    name: "rate of return of the replacement in percent",
    symbol: "IRR_pct",
    formula: "100·IRR",
    unit: "%",
    source: "flows: the price now, the running cost saved at each year's end; methods, section 7",
};
const EUAC: Formula = Formula {
    name: "equal yearly cost over the horizon",
    symbol: "EUAC",
    formula: "PV·CRF",
    unit: "money",
    source: "paid at year ends; methods, section 7",
};
const AVOIDED: Formula = Formula {
    name: "CO2 avoided from the purchase to the end of the horizon, undiscounted",
    symbol: "M",
    formula: "Σ_k M_saved/1000",
    unit: "t",
    source: SOURCE,
};
const SAVED: Formula = Formula {
    name: "discounted running cost saved, the carbon price left out",
    symbol: "S",
    formula: "Σ_k saved·d_k",
    unit: "money",
    source: SOURCE,
};
const PER_TONNE: Formula = Formula {
    name: "cost of a tonne of CO2 avoided; below zero it saves money besides",
    symbol: "c_CO2",
    formula: "((K + removal_less_scrap)·(1+i)^−t − S)/M",
    unit: "money/t",
    source: SOURCE,
};

/// The equal yearly cost of a present value over the horizon.
pub fn equal_yearly_cost<R: Recorder>(w: &mut R, pv: f64, a: &Assumptions) -> f64 {
    w.open();
    #[expect(clippy::cast_precision_loss, reason = "at most 200 years")]
    let crf = capital_recovery(w, a.rate, a.years as f64);
    w.close(&EUAC, &[("PV", pv), ("CRF", crf)], pv * crf)
}

impl Replacement<'_> {
    /// Price and installation, and removal less scrap.
    pub(super) fn paid<R: Recorder>(&self, w: &mut R) -> f64 {
        w.open();
        let price = self.candidate.capital(w);
        let scrap = self.place.removal_less_scrap;
        let inputs = [("P", price), ("removal_less_scrap", scrap)];
        w.close(&PAID, &inputs, price + scrap)
    }

    /// Running cost saved in each year from the purchase to the end of the horizon.
    fn savings<R: Recorder>(&self, w: &mut R) -> Vec<f64> {
        let year = |w: &mut R, k: usize| {
            let saved = self.saved_in(w, k);
            w.about(&|| self.calendar_year(k));
            saved
        };
        (self.offset + 1..=self.assumptions.years).map(|k| year(w, k)).collect()
    }

    fn calendar_year(&self, k: usize) -> String {
        let year = i64::try_from(k).unwrap_or(0) + self.assumptions.first_year - 1;
        year.to_string()
    }

    /// Discounted payback (years); none where the horizon does not bring the price back.
    ///
    /// # Errors
    /// A rate at or below −100 %.
    pub fn discounted_payback_years<R: Recorder>(&self, w: &mut R) -> Result<Option<f64>, Refusal> {
        let (paid, savings) = (self.paid(w), self.savings(w));
        payback::discounted(w, paid, &savings, self.assumptions.rate)
    }

    /// Rate of return (percent); none where there is not exactly one.
    pub fn irr_pct<R: Recorder>(&self, w: &mut R) -> Option<f64> {
        let paid = self.paid(w);
        let flows: Vec<f64> = std::iter::once(-paid).chain(self.savings(w)).collect();
        let rate = irr::internal_rate(w, &flows).ok()?;
        Some(w.step(&IRR_PCT, &[("IRR", rate)], 100.0 * rate))
    }

    /// CO2 avoided to the end of the horizon (t), failures aside.
    pub fn co2_avoided_t<R: Recorder>(&self, w: &mut R) -> f64 {
        w.open();
        let mut sum = 0.0;
        for k in self.offset + 1..=self.assumptions.years {
            sum += self.co2_saved_in(w, k) / 1000.0;
            w.about(&|| self.calendar_year(k));
        }
        w.close(&AVOIDED, &[], sum)
    }

    /// Cost of a tonne of CO2 avoided, failures aside; none where none is avoided.
    ///
    /// # Errors
    /// The annuity rule without a life.
    pub fn cost_per_t_co2<R: Recorder>(&self, w: &mut R) -> Result<Option<f64>, Refusal> {
        let avoided = self.co2_avoided_t(w);
        if avoided <= 0.0 {
            return Ok(None);
        }
        let (a, t) = (self.assumptions, self.offset);
        let price = self.candidate.capital(w);
        let charged = capital::charged(w, price, self.candidate.life_years, t, a)?;
        let without = Assumptions { carbon_price_per_t: 0.0, ..a.clone() };
        let free = Replacement { assumptions: &without, ..*self };
        w.open();
        let mut saved = 0.0;
        for k in t + 1..=a.years {
            saved += discounting::running(a.rate, k, a.cash_flow) * free.saved_in(w, k);
            w.about(&|| self.calendar_year(k));
        }
        w.close(&SAVED, &[], saved);
        let scrap = self.place.removal_less_scrap;
        let value = ((charged + scrap) * discounting::payment(a.rate, t) - saved) / avoided;
        #[expect(clippy::cast_precision_loss, reason = "at most 200 years")]
        let inputs = [
            ("K", charged),
            ("removal_less_scrap", scrap),
            ("i", a.rate),
            ("t", t as f64),
            ("S", saved),
            ("M", avoided),
        ];
        Ok(Some(w.step(&PER_TONNE, &inputs, value)))
    }
}
