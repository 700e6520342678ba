//! Load loss at another winding temperature (IEC 60076-1 Annex E, memory): I²R rises, stray falls.

use crate::engine::columns::WindingMetal;
use crate::engine::working::{Formula, Recorder};

/// Temperature at which the resistance of the metal would vanish, negated (°C).
///
/// 235 copper, 225 aluminium: IEC 60076-1 (US practice takes 234.5 for copper); the mean for mixed windings.
pub const fn vanishing_temp_c(metal: WindingMetal) -> f64 {
    match metal {
        WindingMetal::Copper => 235.0,
        WindingMetal::Aluminium => 225.0,
        WindingMetal::Mixed => 230.0,
    }
}

const RATIO: Formula = Formula {
    name: "ratio of winding resistances",
    symbol: "x",
    formula: "(T0+θ)/(T0+θ_from)",
    unit: "",
    source: "IEC 60076-1 Annex E (memory)",
};
const AT_TEMPERATURE: Formula = Formula {
    name: "load loss at temperature θ",
    symbol: "Pk",
    formula: "P_I2R·x + P_stray/x",
    unit: "W",
    source: "IEC 60076-1 Annex E (memory)",
};

/// Brings a load loss from one winding temperature to another, its I²R and stray parts apart (W, °C).
pub fn load_loss_at<R: Recorder>(
    w: &mut R,
    resistive_w: f64,
    stray_w: f64,
    metal_t0_c: f64,
    from_c: f64,
    to_c: f64,
) -> f64 {
    w.open();
    let x = (metal_t0_c + to_c) / (metal_t0_c + from_c);
    w.step(&RATIO, &[("T0", metal_t0_c), ("θ", to_c), ("θ_from", from_c)], x);
    let value = resistive_w * x + stray_w / x;
    w.close(&AT_TEMPERATURE, &[("P_I2R", resistive_w), ("P_stray", stray_w), ("x", x)], value)
}

const AT_REFERENCE: Formula = Formula {
    name: "measured load loss at the reference temperature, stray part s of it",
    symbol: "Pk",
    formula: "P_test/((1−s)·x + s/x)",
    unit: "W",
    source: "IEC 60076-1 Annex E (memory), the split given at the reference temperature; methods, section 8",
};

/// Brings a load loss measured at `test_c` to `reference_c` where only the stray share of the loss at the
/// reference temperature is known, 0 to 1 (W, °C).
pub fn load_loss_at_reference<R: Recorder>(
    w: &mut R,
    measured_w: f64,
    stray_share_pu: f64,
    metal_t0_c: f64,
    test_c: f64,
    reference_c: f64,
) -> f64 {
    w.open();
    let x = (metal_t0_c + test_c) / (metal_t0_c + reference_c);
    w.step(&RATIO, &[("T0", metal_t0_c), ("θ", test_c), ("θ_from", reference_c)], x);
    let s = stray_share_pu;
    let value = measured_w / ((1.0 - s) * x + s / x);
    w.close(&AT_REFERENCE, &[("P_test", measured_w), ("s", s), ("x", x)], value)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    /// Numbers of T4-loadloss-temp: 1200 W at 28 °C of which 1050 W are I²R, to 75 °C.
    #[test]
    fn resistive_part_rises_and_stray_part_falls() {
        let at = |t0| load_loss_at(&mut Silent, 1050.0, 150.0, t0, 28.0, 75.0);
        assert!((at(235.0) / 1364.90065 - 1.0).abs() < 1e-8);
        assert!((at(225.0) / 1371.559289 - 1.0).abs() < 1e-8);
        assert!((at(234.5) / 1365.221325 - 1.0).abs() < 1e-8);
    }

    /// What is measured is what the loss at the reference temperature becomes at that of the test.
    #[test]
    fn test_and_reference_agree() {
        let (pk, s) = (4000.0, 0.1);
        let test = load_loss_at(&mut Silent, (1.0 - s) * pk, s * pk, 235.0, 75.0, 21.0);
        let back = load_loss_at_reference(&mut Silent, test, s, 235.0, 21.0, 75.0);
        assert!((back / pk - 1.0).abs() < 1e-14);
    }
}
