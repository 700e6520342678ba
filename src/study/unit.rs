//! One unit's dossier: nameplate, loading, losses, and why it ranks where it does.

use serde::Serialize;
use serde_json::{Map, Value};

use crate::engine::columns::{Column, Unit, Value as Cell};
use crate::engine::decision::fit::fitting;
use crate::engine::decision::keep_or_replace::{Decision, YearChoice, age, decide};
use crate::engine::decision::parts::{PolicyCost, of_choice};
use crate::engine::decision::place::{Place, resolve};
use crate::engine::decision::{Context, LeftOut};
use crate::engine::economics::running_cost;
use crate::engine::transformer::circuit::{PowerFactor, magnetising, of_nameplate};
use crate::engine::transformer::{efficiency, regulation};
use crate::engine::working::{Silent, Working};
use crate::study::estimate::EstimatedRow;
use crate::study::explain::StepRow;
use crate::study::losses::{LossesRow, of_unit};
use crate::study::{Desk, StudyError};

/// Keep or replace, one unit, as it is written in JSON.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result; `figures` says what they are")]
pub struct KeepOrReplace<'a> {
    pub keep_pv: f64,
    pub never_pv: f64,
    pub best_pv: f64,
    pub saving_pv: f64,
    pub waiting_pv: f64,
    pub best_offer: Option<&'a str>,
    pub best_year_offset: Option<usize>,
    pub best_year: Option<i64>,
    pub years: Vec<YearRow<'a>>,
    pub flags: Vec<&'static str>,
}

/// The best offer at one delay.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result")]
pub struct YearRow<'a> {
    pub offset: usize,
    pub year: i64,
    pub offer: &'a str,
    pub pv: f64,
}

/// Decides for one unit; the inner result says why it is left out.
///
/// # Errors
/// What the engine refuses of the basis.
pub fn decision(
    desk: &Desk,
    context: &Context,
    i: usize,
) -> Result<Result<(Place, Decision), LeftOut>, StudyError> {
    let place = match resolve(&mut Silent, &desk.fleet.facts(i), context) {
        Ok(place) => place,
        Err(why) => return Ok(Err(why)),
    };
    let terminals = &desk.fleet.terminals[desk.fleet.kind[i] as usize];
    let a = &context.assumptions;
    let fit = fitting(terminals, &context.candidates, a.offer_sizes);
    Ok(decide(&place, &context.candidates, &fit, a)?
        .map(|decision| (place, decision))
        .ok_or(LeftOut::NoOffer))
}

/// What the choices of a decision cost, by what causes it: keeping, the best bought now, the best of all.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ChoiceCosts {
    /// Never replacing before a failure.
    pub keep: PolicyCost,
    /// The best offer bought now; none where none is open now.
    pub now: Option<PolicyCost>,
    /// The best choice; none where it is to keep.
    pub best: Option<PolicyCost>,
}

/// Takes the choices of a decision apart.
///
/// # Errors
/// The annuity rule without a life.
pub fn choice_costs(
    context: &Context,
    place: &Place,
    decision: &Decision,
) -> Result<ChoiceCosts, StudyError> {
    let a = &context.assumptions;
    let of = |choice: Option<YearChoice>| {
        choice
            .map(|c| of_choice(place, Some((&context.candidates[c.offer], c.offset)), c.pv, a))
            .transpose()
    };
    Ok(ChoiceCosts {
        keep: of_choice(place, None, decision.keep_pv, a)?,
        now: of(decision.now)?,
        best: of(decision.best)?,
    })
}

/// The decision as it is written in JSON.
pub fn keep_or_replace<'a>(
    desk: &'a Desk,
    context: &Context,
    decision: &Decision,
) -> KeepOrReplace<'a> {
    let first_year = context.assumptions.first_year;
    #[expect(clippy::cast_possible_wrap, reason = "at most 200 years")]
    let year = |offset: usize| first_year + offset as i64;
    let row = |choice: &YearChoice| YearRow {
        offset: choice.offset,
        year: year(choice.offset),
        offer: desk.offer_name(choice.offer),
        pv: choice.pv,
    };
    KeepOrReplace {
        keep_pv: decision.keep_pv,
        never_pv: decision.keep_pv,
        best_pv: decision.best_pv,
        saving_pv: decision.saving_pv(),
        waiting_pv: decision.waiting_pv,
        best_offer: decision.best.map(|choice| desk.offer_name(choice.offer)),
        best_year_offset: decision.best.map(|choice| choice.offset),
        best_year: decision.best.map(|choice| year(choice.offset)),
        years: decision.years.iter().map(row).collect(),
        flags: decision.flags.keys(),
    }
}

/// Circuit of a unit in per unit of its rating.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result")]
pub struct CircuitRow {
    pub r_pu: f64,
    pub x_pu: f64,
    pub z_pu: f64,
    pub core_resistance_pu: Option<f64>,
    pub magnetising_reactance_pu: Option<f64>,
}

/// Efficiency and regulation at a load.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result")]
pub struct LoadPoint {
    pub load_pu: f64,
    pub efficiency_pct: Option<f64>,
    pub regulation_pct: Option<f64>,
}

/// How a unit is loaded.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result")]
pub struct LoadingRow {
    pub peak_kva: f64,
    pub peak_pu: f64,
    pub load_factor_pu: Option<f64>,
    pub loss_factor_pu: f64,
    pub load_growth_pct: f64,
    pub energised_hours: f64,
    pub responsibility_pu: f64,
    pub no_load_price_per_kwh: f64,
    pub load_price_per_kwh: f64,
}

/// One unit's dossier.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result")]
pub struct Dossier<'a> {
    pub unit: String,
    pub basis: String,
    pub currency: String,
    /// What the book holds of it; blanks are null.
    pub nameplate: Map<String, Value>,
    pub circuit: Option<CircuitRow>,
    pub power_factor: f64,
    pub load_points: Vec<LoadPoint>,
    pub best_load_pu: Option<f64>,
    pub loading: Option<LoadingRow>,
    pub losses: Option<LossesRow<'a>>,
    /// The losses that its nameplate leaves blank.
    pub estimated: Option<EstimatedRow>,
    pub keep_or_replace: Option<KeepOrReplace<'a>>,
    /// Why it cannot be ranked.
    pub left_out: Option<&'static str>,
    pub flags: Vec<&'static str>,
    pub working: Vec<StepRow>,
}

/// The dossier of a unit.
///
/// # Errors
/// What the engine refuses of the basis; a unit that is not on the desk.
pub fn dossier<'a>(desk: &'a Desk, unit: &Unit) -> Result<Dossier<'a>, StudyError> {
    let context = desk.context()?;
    let i = desk
        .find(&unit.unit)
        .ok_or_else(|| StudyError::unknown("unit", &unit.unit, "the book", []))?;
    let a = &context.assumptions;
    let mut working = Working::default();
    let place = resolve(&mut working, &desk.fleet.facts(i), &context);
    let regulated = unit.power_factor.unwrap_or(0.9);
    let losses = place.as_ref().ok().map(|place| place.losses);
    let circuit = losses
        .zip(unit.impedance_pct)
        .and_then(|(l, z)| of_nameplate(&mut working, l.rated_kva, l.load_loss_w, z).ok());
    let pf = PowerFactor::lagging(regulated)?;
    let load_points = [0.25, 0.5, 0.75, 1.0, 1.25].map(|load_pu| LoadPoint {
        load_pu,
        efficiency_pct: losses
            .and_then(|l| efficiency::at_load(&mut Silent, &l, load_pu, regulated).ok())
            .map(|pu| 100.0 * pu),
        regulation_pct: circuit.map(|c| 100.0 * regulation::exact(&mut Silent, &c, load_pu, pf)),
    });
    let magnetised = losses
        .zip(unit.no_load_current_pct)
        .and_then(|(l, i0)| magnetising(&mut working, l.rated_kva, l.no_load_loss_w, i0).ok());
    let best_load_pu = losses.and_then(|l| efficiency::best_load(&mut working, &l).ok());
    if let Ok(place) = &place {
        let age = age(place.year_made, a.first_year, 1);
        running_cost::of_year(&mut working, &place.losses, &place.duty, a, 1, age);
    }
    let decided = decision(desk, &context, i)?;
    let left_out = decided.as_ref().err().map(|why| why.why());
    let flags = match (&decided, &place) {
        (Ok((_, decision)), _) => decision.flags,
        (Err(_), Ok(place)) => place.flags,
        (Err(_), Err(_)) => context.flags,
    };
    Ok(Dossier {
        unit: unit.unit.clone(),
        basis: a.name.clone(),
        currency: a.currency.clone(),
        nameplate: json_of(Unit::COLUMNS, &unit.values()),
        circuit: circuit.map(|c| CircuitRow {
            r_pu: c.r_pu,
            x_pu: c.x_pu,
            z_pu: c.z_pu(),
            core_resistance_pu: magnetised.map(|m| m.core_resistance_pu),
            magnetising_reactance_pu: magnetised.and_then(|m| m.reactance_pu),
        }),
        power_factor: regulated,
        load_points: load_points.to_vec(),
        best_load_pu,
        loading: place.as_ref().ok().map(|place| LoadingRow {
            peak_kva: place.duty.peak_kva,
            peak_pu: place.duty.peak_kva / place.losses.rated_kva,
            load_factor_pu: place.duty.load_factor_pu,
            loss_factor_pu: place.duty.loss_factor_pu,
            load_growth_pct: 100.0 * place.duty.load_growth_pu,
            energised_hours: place.duty.energised_hours,
            responsibility_pu: place.duty.responsibility_pu,
            no_load_price_per_kwh: place.duty.no_load_price_per_kwh,
            load_price_per_kwh: place.duty.load_price_per_kwh,
        }),
        losses: of_unit(desk, &context, i).ok(),
        estimated: EstimatedRow::of(&context, &desk.fleet.facts(i)),
        keep_or_replace: decided.ok().map(|(_, d)| keep_or_replace(desk, &context, &d)),
        left_out,
        flags: flags.keys(),
        working: StepRow::tree(working.steps()),
    })
}

/// A record as a JSON object, blanks as null.
pub fn json_of(columns: &[Column], values: &[Cell]) -> Map<String, Value> {
    let json = |value: &Cell| match value {
        Cell::Blank => Value::Null,
        Cell::Text(text) => Value::from(text.as_str()),
        Cell::Integer(number) => Value::from(*number),
        Cell::Real(number) => Value::from(*number),
        Cell::Money(money) => Value::from(money.amount()),
    };
    columns.iter().zip(values).map(|(c, value)| (c.name.to_owned(), json(value))).collect()
}
