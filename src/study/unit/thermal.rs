//! Heat: how hot a unit gets under its year of load, how long above the limits, how much life that uses; and the
//! best offer under the same load. Liquid-immersed units only.

use serde::Serialize;

use super::Question;
use crate::engine::Refusal;
use crate::engine::columns::Unit;
use crate::engine::decision::Place;
use crate::engine::decision::keep_or_replace::{Decision, YearChoice};
use crate::engine::decision::place::stated::{RATING, said};
use crate::engine::loading::Profile;
use crate::engine::transformer::ageing::Paper;
use crate::engine::transformer::losses::Losses;
use crate::engine::transformer::thermal::{
    self, CAUTION, CoolingMode, NORMAL_CYCLIC, ThermalModel, Year, steady,
};
use crate::engine::working::{Recorder, Silent};

/// The air around a unit.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Ambient<'a> {
    /// One temperature all year (°C).
    Constant(f64),
    /// A year of them, step by step as the unit's profile.
    Series {
        /// Where it comes from.
        name: &'a str,
        /// Length of a step.
        step_minutes: u32,
        /// The temperatures (°C).
        values: &'a [f64],
    },
}

/// Under what a unit is judged: nothing of it is in the book.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Heat<'a> {
    /// The air around it.
    pub ambient: Ambient<'a>,
    /// The paper of its windings.
    pub paper: Paper,
}

impl Default for Heat<'_> {
    /// 20 °C all year (the yearly mean for which rises are rated, IEC 60076-2, memory); paper not upgraded.
    fn default() -> Self {
        Self { ambient: Ambient::Constant(20.0), paper: Paper::Normal }
    }
}

/// The thermal part of a dossier.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result; `figures` says what they are")]
pub struct ThermalRow {
    pub ambient: String,
    /// Where it is one temperature all year.
    pub ambient_c: Option<f64>,
    pub paper: &'static str,
    pub hot_spot_limit_c: f64,
    pub top_oil_limit_c: f64,
    /// The unit under its load of year 1.
    pub own: Option<HeatRow>,
    /// Why the unit is not judged, or not hour by hour.
    pub why: Option<String>,
    /// The best offer under the same load.
    pub replacement: Option<HeatRow>,
    /// What was assumed.
    pub notes: Vec<String>,
    pub cautions: Vec<&'static str>,
}

/// How hot one transformer gets.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result; `figures` says what they are")]
pub struct HeatRow {
    /// The offer; none for the unit that stands there.
    pub offer: Option<String>,
    /// Row of the table of constants.
    pub cooling_mode: &'static str,
    pub rated_kva: f64,
    pub top_oil_rise_k: f64,
    pub gradient_k: f64,
    pub loss_ratio: f64,
    pub hot_spot_factor: f64,
    /// Were the peak of year 1 held for good.
    pub steady_top_oil_c: f64,
    pub steady_hot_spot_c: f64,
    /// Step by step; without a profile its keys are absent.
    #[serde(flatten)]
    pub year: Option<HeatYear>,
}

/// A year step by step.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result; `figures` says what they are")]
pub struct HeatYear {
    /// Step of the profile, counted from 1, at whose end the hot spot is highest.
    pub hottest_interval: usize,
    /// Hour of the year, counted from 1, in which that step ends.
    pub hottest_hour: usize,
    pub hottest_hot_spot_c: f64,
    pub hottest_top_oil_c: f64,
    pub hours_above_hot_spot: f64,
    pub hours_above_top_oil: f64,
    pub life_used_hours: f64,
    pub life_used_pu: f64,
    /// Hours of the year.
    pub hours: f64,
}

/// A transformer at a place, as the thermal equations see it.
pub(super) struct Body<'a> {
    model: ThermalModel,
    mode: CoolingMode,
    losses: &'a Losses,
    offer: Option<&'a str>,
}

impl<'a> Body<'a> {
    /// A transformer by its record.
    pub(super) fn of(
        unit: &Unit,
        losses: &'a Losses,
        offer: Option<&'a str>,
    ) -> Result<Self, Refusal> {
        let cooling = unit.cooling.as_deref();
        let mode = CoolingMode::of(losses.rated_kva, unit.phases, cooling, unit.insulation)?;
        Ok(Self { model: ThermalModel::of_losses(mode, losses), mode, losses, offer })
    }
}

impl Question<'_> {
    fn profile(&self) -> Option<&Profile> {
        self.desk.profiles.get(self.facts().profile as usize)
    }

    /// The unit that stands there, or an offer.
    fn body<'b>(&'b self, place: &'b Place, offer: Option<usize>) -> Result<Body<'b>, Refusal> {
        let Some(c) = offer else { return Body::of(self.unit, &place.losses, None) };
        let (offer, losses) = (&self.desk.offers[c], &self.context.candidates[c].losses);
        let (phases, cooling, insulation) = (offer.phases, &offer.cooling, offer.insulation);
        let mode = CoolingMode::of(losses.rated_kva, phases, cooling.as_deref(), insulation)?;
        Ok(Body {
            model: ThermalModel::of_losses(mode, losses),
            mode,
            losses,
            offer: Some(&offer.offer),
        })
    }

    /// The load of year 1 in parts of a rating, and the ambient, step by step.
    fn steps(&self, place: &Place, rated_kva: f64) -> Result<(Vec<f64>, Vec<f64>, f64), Refusal> {
        let Some(profile) = self.profile() else {
            let why = "is blank: without it there is no course of the load over the year, only the steady state at the peak";
            return Err(Refusal::new("profile", "", why));
        };
        let load = profile.loads(place.duty.peak_pu(&mut Silent, rated_kva))?;
        let ambient = match self.heat.ambient {
            Ambient::Constant(ambient_c) => vec![ambient_c; load.len()],
            Ambient::Series { name, step_minutes, values } => {
                if values.len() != load.len() || step_minutes != profile.step_minutes {
                    let why = format!(
                        "has {} steps of {step_minutes} min, profile {} has {} of {} min; bring both to one step and length",
                        values.len(),
                        profile.profile,
                        load.len(),
                        profile.step_minutes
                    );
                    return Err(Refusal::new("ambient_c", name, why));
                }
                values.to_vec()
            }
        };
        Ok((load, ambient, f64::from(profile.step_minutes)))
    }

    /// The ambient at which the steady state is shown: the constant, or the highest of the series (°C).
    fn ambient_c(&self) -> f64 {
        match self.heat.ambient {
            Ambient::Constant(ambient_c) => ambient_c,
            Ambient::Series { values, .. } => values.iter().copied().fold(f64::MIN, f64::max),
        }
    }

    fn year<R: Recorder>(&self, w: &mut R, place: &Place, body: &Body) -> Result<Year, Refusal> {
        let (load, ambient, minutes) = self.steps(place, body.losses.rated_kva)?;
        let paper = self.heat.paper;
        thermal::year(w, &body.model, paper, NORMAL_CYCLIC, &load, &ambient, minutes)
    }

    /// States the figure of one transformer at a place of the thermal part.
    pub(super) fn state_heat<R: Recorder>(
        &self,
        w: &mut R,
        place: &Place,
        choice: Option<YearChoice>,
        quantity: &str,
    ) -> Result<(), Refusal> {
        let body = self.body(place, choice.map(|choice| choice.offer))?;
        self.state_body(w, place, &body, quantity)
    }

    /// States how hot a transformer gets in a place.
    pub(super) fn state_body<R: Recorder>(
        &self,
        w: &mut R,
        place: &Place,
        body: &Body,
        quantity: &str,
    ) -> Result<(), Refusal> {
        let rises = &body.model.rises;
        let typical = format!("typical of {} (memory)", body.mode.word());
        match quantity {
            "rated_kva" => {
                said(w, &RATING, body.losses.rated_kva, body.offer.unwrap_or("the unit"));
            }
            "top_oil_rise_k" => {
                said(w, &thermal::TOP_OIL_RISE, rises.top_oil_k, &typical);
            }
            "gradient_k" => {
                said(w, &thermal::GRADIENT_RISE, rises.gradient_k, &typical);
            }
            "hot_spot_factor" => {
                said(w, &thermal::HOT_SPOT_FACTOR, rises.hot_spot_factor, &typical);
            }
            "loss_ratio" => {
                ThermalModel::loss_ratio(w, body.mode, body.losses);
            }
            "steady_top_oil_c" | "steady_hot_spot_c" => {
                let peak = place.duty.peak_pu(w, body.losses.rated_kva);
                steady(w, &body.model, peak, self.ambient_c());
            }
            _ => {
                self.year(w, place, body)?;
            }
        }
        Ok(())
    }

    fn heat_of(&self, place: &Place, offer: Option<usize>) -> Result<HeatRow, Refusal> {
        Ok(self.heat_of_body(place, &self.body(place, offer)?))
    }

    /// How hot a transformer gets in a place.
    pub(super) fn heat_of_body(&self, place: &Place, body: &Body) -> HeatRow {
        let w = &mut Silent;
        let peak = place.duty.peak_pu(w, body.losses.rated_kva);
        let held = steady(w, &body.model, peak, self.ambient_c());
        let minutes = self.profile().map_or(60, |profile| profile.step_minutes as usize);
        let year = self.year(w, place, body).ok().map(|year| HeatYear {
            hottest_interval: year.hottest_step + 1,
            hottest_hour: ((year.hottest_step + 1) * minutes).div_ceil(60),
            hottest_hot_spot_c: year.hottest_hot_spot_c,
            hottest_top_oil_c: year.hottest_top_oil_c,
            hours_above_hot_spot: year.hours_above_hot_spot,
            hours_above_top_oil: year.hours_above_top_oil,
            life_used_hours: year.life_used_hours,
            life_used_pu: year.life_used_pu,
            hours: year.hours,
        });
        let rises = &body.model.rises;
        HeatRow {
            offer: body.offer.map(str::to_owned),
            cooling_mode: body.mode.word(),
            rated_kva: body.losses.rated_kva,
            top_oil_rise_k: rises.top_oil_k,
            gradient_k: rises.gradient_k,
            loss_ratio: rises.loss_ratio,
            hot_spot_factor: rises.hot_spot_factor,
            steady_top_oil_c: held.top_oil_c,
            steady_hot_spot_c: held.hot_spot_c(),
            year,
        }
    }

    /// The offer that is judged beside the unit: that of the best choice, else the best one now.
    pub(super) fn heat_choice(decision: &Decision) -> Option<YearChoice> {
        decision.best.or(decision.now)
    }

    /// The thermal part of the dossier.
    pub(super) fn thermal(&self, place: Option<&Place>, decision: Option<&Decision>) -> ThermalRow {
        let own = place.map(|place| self.heat_of(place, None));
        let why = match (&own, place) {
            (Some(Err(refusal)), _) => Some(refusal.to_string()),
            (Some(Ok(row)), Some(place)) if row.year.is_none() => {
                self.steps(place, row.rated_kva).err().map(|refusal| refusal.to_string())
            }
            (None, _) => {
                Some("its losses or its load are not known: see why it is not ranked".to_owned())
            }
            _ => None,
        };
        let choice = decision.and_then(Self::heat_choice);
        let replacement = place
            .zip(choice)
            .and_then(|(place, choice)| self.heat_of(place, Some(choice.offer)).ok());
        let (ambient, ambient_c) = match self.heat.ambient {
            Ambient::Constant(ambient_c) => (format!("{ambient_c} °C all year"), Some(ambient_c)),
            Ambient::Series { name, .. } => (name.to_owned(), None),
        };
        let blank = self.unit.cooling.is_none() || self.unit.insulation.is_none();
        let mut notes = vec![
            "constants of the cooling mode: IEC 60076-7; temperature rises: its typical ones (memory), not the unit's own heat-run test".to_owned(),
            "loss ratio: load loss over no-load loss of each transformer; load of year 1".to_owned(),
            "limits: normal cyclic loading, IEC 60076-7 (memory)".to_owned(),
        ];
        if blank {
            notes.push("cooling or insulation is blank: liquid, ONAN assumed".to_owned());
        }
        ThermalRow {
            ambient,
            ambient_c,
            paper: self.heat.paper.word(),
            hot_spot_limit_c: NORMAL_CYCLIC.hot_spot_c,
            top_oil_limit_c: NORMAL_CYCLIC.top_oil_c,
            own: own.and_then(Result::ok),
            why,
            replacement,
            notes,
            cautions: vec![CAUTION],
        }
    }
}
