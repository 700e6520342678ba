//! How far one uncertain input may lie: its distribution, by quantiles, so that one uniform number gives one value.

use statrs::distribution::{ContinuousCDF as _, Normal};

use crate::engine::Refusal;
use crate::engine::columns::{BasisRange, Distribution};

/// The distribution of an input.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Spread {
    /// Between `low` and `high`, most often about `mode`.
    Triangular {
        /// Lowest value.
        low: f64,
        /// Most likely value.
        mode: f64,
        /// Highest value.
        high: f64,
    },
    /// Anywhere between `low` and `high`.
    Uniform {
        /// Lowest value.
        low: f64,
        /// Highest value.
        high: f64,
    },
    /// About `mean` with the standard deviation `deviation`.
    Normal {
        /// Mean.
        mean: f64,
        /// Standard deviation.
        deviation: f64,
    },
    /// `median` times the exponential of a normal with `deviation`.
    Lognormal {
        /// Median.
        median: f64,
        /// Standard deviation of the natural logarithm.
        deviation: f64,
    },
}

/// Part of the draws below the low end and above the high end by which an input without bounds is shown.
const TAIL: f64 = 0.05;

impl Spread {
    /// The distribution of a range; `base` is the input's value in the basis.
    ///
    /// # Errors
    /// What the distribution needs is blank or out of order.
    pub fn of(range: &BasisRange, base: Option<f64>) -> Result<Self, Refusal> {
        let distribution = range.distribution.unwrap_or(Distribution::Triangular);
        let need = |quantity, value: Option<f64>| {
            value.ok_or_else(|| {
                let why = format!(
                    "is blank; the {} range of {} needs it",
                    distribution.word(),
                    range.quantity
                );
                Refusal::new(quantity, "", why)
            })
        };
        let ordered = |parts: &[f64]| {
            if parts.windows(2).all(|pair| pair[0] <= pair[1]) {
                return Ok(());
            }
            let why = format!(
                "is out of order in the range of {}; low ≤ base ≤ high must hold",
                range.quantity
            );
            Err(Refusal::new("low", parts[0], why))
        };
        match distribution {
            Distribution::Triangular => {
                let (low, high) = (need("low", range.low)?, need("high", range.high)?);
                let mode = need("base", range.base.or(base))?;
                ordered(&[low, mode, high])?;
                Ok(Self::Triangular { low, mode, high })
            }
            Distribution::Uniform => {
                let (low, high) = (need("low", range.low)?, need("high", range.high)?);
                ordered(&[low, high])?;
                Ok(Self::Uniform { low, high })
            }
            Distribution::Normal => {
                let mean = need("mean", range.mean.or(range.base).or(base))?;
                Ok(Self::Normal { mean, deviation: need("deviation", range.deviation)? })
            }
            Distribution::Lognormal => {
                let median = need("mean", range.mean.or(range.base).or(base))?;
                if median <= 0.0 {
                    let why = format!(
                        "must be above zero: the lognormal range of {} is about its median",
                        range.quantity
                    );
                    return Err(Refusal::new("mean", median, why));
                }
                Ok(Self::Lognormal { median, deviation: need("deviation", range.deviation)? })
            }
        }
    }

    /// The value below which the part `u` of all draws lies, 0 < u < 1.
    pub fn quantile(&self, u: f64) -> f64 {
        match *self {
            Self::Triangular { low, mode, high } => {
                let (left, right, width) = (mode - low, high - mode, high - low);
                if width == 0.0 {
                    low
                } else if u * width < left {
                    low + (u * width * left).sqrt()
                } else {
                    high - ((1.0 - u) * width * right).sqrt()
                }
            }
            Self::Uniform { low, high } => low + u * (high - low),
            Self::Normal { mean, deviation } => {
                mean + deviation * Normal::standard().inverse_cdf(u)
            }
            Self::Lognormal { median, deviation } => {
                median * (deviation * Normal::standard().inverse_cdf(u)).exp()
            }
        }
    }

    /// The ends between which the input is swung on its own: the bounds, or P5 and P95 where there are none.
    pub fn ends(&self) -> [f64; 2] {
        match *self {
            Self::Triangular { low, high, .. } | Self::Uniform { low, high } => [low, high],
            Self::Normal { .. } | Self::Lognormal { .. } => {
                [self.quantile(TAIL), self.quantile(1.0 - TAIL)]
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn near(got: f64, want: f64) {
        assert!((got - want).abs() < 1e-9 * want.abs().max(1.0), "{got} instead of {want}");
    }

    /// Against scipy.stats 1.17: triang.ppf(u, 0.2, 1, 10), norm.ppf, lognorm.ppf(u, 0.25, scale=8).
    #[test]
    fn quantiles_against_scipy() {
        let triangular = Spread::Triangular { low: 1.0, mode: 3.0, high: 11.0 };
        near(triangular.quantile(0.1), 2.414_213_562_373_095);
        near(triangular.quantile(0.2), 3.0);
        near(triangular.quantile(0.75), 6.527_864_045_000_421);
        let normal = Spread::Normal { mean: 6.0, deviation: 1.5 };
        near(normal.quantile(0.05), 3.532_719_559_572_791);
        near(normal.quantile(0.999), 10.635_348_459_251_72);
        let lognormal = Spread::Lognormal { median: 8.0, deviation: 0.25 };
        near(lognormal.quantile(0.95), 12.069_178_221_607_148);
        assert_eq!(Spread::Uniform { low: -1.0, high: 3.0 }.quantile(0.25), 0.0);
        assert_eq!(Spread::Triangular { low: 2.0, mode: 2.0, high: 2.0 }.quantile(0.5), 2.0);
        assert_eq!(triangular.ends(), [1.0, 11.0]);
        near(normal.ends()[0], 3.532_719_559_572_791);
    }

    #[test]
    fn what_is_blank_is_asked_for() {
        let range = |distribution| BasisRange {
            quantity: "discount_rate_pct".into(),
            distribution,
            low: Some(4.0),
            high: Some(8.0),
            ..BasisRange::blank()
        };
        let triangular = Spread::Triangular { low: 4.0, mode: 6.0, high: 8.0 };
        assert_eq!(Spread::of(&range(None), Some(6.0)), Ok(triangular));
        let refused = |range: &BasisRange, base| {
            Spread::of(range, base).expect_err("must be refused").to_string()
        };
        assert!(refused(&range(None), None).starts_with("base: is blank"));
        assert!(refused(&range(None), Some(9.0)).contains("low ≤ base ≤ high"));
        let normal = range(Some(Distribution::Normal));
        assert!(refused(&normal, Some(6.0)).starts_with("deviation: is blank"));
        let lognormal = BasisRange { deviation: Some(0.1), ..range(Some(Distribution::Lognormal)) };
        assert!(refused(&lognormal, Some(0.0)).contains("above zero"));
    }
}
