//! Price series: the mean price of a constant loss, of a loss that follows a profile, and the same for CO2.

use super::profile::Profile;
use crate::engine::Refusal;
use crate::engine::working::{Formula, Recorder, Silent};

/// Energy prices of a year in equal steps, with emission factors and the load of the whole system where known.
#[derive(Clone, Debug, PartialEq)]
pub struct PriceSeries {
    /// Identifier.
    pub name: String,
    /// Length of a step in minutes.
    pub step_minutes: u32,
    /// Time of the first step, ISO 8601; none where the steps are only numbered.
    pub first_timestamp: Option<String>,
    /// Price of each step.
    pub price_per_kwh: Vec<f64>,
    /// CO2 of a kWh in each step.
    pub co2_kg_per_kwh: Option<Vec<f64>>,
    /// Load of the system in each step, at any scale.
    pub system_load: Option<Vec<f64>>,
}

/// Price and CO2 of a kWh of some loss, and the share of own peak load at the system peak.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Weights {
    /// Mean price, c̄.
    pub price_per_kwh: f64,
    /// Mean emission factor, κ̄.
    pub co2_kg_per_kwh: f64,
    /// Load at the first step of greatest system load over own peak; none where it is not known.
    pub responsibility_pu: Option<f64>,
}

/// What energy costs: for a constant loss, and for the load loss of each profile.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Market {
    /// Of a constant loss (c̄0, κ̄0).
    pub constant: Weights,
    /// Of a load loss by profile, in the order of the profiles (c̄k, κ̄k); with a flat price all equal. A profile
    /// that cannot be laid beside the price series says why; only who uses it is concerned.
    pub profiles: Vec<Result<Weights, Refusal>>,
    /// Whether the price differs from step to step.
    pub series: bool,
}

const SOURCE: &str = "methods, section 3";
const PRICE: Formula = Formula {
    name: "mean price of a constant loss",
    symbol: "c0",
    formula: "Σ_t p_t/n",
    unit: "money/kWh",
    source: SOURCE,
};
const LOAD_PRICE: Formula = Formula {
    name: "mean price of a load loss that follows the profile",
    symbol: "ck",
    formula: "Σ_t p_t·s_t²/Σ_t s_t²",
    unit: "money/kWh",
    source: SOURCE,
};
const CO2: Formula = Formula {
    name: "mean CO2 of a constant loss",
    symbol: "κ0",
    formula: "Σ_t κ_t/n",
    unit: "kg/kWh",
    source: SOURCE,
};
const LOAD_CO2: Formula = Formula {
    name: "mean CO2 of a load loss that follows the profile",
    symbol: "κk",
    formula: "Σ_t κ_t·s_t²/Σ_t s_t²",
    unit: "kg/kWh",
    source: SOURCE,
};
const RESPONSIBILITY: Formula = Formula {
    name: "load at the first hour of greatest system load over own peak",
    symbol: "PRF",
    formula: "s_t/s_max",
    unit: "pu",
    source: SOURCE,
};

impl PriceSeries {
    /// What a constant loss pays, c̄0 and κ̄0; `co2_kg_per_kwh` counts where the series has no emission factors.
    pub fn constant<R: Recorder>(&self, w: &mut R, co2_kg_per_kwh: f64) -> Weights {
        let mut state = |formula, values: &[f64]| {
            #[expect(
                clippy::cast_precision_loss,
                reason = "a year has at most half a million steps"
            )]
            let n = values.len() as f64;
            w.step(formula, &[("n", n)], mean(values))
        };
        Weights {
            price_per_kwh: state(&PRICE, &self.price_per_kwh),
            co2_kg_per_kwh: self
                .co2_kg_per_kwh
                .as_deref()
                .map_or(co2_kg_per_kwh, |values| state(&CO2, values)),
            responsibility_pu: None,
        }
    }

    /// What a load loss that follows a profile pays, c̄k and κ̄k, and the share of own peak at the system peak.
    ///
    /// # Errors
    /// A profile of another step, length or start than the series.
    pub fn following<R: Recorder>(
        &self,
        w: &mut R,
        profile: &Profile,
        co2_kg_per_kwh: f64,
    ) -> Result<Weights, Refusal> {
        beside(self, profile)?;
        let peak = profile.ratios(&mut Silent)?.peak;
        let mut state =
            |formula, values: &[f64]| w.step(formula, &[], weighted(values, &profile.values));
        let price_per_kwh = state(&LOAD_PRICE, &self.price_per_kwh);
        let co2 = self.co2_kg_per_kwh.as_deref();
        let co2_kg_per_kwh = co2.map_or(co2_kg_per_kwh, |values| state(&LOAD_CO2, values));
        let responsibility_pu = self.system_load.as_deref().map(first_greatest).map(|step| {
            let load = profile.values[step].abs();
            w.step(&RESPONSIBILITY, &[("s_t", load), ("s_max", peak)], load / peak)
        });
        Ok(Weights { price_per_kwh, co2_kg_per_kwh, responsibility_pu })
    }
}

impl Market {
    /// A flat price: every loss pays the same.
    pub fn flat(price_per_kwh: f64, co2_kg_per_kwh: f64, profiles: usize) -> Self {
        let constant = Weights { price_per_kwh, co2_kg_per_kwh, responsibility_pu: None };
        Self { constant, profiles: vec![Ok(constant); profiles], series: false }
    }

    /// A price series: c̄0 = Σp/n for a constant loss; c̄k = Σp·s²/Σs² for a loss that follows profile s.
    /// `co2_kg_per_kwh` counts where the series has no emission factors.
    ///
    /// A profile of another step, length or start than the series is refused by itself.
    pub fn of_series(series: &PriceSeries, profiles: &[Profile], co2_kg_per_kwh: f64) -> Self {
        let following = |profile| series.following(&mut Silent, profile, co2_kg_per_kwh);
        Self {
            constant: series.constant(&mut Silent, co2_kg_per_kwh),
            profiles: profiles.iter().map(following).collect(),
            series: true,
        }
    }
}

/// Day and hour at which a year of steps starts, where it is timed; the year itself does not matter.
fn start(first_timestamp: Option<&str>) -> Option<&str> {
    first_timestamp.and_then(|time| time.get(5..16))
}

/// Holds that a profile and a price series can be multiplied step by step.
fn beside(series: &PriceSeries, profile: &Profile) -> Result<(), Refusal> {
    let refuse = |why: String| Err(Refusal::new("profile", &profile.profile, why));
    if profile.values.len() != series.price_per_kwh.len()
        || profile.step_minutes != series.step_minutes
    {
        return refuse(format!(
            "has {} steps of {} min, the price series {} has {} of {} min; bring both to one step and length",
            profile.values.len(),
            profile.step_minutes,
            series.name,
            series.price_per_kwh.len(),
            series.step_minutes
        ));
    }
    let starts =
        (start(profile.first_timestamp.as_deref()), start(series.first_timestamp.as_deref()));
    match starts {
        (Some(own), Some(other)) if own != other => refuse(format!(
            "starts at {own}, the price series {} at {other}; bring both to one start",
            series.name
        )),
        _ => Ok(()),
    }
}

#[expect(clippy::cast_precision_loss, reason = "a year has at most half a million steps")]
fn mean(values: &[f64]) -> f64 {
    if values.is_empty() { 0.0 } else { values.iter().sum::<f64>() / values.len() as f64 }
}

/// Σ value·s² / Σ s²; the plain mean where Σ s² = 0.
fn weighted(values: &[f64], load: &[f64]) -> f64 {
    let square = load.iter().map(|s| s * s).sum::<f64>();
    if square > 0.0 {
        values.iter().zip(load).map(|(p, s)| p * (s * s)).sum::<f64>() / square
    } else {
        mean(values)
    }
}

/// Index of the first greatest value.
fn first_greatest(values: &[f64]) -> usize {
    let mut at = 0;
    for (i, value) in values.iter().enumerate() {
        if *value > values[at] {
            at = i;
        }
    }
    at
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn load_loss_pays_the_price_of_its_hours() {
        let series = PriceSeries {
            name: "p".into(),
            step_minutes: 60,
            first_timestamp: Some("2025-01-01T00:00".into()),
            price_per_kwh: vec![0.1, 0.3],
            co2_kg_per_kwh: Some(vec![0.2, 0.4]),
            system_load: Some(vec![5.0, 5.0]),
        };
        let profile = Profile {
            profile: "s".into(),
            step_minutes: 60,
            first_timestamp: None,
            values: vec![1.0, 2.0],
        };
        let late = Profile { first_timestamp: Some("2026-07-01T00:00".into()), ..profile.clone() };
        let same = Profile { first_timestamp: Some("2026-01-01T00:00Z".into()), ..profile.clone() };
        let short = Profile { values: vec![1.0], ..profile.clone() };
        let market = Market::of_series(&series, &[profile, same, late, short], 9.0);
        assert!((market.constant.price_per_kwh - 0.2).abs() < 1e-15);
        let weights = market.profiles[0].as_ref().expect("fits");
        assert!((weights.price_per_kwh - (0.1 + 0.3 * 4.0) / 5.0).abs() < 1e-15);
        assert!((weights.co2_kg_per_kwh - (0.2 + 0.4 * 4.0) / 5.0).abs() < 1e-15);
        assert_eq!(weights.responsibility_pu, Some(0.5), "first of two equal peaks");
        assert_eq!(market.profiles[1].as_ref(), Ok(weights));
        let refused = |n: usize| market.profiles[n].as_ref().expect_err("does not fit").why.clone();
        assert!(refused(2).contains("starts at 07-01T00:00"), "{}", refused(2));
        assert!(refused(3).contains("has 1 steps"), "{}", refused(3));
    }
}
