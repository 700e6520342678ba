//! Rates of exchange stored with a tender: the value of one unit of a currency in the tender currency.

use crate::engine::Refusal;
use crate::engine::columns::{Tender, TenderRate};
use crate::engine::working::{Formula, Recorder};

/// The rates of a tender.
#[derive(Clone, Copy, Debug)]
pub struct Rates<'a> {
    currency: &'a str,
    rates: &'a [TenderRate],
}

const CONVERTED: Formula = Formula {
    name: "amount in the tender currency",
    symbol: "amount",
    formula: "own·rate",
    unit: "money",
    source: "rate stored with the tender; methods, section 8",
};

const IN_CURRENCY: Formula = Formula {
    name: "the factor in a currency of the tender",
    symbol: "factor",
    formula: "own/rate",
    unit: "money/kW",
    source: "rate stored with the tender; methods, section 8",
};

const AMOUNT_IN_CURRENCY: Formula = Formula {
    name: "the amount in the currency of the bid",
    symbol: "amount_bid",
    formula: "own/rate",
    unit: "of the bid's currency",
    source: "rate stored with the tender; methods, section 8",
};

/// An amount of the tender currency in the currency of a bid, of `rate`.
pub fn amount_in_currency<R: Recorder>(w: &mut R, own: f64, rate: f64) -> f64 {
    w.step(&AMOUNT_IN_CURRENCY, &[("own", own), ("rate", rate)], own / rate)
}

/// A factor of the tender currency in a currency of `rate`.
pub fn in_currency<R: Recorder>(w: &mut R, own: f64, rate: f64) -> f64 {
    w.step(&IN_CURRENCY, &[("own", own), ("rate", rate)], own / rate)
}

/// Whether a price, brought to the tender currency, is ten times or a tenth of the median of the lot's other bids, which a
/// rate the wrong way round makes it (common practice, no source). Never without another bid.
pub fn price_is_far(price: f64, others: impl IntoIterator<Item = f64>) -> bool {
    let mut others: Vec<f64> = others.into_iter().collect();
    others.sort_by(f64::total_cmp);
    let (Some(low), Some(high)) =
        (others.get(others.len().saturating_sub(1) / 2), others.get(others.len() / 2))
    else {
        return false;
    };
    let median = f64::midpoint(*low, *high);
    median > 0.0 && (price >= 10.0 * median || price <= 0.1 * median)
}

impl<'a> Rates<'a> {
    /// The rates of a tender.
    ///
    /// # Errors
    /// The tender's own currency at another rate than 1.
    pub fn new(tender: &'a Tender, rates: &'a [TenderRate]) -> Result<Self, Refusal> {
        match rates.iter().find(|rate| rate.currency == tender.currency && rate.rate != 1.0) {
            Some(rate) => {
                let why = format!(
                    "is the rate of {}, the tender currency itself; take it out of [rates]",
                    rate.currency
                );
                Err(Refusal::new("rate", rate.rate, why))
            }
            None => Ok(Self { currency: &tender.currency, rates }),
        }
    }

    /// The tender currency.
    pub fn currency(&self) -> &'a str {
        self.currency
    }

    /// The value of one unit of `currency` (blank: the tender's own) in the tender currency.
    ///
    /// # Errors
    /// No rate is stored; the currency is named.
    pub fn of(&self, currency: Option<&str>) -> Result<f64, Refusal> {
        let code = currency.unwrap_or(self.currency);
        if code == self.currency {
            return Ok(1.0);
        }
        let stored = self.rates.iter().find(|rate| rate.currency == code);
        stored.map(|rate| rate.rate).ok_or_else(|| {
            let why = format!(
                "has no rate in this tender; add {code} = (value of one {code} in {}) under [rates]",
                self.currency
            );
            Refusal::new("currency", code, why)
        })
    }

    /// `own` units of a currency at `rate`.
    pub fn convert<R: Recorder>(w: &mut R, own: f64, rate: f64, of: &'static str) -> f64 {
        let value = w.step(&CONVERTED, &[("own", own), ("rate", rate)], own * rate);
        w.about(&|| of.to_owned());
        value
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn missing_rate_names_the_currency() {
        let tender = Tender { currency: "EUR".into(), ..Tender::blank() };
        let usd = [TenderRate { currency: "USD".into(), rate: 0.9 }];
        let rates = Rates::new(&tender, &usd).expect("no own rate");
        assert_eq!(rates.of(None), Ok(1.0));
        assert_eq!(rates.of(Some("USD")), Ok(0.9));
        let refusal = rates.of(Some("SEK")).expect_err("has no rate");
        assert!(refusal.to_string().contains("currency SEK"), "{refusal}");
        let own = [TenderRate { currency: "EUR".into(), rate: 1.1 }];
        assert!(Rates::new(&tender, &own).is_err());
    }
}
