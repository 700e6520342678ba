//! Calculations of the load: load and loss factor, diversity, growth, levelised peak.

use super::input::{HOURS, Input, List, MONEY, RATE_PCT, SHARE, YEARS, calc};
use super::money::rate;
use super::{Calc, result};
use crate::engine::Refusal;
use crate::engine::columns::CashFlow;
use crate::engine::economics::equivalent_peak::{Growth, equivalent_peak, growth_of_doubling};
use crate::engine::loading::{factors, stepped};

pub(super) const CALCS: &[Calc] =
    &[LOSS_FACTOR, LOAD_FACTOR, DIVERSITY, EQUIVALENT_PEAK, GROWTH_RATE];

calc! {
    LOSS_FACTOR = "loss-factor",
    "loss factor: exact from load steps, or estimated from the load factor; energy of a peak loss",
    "definition; w·LF + (1−w)·LF², Buller & Woodrow 1928 (w 0.3); methods, section 3";
    {
        load: List<f64>, Input::real(-1e12, 1e12).list(), "load of each step, at any scale";
        hours: List<f64>, Input::real(0.0, 1e6).list().default("1"), "hours of each step, or one for all";
        load_factor_pu: Option<f64>, SHARE, "mean over peak load, where no steps are known";
        loss_factor_weight_pu: f64, SHARE.default("0.15"), "weight w: 0.15 distribution transformers, 0.3 Buller & Woodrow";
        loss_factor_pu: Option<f64>, SHARE, "loss factor where it is known";
        peak_loss_kw: Option<f64>, Input::real(0.0, 1e9), "loss at the peak load, for its mean and energy";
        hours_per_year: f64, HOURS.default("8760"), "hours of the energy";
    }
    |i, w| {
        let stepped = if i.load.is_empty() {
            None
        } else {
            let hours = i.hours.as_long_as("hours", i.load.len())?;
            Some(stepped::ratios(w, "", i.load.iter().copied().zip(hours))?)
        };
        let (lf, lsf) = match (stepped, i.load_factor_pu, i.loss_factor_pu) {
            (Some(r), None, None) => (Some(r.load_factor_pu), r.loss_factor_pu),
            (Some(_), ..) => {
                let why = "stands beside load steps that give the exact factors; leave one of the two out";
                return Err(Refusal::new("load_factor_pu", "", why));
            }
            (None, Some(lf), Some(lsf)) => {
                factors::check(lf, lsf)?;
                (Some(lf), lsf)
            }
            (None, None, Some(lsf)) => (None, lsf),
            (None, Some(lf), None) => {
                (Some(lf), factors::loss_factor(w, lf, i.loss_factor_weight_pu))
            }
            (None, None, None) => {
                let why = "give load steps, load_factor_pu or loss_factor_pu";
                return Err(Refusal::new("load", "", why));
            }
        };
        let weight = lf.and_then(|lf| stepped::implied_weight(w, lf, lsf));
        let mut out = result("load_factor_pu", lf)
            .and("loss_factor_pu", lsf)
            .and("rms_over_peak_pu", lsf.sqrt())
            .and("implied_weight_pu", weight);
        if let Some(kw) = i.peak_loss_kw {
            let energy = stepped::loss_energy(w, kw, lsf, i.hours_per_year);
            out = out.and("mean_loss_kw", kw * lsf).and("loss_energy_kwh", energy);
        }
        Ok(out)
    }
}

calc! {
    LOAD_FACTOR = "load-factor",
    "load factor from energy and peak, and what a constant load added to it costs",
    "definition; Gonen Ex 2.7, 2.8";
    {
        energy_kwh: f64, Input::real(0.0, 1e15).required(), "energy taken in the hours";
        peak_kw: f64, Input::above(0.0, 1e12).required(), "highest load";
        hours: f64, HOURS.default("8760"), "hours in which the energy is taken";
        added_kw: Option<f64>, Input::real(0.0, 1e12), "constant load that is added";
        capacity_per_kw_month: f64, MONEY.default("0"), "price of a kW of peak and month";
        energy_price_per_kwh: f64, MONEY.default("0"), "energy price";
    }
    |i, w| {
        let (mean, lf) = stepped::load_factor_of_energy(w, i.energy_kwh, i.peak_kw, i.hours)?;
        let out = result("mean_kw", mean).and("load_factor_pu", lf);
        let Some(kw) = i.added_kw else { return Ok(out) };
        let energy = i.energy_kwh + kw * i.hours;
        let (_, with) = stepped::load_factor_of_energy(w, energy, i.peak_kw + kw, i.hours)?;
        let (month, price) = (i.capacity_per_kw_month, i.energy_price_per_kwh);
        let cost = stepped::added_cost(w, kw, month, price, i.hours);
        Ok(out.and("load_factor_with_added_pu", with).and("added_cost_per_year", cost))
    }
}

calc! {
    DIVERSITY = "diversity",
    "diversity and coincidence factor of several loads",
    "definition; Gonen Ex 2.5, 2.6";
    {
        peak_kw: List<f64>, Input::real(0.0, 1e12).list().required(), "own peak of each load";
        system_peak_kw: Option<f64>, Input::above(0.0, 1e12), "common peak";
        at_peak_kw: List<f64>, Input::real(0.0, 1e12).list(), "load of each at the common peak, instead of it";
    }
    |i, w| {
        let common = match (i.system_peak_kw, &i.at_peak_kw[..]) {
            (Some(peak), []) => peak,
            (None, at) if at.len() == i.peak_kw.len() => at.iter().sum(),
            _ => {
                let why = "give system_peak_kw, or at_peak_kw with one value for each load";
                return Err(Refusal::new("system_peak_kw", "", why));
            }
        };
        let (d, c) = stepped::diversity(w, &i.peak_kw, common)?;
        Ok(result("diversity_factor", d).and("coincidence_factor", c).and("system_peak_kw", common))
    }
}

calc! {
    EQUIVALENT_PEAK = "equivalent-peak",
    "levelised peak load: the constant peak that makes the same copper loss as a growing one",
    "RUS 1724E-301 appendix A, IEEE C57.120 (memory); methods, section 5";
    {
        first_peak_pu: f64, Input::real(0.0, 1e9).required(), "peak load of year 1";
        load_growth_pct: f64, RATE_PCT.default("0"), "growth of the peak load a year";
        growth: Growth, Input::choice(Growth::WORDS).default("compound"), "of the year before, or of the first year";
        years: i64, YEARS.required(), "years looked at";
        discount_rate_pct: f64, RATE_PCT.required(), "discount rate";
        cash_flow: CashFlow, Input::choice(CashFlow::WORDS).default("year-end"), "when costs of a year are paid";
    }
    |i, w| {
        let (g, rate) = (rate("load_growth_pct", i.load_growth_pct)?, rate("discount_rate_pct", i.discount_rate_pct)?);
        let years = usize::try_from(i.years).unwrap_or(0);
        let peak = equivalent_peak(w, i.first_peak_pu, g, i.growth, years, rate, i.cash_flow)?;
        Ok(result("equivalent_peak_pu", peak))
    }
}

calc! {
    GROWTH_RATE = "growth-rate",
    "yearly growth of a load that doubles in some years",
    "definition; Gonen Ex 2.10";
    {
        doubling_years: f64, Input::above(0.0, 1e4).required(), "years in which it doubles";
    }
    |i, w| {
        Ok(result("growth_pct", 100.0 * growth_of_doubling(w, i.doubling_years)?))
    }
}
