//! Calculations of capitalised losses: factors A and B, owning cost, penalty. Here sit the three traps of the trade:
//! money per W or per kW and once or per year, responsibility on load or on losses, investment or its yearly cost.

use super::input::{HOURS, Input, LOSS_W, MONEY, RATE_PCT, SHARE, YEARS, calc, need};
use super::money::rate;
use super::{Calc, result};
use crate::engine::Refusal;
use crate::engine::columns::{Basis, CapitalRecovery, CashFlow, FactorMethod, YesNo, choice};
use crate::engine::economics::Assumptions;
use crate::engine::economics::discounting::annuity;
use crate::engine::economics::loss_factors::{LossFactors, of_duty};
use crate::engine::economics::owning_cost::{Priced, owning_cost};
use crate::engine::economics::penalty::{Excess, penalty};
use crate::engine::economics::traps::BELIEVED;
use crate::engine::loading::{Duty, factors};

pub(super) const CALCS: &[Calc] = &[FACTORS, OWNING_COST, PENALTY];

const ASK_RESPONSIBILITY: &str = "may be meant on load or on losses: give responsibility_pu (load at the system peak over own peak; it is squared for losses) or responsibility_on_losses_pu (already on losses; used as it is)";
const ASK_INVESTMENT: &str = "is an investment in capacity, paid once; the factors need what it costs per year: multiply it by the yearly charge rate and give demand_charge_per_kw_year (present-value) or investment_per_kw_year (levelized)";
const ASK_FACTOR: &str = "needs its unit: money per kW of loss (factor_a_per_kw, factor_b_per_kw, factor_aux_per_kw) or per W (factor_a_per_w …)";

calc! {
    FACTORS = "factors",
    "capitalised loss factors A, B and auxiliary: what a kW of loss is worth, once",
    "annuity form of IEC TS 60076-20 (memory); IEEE C57.120 (memory) for levelized; methods, section 5";
    ask "responsibility_factor" => ASK_RESPONSIBILITY;
    ask "responsibility" => ASK_RESPONSIBILITY;
    ask "peak_responsibility" => ASK_RESPONSIBILITY;
    ask "rf" => ASK_RESPONSIBILITY;
    ask "prf" => ASK_RESPONSIBILITY;
    ask "investment_per_kw" => ASK_INVESTMENT;
    ask "capacity_cost_per_kw" => ASK_INVESTMENT;
    ask "demand_charge_per_kw" => ASK_INVESTMENT;
    {
        method: FactorMethod, Input::choice(FactorMethod::WORDS).default("present-value"), "method";
        years: i64, YEARS.required(), "horizon";
        discount_rate_pct: f64, RATE_PCT.required(), "discount rate";
        cash_flow: CashFlow, Input::choice(CashFlow::WORDS).default("year-end"), "when costs of a year are paid";
        energised_hours: f64, HOURS.default("8760"), "hours a year under voltage";
        auxiliary_hours: Option<f64>, HOURS.blank("energised_hours"), "hours a year of fans and pumps";
        energy_price_per_kwh: f64, Input::real(0.0, 1e6).required(), "energy price of year 1";
        load_price_per_kwh: Option<f64>, Input::real(0.0, 1e6).blank("energy_price_per_kwh"), "energy price weighted by the load loss (present-value)";
        energy_escalation_pct: f64, RATE_PCT.default("0"), "yearly rise of the energy price";
        demand_charge_per_kw_year: Option<f64>, Input::real(0.0, 1e9).blank("0"), "price of a kW at the system peak, per year (present-value)";
        demand_escalation_pct: f64, RATE_PCT.default("0"), "yearly rise of the demand charge";
        responsibility_pu: Option<f64>, SHARE.blank("1"), "load at the system peak over own peak load; squared for losses";
        responsibility_on_losses_pu: Option<f64>, SHARE, "the same already on losses, instead";
        carbon_price_per_t: f64, Input::real(0.0, 1e9).default("0"), "price of a tonne of CO2 in year 1";
        carbon_kg_per_kwh: f64, Input::real(0.0, 1e3).default("0"), "CO2 of a kWh";
        carbon_escalation_pct: f64, RATE_PCT.default("0"), "yearly rise of the carbon price";
        peak_pu: f64, Input::real(0.0, 100.0).required(), "peak load of year 1 over the rating";
        load_growth_pct: f64, RATE_PCT.default("0"), "yearly growth of the load";
        load_growth_years: Option<i64>, YEARS.blank("the horizon"), "years over which the load grows";
        loss_factor_pu: Option<f64>, SHARE.blank("from load_factor_pu"), "mean of the squared load over the squared peak";
        load_factor_pu: Option<f64>, SHARE, "mean load over peak load";
        loss_factor_weight_pu: f64, SHARE.default("0.15"), "weight w of the loss factor from the load factor";
        fixed_charge_rate_pct: Option<f64>, Input::above(0.0, 1000.0), "fixed charge rate (levelized)";
        increase_factor: f64, Input::above(0.0, 100.0).default("1"), "increase factor (levelized)";
        transmission_efficiency_pu: f64, Input::above(0.0, 1.0).default("1"), "transmission efficiency (levelized)";
        investment_per_kw_year: Option<f64>, Input::real(0.0, 1e9).blank("0"), "levelised system investment per kW and year (levelized)";
    }
    |i, w| {
        let levelized = i.method == FactorMethod::Levelized;
        if levelized && i.demand_charge_per_kw_year.is_some() {
            let why = "is not used by method levelized: what capacity costs per kW and year is investment_per_kw_year there";
            return Err(Refusal::new("demand_charge_per_kw_year", "", why));
        }
        if !levelized && i.investment_per_kw_year.is_some() {
            let why = "is not used by method present-value: what capacity costs per kW and year is demand_charge_per_kw_year there";
            return Err(Refusal::new("investment_per_kw_year", "", why));
        }
        let responsibility_pu = match (i.responsibility_pu, i.responsibility_on_losses_pu) {
            (Some(_), Some(_)) => {
                let why = "stands beside responsibility_pu: one is on losses, the other on load; keep one of the two";
                return Err(Refusal::new("responsibility_on_losses_pu", "", why));
            }
            (on_load, None) => on_load.unwrap_or(1.0),
            (None, Some(on_losses)) => on_losses.sqrt(),
        };
        let loss_factor_pu = match (i.loss_factor_pu, i.load_factor_pu) {
            (Some(lsf), lf) => {
                if let Some(lf) = lf {
                    factors::check(lf, lsf)?;
                }
                lsf
            }
            (None, Some(lf)) => factors::loss_factor(w, lf, i.loss_factor_weight_pu),
            (None, None) => {
                let why = "is needed, or load_factor_pu to estimate it from";
                return Err(Refusal::new("loss_factor_pu", "", why));
            }
        };
        let assumptions = Assumptions::resolve(&Basis {
            name: "work".to_owned(),
            horizon_years: i.years,
            discount_rate_pct: i.discount_rate_pct,
            cash_flow: Some(i.cash_flow),
            energy_price_per_kwh: Some(i.energy_price_per_kwh),
            energy_escalation_pct: Some(i.energy_escalation_pct),
            demand_charge_per_kw_year: i.demand_charge_per_kw_year,
            demand_escalation_pct: Some(i.demand_escalation_pct),
            load_growth_years: i.load_growth_years,
            capital_recovery: Some(CapitalRecovery::Full),
            carbon_price_per_t: Some(i.carbon_price_per_t),
            carbon_kg_per_kwh: Some(i.carbon_kg_per_kwh),
            carbon_escalation_pct: Some(i.carbon_escalation_pct),
            factor_method: Some(i.method),
            fixed_charge_rate_pct: i.fixed_charge_rate_pct,
            increase_factor: Some(i.increase_factor),
            transmission_efficiency_pu: Some(i.transmission_efficiency_pu),
            investment_per_kw_year: i.investment_per_kw_year,
            ..Basis::blank()
        })?;
        let duty = Duty {
            power_factor: None,
            peak_kva: i.peak_pu,
            load_growth_pu: rate("load_growth_pct", i.load_growth_pct)?,
            load_factor_pu: i.load_factor_pu,
            loss_factor_pu,
            energised_hours: i.energised_hours,
            auxiliary_hours: i.auxiliary_hours.unwrap_or(i.energised_hours),
            responsibility_pu,
            no_load_price_per_kwh: i.energy_price_per_kwh,
            load_price_per_kwh: i.load_price_per_kwh.unwrap_or(i.energy_price_per_kwh),
            no_load_co2_kg_per_kwh: i.carbon_kg_per_kwh,
            drop: None,
            load_co2_kg_per_kwh: i.carbon_kg_per_kwh,
        };
        let got = of_duty(w, &duty, 1.0, &assumptions)?;
        Ok(result("factor_a_per_kw", got.factor_a_per_kw)
            .and("factor_b_per_kw", got.factor_b_per_kw)
            .and("factor_aux_per_kw", got.factor_aux_per_kw)
            .and("method", i.method.word()))
    }
}

choice! {
    /// How the value of a loss is paid.
    Paid {
        /// Capitalised: one sum for the whole life.
        Once = "once",
        /// Again each year.
        PerYear = "per-year",
    }
}

/// A factor that was given per kW or per W, as money per kW.
fn per_kw(
    per_kw: Option<f64>,
    per_w: Option<f64>,
    names: [&'static str; 2],
) -> Result<Option<f64>, Refusal> {
    match (per_kw, per_w) {
        (Some(_), Some(w)) => {
            let why = format!("stands beside {}: keep one of the two", names[0]);
            Err(Refusal::new(names[1], w, why))
        }
        (kw, w) => Ok(kw.or(w.map(|w| 1000.0 * w))),
    }
}

calc! {
    OWNING_COST = "owning-cost",
    "owning cost: price, capitalised losses and adders",
    "owning-cost method, RUS Bulletin 1724E-301; methods, section 6";
    ask "factor_a" => ASK_FACTOR;
    ask "factor_b" => ASK_FACTOR;
    ask "factor_aux" => ASK_FACTOR;
    ask "a" => ASK_FACTOR;
    ask "b" => ASK_FACTOR;
    {
        price: f64, MONEY.required(), "price";
        no_load_loss_w: f64, LOSS_W.required(), "no-load (iron) loss";
        load_loss_w: f64, LOSS_W.required(), "load (copper) loss at rated load";
        auxiliary_loss_w: f64, LOSS_W.default("0"), "fans and pumps";
        added_cost: f64, MONEY.default("0"), "freight, installation and other adders";
        factor_a_per_kw: Option<f64>, Input::real(0.0, 1e12), "value of a kW of no-load loss";
        factor_b_per_kw: Option<f64>, Input::real(0.0, 1e12), "value of a kW of load loss at rated load";
        factor_aux_per_kw: Option<f64>, Input::real(0.0, 1e12).blank("0"), "value of a kW of auxiliary loss";
        factor_a_per_w: Option<f64>, Input::real(0.0, 1e9), "value of a W of no-load loss, instead";
        factor_b_per_w: Option<f64>, Input::real(0.0, 1e9), "value of a W of load loss at rated load, instead";
        factor_aux_per_w: Option<f64>, Input::real(0.0, 1e9), "value of a W of auxiliary loss, instead";
        paid: Option<Paid>, Input::choice(Paid::WORDS).blank("once"), "whether the factors are one sum for the whole life or paid each year";
        evaluation_years: Option<f64>, Input::above(0.0, 200.0), "years over which factors per year are added up";
        discount_rate_pct: f64, RATE_PCT.default("0"), "discount rate of factors per year";
        sure: YesNo, Input::choice(YesNo::WORDS).default("no"), "yes: compute although the factors look as if in another unit";
    }
    |i, w| {
        let names = ["factor_a_per_kw", "factor_a_per_w"];
        let why = "is missing: value of the loss, as factor_a_per_kw and factor_b_per_kw (or …_per_w)";
        let a = need(names[0], per_kw(i.factor_a_per_kw, i.factor_a_per_w, names)?, why)?;
        let names = ["factor_b_per_kw", "factor_b_per_w"];
        let b = need(names[0], per_kw(i.factor_b_per_kw, i.factor_b_per_w, names)?, why)?;
        let names = ["factor_aux_per_kw", "factor_aux_per_w"];
        let aux = per_kw(i.factor_aux_per_kw, i.factor_aux_per_w, names)?.unwrap_or(0.0);
        let times = match (i.paid, i.evaluation_years) {
            (None | Some(Paid::Once), None) => 1.0,
            (Some(Paid::PerYear), Some(years)) => {
                annuity(w, rate("discount_rate_pct", i.discount_rate_pct)?, years)
            }
            (Some(Paid::PerYear), None) => {
                let why = "is needed for factors that are paid per year";
                return Err(Refusal::new("evaluation_years", "", why));
            }
            (None, Some(years)) => {
                let why = "raises a question: are the factors one sum for the whole life (paid=once, then leave the years out; the usual case) or paid again each year (paid=per-year)?";
                return Err(Refusal::new("evaluation_years", years, why));
            }
            (Some(Paid::Once), Some(years)) => {
                let why = "does not go with factors that are paid once: they hold for the whole life already; leave it out";
                return Err(Refusal::new("evaluation_years", years, why));
            }
        };
        let factors = LossFactors {
            factor_a_per_kw: a * times,
            factor_b_per_kw: b * times,
            factor_aux_per_kw: aux * times,
        };
        let priced = Priced {
            price: i.price,
            added_cost: i.added_cost,
            no_load_loss_w: i.no_load_loss_w,
            load_loss_w: i.load_loss_w,
            auxiliary_loss_w: i.auxiliary_loss_w,
        };
        let cost = owning_cost(w, &priced, &factors);
        let losses = cost.no_load_cost + cost.load_cost + cost.auxiliary_cost;
        let share = losses / i.price;
        if i.sure == YesNo::No && i.price > 0.0 && losses > 0.0 && !BELIEVED.contains(&share) {
            let (unit, other) = if share < 1.0 { ("kW", "W") } else { ("W", "kW") };
            let why = format!(
                "makes the losses worth {:.4} % of the price: was the factor meant per {other}, not per {unit}? Give it as factor_a_per_{} and factor_b_per_{}; if it is right, add sure=yes",
                100.0 * share,
                other.to_lowercase(),
                other.to_lowercase()
            );
            return Err(Refusal::new("factor_a_per_kw", a, why));
        }
        Ok(result("owning_cost", cost.total())
            .and("price", cost.price)
            .and("no_load_cost", cost.no_load_cost)
            .and("load_cost", cost.load_cost)
            .and("auxiliary_cost", cost.auxiliary_cost)
            .and("added_cost", cost.added_cost))
    }
}

calc! {
    PENALTY = "penalty",
    "penalty for losses above the guarantee; no credit for what is below",
    "City of Colton specification 1988; methods, section 8";
    ask "factor_a" => ASK_FACTOR;
    ask "factor_b" => ASK_FACTOR;
    {
        factor_a_per_kw: f64, Input::real(0.0, 1e12).required(), "value of a kW of no-load loss, once";
        factor_b_per_kw: f64, Input::real(0.0, 1e12).required(), "value of a kW of load loss at rated load, once";
        factor_aux_per_kw: f64, Input::real(0.0, 1e12).default("0"), "value of a kW of auxiliary loss, once";
        no_load_excess_w: f64, Input::real(-1e9, 1e9).required(), "measured less guaranteed no-load loss";
        load_excess_w: f64, Input::real(-1e9, 1e9).required(), "measured less guaranteed load loss, at the reference temperature";
        auxiliary_excess_w: f64, Input::real(-1e9, 1e9).default("0"), "measured less guaranteed auxiliary loss";
    }
    |i, w| {
        let factors = LossFactors {
            factor_a_per_kw: i.factor_a_per_kw,
            factor_b_per_kw: i.factor_b_per_kw,
            factor_aux_per_kw: i.factor_aux_per_kw,
        };
        let excess = Excess {
            no_load_w: i.no_load_excess_w,
            load_w: i.load_excess_w,
            auxiliary_w: Some(i.auxiliary_excess_w),
        };
        Ok(result("penalty", penalty(w, &factors, &excess)))
    }
}
