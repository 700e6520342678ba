//! How an offer or a bid fits a place: terminals, the unit it would run beside, the busbar behind it, its load, the law.

mod asked;
mod row;
mod workings;

pub use asked::FitAsked;
pub use row::{BesideRow, FitRow};

use super::Question;
use super::thermal::{Body, HeatRow};
use crate::engine::Refusal;
use crate::engine::decision::Place;
use crate::engine::decision::fit::{
    highest_peak, holds_voltage, within_limit, year_of_highest_peak,
};
use crate::engine::decision::place::power_factor;
use crate::engine::decision::side_by_side::{
    IMPEDANCE_PCT, RATIO_PCT, Rated, Sharing, VOLTAGE_PCT, circulating_pu, difference_pct,
    fault_level, groups_agree, load_together, ratio_difference_pct, sharing, within,
};
use crate::engine::law::{self, Subject};
use crate::engine::loading::duty::{loading_pu, peak_of_year};
use crate::engine::transformer::circuit::PowerFactor;
use crate::engine::transformer::fault::fault_current;
use crate::engine::transformer::losses::quoted;
use crate::engine::transformer::nameplate::Phases;
use crate::engine::transformer::regulation::exact_pct;
use crate::engine::working::{Recorder, Silent};
use crate::study::law::VerdictRow;

/// An offer beside the place that it is fitted to.
pub(super) struct Fit<'a> {
    question: &'a Question<'a>,
    asked: &'a FitAsked,
    place: Option<Place>,
}

impl Question<'_> {
    /// What is asked of the fit; none where nothing is.
    pub(super) fn fitted(&self) -> Option<Fit<'_>> {
        let asked = self.fit?;
        Some(Fit { question: self, asked, place: self.place(&mut Silent).ok() })
    }
}

impl Fit<'_> {
    fn own(&self) -> Rated<'_> {
        Rated::of(&self.asked.proposed, Some(self.asked.losses.load_loss_w))
    }

    fn there(&self) -> Rated<'_> {
        Rated::of(self.question.unit, None)
    }

    /// The unit beside, with its load loss at its rating where its nameplate states it.
    fn beside(&self) -> Option<Rated<'_>> {
        let unit = self.asked.beside.as_ref()?;
        let (p0, pk, total) = (unit.no_load_loss_w, unit.load_loss_w, unit.total_loss_w);
        let base = unit.loss_base_kva;
        let losses = quoted(&mut Silent, unit.rated_kva, base, p0.or(Some(0.0)), pk, total, None);
        // From a total alone the load loss follows only where the no-load loss is known.
        let known = pk.is_some() || p0.is_some();
        Some(Rated::of(unit, losses.ok().filter(|_| known).map(|losses| losses.load_loss_w)))
    }

    fn pf(&self) -> Option<PowerFactor> {
        PowerFactor::lagging(power_factor(&mut Silent, &self.question.facts())).ok()
    }

    fn voltage_pct<R: Recorder>(
        &self,
        w: &mut R,
        side: impl Fn(&Rated) -> Option<f64>,
    ) -> Option<f64> {
        Some(difference_pct(w, side(&self.own())?, side(&self.there())?))
    }

    fn peak_pu<R: Recorder>(&self, w: &mut R) -> Option<f64> {
        Some(self.place.as_ref()?.duty.peak_pu(w, self.asked.losses.rated_kva))
    }

    /// The highest peak of the horizon: of its last year where the load grows, else of its first.
    fn highest_peak_pu<R: Recorder>(&self, w: &mut R) -> Option<f64> {
        let a = &self.question.context.assumptions;
        let duty = &self.place.as_ref()?.duty;
        let peak_kva = peak_of_year(w, duty, year_of_highest_peak(duty, 0, a), a.load_growth_years);
        Some(loading_pu(w, peak_kva, self.asked.losses.rated_kva))
    }

    fn holds_voltage(&self) -> Option<bool> {
        let a = &self.question.context.assumptions;
        holds_voltage(&self.asked.losses, &self.place.as_ref()?.duty, 0, a)
    }

    fn within_loading_limit(&self) -> Option<bool> {
        let a = &self.question.context.assumptions;
        let peak_kva = highest_peak(&self.place.as_ref()?.duty, 0, a);
        Some(within_limit(peak_kva, self.asked.losses.rated_kva, a.loading_limit_pu?))
    }

    fn regulation_pct<R: Recorder>(&self, w: &mut R) -> Result<Option<f64>, Refusal> {
        let (Some(peak), Some(pf)) = (self.peak_pu(w), self.pf()) else { return Ok(None) };
        let circuit = self.own().circuit(w)?;
        Ok(circuit.map(|circuit| exact_pct(w, &circuit, peak, pf)))
    }

    fn fault_level_mva<R: Recorder>(&self, w: &mut R) -> Result<Option<f64>, Refusal> {
        let (own, beside) = (self.own(), self.beside());
        let bank: Vec<&Rated> = std::iter::once(&own).chain(&beside).collect();
        fault_level(w, &bank, self.asked.network_mva)
    }

    fn fault_current_a<R: Recorder>(&self, w: &mut R) -> Result<Option<f64>, Refusal> {
        let Some(level) = self.fault_level_mva(w)? else { return Ok(None) };
        let (own, there) = (self.own(), self.there());
        let Some(kv) = own.lv_kv.or(there.lv_kv) else { return Ok(None) };
        let phases = Phases::of(own.phases.or(there.phases).unwrap_or(3))?;
        fault_current(w, phases, level, kv).map(Some)
    }

    /// Peaks of year 1 of both places; that of this one alone where the other is not known (kVA).
    fn load_kva<R: Recorder>(&self, w: &mut R) -> Option<f64> {
        let beside = self.asked.beside.as_ref()?.peak_kva.unwrap_or(0.0);
        let load = load_together(w, self.place.as_ref()?.duty.peak_kva, beside);
        (load > 0.0).then_some(load)
    }

    fn sharing<R: Recorder>(&self, w: &mut R) -> Result<Option<Sharing>, Refusal> {
        let (Some(beside), Some(load), Some(pf)) = (self.beside(), self.load_kva(w), self.pf())
        else {
            return Ok(None);
        };
        sharing(w, [&self.own(), &beside], load, pf)
    }

    fn circulating_pu<R: Recorder>(&self, w: &mut R) -> Result<Option<f64>, Refusal> {
        let Some(beside) = self.beside() else { return Ok(None) };
        circulating_pu(w, [&self.own(), &beside])
    }

    fn impedance_pct<R: Recorder>(&self, w: &mut R) -> Option<f64> {
        let (own, beside) = (self.own(), self.beside()?);
        Some(difference_pct(w, own.impedance_pct?, beside.impedance_pct?))
    }

    /// What the law says of it, bought in the first year.
    fn verdict(&self) -> Result<Option<(law::Verdict, chrono::NaiveDate)>, Refusal> {
        let a = &self.question.context.assumptions;
        let (Some(key), Some(on)) = (&a.law, law::at_start_of(a.first_year)) else {
            return Ok(None);
        };
        let (proposed, there) = (&self.asked.proposed, self.question.unit);
        let subject = Subject {
            phases: proposed.phases.or(there.phases),
            hv_kv: proposed.hv_kv.or(there.hv_kv),
            lv_kv: proposed.lv_kv.or(there.lv_kv),
            hv_um_kv: there.hv_um_kv,
            frequency_hz: there.frequency_hz,
            mounting: there.mounting,
            tap_changer: there.tap_changer,
            // It takes the place of a unit of the same kind.
            replaces_like: true,
            ..Subject::of_unit(proposed, &self.asked.losses, a.stray_share_pu)
        };
        Ok(Some((law::check(key, &subject, on)?, on)))
    }

    fn body(&self) -> Option<Body<'_>> {
        let proposed = &self.asked.proposed;
        Body::of(proposed, &self.asked.losses, Some(&proposed.unit)).ok()
    }

    fn heat(&self) -> Option<HeatRow> {
        Some(self.question.heat_of_body(self.place.as_ref()?, &self.body()?))
    }

    fn beside_row(&self) -> Result<Option<BesideRow>, Refusal> {
        let (Some(unit), Some(beside)) = (&self.asked.beside, self.beside()) else {
            return Ok(None);
        };
        let w = &mut Silent;
        let own = self.own();
        let (ratio, impedance) = (ratio_difference_pct(w, &own, &beside), self.impedance_pct(w));
        let sharing = self.sharing(w)?;
        Ok(Some(BesideRow {
            unit: unit.unit.clone(),
            ratio_difference_pct: ratio,
            ratios_agree: ratio.map(|pct| within(pct, RATIO_PCT)),
            vector_groups_agree: groups_agree(&own, &beside),
            impedance_difference_pct: impedance,
            impedances_agree: impedance.map(|pct| within(pct, IMPEDANCE_PCT)),
            load_kva: self.load_kva(w),
            loading_pu: sharing.map(|sharing| sharing.loading_pu[0]),
            beside_loading_pu: sharing.map(|sharing| sharing.loading_pu[1]),
            bank_limit_kva: sharing.map(|sharing| sharing.bank_limit_kva),
            circulating_pu: self.circulating_pu(w)?,
        }))
    }

    /// The fit as it is written in JSON.
    ///
    /// # Errors
    /// A circuit that contradicts itself; fault levels that are not above zero.
    pub(super) fn row(&self) -> Result<FitRow, Refusal> {
        let w = &mut Silent;
        let (own, there) = (self.own(), self.there());
        let (hv, lv) =
            (self.voltage_pct(w, |side| side.hv_kv), self.voltage_pct(w, |side| side.lv_kv));
        let agrees = |pct: Option<f64>| pct.map(|pct| within(pct, VOLTAGE_PCT));
        let both = |a: Option<bool>, b: Option<bool>| match (a, b) {
            (Some(false), _) | (_, Some(false)) => Some(false),
            (Some(true), Some(true)) => Some(true),
            _ => None,
        };
        let level = self.fault_level_mva(w)?;
        let limit = self.asked.fault_limit_mva;
        let beside = self.beside_row()?;
        let verdict = self.verdict()?;
        let mut row = FitRow {
            proposed: self.asked.proposed.unit.clone(),
            fits: true,
            misses: Vec::new(),
            unknown: Vec::new(),
            phases_agree: own.phases.zip(there.phases).map(|(own, there)| own == there),
            hv_difference_pct: hv,
            lv_difference_pct: lv,
            voltages_agree: both(agrees(hv), agrees(lv)),
            vector_groups_agree: groups_agree(&own, &there),
            peak_pu: self.peak_pu(w),
            highest_peak_pu: self.highest_peak_pu(w),
            loading_limit_pu: self.question.context.assumptions.loading_limit_pu,
            within_loading_limit: self.within_loading_limit(),
            holds_voltage: self.holds_voltage(),
            regulation_pct: self.regulation_pct(w)?,
            fault_level_mva: level,
            fault_current_a: self.fault_current_a(w)?,
            fault_limit_mva: limit,
            within_fault_limit: level.zip(limit).map(|(level, limit)| level <= limit),
            beside,
            thermal: self.heat(),
            law: verdict.map(|(verdict, on)| VerdictRow::of(&verdict, on)),
            notes: self.notes(),
        };
        row.notes.extend(self.told_apart(row.law.as_ref()));
        Self::judge(&mut row);
        Ok(row)
    }

    /// Where the ranking, which holds an offer to the law by its catalogue alone, finds otherwise than here, where the
    /// place counts too (pole mounting, tap changer, highest voltage).
    fn told_apart(&self, here: Option<&VerdictRow>) -> Option<String> {
        let mut candidates = self.question.context.candidates.iter();
        let ranked = candidates.find(|c| c.offer == self.asked.proposed.unit)?.lawful_at(0);
        let found = if ranked { "meets" } else { "misses" };
        (here?.meets? != ranked).then(|| {
            format!("the ranking holds the offer alone to the law, where it {found} it; what the place adds counts here")
        })
    }

    /// Names what does not fit and what could not be looked at.
    fn judge(row: &mut FitRow) {
        let mut checks = vec![
            ("phases", row.phases_agree),
            ("voltages", row.voltages_agree),
            ("vector_group", row.vector_groups_agree),
        ];
        if row.loading_limit_pu.is_some() {
            checks.push(("loading_limit_pu", row.within_loading_limit));
        }
        if row.holds_voltage.is_some() {
            checks.push(("voltage_drop", row.holds_voltage));
        }
        if row.fault_limit_mva.is_some() {
            checks.push(("fault_limit_mva", row.within_fault_limit));
        }
        if let Some(beside) = &row.beside {
            checks.extend([
                ("ratio_beside", beside.ratios_agree),
                ("vector_group_beside", beside.vector_groups_agree),
                ("impedance_beside", beside.impedances_agree),
            ]);
        }
        if let Some(law) = &row.law {
            checks.push(("law", law.meets));
        }
        let named = |wanted: Option<bool>| {
            checks.iter().filter(|(_, got)| *got == wanted).map(|(name, _)| *name).collect()
        };
        (row.misses, row.unknown) = (named(Some(false)), named(None));
        row.fits = row.misses.is_empty();
    }

    fn notes(&self) -> Vec<String> {
        let mut notes = vec![format!(
            "voltages agree within {VOLTAGE_PCT} %; vector groups where the clock numbers are equal, differ by 4 or 8, or are both odd"
        )];
        let network = match self.asked.network_mva {
            Some(network) => format!("behind {network} MVA of network"),
            None => "with a network without impedance".to_owned(),
        };
        if let Some(beside) = &self.asked.beside {
            notes.push(format!(
                "in parallel: ratios within {RATIO_PCT} %, impedances within {IMPEDANCE_PCT} % of the other's (common practice, no source); fault level of both together, {network}"
            ));
            if beside.peak_kva.is_none() {
                notes.push(format!(
                    "the peak of {} is not known: the load shared is that of this place alone",
                    beside.unit
                ));
            }
        } else {
            notes.push(format!("fault level of it alone, {network}"));
        }
        notes.push("screening: protection settings, switchgear ratings and paralleling follow local codes, the manufacturer's instructions and licensed engineers".to_owned());
        notes
    }
}
