//! A year of load on a unit: the hottest step, the hours above limits, the life that is used.

use super::{Scheme, State, ThermalModel, steady, step};
use crate::engine::Refusal;
use crate::engine::transformer::ageing::Paper;
use crate::engine::transformer::circuit::positive;
use crate::engine::working::{Formula, Recorder, Silent};

/// Temperatures that must not be passed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Limits {
    /// Of the hot spot (°C).
    pub hot_spot_c: f64,
    /// Of the top oil (°C).
    pub top_oil_c: f64,
}

/// Normal cyclic loading, IEC 60076-7 (memory): hot spot 120 °C, top oil 105 °C.
pub const NORMAL_CYCLIC: Limits = Limits { hot_spot_c: 120.0, top_oil_c: 105.0 };

/// What a year of load does to the insulation.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Year {
    /// Step of the highest hot-spot temperature, counted from 0; the first of equals.
    pub hottest_step: usize,
    /// Hot spot at its end (°C).
    pub hottest_hot_spot_c: f64,
    /// Highest top-oil temperature (°C).
    pub hottest_top_oil_c: f64,
    /// Hours with the hot spot above its limit.
    pub hours_above_hot_spot: f64,
    /// Hours with the top oil above its limit.
    pub hours_above_top_oil: f64,
    /// Hours of normal life used, ΣV·Δt at step ends.
    pub life_used_hours: f64,
    /// Life used over the hours looked at: 1 is ageing at the rated hot spot.
    pub life_used_pu: f64,
    /// Hours looked at.
    pub hours: f64,
}

const SOURCE: &str =
    "IEC 60076-7, step by step from the steady state of the first step; methods, section 10";

const HOTTEST_OIL: Formula = Formula {
    name: "highest top-oil temperature of the year",
    symbol: "θo_max",
    formula: "the greatest θo at the end of a step",
    unit: "°C",
    source: SOURCE,
};
const HOTTEST: Formula = Formula {
    name: "highest hot-spot temperature of the year",
    symbol: "θh_max",
    formula: "the greatest θh at the end of a step",
    unit: "°C",
    source: SOURCE,
};
const ABOVE_HOT_SPOT: Formula = Formula {
    name: "hours with the hot spot above its limit",
    symbol: "t_hot",
    formula: "Σ Δt where θh > θh_limit",
    unit: "h",
    source: SOURCE,
};
const ABOVE_TOP_OIL: Formula = Formula {
    name: "hours with the top oil above its limit",
    symbol: "t_oil",
    formula: "Σ Δt where θo > θo_limit",
    unit: "h",
    source: SOURCE,
};
const LIFE_USED: Formula = Formula {
    name: "hours of normal life used",
    symbol: "L",
    formula: "Σ V·Δt",
    unit: "h",
    source: SOURCE,
};
const LIFE_USED_PU: Formula = Formula {
    name: "life used over the hours of the year",
    symbol: "L_pu",
    formula: "L/t",
    unit: "",
    source: SOURCE,
};

/// A step of which the state at its start is kept, so that it can be stated.
#[derive(Clone, Copy)]
struct Kept {
    at: usize,
    start: State,
    value: f64,
}

impl Kept {
    fn raise(&mut self, at: usize, start: State, value: f64) {
        if value > self.value {
            *self = Self { at, start, value };
        }
    }
}

/// Runs a unit through equal steps of load (of the rating) and ambient, from the steady state of the first step.
/// States the hottest steps and the sums.
///
/// # Errors
/// Constants out of range, no step, loads and ambients of unequal number, a negative load.
pub fn year<R: Recorder>(
    w: &mut R,
    model: &ThermalModel,
    paper: Paper,
    limits: Limits,
    load_pu: &[f64],
    ambient_c: &[f64],
    step_minutes: f64,
) -> Result<Year, Refusal> {
    model.check()?;
    positive("step_minutes", step_minutes, "must be above zero")?;
    let (Some(first_load), Some(first_ambient)) = (load_pu.first(), ambient_c.first()) else {
        return Err(Refusal::new("load_pu", "", "no load to run through; give a profile"));
    };
    if load_pu.len() != ambient_c.len() {
        let why = format!("loads stand beside {} ambient temperatures", ambient_c.len());
        return Err(Refusal::new("load_pu", load_pu.len(), why));
    }
    let mut state = steady(&mut Silent, model, first_load.abs(), *first_ambient);
    let hours = step_minutes / 60.0;
    let mut hottest = Kept { at: 0, start: state, value: f64::NEG_INFINITY };
    let mut hottest_oil = hottest;
    let (mut above_hot_spot, mut above_top_oil, mut life, mut all) = (0.0, 0.0, 0.0, 0.0);
    let pass = |w: &mut R, start: State, n: usize| {
        let load = load_pu[n].abs();
        step(w, model, Scheme::Exact, start, load, ambient_c[n], step_minutes)
    };
    for (n, (load, ambient)) in load_pu.iter().zip(ambient_c).enumerate() {
        let start = state;
        state = step(&mut Silent, model, Scheme::Exact, start, load.abs(), *ambient, step_minutes)?;
        let hot = state.hot_spot_c();
        hottest.raise(n, start, hot);
        hottest_oil.raise(n, start, state.top_oil_c);
        above_hot_spot += if hot > limits.hot_spot_c { hours } else { 0.0 };
        above_top_oil += if state.top_oil_c > limits.top_oil_c { hours } else { 0.0 };
        life += paper.ageing_rate(&mut Silent, hot) * hours;
        all += hours;
    }
    let mut greatest = |kept: Kept, formula| {
        w.open();
        if w.listens() {
            pass(w, kept.start, kept.at)?;
        }
        w.close(formula, &[], kept.value);
        w.about(&|| format!("step {}", kept.at + 1));
        Ok(())
    };
    greatest(hottest, &HOTTEST)?;
    greatest(hottest_oil, &HOTTEST_OIL)?;
    w.step(&ABOVE_HOT_SPOT, &[("θh_limit", limits.hot_spot_c)], above_hot_spot);
    w.step(&ABOVE_TOP_OIL, &[("θo_limit", limits.top_oil_c)], above_top_oil);
    w.step(&LIFE_USED, &[], life);
    Ok(Year {
        hottest_step: hottest.at,
        hottest_hot_spot_c: hottest.value,
        hottest_top_oil_c: hottest_oil.value,
        hours_above_hot_spot: above_hot_spot,
        hours_above_top_oil: above_top_oil,
        life_used_hours: life,
        life_used_pu: w.step(&LIFE_USED_PU, &[("L", life), ("t", all)], life / all),
        hours: all,
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::transformer::thermal::CoolingMode;
    use crate::engine::working::Working;

    fn model() -> ThermalModel {
        let mode = CoolingMode::DistributionOnan;
        ThermalModel { constants: mode.constants(), rises: mode.typical_rises() }
    }

    #[test]
    fn a_year_is_summed() {
        let m = model();
        let load = [vec![0.5; 12], vec![1.4; 6], vec![0.5; 6]].concat();
        let run = |load: &[f64], ambient: &[f64]| {
            year(&mut Silent, &m, Paper::Normal, NORMAL_CYCLIC, load, ambient, 60.0)
        };
        let y = run(&load, &[20.0; 24]).expect("sound");
        assert_eq!(y.hottest_step, 17, "the last hour of the high load");
        assert!(y.hours_above_hot_spot > 0.0 && y.hours_above_hot_spot < 7.0);
        assert_eq!(y.hours, 24.0);
        assert!(run(&load, &[20.0; 23]).is_err());
        assert!(run(&[], &[]).is_err());
    }

    /// A constant load stays at its steady state, and its life used is V of that temperature.
    #[test]
    fn a_constant_load_is_steady() {
        let m = model();
        let y = year(&mut Silent, &m, Paper::Normal, NORMAL_CYCLIC, &[0.9; 48], &[25.0; 48], 30.0)
            .expect("sound");
        let hot = steady(&mut Silent, &m, 0.9, 25.0).hot_spot_c();
        assert!((y.hottest_hot_spot_c - hot).abs() < 1e-9);
        let rate = Paper::Normal.ageing_rate(&mut Silent, hot);
        assert!((y.life_used_pu / rate - 1.0).abs() < 1e-9 && y.hours == 24.0);
    }

    #[test]
    fn the_hottest_step_is_stated_from_its_start() {
        let load = [0.4, 1.2, 1.3, 0.2];
        let mut w = Working::default();
        let y = year(&mut w, &model(), Paper::Normal, NORMAL_CYCLIC, &load, &[20.0; 4], 60.0)
            .expect("sound");
        let hottest = &w.steps()[0];
        assert_eq!((hottest.value, hottest.of.as_str()), (y.hottest_hot_spot_c, "step 3"));
        assert_eq!(hottest.steps.last().map(|s| s.value), Some(y.hottest_hot_spot_c));
    }
}
