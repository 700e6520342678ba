//! Load factor and loss factor where no curve is known.

use crate::engine::Refusal;
use crate::engine::working::{Formula, Recorder};

const LOSS_FACTOR: Formula = Formula {
    name: "loss factor from the load factor",
    symbol: "LsF",
    formula: "w·LF + (1−w)·LF²",
    unit: "pu",
    source: "form: Buller & Woodrow 1928 (w 0.3); w 0.15 for distribution transformers: common practice",
};

/// Loss factor of a load of which only the load factor is known.
pub fn loss_factor<R: Recorder>(w: &mut R, load_factor_pu: f64, weight_pu: f64) -> f64 {
    let value = weight_pu * load_factor_pu + (1.0 - weight_pu) * load_factor_pu * load_factor_pu;
    w.step(&LOSS_FACTOR, &[("w", weight_pu), ("LF", load_factor_pu)], value)
}

/// Holds LF² ≤ LsF ≤ LF (to 1e-12), which every load obeys.
///
/// # Errors
/// The two factors cannot belong to one load.
pub fn check(load_factor_pu: f64, loss_factor_pu: f64) -> Result<(), Refusal> {
    let (lf, lsf) = (load_factor_pu, loss_factor_pu);
    if lf * lf <= lsf + 1e-12 && lsf <= lf + 1e-12 {
        return Ok(());
    }
    let why = format!(
        "no load with load factor {lf} has this loss factor; it lies between {:.6} and {lf} (LF² ≤ LsF ≤ LF)",
        lf * lf
    );
    Err(Refusal::new("loss_factor_pu", lsf, why))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    /// T2-k0.15 and T2-LLF-0.65 (published 0.490 rounds 0.49075).
    #[test]
    fn published_loss_factors() {
        assert!((loss_factor(&mut Silent, 0.5, 0.15) - 0.2875).abs() < 1e-15);
        assert!((loss_factor(&mut Silent, 0.65, 0.3) - 0.490).abs() < 1e-3);
        assert_eq!(loss_factor(&mut Silent, 1.0, 0.15), 1.0);
    }

    #[test]
    fn impossible_pairs_are_refused() {
        assert!(check(0.5, 0.5).is_ok() && check(0.5, 0.25).is_ok() && check(0.0, 0.0).is_ok());
        assert!(check(0.5, 0.51).is_err() && check(0.5, 0.24).is_err());
    }
}
