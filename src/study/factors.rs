//! The capitalised loss factors A, B and auxiliary of a basis, for a stated load or for the fleet's own.

use serde::Serialize;

use crate::engine::Refusal;
use crate::engine::columns::{Lot, Unit};
use crate::engine::decision::Context;
use crate::engine::decision::place::resolve;
use crate::engine::economics::loss_factors::{LossFactors, levelized, of_duty, present_value};
use crate::engine::loading::{Duty, factors};
use crate::engine::working::{Recorder, Silent, Working};
use crate::study::explain::StepRow;
use crate::study::{Desk, StudyError};

/// The load for which factors are wanted. What is not stated is the fleet's own.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct LoadAsked {
    /// Peak load of year 1 over the rating.
    pub peak_pu: Option<f64>,
    /// Loss factor.
    pub loss_factor_pu: Option<f64>,
    /// Load factor, where the loss factor is not known.
    pub load_factor_pu: Option<f64>,
    /// Profile, by name.
    pub profile: Option<String>,
    /// Yearly growth.
    pub load_growth_pct: Option<f64>,
}

impl LoadAsked {
    /// Holds what is stated against the facts of the columns of a lot, which ask the same.
    fn check(&self) -> Result<(), Refusal> {
        let stated = [
            ("peak_pu", self.peak_pu),
            ("loss_factor_pu", self.loss_factor_pu),
            ("load_factor_pu", self.load_factor_pu),
            ("load_growth_pct", self.load_growth_pct),
        ];
        for (name, value) in stated {
            let column = Lot::COLUMNS.iter().chain(Unit::COLUMNS).find(|c| c.name == name);
            if let (Some(column), Some(value)) = (column, value) {
                column
                    .read(&value.to_string())
                    .map_err(|why| Refusal::new(column.name, value, why))?;
            }
        }
        Ok(())
    }
}

/// The result.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result; `figures` says what they are")]
pub struct Factors {
    pub basis: String,
    pub currency: String,
    pub method: &'static str,
    pub factor_a_per_kw: f64,
    pub factor_b_per_kw: f64,
    pub factor_aux_per_kw: f64,
    /// The load that the factors are for.
    pub peak_pu: f64,
    pub loss_factor_pu: f64,
    pub load_growth_pct: f64,
    /// Where the load comes from.
    pub load: String,
    /// The factors by the other method, where the basis allows it: how much the method matters.
    pub other_method: Option<OtherMethod>,
    pub working: Vec<StepRow>,
}

/// Factors by the method that the basis does not use.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result; `figures` says what they are")]
pub struct OtherMethod {
    pub method: &'static str,
    pub factor_a_per_kw: f64,
    pub factor_b_per_kw: f64,
    pub factor_aux_per_kw: f64,
    pub factor_a_difference_pct: f64,
    pub factor_b_difference_pct: f64,
}

/// The duty of a load on a transformer of rating 1, from the basis alone.
///
/// # Errors
/// Load and loss factor that cannot belong together, a profile that is not in the book, a load of which
/// nothing is said.
pub fn duty<R: Recorder>(
    w: &mut R,
    desk: &Desk,
    context: &Context,
    asked: &LoadAsked,
) -> Result<Duty, StudyError> {
    let a = &context.assumptions;
    asked.check()?;
    let profile = match &asked.profile {
        None => None,
        Some(name) => {
            Some(desk.profiles.iter().position(|p| p.profile == *name).ok_or_else(|| {
                let known: Vec<&str> = desk.profiles.iter().map(|p| p.profile.as_str()).collect();
                StudyError::unknown("profile", name, "the book", known)
            })?)
        }
    };
    if let (Some(lf), Some(lsf)) = (asked.load_factor_pu, asked.loss_factor_pu) {
        factors::check(lf, lsf)?;
    }
    let load_factor_pu = profile.map(|p| context.ratios[p].load_factor_pu).or(asked.load_factor_pu);
    let loss_factor_pu = match (profile, asked.loss_factor_pu, asked.load_factor_pu) {
        (Some(p), ..) => context.ratios[p].loss_factor_pu,
        (None, Some(lsf), _) => lsf,
        (None, None, Some(lf)) => factors::loss_factor(w, lf, a.loss_factor_weight_pu),
        (None, None, None) => {
            let why = "say how the load runs: a profile, a loss factor or a load factor";
            return Err(Refusal::new("loss_factor_pu", "", why).into());
        }
    };
    let constant = context.market.constant;
    let load = profile.map_or_else(|| Ok(constant), |p| context.market.profiles[p].clone())?;
    Ok(Duty {
        peak_kva: asked.peak_pu.unwrap_or(1.0),
        load_growth_pu: asked.load_growth_pct.map_or(a.load_growth, |pct| pct / 100.0),
        load_factor_pu,
        loss_factor_pu,
        energised_hours: a.energised_hours,
        auxiliary_hours: a.auxiliary_hours.unwrap_or(a.energised_hours),
        power_factor: None,
        responsibility_pu: load.responsibility_pu.or(a.responsibility_pu).unwrap_or(1.0),
        no_load_price_per_kwh: constant.price_per_kwh,
        load_price_per_kwh: load.price_per_kwh,
        no_load_co2_kg_per_kwh: constant.co2_kg_per_kwh,
        load_co2_kg_per_kwh: load.co2_kg_per_kwh,
    })
}

/// The fleet's own load, each unit weighed by its load loss: the duty under which one transformer of the
/// fleet's load loss would burn in year 1 what the fleet burns.
fn fleet_duty(desk: &Desk, context: &Context) -> Option<Duty> {
    let a = &context.assumptions;
    // Σ Pk, Σ Pk·β², and Σ Pk·β²·LsF with price, CO2 and responsibility under the same weight.
    let (mut rated, mut peak) = (0.0, 0.0);
    let (mut energy, mut price, mut co2, mut responsibility) = (0.0, 0.0, 0.0, 0.0);
    let mut any = None;
    for i in 0..desk.fleet.len() {
        let Ok(place) = resolve(&mut Silent, &desk.fleet.facts(i), context) else { continue };
        let (l, d) = (&place.losses, &place.duty);
        let beta = d.peak_kva / l.rated_kva;
        let at_peak = l.load_loss_w * (beta * beta);
        let lost = at_peak * d.loss_factor_pu;
        rated += l.load_loss_w;
        peak += at_peak;
        energy += lost;
        price += lost * d.load_price_per_kwh;
        co2 += lost * d.load_co2_kg_per_kwh;
        responsibility += at_peak * (d.responsibility_pu * d.responsibility_pu);
        any = Some(*d);
    }
    if rated <= 0.0 || energy <= 0.0 {
        return None;
    }
    Some(Duty {
        peak_kva: (peak / rated).sqrt(),
        load_growth_pu: a.load_growth,
        load_factor_pu: None,
        loss_factor_pu: energy / peak,
        energised_hours: a.energised_hours,
        auxiliary_hours: a.auxiliary_hours.unwrap_or(a.energised_hours),
        responsibility_pu: (responsibility / peak).sqrt(),
        load_price_per_kwh: price / energy,
        load_co2_kg_per_kwh: co2 / energy,
        ..any?
    })
}

/// The factors of a basis for a stated load, or for the fleet's own load where nothing is stated.
///
/// # Errors
/// What the engine refuses of the basis or of the load.
pub fn factors(desk: &Desk, asked: &LoadAsked) -> Result<Factors, StudyError> {
    let context = desk.context()?;
    let a = &context.assumptions;
    let mut working = Working::default();
    let stated = *asked != LoadAsked::default();
    let (duty, load) = if stated {
        (duty(&mut working, desk, &context, asked)?, "as stated".to_owned())
    } else if let Some(duty) = fleet_duty(desk, &context) {
        (duty, "the fleet's own, each unit weighed by its load loss".to_owned())
    } else {
        let why =
            "no unit of the fleet can be computed; state a load (profile, loss or load factor)";
        return Err(Refusal::new("loss_factor_pu", "", why).into());
    };
    let factors = of_duty(&mut working, &duty, 1.0, a)?;
    let method = a.factor_method;
    let other = match method {
        crate::engine::columns::FactorMethod::PresentValue => {
            levelized(&mut Silent, &duty, 1.0, a).ok().map(|f| (f, "levelized"))
        }
        crate::engine::columns::FactorMethod::Levelized => {
            Some((present_value(&mut Silent, &duty, 1.0, a), "present-value"))
        }
    };
    Ok(Factors {
        basis: a.name.clone(),
        currency: a.currency.clone(),
        method: method.word(),
        factor_a_per_kw: factors.factor_a_per_kw,
        factor_b_per_kw: factors.factor_b_per_kw,
        factor_aux_per_kw: factors.factor_aux_per_kw,
        peak_pu: duty.peak_kva,
        loss_factor_pu: duty.loss_factor_pu,
        load_growth_pct: duty.load_growth_pu * 100.0,
        load,
        other_method: other.map(|(other, method)| differs(&factors, &other, method)),
        working: StepRow::tree(working.steps()),
    })
}

pub(super) fn differs(own: &LossFactors, other: &LossFactors, method: &'static str) -> OtherMethod {
    let pct = |own: f64, other: f64| if own == 0.0 { 0.0 } else { 100.0 * (other / own - 1.0) };
    OtherMethod {
        method,
        factor_a_per_kw: other.factor_a_per_kw,
        factor_b_per_kw: other.factor_b_per_kw,
        factor_aux_per_kw: other.factor_aux_per_kw,
        factor_a_difference_pct: pct(own.factor_a_per_kw, other.factor_a_per_kw),
        factor_b_difference_pct: pct(own.factor_b_per_kw, other.factor_b_per_kw),
    }
}
