//! One load that stands for many: the duty under which one transformer of a fleet's load loss would burn in
//! year 1 what the fleet burns. Each unit is weighed by its load loss.

use super::Context;
use super::fleet::FleetColumns;
use super::place::{Place, resolve};
use crate::engine::economics::Assumptions;
use crate::engine::exact_sum::ExactSum;
use crate::engine::loading::Duty;
use crate::engine::working::{Formula, Recorder, Silent};

const SOURCE: &str = "own definition: one unit of rating 1 that loses in year 1 what all lose";

const PEAK: Formula = Formula {
    name: "peak load over the rating that stands for the fleet",
    symbol: "β",
    formula: "√(Σ Pk·β²/Σ Pk)",
    unit: "pu",
    source: SOURCE,
};
const LOSS_FACTOR: Formula = Formula {
    name: "loss factor that stands for the fleet",
    symbol: "LsF",
    formula: "Σ Pk·β²·LsF/Σ Pk·β²",
    unit: "pu",
    source: SOURCE,
};
const RESPONSIBILITY: Formula = Formula {
    name: "load at the system peak over own peak that stands for the fleet",
    symbol: "PRF",
    formula: "√(Σ Pk·β²·PRF²/Σ Pk·β²)",
    unit: "pu",
    source: SOURCE,
};
const PRICE: Formula = Formula {
    name: "price of a kWh of the fleet's load loss",
    symbol: "ck",
    formula: "Σ Pk·β²·LsF·ck/Σ Pk·β²·LsF",
    unit: "money/kWh",
    source: SOURCE,
};
const CO2: Formula = Formula {
    name: "CO2 of a kWh of the fleet's load loss",
    symbol: "κk",
    formula: "Σ Pk·β²·LsF·κk/Σ Pk·β²·LsF",
    unit: "kg/kWh",
    source: SOURCE,
};

/// The sums over a fleet from which its common load follows.
#[derive(Clone, Debug, Default)]
pub struct CommonLoad {
    /// Σ Pk.
    rated: ExactSum,
    /// Σ Pk·β².
    peak: ExactSum,
    /// Σ Pk·β²·LsF, and the same with price and CO2.
    lost: ExactSum,
    price: ExactSum,
    co2: ExactSum,
    /// Σ Pk·β²·PRF².
    responsibility: ExactSum,
    last: Option<Duty>,
}

impl CommonLoad {
    /// The sums over the units of a fleet that can be computed.
    pub fn of_fleet(fleet: &FleetColumns, context: &Context) -> Self {
        let mut load = Self::default();
        for i in 0..fleet.len() {
            if let Ok(place) = resolve(&mut Silent, &fleet.facts(i), context) {
                load.add(&place);
            }
        }
        load
    }

    /// Counts a place in.
    fn add(&mut self, place: &Place) {
        let (l, d) = (&place.losses, &place.duty);
        let beta = d.peak_kva / l.rated_kva;
        let at_peak = l.load_loss_w * (beta * beta);
        let lost = at_peak * d.loss_factor_pu;
        self.rated.add(l.load_loss_w);
        self.peak.add(at_peak);
        self.lost.add(lost);
        self.price.add(lost * d.load_price_per_kwh);
        self.co2.add(lost * d.load_co2_kg_per_kwh);
        self.responsibility.add(at_peak * (d.responsibility_pu * d.responsibility_pu));
        self.last = Some(d.clone());
    }

    /// The duty on a transformer of rating 1; none where nothing is lost.
    pub fn duty<R: Recorder>(&self, w: &mut R, a: &Assumptions) -> Option<Duty> {
        let (rated, peak, lost) = (self.rated.value(), self.peak.value(), self.lost.value());
        if rated <= 0.0 || lost <= 0.0 {
            return None;
        }
        Some(Duty {
            peak_kva: w.step(&PEAK, &[], (peak / rated).sqrt()),
            load_growth_pu: a.load_growth,
            load_factor_pu: None,
            loss_factor_pu: w.step(&LOSS_FACTOR, &[], lost / peak),
            energised_hours: a.energised_hours,
            auxiliary_hours: a.auxiliary_hours.unwrap_or(a.energised_hours),
            responsibility_pu: w.step(
                &RESPONSIBILITY,
                &[],
                (self.responsibility.value() / peak).sqrt(),
            ),
            load_price_per_kwh: w.step(&PRICE, &[], self.price.value() / lost),
            load_co2_kg_per_kwh: w.step(&CO2, &[], self.co2.value() / lost),
            power_factor: None,
            drop: None,
            ..self.last.clone()?
        })
    }
}
