//! Tender sheets and bases to fill in: every column blank but those a test is about.

use ironhum::engine::columns::{Basis, Bid, Lot, Measured, Money, Tender, TenderRate, TenderSheet};
use ironhum::engine::economics::Assumptions;
use ironhum::engine::loading::Market;

/// A tender `T` in `currency` with one lot `L`.
pub(crate) fn sheet(currency: &str, lot: Lot, bids: Vec<Bid>) -> TenderSheet {
    TenderSheet {
        tender: Tender { tender: "T".into(), currency: currency.into(), dated: None },
        rates: Vec::new(),
        lots: vec![lot],
        bids,
        measured: Vec::new(),
        awards: Vec::new(),
    }
}

/// A lot `L` with its own factors.
pub(crate) fn lot(rated_kva: f64, a: f64, b: f64, aux: f64) -> Lot {
    Lot {
        lot: "L".into(),
        rated_kva,
        factor_a_per_kw: Some(a),
        factor_b_per_kw: Some(b),
        factor_aux_per_kw: Some(aux),
        ..Lot::blank()
    }
}

/// A bid for lot `L` of tender `T`.
pub(crate) fn bid(name: &str, price: f64, no_load_loss_w: f64, load_loss_w: f64) -> Bid {
    Bid {
        tender: "T".into(),
        lot: "L".into(),
        bid: name.into(),
        price: money(price),
        no_load_loss_w,
        load_loss_w: Some(load_loss_w),
        ..Bid::blank()
    }
}

/// Exact money.
pub(crate) fn money(amount: f64) -> Money {
    Money::parse(&amount.to_string()).expect("at most three decimals")
}

/// A rate of a tender.
pub(crate) fn rate(currency: &str, rate: f64) -> TenderRate {
    TenderRate { currency: currency.into(), rate }
}

/// A delivered unit of bid `bid`.
pub(crate) fn measured(bid: &str, serial: &str, no_load_loss_w: f64, load_loss_w: f64) -> Measured {
    Measured {
        tender: "T".into(),
        lot: "L".into(),
        bid: bid.into(),
        serial: serial.into(),
        no_load_loss_w,
        load_loss_w,
        ..Measured::blank()
    }
}

/// A basis in `currency` with a flat energy price.
pub(crate) fn basis(
    currency: &str,
    years: i64,
    discount_rate_pct: f64,
    price_per_kwh: f64,
) -> Basis {
    Basis {
        name: "test".into(),
        currency: currency.into(),
        first_year: 2027,
        horizon_years: years,
        discount_rate_pct,
        energy_price_per_kwh: Some(price_per_kwh),
        ..Basis::blank()
    }
}

/// A basis made ready: keep both alive and borrow them as `BasisForFactors`.
pub(crate) fn resolved(basis: &Basis) -> (Assumptions, Market) {
    let assumptions = Assumptions::resolve(basis).expect("complete basis");
    let price = basis.energy_price_per_kwh.expect("flat price");
    (assumptions, Market::flat(price, basis.carbon_kg_per_kwh.unwrap_or(0.0), 0))
}

/// Holds two numbers equal to a relative tolerance.
#[track_caller]
pub(crate) fn near(got: f64, want: f64, tolerance: f64) {
    assert!((got - want).abs() <= tolerance * want.abs().max(1e-300), "{got} instead of {want}");
}
