//! One unit's dossier: nameplate, loading, losses, and why it ranks where it does. [`Question`] answers; its
//! figures are opened in `workings`.

pub mod ambient;
mod fit;
pub mod thermal;
mod workings;

pub use fit::{BesideRow, FitAsked, FitRow};
pub use thermal::Heat;

use chrono::NaiveDate;
use serde::Serialize;
use serde_json::{Map, Value};

use crate::engine::Refusal;
use crate::engine::columns::{Column, Unit, Value as Cell, VoltageModel};
use crate::engine::decision::estimate::End;
use crate::engine::decision::fit::fitting;
use crate::engine::decision::keep_or_replace::{
    Decision, Replacement, YearChoice, decide, equal_yearly_cost,
};
use crate::engine::decision::parts::{PolicyCost, of_choice};
use crate::engine::decision::place::{Place, known, losses, power_factor, resolve};
use crate::engine::decision::{Context, LeftOut, UnitFacts};
use crate::engine::economics::loss_factors::present_value;
use crate::engine::economics::owning_cost::{Priced, owning_cost};
use crate::engine::economics::traps;
use crate::engine::flags::Flags;
use crate::engine::law::{self, Subject, Verdict};
use crate::engine::transformer::circuit::{
    Circuit, Magnetising, PowerFactor, magnetising, of_nameplate,
};
use crate::engine::transformer::losses::Losses;
use crate::engine::transformer::{efficiency, regulation};
use crate::engine::working::{Recorder, Silent};
use crate::study::estimate::EstimatedRow;
use crate::study::explain::FigureWorking;
use crate::study::law::VerdictRow;
use crate::study::losses::{LossesRow, of_unit, word};
use crate::study::offers_open::left_out_because;
use crate::study::test_report::{TestRow, TestedUnit};
use crate::study::unit::thermal::ThermalRow;
use crate::study::{Desk, StudyError};

/// A unit under a basis: what a dossier is asked about.
#[derive(Clone, Copy, Debug)]
pub struct Question<'a> {
    /// Fleet, offers and profiles.
    pub desk: &'a Desk,
    /// The basis resolved.
    pub context: &'a Context,
    /// Which unit of the fleet.
    pub index: usize,
    /// Its record.
    pub unit: &'a Unit,
    /// Under what it is judged thermally.
    pub heat: Heat<'a>,
    /// What is to be fitted to its place.
    pub fit: Option<&'a FitAsked>,
}

/// Keep or replace, one unit, as it is written in JSON.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result; `figures` says what they are")]
pub struct KeepOrReplace<'a> {
    pub keep_pv: f64,
    pub never_pv: f64,
    pub now_offer: Option<&'a str>,
    pub now_pv: Option<f64>,
    pub best_offer: Option<&'a str>,
    pub best_year_offset: Option<usize>,
    pub best_year: Option<i64>,
    pub best_pv: f64,
    pub saving_pv: f64,
    pub waiting_pv: f64,
    pub payback_years: Option<f64>,
    pub capital: Option<f64>,
    pub energy_saved_kwh: Option<f64>,
    pub co2_saved_kg: Option<f64>,
    /// Of buying the best offer now: rate of return, none where there is not exactly one.
    pub now_irr_pct: Option<f64>,
    /// Of the best choice.
    pub discounted_payback_years: Option<f64>,
    pub co2_avoided_t: Option<f64>,
    pub cost_per_t_co2: Option<f64>,
    /// Equal yearly cost of keeping and of the best choice over the horizon.
    pub keep_euac: f64,
    pub best_euac: f64,
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
    let fit = fitting_offers(desk, context, i);
    let a = &context.assumptions;
    Ok(decide(&place, &context.candidates, &fit, a)?
        .map(|decision| (place, decision))
        .ok_or(LeftOut::NoOffer))
}

/// The offers that fit a unit, in catalogue order.
fn fitting_offers(desk: &Desk, context: &Context, i: usize) -> Vec<usize> {
    let terminals = &desk.fleet.terminals[desk.fleet.kind[i] as usize];
    fitting(terminals, &context.candidates, context.assumptions.offer_sizes)
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
    /// What its test report says, and which blanks of the nameplate are filled from it.
    pub tests: Option<TestRow>,
    pub circuit: Option<CircuitRow>,
    pub power_factor: f64,
    pub load_points: Vec<LoadPoint>,
    pub best_load_pu: Option<f64>,
    pub loading: Option<LoadingRow>,
    pub losses: Option<LossesRow<'a>>,
    /// The losses that its nameplate leaves blank.
    pub estimated: Option<EstimatedRow>,
    pub keep_or_replace: Option<KeepOrReplace<'a>>,
    pub thermal: ThermalRow,
    /// The law that the basis names, were the unit bought in the first year.
    pub law: Option<VerdictRow>,
    /// How an offer or bid fits its place, where that was asked.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub fit: Option<FitRow>,
    /// Why it cannot be ranked.
    pub left_out: Option<&'static str>,
    pub flags: Vec<&'static str>,
    /// How voltage enters the losses of a year.
    #[serde(serialize_with = "word")]
    pub voltage_model: VoltageModel,
    /// How its figures come about, as far as they are opened.
    pub working: Vec<FigureWorking>,
}

/// Loads at which efficiency and regulation are shown (pu).
const LOADS: [f64; 5] = [0.25, 0.5, 0.75, 1.0, 1.25];

impl<'a> Question<'a> {
    /// A unit that lies on a desk, by its record.
    ///
    /// # Errors
    /// A unit that is not on the desk.
    pub fn new(desk: &'a Desk, context: &'a Context, unit: &'a Unit) -> Result<Self, StudyError> {
        let index = desk.find(&unit.unit);
        let index = index.ok_or_else(|| StudyError::unknown("unit", &unit.unit, "the book", []))?;
        Ok(Self { desk, context, index, unit, heat: Heat::default(), fit: None })
    }

    fn tested(&self) -> Option<&TestedUnit> {
        self.desk.tested(&self.unit.unit)
    }

    fn facts(&self) -> UnitFacts {
        self.desk.fleet.facts(self.index)
    }

    fn place<R: Recorder>(&self, w: &mut R) -> Result<Place, LeftOut> {
        resolve(w, &self.facts(), self.context)
    }

    /// Its losses at its rating: also of a unit whose load is not known.
    fn losses<R: Recorder>(&self, w: &mut R) -> Result<Losses, LeftOut> {
        losses(w, &self.facts(), self.context, End::Middle)
    }

    /// What the law that the basis names says of it, were it bought in the first year; none where it names none or
    /// its losses are not known.
    fn verdict(&self) -> Result<Option<(Verdict, NaiveDate)>, Refusal> {
        let a = &self.context.assumptions;
        let (Some(law), Ok(losses)) = (&a.law, self.losses(&mut Silent)) else { return Ok(None) };
        let subject = Subject::of_unit(self.unit, &losses, a.stray_share_pu);
        let Some(on) = law::at_start_of(a.first_year) else { return Ok(None) };
        Ok(Some((law::check(law, &subject, on)?, on)))
    }

    fn circuit<R: Recorder>(&self, w: &mut R, losses: &Losses) -> Option<Circuit> {
        of_nameplate(w, losses.rated_kva, losses.load_loss_w, known(self.facts().impedance_pct)?)
            .ok()
    }

    fn magnetising<R: Recorder>(&self, w: &mut R, losses: &Losses) -> Option<Magnetising> {
        let of_test = || self.tested()?.read(&mut Silent, self.desk.stray_share_pu()).ok();
        let current = self.unit.no_load_current_pct;
        let current = current.or_else(|| of_test()?.no_load_current_pct)?;
        magnetising(w, losses.rated_kva, losses.no_load_loss_w, current).ok()
    }

    /// The dossier, without workings.
    ///
    /// # Errors
    /// What the engine refuses of the basis.
    pub fn dossier(&self) -> Result<Dossier<'a>, StudyError> {
        let a = &self.context.assumptions;
        let w = &mut Silent;
        let place = self.place(w);
        let own = self.losses(w).ok();
        let power_factor = power_factor(w, &self.facts());
        let circuit = own.and_then(|l| self.circuit(w, &l));
        let magnetised = own.and_then(|l| self.magnetising(w, &l));
        let pf = PowerFactor::lagging(power_factor)?;
        let load_points = LOADS.map(|load_pu| LoadPoint {
            load_pu,
            efficiency_pct: own
                .and_then(|l| efficiency::at_load_pct(&mut Silent, &l, load_pu, power_factor).ok()),
            regulation_pct: circuit.map(|c| regulation::exact_pct(&mut Silent, &c, load_pu, pf)),
        });
        let decided = decision(self.desk, self.context, self.index)?;
        let flags = match (&decided, &place) {
            (Ok((_, decision)), _) => decision.flags,
            (Err(_), Ok(place)) => place.flags,
            (Err(_), Err(_)) => self.context.flags,
        };
        let price = self.context.market.constant.price_per_kwh;
        let mut flags = flags.with(traps::of_basis(a, price));
        if let Ok((place, decision)) = &decided {
            flags = flags.with(self.value_scale(place, decision));
        }
        Ok(Dossier {
            unit: self.unit.unit.clone(),
            basis: a.name.clone(),
            currency: a.currency.clone(),
            nameplate: json_of(Unit::COLUMNS, &self.unit.values()),
            tests: self.tested().map(|tested| TestRow::of(tested, self.desk.stray_share_pu())),
            circuit: circuit.map(|c| CircuitRow {
                r_pu: c.r_pu,
                x_pu: c.x_pu,
                z_pu: c.z_pu(),
                core_resistance_pu: magnetised.map(|m| m.core_resistance_pu),
                magnetising_reactance_pu: magnetised.and_then(|m| m.reactance_pu),
            }),
            power_factor,
            load_points: load_points.to_vec(),
            best_load_pu: own.and_then(|l| efficiency::best_load(w, &l).ok()),
            loading: place.as_ref().ok().map(|place| LoadingRow {
                peak_kva: place.duty.peak_kva,
                peak_pu: place.duty.peak_pu(w, place.losses.rated_kva),
                load_factor_pu: place.duty.load_factor_pu,
                loss_factor_pu: place.duty.loss_factor_pu,
                load_growth_pct: place.duty.load_growth_pct(w),
                energised_hours: place.duty.energised_hours,
                responsibility_pu: place.duty.responsibility_pu,
                no_load_price_per_kwh: place.duty.no_load_price_per_kwh,
                load_price_per_kwh: place.duty.load_price_per_kwh,
            }),
            losses: of_unit(self.desk, self.context, self.index).ok(),
            estimated: EstimatedRow::of(self.context, &self.facts()),
            left_out: decided
                .as_ref()
                .err()
                .map(|why| left_out_because(self.desk, self.context, self.index, *why)),
            thermal: self.thermal(place.as_ref().ok(), decided.as_ref().ok().map(|(_, d)| d)),
            fit: self.fitted().map(|fit| fit.row()).transpose()?,
            law: self.verdict()?.map(|(verdict, on)| VerdictRow::of(&verdict, on)),
            keep_or_replace: match &decided {
                Ok((place, decision)) => Some(self.keep_or_replace(place, decision)?),
                Err(_) => None,
            },
            flags: flags.keys(),
            voltage_model: a.voltage_model,
            working: Vec::new(),
        })
    }

    /// Whether the losses of the best offer, capitalised, look like another unit beside its price.
    fn value_scale(&self, place: &Place, decision: &Decision) -> Flags {
        let Some(choice) = decision.best.or(decision.now) else { return Flags::NONE };
        let candidate = &self.context.candidates[choice.offer];
        let losses = &candidate.losses;
        let (a, rated_kva) = (&self.context.assumptions, losses.rated_kva);
        let factors = present_value(&mut Silent, &place.duty, rated_kva, a);
        let priced = Priced {
            price: candidate.price,
            added_cost: 0.0,
            no_load_loss_w: losses.no_load_loss_w,
            load_loss_w: losses.load_loss_w,
            auxiliary_loss_w: losses.auxiliary_loss_w,
        };
        let cost = owning_cost(&mut Silent, &priced, &factors);
        traps::of_value(cost.total() - cost.price, candidate.price)
    }

    /// A choice as a replacement; none where it is to keep.
    fn replacement<'s>(
        &'s self,
        place: &'s Place,
        choice: Option<YearChoice>,
    ) -> Option<Replacement<'s>> {
        choice.map(|choice| Replacement {
            place,
            candidate: &self.context.candidates[choice.offer],
            offset: choice.offset,
            assumptions: &self.context.assumptions,
        })
    }

    /// The decision as it is written in JSON.
    fn keep_or_replace(
        &self,
        place: &Place,
        decision: &Decision,
    ) -> Result<KeepOrReplace<'a>, Refusal> {
        let first_year = self.context.assumptions.first_year;
        #[expect(clippy::cast_possible_wrap, reason = "at most 200 years")]
        let year = |offset: usize| first_year + offset as i64;
        let offer = |choice: YearChoice| self.desk.offer_name(choice.offer);
        let row = |choice: &YearChoice| YearRow {
            offset: choice.offset,
            year: year(choice.offset),
            offer: offer(*choice),
            pv: choice.pv,
        };
        let first = self.replacement(place, decision.best);
        let now = self.replacement(place, decision.now);
        let a = &self.context.assumptions;
        let w = &mut Silent;
        Ok(KeepOrReplace {
            keep_pv: decision.keep_pv,
            never_pv: decision.keep_pv,
            now_offer: decision.now.map(offer),
            now_pv: decision.now.map(|choice| choice.pv),
            best_offer: decision.best.map(offer),
            best_year_offset: decision.best.map(|choice| choice.offset),
            best_year: decision.best.map(|choice| year(choice.offset)),
            best_pv: decision.best_pv,
            saving_pv: decision.saving_pv(w),
            waiting_pv: decision.waiting_pv(w),
            payback_years: first.and_then(|first| first.payback_years(w)),
            capital: first.map(|first| first.candidate.capital(w)),
            energy_saved_kwh: first.map(|first| first.energy_saved_kwh(w)),
            co2_saved_kg: first.map(|first| first.co2_saved_kg(w)),
            now_irr_pct: now.and_then(|now| now.irr_pct(w)),
            discounted_payback_years: match first {
                Some(first) => first.discounted_payback_years(w)?,
                None => None,
            },
            co2_avoided_t: first.map(|first| first.co2_avoided_t(w)),
            cost_per_t_co2: match first {
                Some(first) => first.cost_per_t_co2(w)?,
                None => None,
            },
            keep_euac: equal_yearly_cost(w, decision.keep_pv, a),
            best_euac: equal_yearly_cost(w, decision.best_pv, a),
            years: decision.years.iter().map(row).collect(),
            flags: decision.flags.keys(),
        })
    }
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
