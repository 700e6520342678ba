//! How sure the winner is: every bid on one cloud of factors and stray shares drawn from the ranges of the basis.
//!
//! Owning cost is linear in (A, B, A_aux) and in the stray share, so the cloud is drawn once and each bid is a product
//! with it.
//! Sums over draws run in their order, whatever thread did the work.

use rayon::prelude::*;

use super::factors::{BasisForFactors, of_lot};
use super::{Plane, Rates, Valuation};
use crate::engine::Refusal;
use crate::engine::columns::{BasisSheet, Lot};
use crate::engine::decision::uncertainty::inputs::Drawn;
use crate::engine::decision::uncertainty::{Inputs, RankCorrelation, quantile};
use crate::engine::economics::assumptions::{Assumptions, EnergyPrice};
use crate::engine::loading::{Market, PriceSeries, Weights};
use crate::engine::working::Silent;

/// A lot whose factors follow an uncertain basis.
#[derive(Clone, Debug)]
pub struct UncertainFactors<'a> {
    rates: Rates<'a>,
    inputs: Inputs,
    /// Stray share under the basis as it stands.
    stray_share_pu: f64,
    /// Mean price of the basis's series, and whether the series knows its CO2.
    series: Option<(Weights, bool)>,
}

/// Factors and stray shares drawn, and how many of the draws left a physical range and were moved to its edge.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Cloud {
    /// What bids are valued under in each draw.
    pub valuations: Vec<Valuation>,
    /// Draws in which a value was moved.
    pub moved: usize,
}

impl<'a> UncertainFactors<'a> {
    /// The uncertain factors of a lot under a basis with ranges. `series` is the price series that the basis
    /// names, where it names one.
    ///
    /// # Errors
    /// A range that is incomplete or of no numeric input; a price series that is not given.
    pub fn new(
        sheet: &BasisSheet,
        series: Option<&PriceSeries>,
        lot: &Lot,
        rates: Rates<'a>,
        correlations: &[RankCorrelation],
    ) -> Result<Self, Refusal> {
        let flat = "energy_price_per_kwh";
        let series = match (&sheet.basis.price_series, series) {
            (None, _) => None,
            (Some(name), Some(series)) => {
                if sheet.ranges.iter().any(|range| range.quantity == flat) {
                    let why = format!("has no effect: the basis takes its prices from {name}");
                    return Err(Refusal::new("range", flat, why));
                }
                let constant = Market::of_series(series, &[], 0.0).constant;
                Some((constant, series.co2_kg_per_kwh.is_some()))
            }
            (Some(name), None) => {
                let why = "is not in the book; import it or name another";
                return Err(Refusal::new("price_series", name, why));
            }
        };
        let stray_share_pu = Assumptions::resolve(&sheet.basis)?.stray_share_pu;
        Ok(Self { rates, inputs: Inputs::new(sheet, lot, correlations)?, stray_share_pu, series })
    }

    /// The inputs that are uncertain.
    pub fn inputs(&self) -> &Inputs {
        &self.inputs
    }

    /// The factors of a basis and a lot, and how far its stray share lies above that of the basis as it stands.
    ///
    /// # Errors
    /// They cannot be computed from these values.
    pub fn valuation(&self, drawn: &Drawn) -> Result<Valuation, Refusal> {
        let assumptions = Assumptions::resolve(&drawn.basis)?;
        let carbon = assumptions.carbon_kg_per_kwh;
        let market = match (&assumptions.energy_price, self.series) {
            (EnergyPrice::Series(_), Some((constant, own_carbon))) => {
                let co2_kg_per_kwh = if own_carbon { constant.co2_kg_per_kwh } else { carbon };
                Market {
                    constant: Weights { co2_kg_per_kwh, ..constant },
                    profiles: Vec::new(),
                    series: true,
                }
            }
            (EnergyPrice::Flat(price), _) => Market::flat(*price, carbon, 0),
            (EnergyPrice::Series(name), None) => {
                return Err(Refusal::new("price_series", name, "is not given"));
            }
        };
        let basis = BasisForFactors { assumptions: &assumptions, market: &market };
        let (factors, _) = of_lot(&mut Silent, &drawn.lot, &self.rates, Some(&basis))?;
        let stray_more_pu = assumptions.stray_share_pu - self.stray_share_pu;
        Ok(Valuation { factors, stray_more_pu })
    }

    /// `draws` draws of `seed`: the same for each draw at any number of draws and threads.
    ///
    /// # Errors
    /// A draw from which no factors can be computed.
    pub fn cloud(&self, seed: u64, draws: usize) -> Result<Cloud, Refusal> {
        let draw = |item: usize| {
            let drawn = self.inputs.draw(seed, item as u64)?;
            Ok((self.valuation(&drawn)?, drawn.moved))
        };
        // All are drawn before the first refusal is taken, so that it is the same one at any thread count.
        let all: Vec<Result<_, Refusal>> = (0..draws).into_par_iter().map(draw).collect();
        let all: Vec<(Valuation, bool)> = all.into_iter().collect::<Result<_, _>>()?;
        Ok(Cloud {
            moved: all.iter().filter(|(_, moved)| *moved).count(),
            valuations: all.into_iter().map(|(valuation, _)| valuation).collect(),
        })
    }
}

/// How one bid fares over the cloud; amounts per unit in the tender currency.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Prospect {
    /// Part of the draws in which it is the cheapest to own; ties go to the bid entered first.
    pub probability_pu: f64,
    /// Mean of what it costs above the cheapest of the draw.
    pub mean_regret: f64,
    /// Owning cost that 5 % of the draws stay below.
    pub p5: f64,
    /// Median owning cost.
    pub p50: f64,
    /// Owning cost that 95 % of the draws stay below.
    pub p95: f64,
}

/// How each bid fares over the cloud; nothing of no draws.
pub fn prospects(planes: &[Plane], cloud: &[Valuation]) -> Vec<Prospect> {
    let cheapest = |valued: &Valuation| {
        let costs = planes.iter().map(|plane| plane.under(valued)).enumerate();
        costs.reduce(|best, next| if next.1 < best.1 { next } else { best })
    };
    let winners: Vec<(usize, f64)> = cloud.par_iter().filter_map(cheapest).collect();
    #[expect(clippy::cast_precision_loss, reason = "far fewer draws than 2^53")]
    let draws = winners.len() as f64;
    let fares = |(i, plane): (usize, &Plane)| {
        let mut costs: Vec<f64> = cloud.iter().map(|valued| plane.under(valued)).collect();
        let regret: f64 = costs.iter().zip(&winners).map(|(cost, (_, least))| cost - least).sum();
        #[expect(clippy::cast_precision_loss, reason = "far fewer draws than 2^53")]
        let wins = winners.iter().filter(|(winner, _)| *winner == i).count() as f64;
        let mut at = |p| quantile(&mut costs, p);
        Some(Prospect {
            p5: at(0.05)?,
            p50: at(0.5)?,
            p95: at(0.95)?,
            probability_pu: wins / draws,
            mean_regret: regret / draws,
        })
    };
    planes.par_iter().enumerate().filter_map(fares).collect()
}
