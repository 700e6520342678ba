//! Harmonic currents: how much more eddy and stray loss they make, and the current that may then flow
//! (IEEE C57.110).

use super::circuit::positive;
use crate::engine::Refusal;
use crate::engine::working::{Formula, Recorder};

/// One harmonic: its order and its current at any scale.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Harmonic {
    /// Order, 1 for the fundamental.
    pub order: f64,
    /// Rms current.
    pub current: f64,
}

const EDDY_TERM: Formula = Formula {
    name: "squared current times squared order of a harmonic",
    symbol: "e_h",
    formula: "(h·I_h)²",
    unit: "",
    source: "IEEE C57.110 (memory)",
};
const F_HL: Formula = Formula {
    name: "harmonic loss factor of winding eddy losses",
    symbol: "F_HL",
    formula: "Σe_h/Σi_h",
    unit: "",
    source: "IEEE C57.110 (memory): Σ(h·I_h)²/ΣI_h², i_h = I_h²",
};
const F_STR: Formula = Formula {
    name: "harmonic loss factor of other stray losses",
    symbol: "F_STR",
    formula: "Σs_h/Σi_h",
    unit: "",
    source: "IEEE C57.110 (memory): Σh^0.8·I_h²/ΣI_h²",
};

/// The harmonic loss factors: of winding eddy losses, of other stray losses.
///
/// # Errors
/// No current, a harmonic of an order below 1, a negative current.
pub fn loss_factors<R: Recorder>(w: &mut R, harmonics: &[Harmonic]) -> Result<(f64, f64), Refusal> {
    let (mut square, mut eddy, mut stray) = (0.0, 0.0, 0.0);
    for Harmonic { order, current } in harmonics {
        if *order < 1.0 {
            let why = "is below 1; the fundamental is 1, the fifth harmonic 5";
            return Err(Refusal::new("harmonic_order", order, why));
        }
        if *current < 0.0 {
            return Err(Refusal::new("harmonic_current_pu", current, "cannot be negative"));
        }
        let i2 = current * current;
        square += i2;
        eddy += w.step(&EDDY_TERM, &[("h", *order), ("I_h", *current)], order * order * i2);
        stray += order.powf(0.8) * i2;
    }
    positive("harmonic_current_pu", square, "give the current of each harmonic, one above zero")?;
    let f_hl = w.step(&F_HL, &[("Σe_h", eddy), ("Σi_h", square)], eddy / square);
    let f_str = w.step(&F_STR, &[("Σs_h", stray), ("Σi_h", square)], stray / square);
    Ok((f_hl, f_str))
}

/// How the loss at rated sinusoidal current is made up, in per unit of its I²R.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct LoadLossParts {
    /// Winding eddy loss, P_EC.
    pub eddy_pu: f64,
    /// Other stray loss, P_OSL (structure of a liquid-immersed unit; 0 for dry-type).
    pub other_stray_pu: f64,
}

const PERMISSIBLE: Formula = Formula {
    name: "permissible current, per unit of rated",
    symbol: "I_max",
    formula: "√((1 + P_EC + P_OSL)/(1 + F_HL·P_EC + F_STR·P_OSL))",
    unit: "pu",
    source: "IEEE C57.110 (memory)",
};

/// Current that makes no more loss than rated sinusoidal current does (pu).
///
/// # Errors
/// A negative part of the loss.
pub fn permissible_current<R: Recorder>(
    w: &mut R,
    parts: LoadLossParts,
    f_hl: f64,
    f_str: f64,
) -> Result<f64, Refusal> {
    let LoadLossParts { eddy_pu, other_stray_pu } = parts;
    for (quantity, value) in [("eddy_pu", eddy_pu), ("other_stray_pu", other_stray_pu)] {
        if !(0.0..=10.0).contains(&value) {
            let why = "is a part of the rated load loss per unit of I²R: between 0 and 10";
            return Err(Refusal::new(quantity, value, why));
        }
    }
    let rated = 1.0 + eddy_pu + other_stray_pu;
    let value = (rated / (1.0 + f_hl * eddy_pu + f_str * other_stray_pu)).sqrt();
    let inputs = [("P_EC", eddy_pu), ("P_OSL", other_stray_pu), ("F_HL", f_hl), ("F_STR", f_str)];
    Ok(w.step(&PERMISSIBLE, &inputs, value))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    #[test]
    fn a_sine_wave_costs_nothing() {
        let pure = [Harmonic { order: 1.0, current: 0.7 }];
        assert_eq!(loss_factors(&mut Silent, &pure).expect("sound"), (1.0, 1.0));
        let parts = LoadLossParts { eddy_pu: 0.15, other_stray_pu: 0.1 };
        assert_eq!(permissible_current(&mut Silent, parts, 1.0, 1.0).expect("sound"), 1.0);
        assert!(loss_factors(&mut Silent, &[]).is_err());
        assert!(loss_factors(&mut Silent, &[Harmonic { order: 0.0, current: 1.0 }]).is_err());
    }
}
