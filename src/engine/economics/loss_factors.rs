//! Capitalised loss factors A, B and auxiliary: what a kW of loss is worth, once, in today's money.

use super::Assumptions;
use super::discounting::{self, Sums};
use crate::engine::Refusal;
use crate::engine::columns::{CashFlow, FactorMethod};
use crate::engine::loading::Duty;
use crate::engine::loading::duty::growth;
use crate::engine::working::{Formula, Recorder};

/// The factors, money per kW of loss, once.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct LossFactors {
    /// Of no-load loss.
    pub factor_a_per_kw: f64,
    /// Of load loss at rated load.
    pub factor_b_per_kw: f64,
    /// Of auxiliary loss.
    pub factor_aux_per_kw: f64,
}

const A_PV: Formula = Formula {
    name: "value of a kW of no-load loss",
    symbol: "A",
    formula: "h·(c0·X_energy + κ0·X_carbon) + D·X_demand",
    unit: "money/kW",
    source: "annuity form of IEC TS 60076-20 (memory) with demand and carbon; methods, section 5",
};
const B_PV: Formula = Formula {
    name: "value of a kW of load loss at rated load",
    symbol: "B",
    formula: "β²·(h·LsF·(ck·Y_energy + κk·Y_carbon) + D·PRF²·Y_demand)",
    unit: "money/kW",
    source: "annuity form of IEC TS 60076-20 (memory) with demand and carbon; methods, section 5",
};
const AUX_PV: Formula = Formula {
    name: "value of a kW of auxiliary loss",
    symbol: "A_aux",
    formula: "h_aux·(c0·X_energy + κ0·X_carbon)",
    unit: "money/kW",
    source: "methods, section 5",
};
/// A sum over the horizon, for costs at year ends and in mid-year.
type Horizon = [Formula; 2];

const fn horizon(
    name: &'static str,
    [symbol, unit]: [&'static str; 2],
    formulas: [&'static str; 2],
) -> Horizon {
    let source = "methods, sections 0 and 5";
    let year_end = Formula { name, symbol, formula: formulas[0], unit, source };
    [year_end, Formula { formula: formulas[1], ..year_end }]
}

static SUM: Horizon = horizon(
    "discounted price index over the horizon",
    ["X", "years"],
    ["Σ_{k=1…N} (1+i)^−k·(1+e)^(k−1)", "Σ_{k=1…N} (1+i)^−(k−½)·(1+e)^(k−1)"],
);
static SUM_GROWN: Horizon = horizon(
    "discounted price index times squared load growth over the horizon",
    ["Y", "years"],
    [
        "Σ_{k=1…N} (1+i)^−k·(1+e)^(k−1)·(1+g)^(2·(min(k, Yg)−1))",
        "Σ_{k=1…N} (1+i)^−(k−½)·(1+e)^(k−1)·(1+g)^(2·(min(k, Yg)−1))",
    ],
);
static CARBON: Horizon = horizon(
    "discounted price of a kg of CO2 over the horizon",
    ["X", "money/kg"],
    ["p_C/1000·Σ_{k=1…N} (1+i)^−k·(1+e)^(k−1)", "p_C/1000·Σ_{k=1…N} (1+i)^−(k−½)·(1+e)^(k−1)"],
);
static CARBON_GROWN: Horizon = horizon(
    "discounted price of a kg of CO2 times squared load growth over the horizon",
    ["Y", "money/kg"],
    [
        "p_C/1000·Σ_{k=1…N} (1+i)^−k·(1+e)^(k−1)·(1+g)^(2·(min(k, Yg)−1))",
        "p_C/1000·Σ_{k=1…N} (1+i)^−(k−½)·(1+e)^(k−1)·(1+g)^(2·(min(k, Yg)−1))",
    ],
);

fn sums(a: &Assumptions, duty: &Duty, escalation: f64) -> Sums {
    let grown = |k| growth(duty.load_growth_pu, k, a.load_growth_years);
    discounting::sums(a.rate, a.cash_flow, a.years, escalation, grown)
}

/// The factors of a duty on a transformer of `rated_kva`, by the method of the basis.
///
/// # Errors
/// The levelized method without a fixed charge rate.
pub fn of_duty<R: Recorder>(
    w: &mut R,
    duty: &Duty,
    rated_kva: f64,
    a: &Assumptions,
) -> Result<LossFactors, Refusal> {
    match a.factor_method {
        FactorMethod::PresentValue => Ok(present_value(w, duty, rated_kva, a)),
        FactorMethod::Levelized => levelized(w, duty, rated_kva, a),
    }
}

/// Present value of the yearly cost of a kW of loss: so that owning cost and yearly costs agree.
pub fn present_value<R: Recorder>(
    w: &mut R,
    duty: &Duty,
    rated_kva: f64,
    a: &Assumptions,
) -> LossFactors {
    let energy = sums(a, duty, a.energy_escalation);
    let demand = sums(a, duty, a.demand_escalation);
    let carbon = {
        let s = sums(a, duty, a.carbon_escalation);
        let per_kg = a.carbon_price_per_t / 1000.0;
        Sums { plain: s.plain * per_kg, grown: s.grown * per_kg }
    };
    let (h, d) = (duty.energised_hours, a.demand_charge_per_kw_year);
    let beta = duty.peak_kva / rated_kva;
    let prf = duty.responsibility_pu;

    let state =
        |w: &mut R, of: &'static Horizon, value: f64, escalation: f64, about: &'static str| {
            sum(w, of, a, duty, escalation, value, about);
        };
    w.open();
    state(w, &SUM, energy.plain, a.energy_escalation, "energy");
    let (c0, k0) = (duty.no_load_price_per_kwh, duty.no_load_co2_kg_per_kwh);
    let factor_a = h * (c0 * energy.plain + k0 * carbon.plain) + d * demand.plain;
    if d > 0.0 {
        state(w, &SUM, demand.plain, a.demand_escalation, "demand");
    }
    if a.carbon_price_per_t > 0.0 {
        state(w, &CARBON, carbon.plain, a.carbon_escalation, "carbon");
    }
    let inputs = [
        ("h", h),
        ("c0", c0),
        ("X_energy", energy.plain),
        ("κ0", k0),
        ("X_carbon", carbon.plain),
        ("D", d),
        ("X_demand", demand.plain),
    ];
    w.close(&A_PV, &inputs, factor_a);

    w.open();
    state(w, &SUM_GROWN, energy.grown, a.energy_escalation, "energy");
    if d > 0.0 {
        state(w, &SUM_GROWN, demand.grown, a.demand_escalation, "demand");
    }
    if a.carbon_price_per_t > 0.0 {
        state(w, &CARBON_GROWN, carbon.grown, a.carbon_escalation, "carbon");
    }
    let (ck, kk) = (duty.load_price_per_kwh, duty.load_co2_kg_per_kwh);
    let factor_b = (beta * beta)
        * (h * duty.loss_factor_pu * (ck * energy.grown + kk * carbon.grown)
            + d * (prf * prf) * demand.grown);
    let inputs = [
        ("β", beta),
        ("h", h),
        ("LsF", duty.loss_factor_pu),
        ("ck", ck),
        ("Y_energy", energy.grown),
        ("κk", kk),
        ("Y_carbon", carbon.grown),
        ("D", d),
        ("PRF", prf),
        ("Y_demand", demand.grown),
    ];
    w.close(&B_PV, &inputs, factor_b);

    let aux = duty.auxiliary_hours * (c0 * energy.plain + k0 * carbon.plain);
    let inputs = [
        ("h_aux", duty.auxiliary_hours),
        ("c0", c0),
        ("X_energy", energy.plain),
        ("κ0", k0),
        ("X_carbon", carbon.plain),
    ];
    w.step(&AUX_PV, &inputs, aux);
    LossFactors { factor_a_per_kw: factor_a, factor_b_per_kw: factor_b, factor_aux_per_kw: aux }
}

/// States a sum over the horizon with all that it is made of.
fn sum<R: Recorder>(
    w: &mut R,
    of: &'static Horizon,
    a: &Assumptions,
    duty: &Duty,
    escalation: f64,
    value: f64,
    about: &'static str,
) {
    let [year_end, mid_year] = of;
    let formula = match a.cash_flow {
        CashFlow::YearEnd => year_end,
        CashFlow::MidYear => mid_year,
    };
    #[expect(clippy::cast_precision_loss, reason = "at most 200 years")]
    let inputs = [
        ("N", a.years as f64),
        ("i", a.rate),
        ("e", escalation),
        ("g", duty.load_growth_pu),
        ("Yg", a.load_growth_years as f64),
        ("p_C", a.carbon_price_per_t),
    ];
    w.step(formula, &inputs, value);
    w.about(&|| about.to_owned());
}

const CRF: Formula = Formula {
    name: "capital recovery factor of the horizon",
    symbol: "CRF",
    formula: "1/X_flat",
    unit: "1/year",
    source: "IEEE C57.120 (memory); methods, section 5",
};
const EC: Formula = Formula {
    name: "levelised energy price",
    symbol: "EC",
    formula: "CRF·c0·X_energy",
    unit: "money/kWh",
    source: "IEEE C57.120 (memory); methods, section 5",
};
const PUL2: Formula = Formula {
    name: "levelised square of the peak load",
    symbol: "PUL²",
    formula: "CRF·β²·Y_flat",
    unit: "pu²",
    source: "IEEE C57.120 (memory); methods, section 5",
};
const A_LEVEL: Formula = Formula {
    name: "value of a kW of no-load loss, levelized",
    symbol: "A",
    formula: "(LIC + h·EC)/(ET·FCR·IF)",
    unit: "money/kW",
    source: "IEEE C57.120 (memory); methods, section 5",
};
const B_LEVEL: Formula = Formula {
    name: "value of a kW of load loss at rated load, levelized",
    symbol: "B",
    formula: "(LIC·PRF² + h·EC·LsF)·PUL2/(ET·FCR·IF)",
    unit: "money/kW",
    source: "IEEE C57.120 (memory); methods, section 5",
};
const AUX_LEVEL: Formula = Formula {
    name: "value of a kW of auxiliary loss, levelized",
    symbol: "A_aux",
    formula: "h_aux·EC/(ET·FCR·IF)",
    unit: "money/kW",
    source: "IEEE C57.120 (memory); methods, section 5",
};

const DIFFERENCE: Formula = Formula {
    name: "how far the other method lies above",
    symbol: "difference",
    formula: "100·(other/own − 1)",
    unit: "%",
    source: "definition",
};

/// How far a factor by another method lies above the own one in percent; 0 where the own one is 0.
pub fn difference_pct<R: Recorder>(w: &mut R, own: f64, other: f64) -> f64 {
    let value = if own == 0.0 { 0.0 } else { 100.0 * (other / own - 1.0) };
    w.step(&DIFFERENCE, &[("other", other), ("own", own)], value)
}

/// The levelized form of IEEE C57.120 (memory): price and load levelised apart; not a present value.
///
/// # Errors
/// No fixed charge rate.
pub fn levelized<R: Recorder>(
    w: &mut R,
    duty: &Duty,
    rated_kva: f64,
    a: &Assumptions,
) -> Result<LossFactors, Refusal> {
    let Some(fcr) = a.fixed_charge_rate else {
        let why = "is required by factor_method \"levelized\"";
        return Err(Refusal::new("fixed_charge_rate_pct", "", why));
    };
    let Sums { plain, grown: flat } = sums(a, duty, 0.0);
    let crf = 1.0 / plain;
    let energy = sums(a, duty, a.energy_escalation).plain;
    let beta = duty.peak_kva / rated_kva;
    let (et, increase) = (a.transmission_efficiency_pu, a.increase_factor);
    let divisor = et * fcr * increase;
    let (h, lic, prf) = (duty.energised_hours, a.investment_per_kw_year, duty.responsibility_pu);
    let ec = crf * duty.no_load_price_per_kwh * energy;
    let pul2 = crf * flat * (beta * beta);

    let c0 = duty.no_load_price_per_kwh;
    w.open();
    sum(w, &SUM, a, duty, 0.0, plain, "flat");
    w.step(&CRF, &[("X_flat", plain)], crf);
    sum(w, &SUM, a, duty, a.energy_escalation, energy, "energy");
    w.step(&EC, &[("CRF", crf), ("c0", c0), ("X_energy", energy)], ec);
    let factor_a = (lic + h * ec) / divisor;
    let ends = [("ET", et), ("FCR", fcr), ("IF", increase)];
    let with = |own: &[(&'static str, f64)]| [own, &ends].concat();
    w.close(&A_LEVEL, &with(&[("LIC", lic), ("h", h), ("EC", ec)]), factor_a);
    w.open();
    sum(w, &SUM_GROWN, a, duty, 0.0, flat, "flat");
    w.step(&PUL2, &[("CRF", crf), ("β", beta), ("Y_flat", flat)], pul2);
    let factor_b = (lic * (prf * prf) + h * ec * duty.loss_factor_pu) * pul2 / divisor;
    let inputs = [
        ("LIC", lic),
        ("PRF", prf),
        ("h", h),
        ("EC", ec),
        ("LsF", duty.loss_factor_pu),
        ("PUL2", pul2),
    ];
    w.close(&B_LEVEL, &with(&inputs), factor_b);
    let aux = duty.auxiliary_hours * ec / divisor;
    w.step(&AUX_LEVEL, &with(&[("h_aux", duty.auxiliary_hours), ("EC", ec)]), aux);
    Ok(LossFactors { factor_a_per_kw: factor_a, factor_b_per_kw: factor_b, factor_aux_per_kw: aux })
}
