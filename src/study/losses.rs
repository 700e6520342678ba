//! What the fleet's losses are and cost in year 1 of the basis.

use serde::{Serialize, Serializer};

use crate::engine::columns::VoltageModel;
use crate::engine::decision::LeftOut;
use crate::engine::decision::keep_or_replace::age;
use crate::engine::decision::place::resolve;
use crate::engine::economics::running_cost;
use crate::engine::transformer::losses::{annual_efficiency_pct, annual_energy};
use crate::engine::working::Silent;
use crate::study::rank::LeftOutRow;
use crate::study::{Desk, StudyError};

/// Losses of a unit in year 1.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result; `figures` says what they are")]
pub struct LossesRow<'a> {
    pub unit: &'a str,
    pub rated_kva: f64,
    pub peak_pu: f64,
    pub no_load_energy_kwh: f64,
    pub load_energy_kwh: f64,
    pub auxiliary_energy_kwh: f64,
    pub loss_cost: f64,
    pub load_factor_pu: Option<f64>,
    pub loss_factor_pu: f64,
    pub efficiency_pct: Option<f64>,
    pub flags: Vec<&'static str>,
    /// The cost by what causes it, for bars; not part of the result files.
    #[serde(skip)]
    pub cost: running_cost::YearCost,
}

/// Sums over all units that could be computed.
#[derive(Clone, Copy, Debug, Default, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result; `figures` says what they are")]
pub struct LossesTotals {
    pub units: usize,
    pub no_load_energy_kwh: f64,
    pub load_energy_kwh: f64,
    pub auxiliary_energy_kwh: f64,
    pub loss_cost: f64,
}

/// The result.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result")]
pub struct Losses<'a> {
    pub basis: String,
    pub currency: String,
    pub year: i64,
    pub units: Vec<LossesRow<'a>>,
    pub left_out: Vec<LeftOutRow<'a>>,
    pub totals: LossesTotals,
    /// How voltage enters the losses.
    #[serde(serialize_with = "word")]
    pub voltage_model: VoltageModel,
}

/// A voltage model as its word.
#[expect(clippy::trivially_copy_pass_by_ref, reason = "serde hands fields over so")]
pub(super) fn word<S: Serializer>(model: &VoltageModel, serializer: S) -> Result<S::Ok, S::Error> {
    serializer.serialize_str(model.word())
}

/// Losses of one unit of the fleet in year 1.
///
/// # Errors
/// Why the unit cannot be computed.
pub fn of_unit<'a>(
    desk: &'a Desk,
    context: &crate::engine::decision::Context,
    i: usize,
) -> Result<LossesRow<'a>, LeftOut> {
    let facts = desk.fleet.facts(i);
    let a = &context.assumptions;
    let place = resolve(&mut Silent, &facts, context)?;
    let energy = annual_energy(&mut Silent, &place.losses, &place.duty, 1, a.load_growth_years);
    let age = age(place.year_made, a.first_year, 1);
    let cost = running_cost::of_year(&mut Silent, &place.losses, &place.duty, a, 1, age);
    Ok(LossesRow {
        unit: desk.fleet.unit.get(i),
        rated_kva: facts.rated_kva,
        peak_pu: facts.peak_kva / facts.rated_kva,
        no_load_energy_kwh: energy.no_load_energy_kwh,
        load_energy_kwh: energy.load_energy_kwh,
        auxiliary_energy_kwh: energy.auxiliary_energy_kwh,
        loss_cost: cost.loss_cost(),
        load_factor_pu: place.duty.load_factor_pu,
        loss_factor_pu: place.duty.loss_factor_pu,
        efficiency_pct: annual_efficiency_pct(&mut Silent, &energy, &place.duty),
        flags: place.flags.keys(),
        cost,
    })
}

/// Losses of the whole fleet in year 1.
///
/// # Errors
/// What the engine refuses of the basis.
pub fn losses(desk: &Desk) -> Result<Losses<'_>, StudyError> {
    let context = desk.context()?;
    let (mut units, mut left_out) = (Vec::new(), Vec::new());
    for i in 0..desk.fleet.len() {
        match of_unit(desk, &context, i) {
            Ok(row) => units.push(row),
            Err(why) => {
                left_out.push(LeftOutRow { unit: desk.fleet.unit.get(i), why: why.why() });
            }
        }
    }
    units.sort_by(|a, b| b.loss_cost.total_cmp(&a.loss_cost).then_with(|| a.unit.cmp(b.unit)));
    // Summed in this order: the order of the book's rows changes no bit.
    let mut totals = LossesTotals { units: units.len(), ..LossesTotals::default() };
    for row in &units {
        totals.no_load_energy_kwh += row.no_load_energy_kwh;
        totals.load_energy_kwh += row.load_energy_kwh;
        totals.auxiliary_energy_kwh += row.auxiliary_energy_kwh;
        totals.loss_cost += row.loss_cost;
    }
    Ok(Losses {
        voltage_model: context.assumptions.voltage_model,
        basis: context.assumptions.name,
        currency: context.assumptions.currency,
        year: context.assumptions.first_year,
        units,
        left_out,
        totals,
    })
}

/// How voltage enters the losses of a year, in words.
pub const fn voltage_words(model: VoltageModel) -> &'static str {
    match model {
        VoltageModel::Rated => "at rated voltage (voltage_model rated)",
        VoltageModel::Drop => {
            "at the operating voltage, with the drop inside each transformer (voltage_model drop)"
        }
    }
}

/// The meaning of a flag by its key.
pub fn flag_meaning(key: &str) -> Option<&'static str> {
    crate::engine::flags::FLAGS.iter().find(|(_, k, _)| *k == key).map(|(.., meaning)| *meaning)
}
