//! Failures: yearly probability from a Weibull age at failure; more of it in `survival`.

mod survival;

use crate::engine::working::{Formula, Recorder};

/// Age at failure: Weibull of shape b and scale η.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Weibull {
    /// Shape, b.
    pub shape: f64,
    /// Scale, η.
    pub scale_years: f64,
}

const FAILS_WITHIN: Formula = Formula {
    name: "probability that a unit of age a fails within n years",
    symbol: "h",
    formula: "1 − exp((a/η)^b − ((a+n)/η)^b)",
    unit: "pu",
    source: "Weibull 1951, conditional on having lived to age a",
};

impl Weibull {
    /// Probability that a unit that has reached `age` fails before `age` + 1 (years).
    pub fn fails_in_year<R: Recorder>(&self, w: &mut R, age: f64) -> f64 {
        self.fails_within(w, age, 1.0)
    }

    /// Probability that a unit of `age` fails within `years` (pu).
    pub fn fails_within<R: Recorder>(&self, w: &mut R, age: f64, years: f64) -> f64 {
        let hazard = |x: f64| (x / self.scale_years).powf(self.shape);
        let lived = hazard(age);
        // Nobody lives to an age at which the sum of the hazard is beyond any number.
        let value = if lived.is_finite() { -(lived - hazard(age + years)).exp_m1() } else { 1.0 };
        let inputs = [("a", age), ("η", self.scale_years), ("b", self.shape), ("n", years)];
        w.step(&FAILS_WITHIN, &inputs, value)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    /// T6-Weibull: scipy.stats.weibull_min, shape 3.5, scale 45, age 35.
    #[test]
    fn published_probability() {
        let weibull = Weibull { shape: 3.5, scale_years: 45.0 };
        let p = weibull.fails_in_year(&mut Silent, 35.0);
        assert!((p / 0.042_086_761_94 - 1.0).abs() < 1e-9);
        let steep = Weibull { shape: 100.0, scale_years: 0.1 };
        assert_eq!(steep.fails_in_year(&mut Silent, 146.0), 1.0);
    }
}
