//! The capitalised loss factors A, B and auxiliary of a basis, for a stated load or for the fleet's own.

use serde::Serialize;

use crate::engine::Refusal;
use crate::engine::columns::{FactorMethod, Lot, Unit};
use crate::engine::decision::Context;
use crate::engine::decision::common_load::CommonLoad;
use crate::engine::decision::stated_load::StatedLoad;
use crate::engine::economics::loss_factors::{
    LossFactors, difference_pct, levelized, of_duty, present_value,
};
use crate::engine::economics::traps;
use crate::engine::flags::Flags;
use crate::engine::loading::Duty;
use crate::engine::working::{Recorder, Silent, Working};
use crate::study::explain::{Explained, StepRow, numbers};
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
    /// What is stated in numbers.
    fn numbers(&self) -> StatedLoad {
        StatedLoad {
            peak_pu: self.peak_pu,
            loss_factor_pu: self.loss_factor_pu,
            load_factor_pu: self.load_factor_pu,
            load_growth_pct: self.load_growth_pct,
            profile: None,
        }
    }

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
    /// What is doubtful.
    pub flags: Vec<&'static str>,
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

/// A basis and a load: what factors are asked about.
#[derive(Clone, Copy, Debug)]
pub struct Question<'a> {
    /// The fleet, its profiles and prices.
    pub desk: &'a Desk,
    /// The basis resolved.
    pub context: &'a Context,
    /// The load.
    pub asked: &'a LoadAsked,
}

impl Question<'_> {
    /// The duty on a transformer of rating 1: as stated, else the fleet's own; and where it comes from.
    ///
    /// # Errors
    /// Load and loss factor that cannot belong together, a profile that is not in the book, a fleet of which no
    /// unit can be computed.
    fn load<R: Recorder>(&self, w: &mut R) -> Result<(Duty, &'static str), StudyError> {
        if *self.asked != LoadAsked::default() {
            return Ok((self.stated(w)?.duty(w, self.context)?, "as stated"));
        }
        let load = CommonLoad::of_fleet(&self.desk.fleet, self.context);
        let Some(duty) = load.duty(w, &self.context.assumptions) else {
            let why =
                "no unit of the fleet can be computed; state a load (profile, loss or load factor)";
            return Err(Refusal::new("loss_factor_pu", "", why).into());
        };
        Ok((duty, "the fleet's own, each unit weighed by its load loss"))
    }

    /// The load that was stated, its profile looked up.
    fn stated<R: Recorder>(&self, w: &mut R) -> Result<StatedLoad, StudyError> {
        let (desk, asked) = (self.desk, self.asked);
        asked.check()?;
        let profile = match &asked.profile {
            None => None,
            Some(name) => {
                let found = desk.profiles.iter().position(|p| p.profile == *name);
                let index = found.ok_or_else(|| {
                    let known = desk.profiles.iter().map(|p| p.profile.as_str());
                    StudyError::unknown("profile", name, "the book", known)
                })?;
                Some((index, desk.profiles[index].ratios(w)?))
            }
        };
        Ok(StatedLoad { profile, ..asked.numbers() })
    }

    /// What is doubtful about the basis and about what was stated of the load.
    fn doubts(&self) -> Flags {
        let (a, market, asked) = (&self.context.assumptions, &self.context.market, self.asked);
        let stated = *asked != LoadAsked::default() && asked.profile.is_none();
        // A profile knows its load at the system peak where a series has that.
        let system_load = self.desk.series.iter().any(|series| series.system_load.is_some());
        let unknown = a.responsibility_pu.is_none() && (stated || !system_load);
        traps::of_basis(a, market.constant.price_per_kwh)
            .with_if(stated && asked.loss_factor_pu.is_none(), Flags::LOSS_FACTOR_ESTIMATED)
            .with_if(stated && market.series, Flags::PRICE_NOT_WEIGHTED)
            .with_if(a.demand_charge_per_kw_year > 0.0 && unknown, Flags::RESPONSIBILITY_DEFAULT)
    }

    fn own<R: Recorder>(&self, w: &mut R, duty: &Duty) -> Result<LossFactors, Refusal> {
        of_duty(w, duty, 1.0, &self.context.assumptions)
    }

    /// The factors by the method that the basis does not use, where it allows it.
    fn other<R: Recorder>(&self, w: &mut R, duty: &Duty) -> Option<(LossFactors, &'static str)> {
        let a = &self.context.assumptions;
        match a.factor_method {
            FactorMethod::PresentValue => {
                levelized(w, duty, 1.0, a).ok().map(|f| (f, FactorMethod::Levelized.word()))
            }
            FactorMethod::Levelized => {
                Some((present_value(w, duty, 1.0, a), FactorMethod::PresentValue.word()))
            }
        }
    }

    /// The factors.
    ///
    /// # Errors
    /// What the engine refuses of the basis or of the load.
    pub fn factors(&self) -> Result<Factors, StudyError> {
        let a = &self.context.assumptions;
        let mut working = Working::default();
        let (duty, load) = self.load(&mut working)?;
        let factors = self.own(&mut working, &duty)?;
        let other = self.other(&mut Silent, &duty);
        Ok(Factors {
            basis: a.name.clone(),
            currency: a.currency.clone(),
            method: a.factor_method.word(),
            factor_a_per_kw: factors.factor_a_per_kw,
            factor_b_per_kw: factors.factor_b_per_kw,
            factor_aux_per_kw: factors.factor_aux_per_kw,
            peak_pu: duty.peak_kva,
            loss_factor_pu: duty.loss_factor_pu,
            load_growth_pct: duty.load_growth_pct(&mut Silent),
            load: load.to_owned(),
            other_method: other.map(|(other, method)| differs(&factors, &other, method)),
            working: StepRow::tree(working.steps()),
            flags: self.doubts().keys(),
        })
    }
}

/// The factors of a basis for a stated load, or for the fleet's own load where nothing is stated.
///
/// # Errors
/// What the engine refuses of the basis or of the load.
pub fn factors(desk: &Desk, asked: &LoadAsked) -> Result<Factors, StudyError> {
    Question { desk, context: &desk.context()?, asked }.factors()
}

/// What the steps of a factor are called.
pub(super) fn symbol(quantity: &str) -> &'static str {
    let found = SYMBOLS.iter().find(|(key, _)| quantity.starts_with(key));
    found.map_or("", |(_, symbol)| symbol)
}

const SYMBOLS: [(&str, &str); 3] =
    [("factor_a_", "A"), ("factor_b_", "B"), ("factor_aux_", "A_aux")];

impl Explained for Question<'_> {
    fn called(&self) -> String {
        format!("the factors of basis {}", self.context.assumptions.name)
    }

    fn figures(&self) -> Result<Vec<(String, f64)>, StudyError> {
        Ok(numbers(&self.factors()?, &["working"], &[]))
    }

    fn state(&self, w: &mut Working, place: &[&str]) -> Result<(), StudyError> {
        let mut told = Working::default();
        let (duty, _) = self.load(&mut told)?;
        let quantity = place.last().copied().unwrap_or_default();
        match quantity {
            "peak_pu" => w.append(told.only(&["β"])),
            "loss_factor_pu" => w.append(told.only(&["LsF"])),
            "load_growth_pct" => {
                w.append(told.only(&["g"]));
                duty.load_growth_pct(w);
            }
            _ => {
                let symbol = symbol(quantity);
                w.append(told.into_steps());
                let (mut own, mut other) = (Working::default(), Working::default());
                self.own(&mut own, &duty)?;
                self.other(&mut other, &duty);
                let mut last = |steps: Working| {
                    let steps = steps.only(&[symbol]);
                    let value = steps.last().map_or(0.0, |step| step.value);
                    w.append(steps);
                    value
                };
                match (place.len(), quantity.ends_with("_difference_pct")) {
                    (1, _) => {
                        last(own);
                    }
                    (_, false) => {
                        last(other);
                    }
                    (_, true) => {
                        let (own, other) = (last(own), last(other));
                        difference_pct(w, own, other);
                    }
                }
            }
        }
        Ok(())
    }
}

pub(super) fn differs(own: &LossFactors, other: &LossFactors, method: &'static str) -> OtherMethod {
    let pct = |own: f64, other: f64| difference_pct(&mut Silent, own, other);
    OtherMethod {
        method,
        factor_a_per_kw: other.factor_a_per_kw,
        factor_b_per_kw: other.factor_b_per_kw,
        factor_aux_per_kw: other.factor_aux_per_kw,
        factor_a_difference_pct: pct(own.factor_a_per_kw, other.factor_a_per_kw),
        factor_b_difference_pct: pct(own.factor_b_per_kw, other.factor_b_per_kw),
    }
}
