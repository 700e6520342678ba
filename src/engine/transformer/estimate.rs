//! A loss that a nameplate leaves blank, estimated from transformers of which it is known: least squares of ln P on
//! ln S_r, with vintage, winding metal, insulation and phases as further terms where there is enough data.
//!
//! The estimate is the geometric mean that the fit gives (half of such units lie below it); its interval is the
//! prediction interval of one more unit (Student t), not that of the mean. The rules stand in the methods.

mod least_squares;

use statrs::distribution::{ContinuousCDF, StudentsT};

use crate::engine::columns::{Insulation, WindingMetal};
use crate::engine::working::{Formula, Recorder};
use least_squares::{Dependent, LeastSquares, Solution};

/// Known units asked for each term of the regression, the rating included.
pub const UNITS_PER_TERM: usize = 5;
/// Share of like units that the interval is meant to hold.
pub const CONFIDENCE: f64 = 0.95;
/// Residual standard deviations beyond which a known loss is set aside as misread.
pub const SET_ASIDE: f64 = 4.0;
/// A residual of ln P that is never set aside, however well the others agree.
const NO_RESIDUAL: f64 = 1e-6;
/// Ratings up to this many times beyond the known ones are estimated.
pub const BEYOND: f64 = 2.0;

/// What a transformer's losses go with.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Build {
    /// Rated power.
    pub rated_kva: f64,
    /// Year of manufacture.
    pub year_made: Option<f64>,
    /// Winding metal; blank counts as copper.
    pub winding_metal: Option<WindingMetal>,
    /// Insulation; blank counts as liquid.
    pub insulation: Option<Insulation>,
    /// Number of phases; blank counts as three.
    pub phases: Option<i64>,
}

/// A term of the regression beside its constant.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Term {
    Rating,
    Vintage,
    Aluminium,
    Mixed,
    Dry,
    SinglePhase,
}

/// The terms beside the rating, in the order in which they are taken in.
const FURTHER: [Term; 5] =
    [Term::Vintage, Term::Aluminium, Term::Mixed, Term::Dry, Term::SinglePhase];
/// A constant, every term, and the observed value.
const WIDEST: usize = FURTHER.len() + 3;

impl Term {
    /// The value of the term for a transformer. Vintage counts in decades from 2000.
    fn of(self, build: &Build) -> f64 {
        let is = |yes: bool| f64::from(u8::from(yes));
        match self {
            Self::Rating => build.rated_kva.ln(),
            Self::Vintage => build.year_made.map_or(0.0, |year| (year - 2000.0) / 10.0),
            Self::Aluminium => is(build.winding_metal == Some(WindingMetal::Aluminium)),
            Self::Mixed => is(build.winding_metal == Some(WindingMetal::Mixed)),
            Self::Dry => is(build.insulation == Some(Insulation::Dry)),
            Self::SinglePhase => is(build.phases == Some(1)),
        }
    }

    /// The term in trade words.
    const fn word(self) -> &'static str {
        match self {
            Self::Rating => "rating",
            Self::Vintage => "year made",
            Self::Aluminium => "aluminium windings",
            Self::Mixed => "mixed windings",
            Self::Dry => "dry-type",
            Self::SinglePhase => "single phase",
        }
    }
}

/// Why a loss cannot be estimated.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Impossible {
    /// Fewer than [`UNITS_PER_TERM`] units have it known.
    TooFew,
    /// All of these have the same rating.
    OneRating,
    /// The rating lies too far from theirs.
    BeyondRatings,
}

/// A regression of one loss.
#[derive(Clone, Debug, PartialEq)]
pub struct Regression {
    terms: Vec<Term>,
    solution: Solution,
    /// Standard deviation of a residual of ln P, s.
    deviation: f64,
    /// Quantile of Student's t for the interval.
    quantile: f64,
    least_kva: f64,
    greatest_kva: f64,
    /// Units that it rests on.
    pub units: usize,
    /// Units whose loss is known but was set aside as misread.
    pub set_aside: usize,
}

impl Regression {
    /// The terms beside the constant, in trade words.
    pub fn terms(&self) -> Vec<&'static str> {
        self.terms.iter().map(|term| term.word()).collect()
    }

    /// Exponent of the rating: the loss goes with S_r to this power.
    pub fn exponent(&self) -> f64 {
        self.solution.coefficients.get(1).copied().unwrap_or_default()
    }

    /// Least squares over known units; with `dated`, those of known year, and vintage as a term.
    fn fit(known: &[(Build, f64)], dated: bool) -> Result<Self, Impossible> {
        let known: Vec<&(Build, f64)> =
            known.iter().filter(|(build, _)| !dated || build.year_made.is_some()).collect();
        let units = known.len();
        let mut terms = vec![Term::Rating];
        for term in FURTHER {
            let with = known.iter().filter(|(build, _)| term.of(build) != 0.0).count();
            let enough = match term {
                Term::Vintage => dated,
                _ => with >= UNITS_PER_TERM && units - with >= UNITS_PER_TERM,
            };
            if enough && units >= UNITS_PER_TERM * (terms.len() + 1) {
                terms.push(term);
            }
        }
        let first = Self::over(&known, terms.clone(), 0)?;
        let apart = |(build, loss): &(Build, f64)| {
            let residual = loss.ln() - first.solution.at(first.row(build, &mut [0.0; WIDEST]));
            residual.abs() > (SET_ASIDE * first.deviation).max(NO_RESIDUAL)
        };
        let kept: Vec<&(Build, f64)> =
            known.iter().copied().filter(|known| !apart(known)).collect();
        if kept.len() == units {
            return Ok(first);
        }
        Self::over(&kept, terms, units - kept.len())
    }

    /// Least squares with given terms, less those that say nothing new.
    fn over(
        known: &[&(Build, f64)],
        mut terms: Vec<Term>,
        set_aside: usize,
    ) -> Result<Self, Impossible> {
        let units = known.len();
        if units < UNITS_PER_TERM {
            return Err(Impossible::TooFew);
        }
        let ratings = known.iter().map(|(build, _)| build.rated_kva);
        let (least_kva, greatest_kva) = ratings
            .fold((f64::INFINITY, 0.0_f64), |(least, most), kva| (least.min(kva), most.max(kva)));
        loop {
            let width = terms.len() + 1;
            let mut problem = LeastSquares::new(width);
            for (build, loss) in known {
                let mut row = [0.0; WIDEST];
                fill(&terms, build, &mut row);
                row[width] = loss.ln();
                problem.add(&mut row[..=width]);
            }
            match problem.solve() {
                Err(Dependent(0 | 1)) => return Err(Impossible::OneRating),
                Err(Dependent(column)) => {
                    terms.remove(column - 1);
                }
                Ok(solution) => {
                    #[expect(clippy::cast_precision_loss, reason = "units of a fleet")]
                    let freedom = (units - width) as f64;
                    let quantile = StudentsT::new(0.0, 1.0, freedom)
                        .map_or(f64::INFINITY, |t| t.inverse_cdf(0.5 + 0.5 * CONFIDENCE));
                    let deviation = (solution.residual_square / freedom).sqrt();
                    return Ok(Self {
                        terms,
                        solution,
                        deviation,
                        quantile,
                        least_kva,
                        greatest_kva,
                        units,
                        set_aside,
                    });
                }
            }
        }
    }

    /// The row of terms of a transformer, the constant first.
    fn row<'a>(&self, build: &Build, space: &'a mut [f64; WIDEST]) -> &'a [f64] {
        fill(&self.terms, build, space);
        &space[..=self.terms.len()]
    }

    fn coefficient(&self, term: Term) -> f64 {
        let at = self.terms.iter().position(|t| *t == term);
        at.map_or(0.0, |at| self.solution.coefficients[at + 1])
    }
}

/// The constant and the terms of a transformer.
fn fill(terms: &[Term], build: &Build, row: &mut [f64; WIDEST]) {
    row[0] = 1.0;
    for (x, term) in row[1..].iter_mut().zip(terms) {
        *x = term.of(build);
    }
}

/// The formulas of one loss: the estimate and the ends of its interval.
#[derive(Debug, PartialEq)]
struct Formulas {
    estimate: Formula,
    low: Formula,
    high: Formula,
}

const LAW: &str = "exp(b0 + b1·ln(S_r) + b2·(year − 2000)/10 + b3·aluminium + b4·mixed + b5·dry + b6·single_phase)";
const LEAST_SQUARES: &str = "least squares of ln P, geometric mean; methods, section 1";
const INTERVAL: &str = "95 % prediction interval of least squares (Student t)";

const fn formula(
    name: &'static str,
    symbol: &'static str,
    formula: &'static str,
    source: &'static str,
) -> Formula {
    Formula { name, symbol, formula, unit: "W", source }
}

static NO_LOAD: Formulas = Formulas {
    estimate: formula("no-load loss, estimated", "P0", LAW, LEAST_SQUARES),
    low: formula("low end of the no-load loss", "P0_low", "P0·exp(−t·s·√(1 + h))", INTERVAL),
    high: formula("high end of the no-load loss", "P0_high", "P0·exp(t·s·√(1 + h))", INTERVAL),
};
static LOAD: Formulas = Formulas {
    estimate: formula("load loss at the rating, estimated", "Pk", LAW, LEAST_SQUARES),
    low: formula("low end of the load loss", "Pk_low", "Pk·exp(−t·s·√(1 + h))", INTERVAL),
    high: formula("high end of the load loss", "Pk_high", "Pk·exp(t·s·√(1 + h))", INTERVAL),
};

/// Which loss of a transformer.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Loss {
    /// No-load (iron) loss.
    NoLoad,
    /// Load (copper) loss at the rating.
    Load,
}

/// An estimated loss at the rating.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Estimated<'a> {
    /// The estimate, a geometric mean.
    pub loss_w: f64,
    /// Lower end of its interval.
    pub low_w: f64,
    /// Upper end of its interval.
    pub high_w: f64,
    /// What it rests on.
    pub regression: &'a Regression,
}

/// How one loss goes with the build of a transformer, learnt from those of which it is known.
#[derive(Clone, Debug, PartialEq)]
pub struct LossModel {
    formulas: &'static Formulas,
    /// From units of known year of manufacture, with vintage as a term.
    dated: Result<Regression, Impossible>,
    /// From all units, without vintage.
    any: Result<Regression, Impossible>,
}

impl LossModel {
    /// Learns from transformers of which the loss at the rating (W) is known, in any order; losses of 0 W are passed
    /// over.
    pub fn learn(loss: Loss, mut known: Vec<(Build, f64)>) -> Self {
        known.retain(|(build, loss)| *loss > 0.0 && build.rated_kva > 0.0);
        // Taken in an order of their own, so that the order of a fleet changes no bit of the estimate.
        known.sort_unstable_by(|(a, loss_a), (b, loss_b)| {
            let figures = |build: &Build, loss: f64| {
                [build.rated_kva, loss, build.year_made.unwrap_or(f64::NAN)].map(f64::to_bits)
            };
            let words = |build: &Build| (build.winding_metal, build.insulation, build.phases);
            figures(a, *loss_a).cmp(&figures(b, *loss_b)).then_with(|| words(a).cmp(&words(b)))
        });
        Self {
            formulas: match loss {
                Loss::NoLoad => &NO_LOAD,
                Loss::Load => &LOAD,
            },
            dated: Regression::fit(&known, true),
            any: Regression::fit(&known, false),
        }
    }

    /// The regression for a transformer: with vintage where its year is known and the units of known year suffice
    /// for that term.
    ///
    /// # Errors
    /// Why there is none.
    pub fn regression(&self, build: &Build) -> Result<&Regression, Impossible> {
        let dated = self.dated.as_ref().ok().filter(|r| r.terms.contains(&Term::Vintage));
        let regression = match dated.filter(|_| build.year_made.is_some()) {
            Some(dated) => dated,
            None => self.any.as_ref().map_err(|why| *why)?,
        };
        let near = regression.least_kva / BEYOND..=regression.greatest_kva * BEYOND;
        if near.contains(&build.rated_kva) {
            Ok(regression)
        } else {
            Err(Impossible::BeyondRatings)
        }
    }

    /// Estimates the loss of a transformer.
    ///
    /// # Errors
    /// Why it cannot be estimated.
    pub fn estimate<R: Recorder>(
        &self,
        w: &mut R,
        build: &Build,
    ) -> Result<Estimated<'_>, Impossible> {
        let regression = self.regression(build)?;
        let mut space = [0.0; WIDEST];
        let row = regression.row(build, &mut space);
        let loss_w = regression.solution.at(row).exp();
        let inputs = [
            ("b0", regression.solution.coefficients[0]),
            ("b1", regression.coefficient(Term::Rating)),
            ("b2", regression.coefficient(Term::Vintage)),
            ("b3", regression.coefficient(Term::Aluminium)),
            ("b4", regression.coefficient(Term::Mixed)),
            ("b5", regression.coefficient(Term::Dry)),
            ("b6", regression.coefficient(Term::SinglePhase)),
            ("S_r", build.rated_kva),
            ("year", build.year_made.unwrap_or(2000.0)),
            ("aluminium", Term::Aluminium.of(build)),
            ("mixed", Term::Mixed.of(build)),
            ("dry", Term::Dry.of(build)),
            ("single_phase", Term::SinglePhase.of(build)),
        ];
        let Formulas { estimate, low, high } = self.formulas;
        let symbol = estimate.symbol;
        w.step(estimate, &inputs, loss_w);
        w.about(&|| format!("from {} units", regression.units));
        let h = regression.solution.leverage(row);
        let (t, s) = (regression.quantile, regression.deviation);
        let inputs = [(symbol, loss_w), ("t", t), ("s", s), ("h", h)];
        let half = t * s * (1.0 + h).sqrt();
        let low_w = w.step(low, &inputs, loss_w * (-half).exp());
        let high_w = w.step(high, &inputs, loss_w * half.exp());
        Ok(Estimated { loss_w, low_w, high_w, regression })
    }
}

#[cfg(test)]
mod tests;
