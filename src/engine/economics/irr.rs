//! Net present value of yearly flows and the internal rate at which it is nothing, by a bracketed root.

use super::interest::check_rate;
use crate::engine::Refusal;
use crate::engine::working::{Formula, Recorder};

const NPV: Formula = Formula {
    name: "net present value",
    symbol: "NPV",
    formula: "Σ_k F_k·(1+i)^−k, k from 0",
    unit: "money",
    source: "definition",
};

/// Net present value of flows at times 0, 1, 2 … years at the rate `i` (fraction).
///
/// # Errors
/// A rate at or below −100 %.
pub fn npv<R: Recorder>(w: &mut R, flows: &[f64], i: f64) -> Result<f64, Refusal> {
    check_rate("discount_rate_pct", i)?;
    Ok(w.step(&NPV, &[("i", i)], worth(flows, 1.0 / (1.0 + i))))
}

/// Σ F_k·v^k by Horner's rule.
fn worth(flows: &[f64], v: f64) -> f64 {
    flows.iter().rev().fold(0.0, |sum, flow| sum * v + flow)
}

/// Rates looked at: −99 % to 1000 % a year.
const LOWEST: f64 = -0.99;
const HIGHEST: f64 = 10.0;

/// Every internal rate between −99 % and 1000 % (fractions, rising): the sign changes of the net present value
/// on a fine net of rates, each closed in by bisection.
fn roots(flows: &[f64]) -> Vec<f64> {
    const NET: u32 = 4000;
    let v = |n: u32| {
        let share = f64::from(n) / f64::from(NET);
        1.0 / ((1.0 + LOWEST) * ((1.0 + HIGHEST) / (1.0 + LOWEST)).powf(share))
    };
    let mut found = Vec::new();
    let mut left = (v(0), worth(flows, v(0)));
    for n in 1..=NET {
        let right = (v(n), worth(flows, v(n)));
        if left.1 == 0.0 {
            found.push(1.0 / left.0 - 1.0);
        } else if left.1 * right.1 < 0.0 {
            found.push(1.0 / bisect(flows, left.0, right.0) - 1.0);
        }
        left = right;
    }
    found
}

fn bisect(flows: &[f64], mut a: f64, mut b: f64) -> f64 {
    let rising = worth(flows, a) < 0.0;
    loop {
        let middle = 0.5 * (a + b);
        if middle == a || middle == b {
            return middle;
        }
        if (worth(flows, middle) < 0.0) == rising { a = middle } else { b = middle }
    }
}

const IRR: Formula = Formula {
    name: "internal rate of return",
    symbol: "IRR",
    formula: "the i at which Σ_k F_k·(1+i)^−k = 0",
    unit: "1/year",
    source: "definition; bracketed root between −99 % and 1000 %",
};

/// The internal rate of flows at times 0, 1, 2 … years (fraction).
///
/// # Errors
/// No such rate, or several: then it says nothing, and the net present value decides.
pub fn internal_rate<R: Recorder>(w: &mut R, flows: &[f64]) -> Result<f64, Refusal> {
    let found = roots(flows);
    match found[..] {
        [rate] => Ok(w.step(&IRR, &[], rate)),
        [] => {
            let why = "have no internal rate between −99 % and 1000 %: they do not turn from cost to saving; use the net present value";
            Err(Refusal::new("flows", "", why))
        }
        _ => {
            let rates: Vec<String> = found.iter().map(|i| format!("{:.4} %", 100.0 * i)).collect();
            let why =
                "have several internal rates, so none of them decides; use the net present value";
            Err(Refusal::new("flows", rates.join(", "), why))
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    #[test]
    fn one_rate_none_and_several() {
        let irr = |flows: &[f64]| internal_rate(&mut Silent, flows);
        assert!((irr(&[-100.0, 110.0]).expect("one") - 0.1).abs() < 1e-12);
        assert!((irr(&[-100.0, 40.0]).expect("one") + 0.6).abs() < 1e-12);
        assert!(irr(&[100.0, 110.0]).is_err());
        assert!(irr(&[0.0, 0.0]).is_err());
        // 10 % and 20 %: (1 − 1.1v)(1 − 1.2v).
        let several = irr(&[-100.0, 230.0, -132.0]).expect_err("two rates");
        assert!(several.value.contains("10.0000 %") && several.value.contains("20.0000 %"));
    }
}
