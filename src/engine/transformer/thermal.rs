//! Top-oil and hot-spot temperature of liquid-immersed transformers (IEC 60076-7): steady, and over time by three
//! first-order states. Owns constants, ratings and states; ageing is in [`super::ageing`]. Dry-type is refused.

mod year;

pub use year::{Limits, NORMAL_CYCLIC, Year, year};

use super::circuit::positive;
use super::losses::Losses;
use crate::engine::Refusal;
use crate::engine::columns::{Insulation, choice};
use crate::engine::working::{Formula, Recorder, Silent};

choice! {
    /// How a unit is cooled, as the table of constants names it.
    CoolingMode {
        /// Distribution transformer, natural.
        DistributionOnan = "distribution-onan",
        /// Medium and large power, natural.
        Onan = "onan",
        /// The same with restricted oil flow.
        OnanRestricted = "onan-restricted",
        /// Medium and large power, fans.
        Onaf = "onaf",
        /// The same with restricted oil flow.
        OnafRestricted = "onaf-restricted",
        /// Forced oil.
        Of = "of",
        /// The same with restricted oil flow.
        OfRestricted = "of-restricted",
        /// Forced and directed oil.
        Od = "od",
    }
}

/// Constants of the thermal equations.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Constants {
    /// Oil exponent, x.
    pub oil_exponent: f64,
    /// Winding exponent, y.
    pub winding_exponent: f64,
    /// k11.
    pub k11: f64,
    /// k21.
    pub k21: f64,
    /// k22.
    pub k22: f64,
    /// Time constant of the oil, τo, in minutes.
    pub oil_minutes: f64,
    /// Time constant of the winding, τw, in minutes.
    pub winding_minutes: f64,
}

/// Temperature rises at rated load.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Rises {
    /// Top-oil rise over ambient, Δθor (K).
    pub top_oil_k: f64,
    /// Average winding over average oil, gr (K).
    pub gradient_k: f64,
    /// Load loss over no-load loss at rated load, R.
    pub loss_ratio: f64,
    /// Hot-spot factor, H.
    pub hot_spot_factor: f64,
}

/// A unit as the thermal equations see it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ThermalModel {
    /// Constants.
    pub constants: Constants,
    /// Rises.
    pub rises: Rises,
}

/// Largest rating of the distribution class (kVA), three-phase and single-phase: IEC 60076-7 (memory).
const DISTRIBUTION_KVA: [(i64, f64); 2] = [(3, 2500.0), (1, 833.0)];

impl CoolingMode {
    /// The mode of a unit from its columns: the last stage of its cooling code; blank is ONAN.
    ///
    /// # Errors
    /// Dry-type units, and codes that are not of a liquid-immersed unit.
    pub fn of(
        rated_kva: f64,
        phases: Option<i64>,
        cooling: Option<&str>,
        insulation: Option<Insulation>,
    ) -> Result<Self, Refusal> {
        liquid(insulation)?;
        let code = cooling.unwrap_or("ONAN").trim().to_uppercase();
        let stage = code.rsplit('/').next().unwrap_or_default().trim();
        let limit = DISTRIBUTION_KVA.iter().find(|(n, _)| *n == phases.unwrap_or(3));
        let small = limit.is_some_and(|(_, kva)| rated_kva <= *kva);
        match stage.strip_prefix(['O', 'K', 'L']) {
            Some("NAN") if small => Ok(Self::DistributionOnan),
            Some("NAN") => Ok(Self::Onan),
            Some("NAF") => Ok(Self::Onaf),
            Some("FAN" | "FAF" | "FWF") => Ok(Self::Of),
            Some("DAN" | "DAF" | "DWF") => Ok(Self::Od),
            _ => {
                let why = "is not the code of a liquid-immersed unit (ONAN, ONAF, OFAF, OFWF, ODAF, ODWF or stages like ONAN/ONAF); dry-type units are not covered by the thermal model";
                Err(Refusal::new("cooling", &code, why))
            }
        }
    }

    /// The constants of this mode, IEC 60076-7 (text; the restricted variants from memory).
    pub const fn constants(self) -> Constants {
        let (x, y, k11, k21, k22, oil, winding) = match self {
            Self::DistributionOnan => (0.8, 1.6, 1.0, 1.0, 2.0, 180.0, 4.0),
            Self::Onan => (0.8, 1.3, 0.5, 2.0, 2.0, 210.0, 10.0),
            Self::OnanRestricted => (0.8, 1.3, 0.5, 3.0, 2.0, 210.0, 10.0),
            Self::Onaf => (0.8, 1.3, 0.5, 2.0, 2.0, 150.0, 7.0),
            Self::OnafRestricted => (0.8, 1.3, 0.5, 3.0, 2.0, 150.0, 7.0),
            Self::Of => (1.0, 1.3, 1.0, 1.3, 1.0, 90.0, 7.0),
            Self::OfRestricted => (1.0, 1.3, 1.0, 1.45, 1.0, 90.0, 7.0),
            Self::Od => (1.0, 2.0, 1.0, 1.0, 1.0, 90.0, 7.0),
        };
        Constants {
            oil_exponent: x,
            winding_exponent: y,
            k11,
            k21,
            k22,
            oil_minutes: oil,
            winding_minutes: winding,
        }
    }

    /// Typical rises of this mode (memory): an example, not the unit's own heat-run test.
    pub const fn typical_rises(self) -> Rises {
        let (top_oil_k, gradient_k, loss_ratio, hot_spot_factor) = match self {
            Self::DistributionOnan => (55.0, 23.0, 5.0, 1.1),
            Self::Onan | Self::OnanRestricted | Self::Onaf | Self::OnafRestricted => {
                (52.0, 26.0, 6.0, 1.3)
            }
            Self::Of | Self::OfRestricted => (56.0, 22.0, 6.0, 1.3),
            Self::Od => (49.0, 29.0, 6.0, 1.3),
        };
        Rises { top_oil_k, gradient_k, loss_ratio, hot_spot_factor }
    }
}

/// Refuses dry-type units.
///
/// # Errors
/// `insulation` is dry.
pub fn liquid(insulation: Option<Insulation>) -> Result<(), Refusal> {
    if insulation == Some(Insulation::Dry) {
        let why = "units have no oil: this thermal model holds for liquid-immersed units only; use the maker's loading guide (IEC 60076-12)";
        return Err(Refusal::new("insulation", "dry", why));
    }
    Ok(())
}

const LOSS_RATIO: Formula = Formula {
    name: "load loss over no-load loss at rated load",
    symbol: "R",
    formula: "Pk/P0",
    unit: "",
    source: "IEC 60076-7",
};

const fn rise(name: &'static str, symbol: &'static str, unit: &'static str) -> Formula {
    Formula { name, symbol, formula: "as stated", unit, source: "IEC 60076-7 (memory)" }
}
const TYPICAL_LOSS_RATIO: Formula =
    rise("load loss over no-load loss at rated load, typical: there is no no-load loss", "R", "");
/// Top-oil rise at rated load.
pub const TOP_OIL_RISE: Formula = rise("top-oil rise at rated load", "Δθor", "K");
/// Average winding over average oil.
pub const GRADIENT_RISE: Formula =
    rise("average winding over average oil at rated load", "gr", "K");
/// Hot-spot factor.
pub const HOT_SPOT_FACTOR: Formula = rise("hot-spot factor", "H", "");

/// What a unit may do beyond its rating is not said by a calculation: the words that stay on screen.
pub const CAUTION: &str = "Screening, not a loading instruction: loading beyond nameplate follows local codes, the manufacturer's instructions and licensed engineers.";

impl ThermalModel {
    /// The model of a unit of which only cooling and losses are known: constants and typical rises of its mode
    /// (memory), the loss ratio its own where it has a no-load loss.
    pub fn of_losses(mode: CoolingMode, losses: &Losses) -> Self {
        let loss_ratio = Self::loss_ratio(&mut Silent, mode, losses);
        Self { constants: mode.constants(), rises: Rises { loss_ratio, ..mode.typical_rises() } }
    }

    /// Load loss over no-load loss at rated load, R; the typical one where there is no no-load loss.
    pub fn loss_ratio<R: Recorder>(w: &mut R, mode: CoolingMode, losses: &Losses) -> f64 {
        let (p0, pk) = (losses.no_load_loss_w, losses.load_loss_w);
        if p0 > 0.0 {
            w.step(&LOSS_RATIO, &[("Pk", pk), ("P0", p0)], pk / p0)
        } else {
            w.step(&TYPICAL_LOSS_RATIO, &[], mode.typical_rises().loss_ratio)
        }
    }

    /// Holds all constants and rises in their ranges.
    ///
    /// # Errors
    /// The first one that is out of range.
    pub fn check(&self) -> Result<(), Refusal> {
        let (c, r) = (&self.constants, &self.rises);
        let why = "must be above zero";
        positive("oil_exponent", c.oil_exponent, why)?;
        positive("winding_exponent", c.winding_exponent, why)?;
        positive("k11", c.k11, why)?;
        positive("k22", c.k22, why)?;
        positive("oil_minutes", c.oil_minutes, why)?;
        positive("winding_minutes", c.winding_minutes, why)?;
        positive("top_oil_rise_k", r.top_oil_k, why)?;
        positive("hot_spot_factor", r.hot_spot_factor, why)?;
        if c.k21 < 1.0 {
            return Err(Refusal::new("k21", c.k21, "is at least 1"));
        }
        if r.loss_ratio < 0.0 || r.gradient_k < 0.0 {
            let why = "loss ratio and gradient cannot be negative";
            return Err(Refusal::new("loss_ratio", r.loss_ratio, why));
        }
        Ok(())
    }
}

/// The three states of the thermal equations.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct State {
    /// Top-oil temperature, θo (°C).
    pub top_oil_c: f64,
    /// First gradient, g1 (K).
    pub gradient_1_k: f64,
    /// Second gradient, g2 (K).
    pub gradient_2_k: f64,
}

impl State {
    /// Hot-spot temperature, θo + g1 − g2 (°C).
    pub fn hot_spot_c(&self) -> f64 {
        self.top_oil_c + self.gradient_1_k - self.gradient_2_k
    }
}

const TOP_OIL: Formula = Formula {
    name: "top-oil temperature at a steady load",
    symbol: "θo",
    formula: "θa + Δθor·((1 + R·K²)/(1 + R))^x",
    unit: "°C",
    source: "IEC 60076-7",
};
const GRADIENT: Formula = Formula {
    name: "hot spot over top oil at a steady load",
    symbol: "Δθh",
    formula: "H·gr·K^y",
    unit: "K",
    source: "IEC 60076-7",
};
const HOT_SPOT: Formula = Formula {
    name: "hot-spot temperature",
    symbol: "θh",
    formula: "θo + g1 − g2",
    unit: "°C",
    source: "IEC 60076-7; g1 − g2 is Δθh at a steady load",
};

/// Where oil and gradient tend to: top oil (°C) and hot spot over top oil (K) at a steady load of `k` of the rating.
fn targets<R: Recorder>(w: &mut R, model: &ThermalModel, k: f64, ambient_c: f64) -> (f64, f64) {
    let (c, r) = (&model.constants, &model.rises);
    let ratio = (1.0 + r.loss_ratio * k * k) / (1.0 + r.loss_ratio);
    let oil = ambient_c + r.top_oil_k * ratio.powf(c.oil_exponent);
    let inputs = [
        ("θa", ambient_c),
        ("Δθor", r.top_oil_k),
        ("R", r.loss_ratio),
        ("K", k),
        ("x", c.oil_exponent),
    ];
    w.step(&TOP_OIL, &inputs, oil);
    let gradient = r.hot_spot_factor * r.gradient_k * k.powf(c.winding_exponent);
    let inputs =
        [("H", r.hot_spot_factor), ("gr", r.gradient_k), ("K", k), ("y", c.winding_exponent)];
    w.step(&GRADIENT, &inputs, gradient);
    (oil, gradient)
}

/// The state at a steady load of `k` of the rating.
pub fn steady<R: Recorder>(w: &mut R, model: &ThermalModel, k: f64, ambient_c: f64) -> State {
    w.open();
    let (oil, gradient) = targets(w, model, k, ambient_c);
    let k21 = model.constants.k21;
    let state = State {
        top_oil_c: oil,
        gradient_1_k: k21 * gradient,
        gradient_2_k: (k21 - 1.0) * gradient,
    };
    close_hot_spot(w, &state);
    state
}

fn close_hot_spot<R: Recorder>(w: &mut R, state: &State) {
    let inputs = [("θo", state.top_oil_c), ("g1", state.gradient_1_k), ("g2", state.gradient_2_k)];
    w.close(&HOT_SPOT, &inputs, state.hot_spot_c());
}

choice! {
    /// How a step of time is taken.
    Scheme {
        /// The exact solution for constant load and ambient within the step.
        Exact = "exact",
        /// The difference equations of IEC 60076-7; steps of at most half the smallest time constant.
        Euler = "euler",
    }
}

const OIL_EXACT: Formula = Formula {
    name: "top oil after the step, τ = k11·τo",
    symbol: "θo",
    formula: "x_end + (x_start − x_end)·exp(−Δt/τ)",
    unit: "°C",
    source: "IEC 60076-7, exponential equations",
};
const OIL_EULER: Formula = Formula {
    formula: "x_end + (x_start − x_end)·(1 − Δt/τ)",
    source: "IEC 60076-7, difference equations",
    ..OIL_EXACT
};
const G1_EXACT: Formula = Formula {
    name: "first gradient after the step, τ = k22·τw",
    symbol: "g1",
    unit: "K",
    ..OIL_EXACT
};
const G1_EULER: Formula =
    Formula { formula: OIL_EULER.formula, source: OIL_EULER.source, ..G1_EXACT };
const G2_EXACT: Formula = Formula {
    name: "second gradient after the step, τ = τo/k22",
    symbol: "g2",
    unit: "K",
    ..OIL_EXACT
};
const G2_EULER: Formula =
    Formula { formula: OIL_EULER.formula, source: OIL_EULER.source, ..G2_EXACT };

/// The state after `minutes` of constant load `k` and ambient.
///
/// # Errors
/// A negative load or time; for Euler a step above half the smallest time constant.
pub fn step<R: Recorder>(
    w: &mut R,
    model: &ThermalModel,
    scheme: Scheme,
    state: State,
    k: f64,
    ambient_c: f64,
    minutes: f64,
) -> Result<State, Refusal> {
    if k < 0.0 || k.is_nan() {
        return Err(Refusal::new(
            "load_pu",
            k,
            "cannot be negative: give the magnitude of the load",
        ));
    }
    if minutes < 0.0 || minutes.is_nan() {
        return Err(Refusal::new("minutes", minutes, "cannot be negative"));
    }
    let c = &model.constants;
    let oil_tau = c.k11 * c.oil_minutes;
    let first_tau = c.k22 * c.winding_minutes;
    let second_tau = c.oil_minutes / c.k22;
    let smallest = oil_tau.min(first_tau).min(second_tau);
    if scheme == Scheme::Euler && minutes > smallest / 2.0 {
        let why = format!(
            "is more than half of the smallest time constant ({smallest} min): take shorter steps, or scheme exact"
        );
        return Err(Refusal::new("minutes", minutes, why));
    }
    w.open();
    let (oil, gradient) = targets(w, model, k, ambient_c);
    let mut toward = |formulas: [&'static Formula; 2], start: f64, end: f64, tau: f64| {
        let (formula, left) = match scheme {
            Scheme::Exact => (formulas[0], (-minutes / tau).exp()),
            Scheme::Euler => (formulas[1], 1.0 - minutes / tau),
        };
        let inputs = [("x_start", start), ("x_end", end), ("Δt", minutes), ("τ", tau)];
        w.step(formula, &inputs, end + (start - end) * left)
    };
    let (first, second) = (c.k21 * gradient, (c.k21 - 1.0) * gradient);
    let state = State {
        top_oil_c: toward([&OIL_EXACT, &OIL_EULER], state.top_oil_c, oil, oil_tau),
        gradient_1_k: toward([&G1_EXACT, &G1_EULER], state.gradient_1_k, first, first_tau),
        gradient_2_k: toward([&G2_EXACT, &G2_EULER], state.gradient_2_k, second, second_tau),
    };
    close_hot_spot(w, &state);
    Ok(state)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn model(mode: CoolingMode) -> ThermalModel {
        ThermalModel { constants: mode.constants(), rises: mode.typical_rises() }
    }

    /// At rated load and 20 °C the rises add up: 20 + Δθor + H·gr.
    #[test]
    fn rated_load_gives_rated_rises() {
        let state = steady(&mut Silent, &model(CoolingMode::Onan), 1.0, 20.0);
        assert!((state.hot_spot_c() - (20.0 + 52.0 + 1.3 * 26.0)).abs() < 1e-12);
    }

    /// One exact step of an hour equals sixty of a minute; a steady state stays; Euler tends to the exact one.
    #[test]
    fn exact_steps_do_not_depend_on_their_length() {
        let m = model(CoolingMode::Onaf);
        let start = steady(&mut Silent, &m, 0.5, 20.0);
        let go = |scheme, n: u32, minutes| {
            (0..n).fold(start, |s, _| {
                step(&mut Silent, &m, scheme, s, 1.3, 25.0, minutes).expect("sound")
            })
        };
        let (long, short) = (go(Scheme::Exact, 1, 60.0), go(Scheme::Exact, 60, 1.0));
        assert!((long.hot_spot_c() - short.hot_spot_c()).abs() < 1e-10);
        let error = |minutes: f64, n| {
            (go(Scheme::Euler, n, minutes).hot_spot_c() - long.hot_spot_c()).abs()
        };
        assert!(error(0.1, 600) < error(1.0, 60) / 5.0);
        let still = step(&mut Silent, &m, Scheme::Exact, start, 0.5, 20.0, 600.0).expect("sound");
        assert!((still.hot_spot_c() - start.hot_spot_c()).abs() < 1e-10);
        assert!(step(&mut Silent, &m, Scheme::Euler, start, 1.0, 20.0, 60.0).is_err());
    }

    #[test]
    fn cooling_codes() {
        let of = |kva, code| CoolingMode::of(kva, Some(3), code, None);
        assert_eq!(of(400.0, None), Ok(CoolingMode::DistributionOnan));
        assert_eq!(of(40_000.0, Some("ONAN")), Ok(CoolingMode::Onan));
        assert_eq!(of(40_000.0, Some("ONAN/ONAF")), Ok(CoolingMode::Onaf));
        assert_eq!(of(90_000.0, Some("ODAF")), Ok(CoolingMode::Od));
        assert_eq!(of(90_000.0, Some("KFWF")), Ok(CoolingMode::Of));
        assert!(of(400.0, Some("AN")).is_err());
        assert!(of(400.0, Some("ÖÖ")).is_err());
        assert!(CoolingMode::of(400.0, None, None, Some(Insulation::Dry)).is_err());
    }
}
