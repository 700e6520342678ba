//! What a replacement brings in its first year of service: energy and CO2 saved, and the payback of its price.

use super::age;
use crate::engine::decision::fit::Candidate;
use crate::engine::decision::place::Place;
use crate::engine::economics::{Assumptions, payback, running_cost};
use crate::engine::loading::Duty;
use crate::engine::transformer::losses::{Energy, Losses, annual_energy};
use crate::engine::working::{Formula, Recorder};

const ENERGY: Formula = Formula {
    name: "energy lost in the year",
    symbol: "E",
    formula: "E0 + Ek + Ea",
    unit: "kWh",
    source: "methods, section 4",
};
const ENERGY_SAVED: Formula = Formula {
    name: "energy saved in the first year of service",
    symbol: "E_saved",
    formula: "E_old − E_new",
    unit: "kWh",
    source: "methods, section 7",
};
const CO2: Formula = Formula {
    name: "CO2 of the energy lost in the year",
    symbol: "M",
    formula: "(E0 + Ea)·κ0 + Ek·κk",
    unit: "kg",
    source: "methods, section 4",
};
const CO2_SAVED: Formula = Formula {
    name: "CO2 saved in a year",
    symbol: "M_saved",
    formula: "M_old − M_new",
    unit: "kg",
    source: "methods, section 7",
};
const RUN_SAVED: Formula = Formula {
    name: "running cost saved in a year",
    symbol: "saved",
    formula: "run_old − run_new",
    unit: "money",
    source: "methods, section 7",
};
/// A replacement, the unit that it replaces beside it. Here its first year of service.
#[derive(Clone, Copy, Debug)]
pub struct Replacement<'a> {
    /// The place with the old unit.
    pub place: &'a Place,
    /// The new unit.
    pub candidate: &'a Candidate,
    /// Years of delay, t.
    pub offset: usize,
    /// The basis.
    pub assumptions: &'a Assumptions,
}

impl Replacement<'_> {
    pub(super) fn duty(&self) -> &Duty {
        &self.place.duty
    }

    fn both<R: Recorder>(
        &self,
        w: &mut R,
        of: impl Fn(&mut R, &Self, &Losses) -> f64,
    ) -> (f64, f64) {
        let old = of(w, self, &self.place.losses);
        w.about(&|| "the unit there".to_owned());
        let new = of(w, self, &self.candidate.losses);
        w.about(&|| self.candidate.offer.clone());
        (old, new)
    }

    fn energy<R: Recorder>(&self, w: &mut R, losses: &Losses, k: usize) -> Energy {
        annual_energy(w, losses, self.duty(), k, self.assumptions.load_growth_years)
    }

    /// Energy saved (kWh).
    pub fn energy_saved_kwh<R: Recorder>(&self, w: &mut R) -> f64 {
        w.open();
        let (old, new) = self.both(w, |w, year, losses| {
            w.open();
            let energy = year.energy(w, losses, year.offset + 1);
            w.close(&ENERGY, &energy.inputs(), energy.total_kwh())
        });
        w.close(&ENERGY_SAVED, &[("E_old", old), ("E_new", new)], old - new)
    }

    /// CO2 saved (kg).
    pub fn co2_saved_kg<R: Recorder>(&self, w: &mut R) -> f64 {
        self.co2_saved_in(w, self.offset + 1)
    }

    /// CO2 saved in year `k` of the horizon, after the purchase (kg).
    pub(super) fn co2_saved_in<R: Recorder>(&self, w: &mut R, k: usize) -> f64 {
        w.open();
        let (old, new) = self.both(w, |w, year, losses| {
            w.open();
            let e = year.energy(w, losses, k);
            let (k0, kk) = (year.duty().no_load_co2_kg_per_kwh, year.duty().load_co2_kg_per_kwh);
            let value =
                (e.no_load_energy_kwh + e.auxiliary_energy_kwh) * k0 + e.load_energy_kwh * kk;
            let [e0, ek, ea] = e.inputs();
            w.close(&CO2, &[e0, ea, ("κ0", k0), ek, ("κk", kk)], value)
        });
        w.close(&CO2_SAVED, &[("M_old", old), ("M_new", new)], old - new)
    }

    /// Running cost saved in year `k` of the horizon, after the purchase.
    pub(super) fn saved_in<R: Recorder>(&self, w: &mut R, k: usize) -> f64 {
        let a = self.assumptions;
        w.open();
        let old_age = age(self.place.year_made, a.first_year, k);
        let old = running_cost::of_year(w, &self.place.losses, self.duty(), a, k, old_age).total();
        w.about(&|| "the unit there".to_owned());
        #[expect(clippy::cast_precision_loss, reason = "at most 200 years")]
        let new_age = (k - self.offset - 1) as f64;
        let new = &self.candidate.losses;
        let new = running_cost::of_year(w, new, self.duty(), a, k, new_age).total();
        w.about(&|| self.candidate.offer.clone());
        w.close(&RUN_SAVED, &[("run_old", old), ("run_new", new)], old - new)
    }

    /// Simple payback, undiscounted (years); none where nothing is saved.
    pub fn payback_years<R: Recorder>(&self, w: &mut R) -> Option<f64> {
        let (paid, saved) = (self.paid(w), self.saved_in(w, self.offset + 1));
        payback::simple(w, paid, saved)
    }
}
