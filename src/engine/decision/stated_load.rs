//! A load that a planner states for loss factors, on a transformer of rating 1: made the duty of a year, blanks
//! filled from basis and default.

use super::Context;
use super::place::stated::{self, first_known, known_or};
use crate::engine::Refusal;
use crate::engine::loading::{Duty, Ratios, factors};
use crate::engine::working::Recorder;

/// A load as stated; a load of which neither profile nor loss or load factor is known has no duty.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct StatedLoad {
    /// Peak load of year 1 over the rating; blank: 1.
    pub peak_pu: Option<f64>,
    /// Mean square over peak square, LsF.
    pub loss_factor_pu: Option<f64>,
    /// Mean over peak, LF, where the loss factor is not known.
    pub load_factor_pu: Option<f64>,
    /// Yearly growth; blank: the basis.
    pub load_growth_pct: Option<f64>,
    /// Profile: its index, and its ratios, which go before the stated ones.
    pub profile: Option<(usize, Ratios)>,
}

impl StatedLoad {
    /// The duty on a transformer of rating 1.
    ///
    /// # Errors
    /// Load and loss factor that cannot belong together, a profile that cannot be laid beside the price series, a
    /// load of which nothing says how it runs.
    pub fn duty<R: Recorder>(&self, w: &mut R, context: &Context) -> Result<Duty, Refusal> {
        let a = &context.assumptions;
        if let (Some(lf), Some(lsf)) = (self.load_factor_pu, self.loss_factor_pu) {
            factors::check(lf, lsf)?;
        }
        let ratios = self.profile.map(|(_, ratios)| ratios);
        let peak = [(self.peak_pu, "as asked")];
        let peak_kva = known_or(w, &stated::PEAK_PU, peak, (1.0, "the default"));
        let from =
            [(ratios.map(|r| r.loss_factor_pu), "the profile"), (self.loss_factor_pu, "as asked")];
        let loss_factor_pu = match (first_known(w, &stated::LOSS_FACTOR, from), self.load_factor_pu)
        {
            (Some(known), _) => known,
            (None, Some(lf)) => factors::loss_factor(w, lf, a.loss_factor_weight_pu),
            (None, None) => {
                let why = "say how the load runs: a profile, a loss factor or a load factor";
                return Err(Refusal::new("loss_factor_pu", "", why));
            }
        };
        let growth = [(self.load_growth_pct.map(|pct| pct / 100.0), "as asked")];
        let constant = context.market.constant;
        let load = match self.profile {
            Some((index, _)) => context.market.profiles[index].clone()?,
            None => constant,
        };
        Ok(Duty {
            peak_kva,
            load_growth_pu: known_or(w, &stated::GROWTH, growth, (a.load_growth, "the basis")),
            load_factor_pu: ratios.map(|r| r.load_factor_pu).or(self.load_factor_pu),
            loss_factor_pu,
            energised_hours: a.energised_hours,
            auxiliary_hours: a.auxiliary_hours.unwrap_or(a.energised_hours),
            power_factor: None,
            responsibility_pu: load.responsibility_pu.or(a.responsibility_pu).unwrap_or(1.0),
            no_load_price_per_kwh: constant.price_per_kwh,
            load_price_per_kwh: load.price_per_kwh,
            no_load_co2_kg_per_kwh: constant.co2_kg_per_kwh,
            drop: None,
            load_co2_kg_per_kwh: load.co2_kg_per_kwh,
        })
    }
}
