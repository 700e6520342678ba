//! What a transformer costs to run in a year: energy, demand and carbon of its losses, and its upkeep.

use super::Assumptions;
use crate::engine::loading::Duty;
use crate::engine::loading::duty::peak_of_year;
use crate::engine::transformer::losses::{Energy, Losses, annual_energy};
use crate::engine::transformer::voltage_drop::{self, Supply};
use crate::engine::working::{Formula, Recorder};

/// Cost of a year, by what causes it.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct YearCost {
    /// Of the iron.
    pub no_load: f64,
    /// Of the copper.
    pub load: f64,
    /// Of fans and pumps.
    pub auxiliary: f64,
    /// Upkeep.
    pub upkeep: f64,
}

impl YearCost {
    /// Everything, run_k.
    pub fn total(&self) -> f64 {
        self.loss_cost() + self.upkeep
    }
    /// Everything but upkeep.
    pub fn loss_cost(&self) -> f64 {
        self.no_load + self.load + self.auxiliary
    }
}

const NO_LOAD: Formula = Formula {
    name: "cost of the no-load loss in year k",
    symbol: "iron",
    formula: "E0·c0·idx + D·P0/1000·idxD + p_C·E0·κ0/1000",
    unit: "money",
    source: "methods, section 4",
};
const NO_LOAD_AT_VOLTAGE: Formula = Formula {
    name: "cost of the no-load loss in year k at the operating voltage",
    symbol: "iron",
    formula: "E0·c0·idx + D·P0·v_hv²/1000·idxD + p_C·E0·κ0/1000",
    unit: "money",
    source: "methods, sections 2 and 4 (drop voltage model)",
};
const LOAD_AT_CURRENT: Formula = Formula {
    name: "cost of the load loss in year k",
    symbol: "copper",
    formula: "Ek·ck·idx + D·Pk·i_sys²/1000·idxD + p_C·Ek·κk/1000",
    unit: "money",
    source: "methods, sections 2 and 4 (drop voltage model; i_sys at PRF·S_k)",
};
const LOAD: Formula = Formula {
    name: "cost of the load loss in year k",
    symbol: "copper",
    formula: "Ek·ck·idx + D·Pk·(S_k/S_r)²·PRF²/1000·idxD + p_C·Ek·κk/1000",
    unit: "money",
    source: "methods, section 4",
};
const AUXILIARY: Formula = Formula {
    name: "cost of fans and pumps in year k",
    symbol: "aux",
    formula: "Ea·c0·idx + p_C·Ea·κ0/1000",
    unit: "money",
    source: "methods, section 4",
};
const UPKEEP: Formula = Formula {
    name: "upkeep of a unit of age a",
    symbol: "upkeep",
    formula: "u·(1+r)^a",
    unit: "money",
    source: "methods, section 4",
};
const YEAR: Formula = Formula {
    name: "running cost of year k",
    symbol: "run",
    formula: "iron + copper + aux + upkeep",
    unit: "money",
    source: "methods, section 4",
};

const LOSS_COST: Formula = Formula {
    name: "cost of the losses of year k",
    symbol: "loss_cost",
    formula: "iron + copper + aux",
    unit: "money",
    source: "methods, section 4",
};

/// Cost of the losses of a year, stated from its parts.
pub fn loss_cost<R: Recorder>(w: &mut R, year: &YearCost) -> f64 {
    let inputs = [("iron", year.no_load), ("copper", year.load), ("aux", year.auxiliary)];
    w.step(&LOSS_COST, &inputs, year.loss_cost())
}

/// Upkeep of a unit of `age` years.
pub fn upkeep<R: Recorder>(w: &mut R, a: &Assumptions, age: f64) -> f64 {
    let value = a.upkeep_per_year * (1.0 + a.upkeep_age).powf(age);
    w.step(&UPKEEP, &[("u", a.upkeep_per_year), ("r", a.upkeep_age), ("a", age)], value)
}

/// Price indices of a year with the prices that a duty does not hold.
struct Prices {
    /// Of energy.
    idx: f64,
    /// Of demand.
    idx_d: f64,
    /// Price of a tonne of CO2 in the year.
    p_c: f64,
    /// Price of a kW at the system peak in year 1.
    demand: f64,
}

/// Cost of the no-load loss.
fn iron<R: Recorder>(
    w: &mut R,
    losses: &Losses,
    duty: &Duty,
    energy: &Energy,
    prices: &Prices,
) -> f64 {
    let Prices { idx, idx_d, p_c, demand } = *prices;
    let of = |demand_loss_w: f64| {
        energy.no_load_energy_kwh * duty.no_load_price_per_kwh * idx
            + demand * demand_loss_w / 1000.0 * idx_d
            + p_c * energy.no_load_energy_kwh * duty.no_load_co2_kg_per_kwh / 1000.0
    };
    let p0 = losses.no_load_loss_w;
    let inputs = [
        ("E0", energy.no_load_energy_kwh),
        ("c0", duty.no_load_price_per_kwh),
        ("idx", idx),
        ("D", demand),
        ("P0", p0),
        ("idxD", idx_d),
        ("p_C", p_c),
        ("κ0", duty.no_load_co2_kg_per_kwh),
        ("v_hv", duty.drop.as_ref().map_or(1.0, |drop| drop.v_hv_pu)),
    ];
    match &duty.drop {
        None => w.step(&NO_LOAD, &inputs, of(p0)),
        Some(drop) => w.step(&NO_LOAD_AT_VOLTAGE, &inputs, of(p0 * drop.v_hv_pu * drop.v_hv_pu)),
    }
}

/// Cost of the load loss in a year of a peak (kVA); closes the step that is open.
fn copper<R: Recorder>(
    w: &mut R,
    losses: &Losses,
    duty: &Duty,
    energy: &Energy,
    prices: &Prices,
    peak_kva: f64,
) -> f64 {
    let Prices { idx, idx_d, p_c, demand } = *prices;
    let of = |demand: f64| {
        energy.load_energy_kwh * duty.load_price_per_kwh * idx
            + demand / 1000.0 * idx_d
            + p_c * energy.load_energy_kwh * duty.load_co2_kg_per_kwh / 1000.0
    };
    let (pk, prf) = (losses.load_loss_w, duty.responsibility_pu);
    let beta = peak_kva / losses.rated_kva;
    let current = duty.drop.as_ref().map(|drop| {
        let supply = Supply::of(losses, drop);
        voltage_drop::current(w, &supply, prf * beta).unwrap_or(f64::INFINITY)
    });
    let inputs = [
        ("Ek", energy.load_energy_kwh),
        ("ck", duty.load_price_per_kwh),
        ("idx", idx),
        ("D", demand),
        ("Pk", pk),
        ("S_k", peak_kva),
        ("S_r", losses.rated_kva),
        ("PRF", prf),
        ("i_sys", current.unwrap_or(0.0)),
        ("idxD", idx_d),
        ("p_C", p_c),
        ("κk", duty.load_co2_kg_per_kwh),
    ];
    match current {
        None => w.close(&LOAD, &inputs, of(demand * pk * (beta * beta) * (prf * prf))),
        Some(i) => w.close(&LOAD_AT_CURRENT, &inputs, of(demand * pk * (i * i))),
    }
}

/// Running cost of year `k` of a transformer under a duty, `age` years old at the start of the year.
pub fn of_year<R: Recorder>(
    w: &mut R,
    losses: &Losses,
    duty: &Duty,
    a: &Assumptions,
    k: usize,
    age: f64,
) -> YearCost {
    w.open();
    let idx = Assumptions::index(a.energy_escalation, k);
    let idx_d = Assumptions::index(a.demand_escalation, k);
    let p_c = a.carbon_price_per_t * Assumptions::index(a.carbon_escalation, k);
    let demand = a.demand_charge_per_kw_year;
    let energy = annual_energy(w, losses, duty, k, a.load_growth_years);
    let prices = Prices { idx, idx_d, p_c, demand };
    let no_load = iron(w, losses, duty, &energy, &prices);
    w.open();
    let peak = peak_of_year(w, duty, k, a.load_growth_years);
    let load = copper(w, losses, duty, &energy, &prices, peak);
    let auxiliary = energy.auxiliary_energy_kwh
        * (duty.no_load_price_per_kwh * idx + p_c * duty.no_load_co2_kg_per_kwh / 1000.0);
    if losses.auxiliary_loss_w > 0.0 {
        let inputs = [
            ("Ea", energy.auxiliary_energy_kwh),
            ("c0", duty.no_load_price_per_kwh),
            ("idx", idx),
            ("p_C", p_c),
            ("κ0", duty.no_load_co2_kg_per_kwh),
        ];
        w.step(&AUXILIARY, &inputs, auxiliary);
    }
    let upkeep = if a.upkeep_per_year > 0.0 { upkeep(w, a, age) } else { 0.0 };
    let cost = YearCost { no_load, load, auxiliary, upkeep };
    let inputs = [("iron", no_load), ("copper", load), ("aux", auxiliary), ("upkeep", upkeep)];
    w.close(&YEAR, &inputs, cost.total());
    cost
}
