//! Uncertain inputs: how far each may lie, draws from all of them together, and order statistics.
//!
//! [`spread`] is the distribution of one input, [`inputs`] sets drawn values into a basis and a lot. Draw `item`
//! of a seed is the same whatever was drawn before and on however many threads: each has a stream of its own.

pub mod inputs;
pub mod spread;

use rand_chacha::ChaCha8Rng;
use rand_chacha::rand_core::{Rng as _, SeedableRng as _};
use statrs::distribution::{ContinuousCDF as _, Normal};

use crate::engine::Refusal;

pub use inputs::Inputs;
pub use spread::Spread;

/// `count` independent numbers between 0 and 1 (neither included): draw `item` of `seed`.
pub fn uniforms(seed: u64, item: u64, count: usize) -> Vec<f64> {
    let mut stream = ChaCha8Rng::seed_from_u64(seed);
    stream.set_stream(item);
    #[expect(clippy::cast_precision_loss, reason = "53 bits")]
    let mut uniform = || ((stream.next_u64() >> 11) as f64 + 0.5) / (1_u64 << 53) as f64;
    (0..count).map(|_| uniform()).collect()
}

/// Two inputs that move together: Spearman's rank correlation between them.
#[derive(Clone, Debug, PartialEq)]
pub struct RankCorrelation {
    /// The two inputs, by name.
    pub quantities: [String; 2],
    /// From −1 to 1.
    pub rank_correlation: f64,
}

/// Makes independent uniforms dependent (normal copula); the distribution of each stays what it is.
#[derive(Clone, Debug, PartialEq)]
pub struct Copula {
    /// Lower triangle of the Cholesky factor of the normal correlations, by rows.
    rows: Vec<Vec<f64>>,
}

impl Copula {
    /// A copula over `names` with the given pairs; pairs that are not given are independent. Pearson's
    /// correlation of the normals is 2·sin(π·ρ/6) of the rank correlation ρ (Pearson 1907, memory).
    ///
    /// # Errors
    /// A pair of unknown or equal names, or correlations that cannot hold together.
    pub fn new(names: &[&str], pairs: &[RankCorrelation]) -> Result<Self, Refusal> {
        let n = names.len();
        let mut matrix = vec![vec![0.0; n]; n];
        for (i, row) in matrix.iter_mut().enumerate() {
            row[i] = 1.0;
        }
        for pair in pairs {
            let place = |name: &String| names.iter().position(|known| known == name);
            let [Some(i), Some(j)] = pair.quantities.each_ref().map(place) else {
                let why = "joins an input that has no range; give both inputs a range";
                return Err(Refusal::new("rank_correlation", pair.quantities.join(" "), why));
            };
            if i == j || !(-1.0..=1.0).contains(&pair.rank_correlation) {
                let why = "must lie between −1 and 1 and join two different inputs";
                return Err(Refusal::new("rank_correlation", pair.rank_correlation, why));
            }
            let normal = 2.0 * (std::f64::consts::PI / 6.0 * pair.rank_correlation).sin();
            matrix[i][j] = normal;
            matrix[j][i] = normal;
        }
        cholesky(&matrix).map(|rows| Self { rows }).ok_or_else(|| {
            let why = "these correlations cannot hold together; weaken one of them";
            Refusal::new("rank_correlation", "", why)
        })
    }

    /// The dependent uniforms of independent ones.
    pub fn join(&self, independent: &[f64]) -> Vec<f64> {
        let normal = Normal::standard();
        let z: Vec<f64> = independent.iter().map(|u| normal.inverse_cdf(*u)).collect();
        let mixed = |row: &Vec<f64>| row.iter().zip(&z).map(|(l, z)| l * z).sum::<f64>();
        self.rows.iter().map(|row| normal.cdf(mixed(row))).collect()
    }
}

/// Rows of the lower triangle L with L·Lᵀ = matrix; none where the matrix is not positive (semi)definite.
fn cholesky(matrix: &[Vec<f64>]) -> Option<Vec<Vec<f64>>> {
    let mut rows: Vec<Vec<f64>> = Vec::with_capacity(matrix.len());
    for (i, given) in matrix.iter().enumerate() {
        let mut row: Vec<f64> = Vec::with_capacity(i + 1);
        for (j, other) in rows.iter().enumerate() {
            let rest = given[j] - row.iter().zip(other).map(|(a, b)| a * b).sum::<f64>();
            let unit = other[j];
            row.push(match unit {
                0.0 if rest.abs() > 1e-12 => return None,
                0.0 => 0.0,
                unit => rest / unit,
            });
        }
        let rest = given[i] - row.iter().map(|a| a * a).sum::<f64>();
        if rest < -1e-12 {
            return None;
        }
        row.push(rest.max(0.0).sqrt());
        rows.push(row);
    }
    Some(rows)
}

/// The value below which the part `p` of the values lies, between order statistics in a straight line
/// (position p·(n−1) from the least). Sorts as far as it must; none of no values.
pub fn quantile(values: &mut [f64], p: f64) -> Option<f64> {
    let last = values.len().checked_sub(1)?;
    #[expect(clippy::cast_precision_loss, reason = "far fewer values than 2^53")]
    let position = p.clamp(0.0, 1.0) * last as f64;
    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "between 0 and the last index"
    )]
    let below = position.floor() as usize;
    let (_, &mut lower, above) = values.select_nth_unstable_by(below, f64::total_cmp);
    let upper = above.iter().copied().min_by(f64::total_cmp).unwrap_or(lower);
    Some(lower + position.fract() * (upper - lower))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_draw_does_not_depend_on_others() {
        let late = uniforms(5, 1_000_000, 3);
        assert_eq!(late, uniforms(5, 1_000_000, 3));
        assert_eq!(late[..2], uniforms(5, 1_000_000, 2));
        assert_ne!(late, uniforms(5, 1_000_001, 3));
        assert_ne!(late, uniforms(6, 1_000_000, 3));
        assert!(late.iter().all(|u| *u > 0.0 && *u < 1.0));
    }

    #[test]
    fn quantiles_between_order_statistics() {
        let mut values = [4.0, 1.0, 3.0, 2.0];
        assert_eq!(quantile(&mut values, 0.5), Some(2.5));
        assert_eq!(quantile(&mut values, 0.0), Some(1.0));
        assert_eq!(quantile(&mut values, 1.0), Some(4.0));
        assert_eq!(quantile(&mut [], 0.5), None);
    }

    fn pair(rank_correlation: f64, a: &str, b: &str) -> RankCorrelation {
        RankCorrelation { quantities: [a.into(), b.into()], rank_correlation }
    }

    /// Spearman's correlation of 4,000 joined pairs against what was asked for; its standard error is 0.016.
    #[test]
    fn joined_draws_have_the_rank_correlation() {
        for asked in [0.7, -0.4] {
            let copula = Copula::new(&["a", "b"], &[pair(asked, "b", "a")]).expect("possible");
            let draws: Vec<Vec<f64>> =
                (0..4000).map(|item| copula.join(&uniforms(1, item, 2))).collect();
            // The margins are uniform, so ranks are the values themselves but for the sample.
            let mean = |f: &dyn Fn(&[f64]) -> f64| draws.iter().map(|d| f(d)).sum::<f64>() / 4000.0;
            let got = 12.0 * mean(&|d| (d[0] - 0.5) * (d[1] - 0.5));
            assert!((got - asked).abs() < 0.064, "{got} instead of {asked}");
            assert!((mean(&|d| d[1]) - 0.5).abs() < 0.02);
        }
    }

    #[test]
    fn impossible_correlations_are_refused() {
        let names = ["a", "b", "c"];
        let all = [pair(0.9, "a", "b"), pair(0.9, "b", "c"), pair(-0.9, "a", "c")];
        assert!(Copula::new(&names, &all).is_err());
        assert!(Copula::new(&names, &all[..1]).is_ok());
        assert!(Copula::new(&names, &[pair(0.5, "a", "x")]).is_err());
        assert!(Copula::new(&names, &[pair(1.5, "a", "b")]).is_err());
        assert!(Copula::new(&names, &[pair(1.0, "a", "b")]).is_ok(), "together without freedom");
    }
}
