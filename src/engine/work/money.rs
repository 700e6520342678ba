//! Calculations of money over time: annuities, economic life, payback, internal rate, break-even, failures.

use super::input::{Input, KVA, LOSS_W, List, MONEY, RATE_PCT, YEARS, calc};
use super::{Calc, Datum, result};
use crate::engine::Refusal;
use crate::engine::economics::discounting::{annuity, growing_annuity};
use crate::engine::economics::economic_life::{
    KeptYears, economic_life, lengths_of_service, years_to_keep,
};
use crate::engine::economics::failure::Weibull;
use crate::engine::economics::interest::{self, check_rate};
use crate::engine::economics::{irr, payback};
use crate::engine::transformer::efficiency::{LoadStep, energies};
use crate::engine::transformer::losses::Losses;

pub(super) const CALCS: &[Calc] = &[
    ANNUITY,
    GROWING_ANNUITY,
    REAL_RATE,
    ECONOMIC_LIFE,
    YEARS_TO_KEEP,
    PAYBACK,
    INTERNAL_RATE,
    LOSS_COST,
    BREAK_EVEN_PRICE,
    WEIBULL,
];

/// A rate in percent as a fraction.
pub(super) fn rate(name: &'static str, pct: f64) -> Result<f64, Refusal> {
    check_rate(name, pct / 100.0)?;
    Ok(pct / 100.0)
}

#[expect(clippy::cast_precision_loss, reason = "small whole numbers")]
fn float(n: i64) -> f64 {
    n as f64
}

calc! {
    ANNUITY = "annuity",
    "annuity, capital recovery, sinking fund; present value of a payment now and a yearly amount",
    "interest factors of engineering economics";
    {
        discount_rate_pct: f64, RATE_PCT.required(), "discount rate";
        years: f64, Input::above(0.0, 1000.0).required(), "years";
        yearly: f64, MONEY.default("1"), "amount paid at the end of each year";
        paid_now: f64, MONEY.default("0"), "amount paid at once";
    }
    |i, w| {
        let rate = rate("discount_rate_pct", i.discount_rate_pct)?;
        let a = annuity(w, rate, i.years);
        Ok(result("annuity_years", a)
            .and("capital_recovery_per_year", interest::capital_recovery(w, rate, i.years))
            .and("sinking_fund_per_year", interest::sinking_fund(w, rate, i.years))
            .and("single_payment", interest::single_payment(w, rate, i.years))
            .and("present_value", interest::present_value(w, i.paid_now, i.yearly, rate, i.years)))
    }
}

calc! {
    GROWING_ANNUITY = "growing-annuity",
    "present value of a yearly amount that grows",
    "geometric-gradient present-worth factor";
    {
        first: f64, MONEY.default("1"), "amount paid at the end of year 1";
        discount_rate_pct: f64, RATE_PCT.required(), "discount rate";
        growth_pct: f64, RATE_PCT.required(), "growth of the amount a year";
        years: f64, Input::above(0.0, 1000.0).required(), "years";
    }
    |i, w| {
        let discount = rate("discount_rate_pct", i.discount_rate_pct)?;
        let growth = rate("growth_pct", i.growth_pct)?;
        Ok(result("present_value", growing_annuity(w, i.first, discount, growth, i.years)))
    }
}

calc! {
    REAL_RATE = "real-rate",
    "real rate of a nominal rate under inflation",
    "(1+i_n) = (1+i_r)·(1+f)";
    {
        nominal_rate_pct: f64, RATE_PCT.required(), "nominal rate";
        inflation_pct: f64, RATE_PCT.required(), "inflation a year";
    }
    |i, w| {
        let (nominal, inflation) = (i.nominal_rate_pct / 100.0, i.inflation_pct / 100.0);
        Ok(result("real_rate_pct", 100.0 * interest::real_rate(w, nominal, inflation)?))
    }
}

calc! {
    ECONOMIC_LIFE = "economic-life",
    "equivalent annual cost and marginal cost for each length of service, and the cheapest one",
    "Newnan ch. 13; Panneerselvam ch. 8; methods, section 7";
    {
        first_cost: f64, MONEY.required(), "price, or market value of what is owned (what was once paid does not count)";
        running_cost: List<f64>, MONEY.list().required(), "cost of each year, at its end";
        market_value: List<f64>, MONEY.list().blank("nothing"), "market value at the end of each year";
        discount_rate_pct: f64, RATE_PCT.required(), "discount rate";
    }
    |i, w| {
        let rate = rate("discount_rate_pct", i.discount_rate_pct)?;
        let years = lengths_of_service(w, i.first_cost, &i.market_value, &i.running_cost, rate)?;
        let life = economic_life(&years);
        let each = |value: fn(&KeptYears) -> f64| years.iter().map(value).collect::<Vec<f64>>();
        #[expect(clippy::cast_precision_loss, reason = "number of years")]
        let life_years = life as f64;
        Ok(result("economic_life_years", life_years)
            .and("least_annual_cost", years[life - 1].euac)
            .and("annual_cost", each(|y| y.euac))
            .and("marginal_cost", each(|y| y.marginal_cost)))
    }
}

calc! {
    YEARS_TO_KEEP = "years-to-keep",
    "how many years to keep a defender whose marginal costs are known against a challenger",
    "least present cost over every number of years; agrees with Newnan Ex 13-4 where costs rise";
    {
        marginal_cost: List<f64>, MONEY.list().required(), "marginal cost of the defender in each further year";
        challenger_annual_cost: f64, MONEY.required(), "least equivalent annual cost of the challenger";
        discount_rate_pct: f64, RATE_PCT.required(), "discount rate";
    }
    |i, w| {
        let rate = rate("discount_rate_pct", i.discount_rate_pct)?;
        let years = years_to_keep(w, &i.marginal_cost, i.challenger_annual_cost, rate)?;
        let whole = years == i.marginal_cost.len();
        #[expect(clippy::cast_precision_loss, reason = "number of years")]
        let keep = years as f64;
        let replace = if whole { Datum::Nothing } else { Datum::Number(keep + 1.0) };
        Ok(result("keep_years", keep).and("replace_in_year", replace))
    }
}

calc! {
    PAYBACK = "payback",
    "simple and discounted payback, net present value and internal rate of a purchase",
    "definitions; methods, section 7";
    {
        capital: f64, MONEY.required(), "price premium or capital paid now";
        yearly_saving: List<f64>, MONEY.list().required(), "saving at the end of each year, or one for all";
        years: Option<i64>, YEARS.blank("as many as savings are given"), "years looked at";
        discount_rate_pct: f64, RATE_PCT.required(), "discount rate";
    }
    |i, w| {
        let rate = rate("discount_rate_pct", i.discount_rate_pct)?;
        let n = match i.years {
            Some(years) => usize::try_from(years).unwrap_or(0),
            None if i.yearly_saving.len() > 1 => i.yearly_saving.len(),
            None => {
                let why = "is needed: for how many years the saving lasts";
                return Err(Refusal::new("years", "", why));
            }
        };
        let savings = i.yearly_saving.as_long_as("yearly_saving", n)?;
        let flat = savings.iter().all(|s| *s == savings[0]);
        let simple = if flat { payback::simple(w, i.capital, savings[0]) } else {
            payback::discounted(w, i.capital, &savings, 0.0)?
        };
        let discounted = payback::discounted(w, i.capital, &savings, rate)?;
        let flows: Vec<f64> = std::iter::once(-i.capital).chain(savings).collect();
        let npv = irr::npv(w, &flows, rate)?;
        let internal = irr::internal_rate(w, &flows).ok();
        Ok(result("simple_payback_years", simple)
            .and("discounted_payback_years", discounted)
            .and("net_present_value", npv)
            .and("internal_rate_pct", internal.map(|i| 100.0 * i)))
    }
}

calc! {
    INTERNAL_RATE = "internal-rate",
    "internal rate and net present value of yearly flows",
    "definitions; bracketed root between −99 % and 1000 %";
    {
        flows: List<f64>, MONEY.list().required(), "flows at times 0, 1, 2 … years; what is paid is negative";
        discount_rate_pct: Option<f64>, RATE_PCT.blank("no present value"), "discount rate of the net present value";
    }
    |i, w| {
        let internal = irr::internal_rate(w, &i.flows)?;
        let npv = match i.discount_rate_pct {
            Some(pct) => Some(irr::npv(w, &i.flows, rate("discount_rate_pct", pct)?)?),
            None => None,
        };
        Ok(result("internal_rate_pct", 100.0 * internal).and("net_present_value", npv))
    }
}

calc! {
    LOSS_COST = "loss-cost",
    "yearly cost of the losses under a daily load of steps",
    "annual cost method: Theraja Vol. III Ex 50.72";
    {
        rated_kva: f64, KVA.required(), "rated power";
        no_load_loss_w: f64, LOSS_W.required(), "no-load (iron) loss";
        load_loss_w: f64, LOSS_W.required(), "load (copper) loss at rated load";
        load_kva: List<f64>, Input::real(0.0, 1e9).list().required(), "apparent power of each step";
        hours: List<f64>, Input::real(0.0, 1e5).list().required(), "hours of each step, or one for all";
        energised_hours: f64, Input::above(0.0, 1e5).default("24"), "hours under voltage, idle ones included";
        days: f64, Input::above(0.0, 366.0).default("365"), "days a year";
        energy_price_per_kwh: f64, MONEY.required(), "energy price";
    }
    |i, w| {
        let losses = Losses {
            rated_kva: i.rated_kva,
            no_load_loss_w: i.no_load_loss_w,
            load_loss_w: i.load_loss_w,
            auxiliary_loss_w: 0.0,
            reactance_pu: None,
        };
        let hours = i.hours.as_long_as("hours", i.load_kva.len())?;
        let step = |(kva, hours): (&f64, f64)| LoadStep { kva: *kva, kw: 0.0, hours };
        let steps: Vec<LoadStep> = i.load_kva.iter().zip(hours).map(step).collect();
        let e = energies(w, &losses, &steps, i.energised_hours)?;
        let daily = e.no_load_kwh + e.load_kwh;
        let cost = payback::repeated_energy(w, daily, i.days, i.energy_price_per_kwh);
        Ok(result("loss_cost_per_year", cost)
            .and("no_load_energy_kwh", e.no_load_kwh * i.days)
            .and("load_energy_kwh", e.load_kwh * i.days))
    }
}

calc! {
    BREAK_EVEN_PRICE = "break-even-price",
    "price difference at which a dearer unit with lower yearly cost is worth it",
    "annual cost method: Theraja Vol. III Ex 50.72, 50.80";
    {
        yearly_saving: f64, MONEY.required(), "yearly cost that the dearer unit saves";
        fixed_charge_rate_pct: f64, RATE_PCT.required(), "yearly charges on the price";
        price_difference: Option<f64>, MONEY, "how much dearer it is";
    }
    |i, w| {
        let fcr = i.fixed_charge_rate_pct / 100.0;
        let worth = payback::break_even_price(w, i.yearly_saving, fcr)?;
        let choice = match i.price_difference {
            Some(difference) if difference <= worth => Datum::from("dearer"),
            Some(_) => Datum::from("cheaper"),
            None => Datum::Nothing,
        };
        Ok(result("break_even_price_difference", worth).and("choice", choice))
    }
}

calc! {
    WEIBULL = "weibull",
    "what a Weibull age at failure says of a unit: hazard, survival, failure within years, mean life, B10",
    "Weibull 1951";
    {
        failure_shape: f64, Input::above(0.0, 100.0).required(), "shape, b";
        failure_scale_years: f64, Input::above(0.0, 1e4).required(), "scale, η";
        age_years: f64, Input::real(0.0, 1e4).required(), "age of the unit";
        years: i64, YEARS.default("5"), "years within which it may fail";
    }
    |i, w| {
        let weibull = Weibull::new(i.failure_shape, i.failure_scale_years)?;
        Ok(result("hazard_per_year", weibull.hazard(w, i.age_years))
            .and("survival_pu", weibull.survival(w, i.age_years))
            .and("fails_in_year_pu", weibull.fails_in_year(w, i.age_years))
            .and("fails_within_pu", weibull.fails_within(w, i.age_years, float(i.years)))
            .and("mean_life_years", weibull.mean_life(w))
            .and("b10_years", weibull.quantile(w, 0.1)))
    }
}
