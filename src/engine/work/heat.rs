//! Calculations of heat: top-oil and hot-spot temperature, ageing.

use super::input::{Input, List, TEMPERATURE_C, calc};
use super::{Calc, Results, result};
use crate::engine::Refusal;
use crate::engine::columns::Insulation;
use crate::engine::transformer::ageing::{self, Paper};
use crate::engine::transformer::thermal::{self, CoolingMode, Scheme, State, ThermalModel, liquid};
use crate::engine::working::Silent;

pub(super) const CALCS: &[Calc] = &[HOT_SPOT, AGEING];

/// A positive constant of the thermal equations; blank: that of the cooling mode.
const CONSTANT: Input = Input::above(0.0, 1e5).blank("of the cooling mode");

calc! {
    HOT_SPOT = "hot-spot",
    "top-oil and hot-spot temperature of a liquid-immersed unit, steady or through steps of load",
    "IEC 60076-7; restricted-flow constants and typical rises from memory; methods, section 10";
    {
        load_pu: List<f64>, Input::real(0.0, 10.0).list().required(), "load of each step over the rating";
        minutes: List<f64>, Input::real(0.0, 1e7).list().blank("steady at each load"), "length of each step, or one for all";
        ambient_c: List<f64>, TEMPERATURE_C.list().default("20"), "ambient temperature of each step, or one for all";
        initial_load_pu: Option<f64>, Input::real(0.0, 10.0).blank("the first load"), "steady load before the first step";
        initial_ambient_c: Option<f64>, TEMPERATURE_C.blank("the first ambient"), "ambient temperature before the first step";
        initial_top_oil_c: Option<f64>, TEMPERATURE_C.blank("steady"), "top-oil temperature at the start, with no gradient";
        cooling_mode: CoolingMode, Input::choice(CoolingMode::WORDS).default("distribution-onan"), "row of the table of constants";
        insulation: Option<Insulation>, Input::choice(Insulation::WORDS).blank("liquid"), "what insulates the windings";
        top_oil_rise_k: Option<f64>, CONSTANT, "top-oil rise at rated load";
        gradient_k: Option<f64>, Input::real(0.0, 1e3).blank("of the cooling mode"), "average winding over average oil at rated load";
        loss_ratio: Option<f64>, Input::real(0.0, 1e5).blank("of the cooling mode"), "load loss over no-load loss";
        hot_spot_factor: Option<f64>, CONSTANT, "hot-spot factor H";
        oil_exponent: Option<f64>, CONSTANT, "x";
        winding_exponent: Option<f64>, CONSTANT, "y";
        k11: Option<f64>, CONSTANT, "constant k11";
        k21: Option<f64>, Input::real(1.0, 1e3).blank("of the cooling mode"), "constant k21";
        k22: Option<f64>, CONSTANT, "constant k22";
        oil_minutes: Option<f64>, CONSTANT, "time constant of the oil";
        winding_minutes: Option<f64>, CONSTANT, "time constant of the winding";
        scheme: Scheme, Input::choice(Scheme::WORDS).default("exact"), "how a step is taken";
        paper: Paper, Input::choice(Paper::WORDS).default("normal"), "paper, for the life that is used";
        hot_spot_limit_c: f64, TEMPERATURE_C.default("120"), "limit of the hot spot (normal cyclic loading, memory)";
        top_oil_limit_c: f64, TEMPERATURE_C.default("105"), "limit of the top oil (normal cyclic loading, memory)";
    }
    |i, w| {
        liquid(i.insulation)?;
        let (mut c, mut r) = (i.cooling_mode.constants(), i.cooling_mode.typical_rises());
        let set = |place: &mut f64, given: Option<f64>| *place = given.unwrap_or(*place);
        set(&mut c.oil_exponent, i.oil_exponent);
        set(&mut c.winding_exponent, i.winding_exponent);
        set(&mut c.k11, i.k11);
        set(&mut c.k21, i.k21);
        set(&mut c.k22, i.k22);
        set(&mut c.oil_minutes, i.oil_minutes);
        set(&mut c.winding_minutes, i.winding_minutes);
        set(&mut r.top_oil_k, i.top_oil_rise_k);
        set(&mut r.gradient_k, i.gradient_k);
        set(&mut r.loss_ratio, i.loss_ratio);
        set(&mut r.hot_spot_factor, i.hot_spot_factor);
        let model = ThermalModel { constants: c, rises: r };
        model.check()?;
        let n = i.load_pu.len();
        let ambient = i.ambient_c.as_long_as("ambient_c", n)?;
        if i.minutes.is_empty() {
            let given = [i.initial_load_pu, i.initial_ambient_c, i.initial_top_oil_c];
            if given.iter().any(Option::is_some) {
                let why = "is missing: a start is given, so the steps need their length";
                return Err(Refusal::new("minutes", "", why));
            }
            let states: Vec<State> = i.load_pu.iter().zip(ambient)
                .map(|(k, a)| thermal::steady(w, &model, *k, a))
                .collect();
            return Ok(temperatures(&states));
        }
        let minutes = i.minutes.as_long_as("minutes", n)?;
        let mut state = match (i.initial_top_oil_c, i.initial_load_pu) {
            (Some(_), Some(load)) => {
                let why = "stands beside initial_top_oil_c: give the steady load before, or the oil temperature";
                return Err(Refusal::new("initial_load_pu", load, why));
            }
            (Some(oil), None) => State { top_oil_c: oil, gradient_1_k: 0.0, gradient_2_k: 0.0 },
            (None, load) => {
                let (load, air) = (load.unwrap_or(i.load_pu[0]), i.initial_ambient_c.unwrap_or(ambient[0]));
                thermal::steady(w, &model, load, air)
            }
        };
        let mut states = Vec::with_capacity(n);
        let (mut life, mut above_hot, mut above_oil) = (0.0, 0.0, 0.0);
        for ((k, a), m) in i.load_pu.iter().zip(ambient).zip(minutes) {
            state = thermal::step(w, &model, i.scheme, state, *k, a, m)?;
            let hours = m / 60.0;
            life += i.paper.ageing_rate(&mut Silent, state.hot_spot_c()) * hours;
            above_hot += if state.hot_spot_c() > i.hot_spot_limit_c { hours } else { 0.0 };
            above_oil += if state.top_oil_c > i.top_oil_limit_c { hours } else { 0.0 };
            states.push(state);
        }
        Ok(temperatures(&states)
            .and("life_used_hours", life)
            .and("above_hot_spot_limit_hours", above_hot)
            .and("above_top_oil_limit_hours", above_oil))
    }
}

/// Both temperatures of each state, and the highest hot spot.
fn temperatures(states: &[State]) -> Results {
    let hot: Vec<f64> = states.iter().map(State::hot_spot_c).collect();
    let hottest = hot.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    result("top_oil_c", states.iter().map(|s| s.top_oil_c).collect::<Vec<f64>>())
        .and("hot_spot_c", hot)
        .and("hottest_hot_spot_c", hottest)
        .and("gradient_1_k", states.iter().map(|s| s.gradient_1_k).collect::<Vec<f64>>())
        .and("gradient_2_k", states.iter().map(|s| s.gradient_2_k).collect::<Vec<f64>>())
}

calc! {
    AGEING = "ageing",
    "ageing of paper at hot-spot temperatures: rate, equivalent factor, life used",
    "IEC 60076-7; IEEE C57.91; methods, section 10";
    {
        hot_spot_c: List<f64>, Input::real(-50.0, 400.0).list().required(), "hot-spot temperatures";
        hours: List<f64>, Input::real(0.0, 1e6).list().default("1"), "hours of each, or one for all";
        paper: Paper, Input::choice(Paper::WORDS).default("normal"), "paper (normal: not upgraded, 98 °C)";
        reference_hot_spot_c: f64, Input::real(50.0, 200.0).default("110"), "reference of F_AA: 110 for 65 °C rise, 95 for 55 °C rise";
        normal_life_hours: f64, Input::above(0.0, 1e7).default("180000"), "normal insulation life";
    }
    |i, w| {
        let hours = i.hours.as_long_as("hours", i.hot_spot_c.len())?;
        let rates: Vec<f64> =
            i.hot_spot_c.iter().map(|t| i.paper.ageing_rate(w, *t)).collect();
        let life = rates.iter().zip(&hours).map(|(v, h)| v * h).sum::<f64>();
        let faa: Vec<f64> = i.hot_spot_c.iter()
            .map(|t| ageing::acceleration(&mut Silent, *t, i.reference_hot_spot_c))
            .collect();
        let total = hours.iter().sum::<f64>();
        let pairs: Vec<(f64, f64)> = i.hot_spot_c.iter().copied().zip(hours).collect();
        let feqa = ageing::equivalent(w, &pairs, i.reference_hot_spot_c)?;
        let lost = ageing::life_lost(w, feqa, total, i.normal_life_hours)?;
        let per_unit: Vec<f64> =
            i.hot_spot_c.iter().map(|t| ageing::per_unit_life(w, *t)).collect();
        let in_years = per_unit.iter().map(|l| l * i.normal_life_hours / 8760.0).collect::<Vec<f64>>();
        Ok(result("ageing_rate", rates)
            .and("life_used_hours", life)
            .and("acceleration_factor", faa)
            .and("equivalent_factor", feqa)
            .and("life_lost_pct", lost)
            .and("per_unit_life_pu", per_unit)
            .and("insulation_life_years", in_years))
    }
}
