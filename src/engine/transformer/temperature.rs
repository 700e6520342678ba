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
}
