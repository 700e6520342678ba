//! Payback of a price premium: plain, discounted; the yearly cost of a daily loss, and the price difference at which
//! two choices cost the same.

use super::interest::check_rate;
use crate::engine::Refusal;
use crate::engine::working::{Formula, Recorder};

const SIMPLE: Formula = Formula {
    name: "simple payback",
    symbol: "t_p",
    formula: "C/S",
    unit: "years",
    source: "definition; methods, section 7",
};

/// Years in which a yearly `saving` brings a `capital` back, undiscounted; none where nothing is saved.
pub fn simple<R: Recorder>(w: &mut R, capital: f64, saving: f64) -> Option<f64> {
    (saving > 0.0).then(|| w.step(&SIMPLE, &[("C", capital), ("S", saving)], capital / saving))
}

const DISCOUNTED: Formula = Formula {
    name: "discounted payback, linear within the year",
    symbol: "t_d",
    formula: "m + (C − Σ_{k≤m} S_k·(1+i)^−k)/(S_{m+1}·(1+i)^−(m+1))",
    unit: "years",
    source: "definition; savings at year ends, methods, section 7",
};

/// Years in which yearly `savings`, at year ends and discounted at `rate`, bring a `capital` back; linear within
/// the year; none where they never do.
///
/// # Errors
/// A rate at or below −100 %.
pub fn discounted<R: Recorder>(
    w: &mut R,
    capital: f64,
    savings: &[f64],
    rate: f64,
) -> Result<Option<f64>, Refusal> {
    check_rate("discount_rate_pct", rate)?;
    let mut open = capital;
    let (mut factor, mut years) = (1.0, 0.0);
    for saving in savings {
        factor /= 1.0 + rate;
        let worth = saving * factor;
        if open <= worth {
            let value = years + if worth > 0.0 { (open / worth).max(0.0) } else { 0.0 };
            return Ok(Some(w.step(
                &DISCOUNTED,
                &[("C", capital), ("i", rate), ("m", years)],
                value,
            )));
        }
        open -= worth;
        years += 1.0;
    }
    Ok(None)
}

const REPEATED: Formula = Formula {
    name: "yearly cost of an energy lost again each day",
    symbol: "C",
    formula: "E·n·c",
    unit: "money",
    source: "annual cost method: Theraja Vol. III Ex 50.72",
};

/// Yearly cost of an energy (kWh) that is lost again on each of `days` days at a price per kWh.
pub fn repeated_energy<R: Recorder>(w: &mut R, energy_kwh: f64, days: f64, price: f64) -> f64 {
    let inputs = [("E", energy_kwh), ("n", days), ("c", price)];
    w.step(&REPEATED, &inputs, energy_kwh * days * price)
}

const BREAK_EVEN: Formula = Formula {
    name: "price difference at which both cost the same",
    symbol: "ΔP",
    formula: "S/FCR",
    unit: "money",
    source: "annual cost method: Theraja Vol. III Ex 50.72, 50.80",
};

/// The price difference that a yearly saving is worth at a fixed charge rate (fraction a year).
///
/// # Errors
/// A fixed charge rate that is not above zero.
pub fn break_even_price<R: Recorder>(
    w: &mut R,
    yearly_saving: f64,
    fixed_charge_rate: f64,
) -> Result<f64, Refusal> {
    if fixed_charge_rate.is_nan() || fixed_charge_rate <= 0.0 {
        let why = "must be above zero: interest, depreciation and other yearly charges on the price, in percent";
        return Err(Refusal::new("fixed_charge_rate_pct", 100.0 * fixed_charge_rate, why));
    }
    let inputs = [("S", yearly_saving), ("FCR", fixed_charge_rate)];
    Ok(w.step(&BREAK_EVEN, &inputs, yearly_saving / fixed_charge_rate))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    #[test]
    fn paybacks() {
        let back = |savings: &[f64], rate| {
            discounted(&mut Silent, 1000.0, savings, rate).expect("sound rate")
        };
        assert_eq!(back(&[250.0; 8], 0.0), Some(4.0), "undiscounted it is the simple one");
        assert_eq!(simple(&mut Silent, 1000.0, 250.0), Some(4.0));
        assert_eq!(back(&[250.0; 3], 0.0), None);
        assert_eq!(back(&[0.0, 2000.0], 0.0), Some(1.5));
        assert_eq!(simple(&mut Silent, 1000.0, 0.0), None);
        assert!(discounted(&mut Silent, 1.0, &[1.0], -1.0).is_err());
        assert!(break_even_price(&mut Silent, 1.0, 0.0).is_err());
    }
}
