//! The loss factors of a lot: its own, and each absent one computed from a basis with the lot's load.
//! Money per kW in the tender currency; B at the lot's rating.

use super::Rates;
use crate::engine::Refusal;
use crate::engine::columns::Lot;
use crate::engine::economics::Assumptions;
use crate::engine::economics::loss_factors::{LossFactors, of_duty};
use crate::engine::flags::Flags;
use crate::engine::loading::Duty;
use crate::engine::loading::prices::Market;
use crate::engine::working::{Formula, Recorder};

/// The basis from which a lot's absent factors are computed.
#[derive(Clone, Copy, Debug)]
pub struct BasisForFactors<'a> {
    /// The resolved basis.
    pub assumptions: &'a Assumptions,
    /// What energy costs under it.
    pub market: &'a Market,
}

/// Which factors come from the basis.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Computed {
    /// A.
    pub a: bool,
    /// B.
    pub b: bool,
    /// A_aux.
    pub aux: bool,
}

impl Computed {
    /// Which factors a lot leaves to the basis.
    pub fn by(lot: &Lot) -> Self {
        Self {
            a: lot.factor_a_per_kw.is_none(),
            b: lot.factor_b_per_kw.is_none(),
            aux: lot.factor_aux_per_kw.is_none(),
        }
    }

    /// Whether any factor comes from the basis.
    pub fn any(self) -> bool {
        self.a || self.b || self.aux
    }
}

const A: Formula = Formula {
    name: "value of a kW of no-load loss in the tender currency",
    symbol: "A",
    formula: "own·rate",
    unit: "money/kW",
    source: "the lot, else the basis at the rate stored with the tender; methods, section 8",
};
const B: Formula =
    Formula { name: "value of a kW of load loss in the tender currency", symbol: "B", ..A };
const AUX: Formula = Formula {
    name: "value of a kW of auxiliary loss in the tender currency",
    symbol: "A_aux",
    ..A
};

/// The factors of a lot in the tender currency, with what is doubtful about them.
///
/// The last three steps stated are A, B and A_aux.
///
/// # Errors
/// A factor is absent and there is no basis, no load of the lot to compute B with, or no rate of the basis
/// currency.
pub fn of_lot<R: Recorder>(
    w: &mut R,
    lot: &Lot,
    rates: &Rates,
    basis: Option<&BasisForFactors>,
) -> Result<(LossFactors, Flags), Refusal> {
    let absent = Computed::by(lot);
    let (own, rate, flags) = if absent.any() {
        let Some(basis) = basis else {
            return Err(needs_basis(absent));
        };
        let (duty, flags) = duty(lot, basis, absent)?;
        let rate = rates.of(Some(&basis.assumptions.currency))?;
        (of_duty(w, &duty, lot.rated_kva, basis.assumptions)?, rate, flags)
    } else {
        let unused =
            LossFactors { factor_a_per_kw: 0.0, factor_b_per_kw: 0.0, factor_aux_per_kw: 0.0 };
        (unused, 1.0, Flags::NONE)
    };
    let mut state = |formula, given: Option<f64>, computed: f64| {
        let (own, rate) = given.map_or((computed, rate), |given| (given, 1.0));
        w.step(formula, &[("own", own), ("rate", rate)], own * rate)
    };
    let factors = LossFactors {
        factor_a_per_kw: state(&A, lot.factor_a_per_kw, own.factor_a_per_kw),
        factor_b_per_kw: state(&B, lot.factor_b_per_kw, own.factor_b_per_kw),
        factor_aux_per_kw: state(&AUX, lot.factor_aux_per_kw, own.factor_aux_per_kw),
    };
    let values = [factors.factor_a_per_kw, factors.factor_b_per_kw, factors.factor_aux_per_kw];
    if values.iter().any(|value| !value.is_finite()) {
        let why =
            "gives loss factors beyond the range of numbers over this horizon; check the rate";
        let pct = basis.map_or(0.0, |basis| 100.0 * basis.assumptions.rate);
        return Err(Refusal::new("discount_rate_pct", pct, why));
    }
    Ok((factors, flags))
}

fn needs_basis(absent: Computed) -> Refusal {
    let quantity = match absent {
        Computed { a: true, .. } => "factor_a_per_kw",
        Computed { b: true, .. } => "factor_b_per_kw",
        _ => "factor_aux_per_kw",
    };
    Refusal::new(quantity, "", "is absent and no basis is named; give the factor or name a basis")
}

/// What the lot's place asks of a transformer. A and A_aux need no load.
fn duty(lot: &Lot, basis: &BasisForFactors, absent: Computed) -> Result<(Duty, Flags), Refusal> {
    let load = |quantity, value: Option<f64>| match value {
        Some(value) => Ok(value),
        None if absent.b => {
            let why = "is blank in the lot; give it, or factor_b_per_kw itself";
            Err(Refusal::new(quantity, "", why))
        }
        None => Ok(0.0),
    };
    let (assumptions, market) = (basis.assumptions, basis.market);
    let prices = market.constant;
    let duty = Duty {
        peak_kva: load("peak_pu", lot.peak_pu)? * lot.rated_kva,
        load_growth_pu: lot.load_growth_pct.map_or(assumptions.load_growth, |pct| pct / 100.0),
        load_factor_pu: None,
        loss_factor_pu: load("loss_factor_pu", lot.loss_factor_pu)?,
        energised_hours: assumptions.energised_hours,
        auxiliary_hours: assumptions.auxiliary_hours.unwrap_or(assumptions.energised_hours),
        power_factor: None,
        responsibility_pu: assumptions.responsibility_pu.unwrap_or(1.0),
        no_load_price_per_kwh: prices.price_per_kwh,
        load_price_per_kwh: prices.price_per_kwh,
        no_load_co2_kg_per_kwh: prices.co2_kg_per_kwh,
        drop: None,
        load_co2_kg_per_kwh: prices.co2_kg_per_kwh,
    };
    let demand = assumptions.demand_charge_per_kw_year > 0.0;
    let flags = Flags::NONE.with_if(absent.b && market.series, Flags::PRICE_NOT_WEIGHTED).with_if(
        absent.b && demand && assumptions.responsibility_pu.is_none(),
        Flags::RESPONSIBILITY_DEFAULT,
    );
    Ok((duty, flags))
}
