//! What a Weibull age at failure says of a unit: hazard, survival, mean life, B10.

use super::Weibull;
use crate::engine::Refusal;
use crate::engine::working::{Formula, Recorder};

const HAZARD: Formula = Formula {
    name: "hazard rate at age a (a rate, not the probability of a year)",
    symbol: "λ",
    formula: "b/η·(a/η)^(b−1)",
    unit: "1/year",
    source: "Weibull 1951",
};
const SURVIVAL: Formula = Formula {
    name: "probability of reaching age a",
    symbol: "S",
    formula: "exp(−(a/η)^b)",
    unit: "pu",
    source: "Weibull 1951",
};
const MEAN_LIFE: Formula = Formula {
    name: "mean life",
    symbol: "L_mean",
    formula: "η·Γ(1 + 1/b)",
    unit: "years",
    source: "Weibull 1951",
};
const QUANTILE: Formula = Formula {
    name: "age by which the share q has failed",
    symbol: "B_q",
    formula: "η·(−ln(1−q))^(1/b)",
    unit: "years",
    source: "Weibull 1951",
};

impl Weibull {
    /// A Weibull of shape b and scale η.
    ///
    /// # Errors
    /// A shape or scale that is not above zero.
    pub fn new(shape: f64, scale_years: f64) -> Result<Self, Refusal> {
        for (quantity, value) in [("failure_shape", shape), ("failure_scale_years", scale_years)] {
            if value.is_nan() || value <= 0.0 {
                return Err(Refusal::new(quantity, value, "must be above zero"));
            }
        }
        Ok(Self { shape, scale_years })
    }

    /// Hazard rate at an age (1/year).
    pub fn hazard<R: Recorder>(&self, w: &mut R, age: f64) -> f64 {
        let (b, eta) = (self.shape, self.scale_years);
        let inputs = [("b", b), ("η", eta), ("a", age)];
        w.step(&HAZARD, &inputs, b / eta * (age / eta).powf(b - 1.0))
    }

    /// Probability of reaching an age (pu).
    pub fn survival<R: Recorder>(&self, w: &mut R, age: f64) -> f64 {
        let value = (-(age / self.scale_years).powf(self.shape)).exp();
        w.step(&SURVIVAL, &[("a", age), ("η", self.scale_years), ("b", self.shape)], value)
    }

    /// Mean life (years).
    pub fn mean_life<R: Recorder>(&self, w: &mut R) -> f64 {
        let value = self.scale_years * gamma(1.0 + 1.0 / self.shape);
        w.step(&MEAN_LIFE, &[("η", self.scale_years), ("b", self.shape)], value)
    }

    /// Age by which the share `q` has failed (years); q = 0.1 gives B10.
    pub fn quantile<R: Recorder>(&self, w: &mut R, q: f64) -> f64 {
        let value = self.scale_years * (-(-q).ln_1p()).powf(1.0 / self.shape);
        w.step(&QUANTILE, &[("η", self.scale_years), ("q", q), ("b", self.shape)], value)
    }
}

/// The gamma function for x ≥ 1, by the Lanczos series (g = 7, 9 terms; about 1e-15).
fn gamma(x: f64) -> f64 {
    const SERIES: [f64; 9] = [
        0.999_999_999_999_809_9,
        676.520_368_121_885_1,
        -1_259.139_216_722_402_8,
        771.323_428_777_653_1,
        -176.615_029_162_140_6,
        12.507_343_278_686_905,
        -0.138_571_095_265_720_12,
        9.984_369_578_019_572e-6,
        1.505_632_735_149_311_6e-7,
    ];
    let x = x - 1.0;
    let (mut sum, mut n) = (SERIES[0], 1.0);
    for term in &SERIES[1..] {
        sum += term / (x + n);
        n += 1.0;
    }
    let t = x + 7.5;
    (2.0 * std::f64::consts::PI).sqrt() * t.powf(x + 0.5) * (-t).exp() * sum
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    #[test]
    fn gamma_of_whole_numbers_and_a_half() {
        for (x, want) in [(1.0, 1.0), (2.0, 1.0), (5.0, 24.0), (11.0, 3_628_800.0)] {
            assert!((gamma(x) / want - 1.0).abs() < 1e-13, "{x}");
        }
        assert!((gamma(1.5) - std::f64::consts::PI.sqrt() / 2.0).abs() < 1e-14);
    }

    /// Shape 1 is the exponential: constant hazard, mean life the scale.
    #[test]
    fn shape_one_is_exponential() {
        let e = Weibull::new(1.0, 40.0).expect("sound");
        assert!((e.hazard(&mut Silent, 30.0) - 0.025).abs() < 1e-15);
        assert!((e.mean_life(&mut Silent) - 40.0).abs() < 1e-12);
        let b10 = e.quantile(&mut Silent, 0.1);
        assert!((e.survival(&mut Silent, b10) - 0.9).abs() < 1e-14);
        assert!(Weibull::new(0.0, 40.0).is_err() && Weibull::new(1.0, f64::NAN).is_err());
    }
}
