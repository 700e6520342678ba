//! Least squares a row at a time: each row is rotated into a triangle, so that a fleet of any size needs no more
//! room than its terms, and the figures are those of a QR factorisation. Owns the leverage of a new row too.

/// Rows taken in so far, as a triangle of the terms with the observed value behind them.
#[derive(Clone, Debug)]
pub(super) struct LeastSquares {
    terms: usize,
    /// Row j holds columns 0..=terms; only those from j on are used.
    triangle: Vec<Vec<f64>>,
}

/// The solution of a problem in which no term depends on others.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Solution {
    /// One coefficient for each term.
    pub(super) coefficients: Vec<f64>,
    /// Sum of the squared residuals.
    pub(super) residual_square: f64,
    triangle: Vec<Vec<f64>>,
}

/// A term that the terms before it already determine.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Dependent(pub(super) usize);

/// What is left of a column beside what earlier ones explain, below which it counts as nothing.
const NOTHING_NEW: f64 = 1e-9;

impl LeastSquares {
    /// An empty problem.
    pub(super) fn new(terms: usize) -> Self {
        Self { terms, triangle: vec![vec![0.0; terms + 1]; terms + 1] }
    }

    /// Takes in a row: its terms, and the value observed, last. The row is used up.
    pub(super) fn add(&mut self, row: &mut [f64]) {
        for j in 0..=self.terms {
            if row[j] == 0.0 {
                continue;
            }
            let of = &mut self.triangle[j];
            let length = of[j].hypot(row[j]);
            let (cos, sin) = (of[j] / length, row[j] / length);
            for (above, below) in of[j..].iter_mut().zip(&mut row[j..]) {
                (*above, *below) = (cos * *above + sin * *below, cos * *below - sin * *above);
            }
        }
    }

    /// The coefficients that leave the least sum of squared residuals.
    ///
    /// # Errors
    /// The first term that depends on those before it.
    pub(super) fn solve(self) -> Result<Solution, Dependent> {
        let Self { terms, triangle } = self;
        for j in 0..terms {
            let whole = (0..=j).map(|i| triangle[i][j] * triangle[i][j]).sum::<f64>().sqrt();
            if triangle[j][j].abs() <= NOTHING_NEW * whole {
                return Err(Dependent(j));
            }
        }
        let mut coefficients = vec![0.0; terms];
        for j in (0..terms).rev() {
            let known: f64 = (j + 1..terms).map(|k| triangle[j][k] * coefficients[k]).sum();
            coefficients[j] = (triangle[j][terms] - known) / triangle[j][j];
        }
        let residual = triangle[terms][terms];
        Ok(Solution { coefficients, residual_square: residual * residual, triangle })
    }
}

impl Solution {
    /// The fitted value of a row of terms.
    pub(super) fn at(&self, row: &[f64]) -> f64 {
        self.coefficients.iter().zip(row).map(|(b, x)| b * x).sum()
    }

    /// x′(X′X)⁻¹x: the variance of the fitted value at a row of terms, over the variance of a residual.
    pub(super) fn leverage(&self, row: &[f64]) -> f64 {
        let mut z: Vec<f64> = Vec::with_capacity(row.len());
        for (j, x) in row.iter().enumerate() {
            let known: f64 = z.iter().enumerate().map(|(i, z)| self.triangle[i][j] * z).sum();
            z.push((x - known) / self.triangle[j][j]);
        }
        z.iter().map(|z| z * z).sum()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn of(rows: &[[f64; 3]]) -> LeastSquares {
        let mut problem = LeastSquares::new(2);
        for row in rows {
            problem.add(&mut row.clone());
        }
        problem
    }

    /// A line through (0,1), (1,3), (2,5), (3,7.5): by hand b = 2.15, a = 0.9, Σe² = 0.075; leverage at x is
    /// 1/n + (x − x̄)²/Sxx with x̄ = 1.5, Sxx = 5.
    #[test]
    fn a_line_by_hand() {
        let problem = of(&[[1.0, 0.0, 1.0], [1.0, 1.0, 3.0], [1.0, 2.0, 5.0], [1.0, 3.0, 7.5]]);
        let line = problem.solve().expect("two points and more");
        let near =
            |got: f64, want: f64| assert!((got - want).abs() < 1e-14, "{got} against {want}");
        near(line.coefficients[0], 0.9);
        near(line.coefficients[1], 2.15);
        near(line.residual_square, 0.075);
        near(line.at(&[1.0, 4.0]), 9.5);
        near(line.leverage(&[1.0, 4.0]), 0.25 + 6.25 / 5.0);
    }

    #[test]
    fn a_term_that_others_determine_is_named() {
        let constant = of(&[[1.0, 2.0, 1.0], [1.0, 2.0, 3.0], [1.0, 2.0, 4.0]]);
        assert_eq!(constant.solve(), Err(Dependent(1)));
        assert_eq!(of(&[[1.0, 2.0, 1.0]]).solve(), Err(Dependent(1)));
        assert_eq!(of(&[]).solve(), Err(Dependent(0)));
    }
}
