//! How far an input must move before the winner changes: just before the move the winner stands, just after
//! it another bid wins.

use ironhum::engine::columns::{Basis, Bid, Lot};
use ironhum::study::tender::{BasisForFactors, LotResult, evaluate};

use crate::sheets::{basis, bid, money, near, resolved, sheet};

fn bids() -> Vec<Bid> {
    vec![
        bid("cheap", 8000.0, 1100.0, 6500.0),
        Bid { auxiliary_loss_w: Some(30.0), ..bid("lean", 10_500.0, 610.0, 5400.0) },
        bid("iron", 9800.0, 500.0, 7200.0),
        bid("copper", 11_000.0, 900.0, 3300.0),
    ]
}

fn evaluated(basis: &Basis, lot: &Lot, bids: Vec<Bid>) -> LotResult {
    let (assumptions, market) = resolved(basis);
    let basis = BasisForFactors { assumptions: &assumptions, market: &market };
    let sheet = sheet("EUR", lot.clone(), bids);
    evaluate(&sheet, Some(&basis), None).expect("complete").lots.remove(0)
}

fn of_load() -> Lot {
    Lot {
        lot: "L".into(),
        rated_kva: 630.0,
        peak_pu: Some(0.7),
        loss_factor_pu: Some(0.35),
        load_growth_pct: Some(1.0),
        ..Lot::blank()
    }
}

fn today() -> Basis {
    Basis {
        demand_charge_per_kw_year: Some(40.0),
        responsibility_pu: Some(0.8),
        carbon_price_per_t: Some(60.0),
        carbon_kg_per_kwh: Some(0.3),
        energy_escalation_pct: Some(1.5),
        ..basis("EUR", 25, 6.0, 0.09)
    }
}

/// Sets an input of the basis or the lot.
type Set = fn(&mut Basis, &mut Lot, f64);

const INPUTS: [(&str, Set); 3] = [
    ("discount_rate_pct", |basis, _, x| basis.discount_rate_pct = x),
    ("energy_price_per_kwh", |basis, _, x| basis.energy_price_per_kwh = Some(x)),
    ("peak_pu", |_, lot, x| lot.peak_pu = Some(x)),
];

#[test]
fn winner_changes_at_the_stated_value_of_the_basis() {
    let mut seen = 0;
    for peak_pu in [0.3, 0.45, 0.6, 0.7] {
        let lot = Lot { peak_pu: Some(peak_pu), ..of_load() };
        let result = evaluated(&today(), &lot, bids());
        let winner = result.least_owning_cost.clone();
        for (name, set) in INPUTS {
            let change =
                result.changes.0.iter().find(|change| change.quantity == name).expect("computed");
            for (side, sign) in [(&change.down, -1.0), (&change.up, 1.0)] {
                let Some(side) = side else { continue };
                seen += 1;
                near(change.base + sign * side.by, side.to, 1e-12);
                let at = |x: f64| {
                    let (mut basis, mut lot) = (today(), lot.clone());
                    set(&mut basis, &mut lot, x);
                    evaluated(&basis, &lot, bids()).least_owning_cost
                };
                let step = 1e-7 * sign * change.base;
                assert_eq!(at(side.to - step), winner, "{name} before {}", side.to);
                assert_eq!(at(side.to + step).as_ref(), Some(&side.bid), "{name} after");
            }
        }
    }
    assert!(seen >= 12, "{seen} changes are too few to mean anything");
}

#[test]
fn winner_changes_at_the_stated_price_and_losses() {
    let result = evaluated(&today(), &of_load(), bids());
    let winner = result.least_owning_cost.clone().expect("four bids");
    for name in ["price", "no_load_loss_w", "load_loss_w"] {
        let change =
            result.changes.0.iter().find(|change| change.quantity == name).expect("always");
        let up = change.up.as_ref().expect("a worse winner loses");
        let at = |x: f64| {
            let mut bids = bids();
            let own = bids.iter_mut().find(|bid| bid.bid == winner).expect("bids");
            match name {
                "price" => own.price = money((1000.0 * x).round() / 1000.0),
                "no_load_loss_w" => own.no_load_loss_w = x,
                _ => own.load_loss_w = Some(x),
            }
            evaluated(&today(), &of_load(), bids).least_owning_cost
        };
        assert_eq!(at(up.to - 0.002).as_ref(), Some(&winner), "{name}");
        assert_eq!(at(up.to + 0.002).as_ref(), Some(&up.bid), "{name}");
        assert_eq!(change.down, None, "{name}");
    }
}

/// A factor that the lot states does not follow the basis: only what is computed moves.
#[test]
fn stated_factors_do_not_follow_the_basis() {
    let stated = Lot {
        factor_a_per_kw: Some(9000.0),
        factor_b_per_kw: Some(2000.0),
        factor_aux_per_kw: Some(0.0),
        ..of_load()
    };
    let result = evaluated(&today(), &stated, bids());
    let names: Vec<_> = result.changes.0.iter().map(|change| change.quantity).collect();
    let own = ["factor_a_per_kw", "factor_b_per_kw", "factor_aux_per_kw"];
    assert_eq!(names, [&own[..], &["price", "no_load_loss_w", "load_loss_w"]].concat());
    let half = Lot { factor_b_per_kw: None, ..stated };
    let result = evaluated(&today(), &half, bids());
    assert!(result.changes.0.iter().any(|change| change.quantity == "peak_pu"));
}
