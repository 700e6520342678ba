//! How long a lot of 500 bids takes: the whole evaluation with map, borders and changes, and the map alone.

use std::hint::black_box;

use criterion::{Criterion, criterion_group, criterion_main};
use ironhum::engine::columns::{
    Basis, BasisRange, BasisSheet, Bid, Lot, Money, Tender, TenderSheet,
};
use ironhum::engine::decision::tender::Plane;
use ironhum::engine::decision::tender::map::WinnerMap;
use ironhum::engine::economics::Assumptions;
use ironhum::engine::economics::loss_factors::LossFactors;
use ironhum::engine::loading::Market;
use ironhum::study::tender::risk::{Question, risk};
use ironhum::study::tender::{BasisForFactors, evaluate};
use rand::{RngExt as _, SeedableRng as _};
use rand_chacha::ChaCha8Rng;

/// Bids near a curve of price over losses, so that dozens of them win somewhere.
fn bids(count: usize) -> Vec<Bid> {
    let mut rng = ChaCha8Rng::seed_from_u64(500);
    let bid = |i| {
        let (p0, pk) = (rng.random_range(300.0..1500.0_f64), rng.random_range(2e3..9e3_f64));
        let price = 5000.0 + 1.5e6 / p0 + 9e6 / pk + rng.random_range(0.0..60.0);
        Bid {
            tender: "T".into(),
            lot: "L".into(),
            bid: format!("B{i:03}"),
            price: Money::parse(&format!("{price:.3}")).expect("three decimals"),
            no_load_loss_w: p0,
            load_loss_w: Some(pk),
            ..Bid::blank()
        }
    };
    (0..count).map(bid).collect()
}

fn basis() -> Basis {
    Basis {
        currency: "EUR".into(),
        horizon_years: 30,
        discount_rate_pct: 6.0,
        energy_price_per_kwh: Some(0.09),
        ..Basis::blank()
    }
}

/// A tender of one lot whose factors come from the basis.
fn sheet(count: usize) -> TenderSheet {
    let lot = Lot {
        lot: "L".into(),
        rated_kva: 630.0,
        peak_pu: Some(0.7),
        loss_factor_pu: Some(0.35),
        ..Lot::blank()
    };
    TenderSheet {
        tender: Tender { tender: "T".into(), currency: "EUR".into(), dated: None },
        rates: Vec::new(),
        lots: vec![lot],
        bids: bids(count),
        measured: Vec::new(),
        awards: Vec::new(),
    }
}

fn tender(c: &mut Criterion) {
    let basis = basis();
    let assumptions = Assumptions::resolve(&basis).expect("complete basis");
    let market = Market::flat(0.09, 0.0, 0);
    let basis = BasisForFactors { assumptions: &assumptions, market: &market };
    let sheet = sheet(500);
    let result = evaluate(&sheet, Some(&basis), None).expect("complete");
    let cells = result.lots[0].map.bids.iter().filter(|cell| cell.share > 0.0).count();
    let name = format!("500 bids, {cells} winners");
    c.bench_function(&format!("evaluate {name}"), |b| {
        b.iter(|| evaluate(black_box(&sheet), Some(&basis), None));
    });

    let planes: Vec<Plane> = sheet
        .bids
        .iter()
        .map(|bid| Plane {
            fixed: bid.price.amount(),
            no_load_kw: bid.no_load_loss_w / 1000.0,
            load_kw: bid.load_loss_w.unwrap_or(0.0) / 1000.0,
            ..Plane::default()
        })
        .collect();
    let today = LossFactors {
        factor_a_per_kw: result.lots[0].factor_a_per_kw,
        factor_b_per_kw: result.lots[0].factor_b_per_kw,
        factor_aux_per_kw: 0.0,
    };
    c.bench_function(&format!("map of {name}"), |b| {
        b.iter(|| WinnerMap::new(black_box(&planes), &today));
    });
}

/// A lot of 60 bids over 10,000 draws of two inputs.
fn simulation(c: &mut Criterion) {
    let basis = basis();
    let assumptions = Assumptions::resolve(&basis).expect("complete basis");
    let market = Market::flat(0.09, 0.0, 0);
    let today = BasisForFactors { assumptions: &assumptions, market: &market };
    let range = |quantity: &str, low, high| BasisRange {
        quantity: quantity.into(),
        low: Some(low),
        high: Some(high),
        ..BasisRange::blank()
    };
    let ranges =
        vec![range("discount_rate_pct", 4.0, 9.0), range("energy_price_per_kwh", 0.06, 0.15)];
    let basis = BasisSheet { basis, ranges, budgets: Vec::new() };
    let sheet = sheet(60);
    let question =
        Question { basis: &basis, series: None, correlations: &[], seed: 1, draws: 10_000 };
    c.bench_function("risk of 60 bids, 10,000 draws", |b| {
        b.iter(|| risk(black_box(&sheet), &today, "L", &question));
    });
}

criterion_group!(benches, tender, simulation);
criterion_main!(benches);
