//! What must hold of any tender: the scale of money, the order of bids, sums of parts.

use ironhum::engine::columns::{Bid, Lot, Money, TenderSheet};
use ironhum::study::tender::{LotResult, evaluate};
use proptest::prelude::*;

use crate::sheets::{bid, lot, near, sheet};

fn any_bid() -> impl Strategy<Value = Bid> {
    let losses = (100.0..3000.0_f64, 500.0..20_000.0_f64, prop::option::of(0.0..200.0_f64));
    let money = (1_000_000..60_000_000_i64, prop::option::of(-900_000..900_000_i64));
    let extras = (prop::option::of(400.0..900.0_f64), prop::option::of(60.0..90.0_f64));
    (losses, money, extras).prop_map(|((p0, pk, aux), (price, adder), (kva, temperature))| Bid {
        price: Money(price),
        adder_cost: adder.map(Money),
        auxiliary_loss_w: aux,
        rated_kva: kva,
        reference_temp_c: temperature,
        ..bid("", 0.0, p0, pk)
    })
}

fn any_sheet() -> impl Strategy<Value = TenderSheet> {
    let factors = (0.0..15_000.0_f64, 0.0..6000.0_f64, 0.0..9000.0_f64, 0.0..10.0_f64);
    (prop::collection::vec(any_bid(), 0..25), factors).prop_map(|(mut bids, (a, b, aux, band))| {
        for (i, bid) in bids.iter_mut().enumerate() {
            bid.bid = format!("B{i}");
        }
        let lot =
            Lot { near_tie_pct: Some(band), reference_temp_c: Some(75.0), ..lot(500.0, a, b, aux) };
        sheet("EUR", lot, bids)
    })
}

fn judged(sheet: &TenderSheet) -> LotResult {
    evaluate(sheet, None, None).expect("complete").lots.remove(0)
}

/// The same tender with all money times a power of two.
fn scaled(sheet: &TenderSheet, shift: u32) -> TenderSheet {
    let mut sheet = sheet.clone();
    let factor = f64::from(1_u32 << shift);
    for lot in &mut sheet.lots {
        for factor_per_kw in
            [&mut lot.factor_a_per_kw, &mut lot.factor_b_per_kw, &mut lot.factor_aux_per_kw]
        {
            *factor_per_kw = factor_per_kw.map(|value| value * factor);
        }
    }
    // A rate scales the bids to the bit; thousandths of money need not divide evenly.
    sheet.rates.push(crate::sheets::rate("XXX", factor));
    for bid in &mut sheet.bids {
        bid.currency = Some("XXX".into());
    }
    sheet
}

proptest! {
    #[test]
    fn money_scales_to_the_bit(sheet in any_sheet(), shift in 1_u32..12) {
        // Below a factor of 1 per kW the box of the map keeps its least size.
        prop_assume!(sheet.lots[0].factor_a_per_kw > Some(1.0));
        prop_assume!(sheet.lots[0].factor_b_per_kw > Some(1.0));
        let (one, other) = (judged(&sheet), judged(&scaled(&sheet, shift)));
        let factor = f64::from(1_u32 << shift);
        prop_assert_eq!(&one.recommended, &other.recommended);
        prop_assert_eq!(one.margin_pct, other.margin_pct);
        for (a, b) in one.bids.iter().zip(&other.bids) {
            prop_assert_eq!((&a.bid, a.rank, a.near_tie), (&b.bid, b.rank, b.near_tie));
            prop_assert_eq!(a.owning_cost * factor, b.owning_cost);
            prop_assert_eq!(a.owning_cost_at_tolerance * factor, b.owning_cost_at_tolerance);
        }
        for (a, b) in one.map.bids.iter().zip(&other.map.bids) {
            prop_assert_eq!(a.share, b.share);
            let corners: Vec<_> =
                a.polygon.iter().map(|p| p.map(|x| x * factor)).collect();
            prop_assert_eq!(&corners, &b.polygon);
        }
        let changes = one.changes.0.iter().zip(&other.changes.0);
        for (a, b) in changes.filter(|(a, _)| !a.quantity.ends_with("_loss_w")) {
            let by = |side: &Option<ironhum::study::tender::MoveResult>| {
                side.as_ref().map(|side| side.by)
            };
            // A share is no money: it moves as far.
            let factor = if a.quantity == "stray_share_pu" { 1.0 } else { factor };
            prop_assert_eq!(by(&a.up).map(|by| by * factor), by(&b.up));
            prop_assert_eq!(by(&a.down).map(|by| by * factor), by(&b.down));
        }
    }

    /// Ties apart, nothing depends on which bid came first.
    #[test]
    fn order_of_entry_does_not_matter(sheet in any_sheet(), turn in 0_usize..25) {
        let mut turned = sheet.clone();
        let len = turned.bids.len().max(1);
        turned.bids.rotate_left(turn % len);
        let (one, other) = (judged(&sheet), judged(&turned));
        let ranks = |lot: &LotResult| -> Vec<_> {
            lot.bids.iter().filter(|b| b.rank.is_some()).map(|b| (b.rank, b.bid.clone())).collect()
        };
        prop_assert_eq!(ranks(&one), ranks(&other));
        prop_assert_eq!(&one.recommended, &other.recommended);
        for cell in &one.map.bids {
            let same = other.map.bids.iter().find(|c| c.bid == cell.bid).expect("same bids");
            prop_assert!((cell.share - same.share).abs() < 1e-12);
            prop_assert_eq!(cell.polygon.len(), same.polygon.len());
        }
    }

    #[test]
    fn parts_make_the_whole(sheet in any_sheet()) {
        let lot = judged(&sheet);
        for bid in &lot.bids {
            let parts = bid.price + bid.no_load_cost + bid.load_cost + bid.auxiliary_cost
                + bid.added_cost;
            prop_assert_eq!(parts, bid.owning_cost);
            prop_assert!(bid.owning_cost_at_tolerance >= bid.owning_cost);
            prop_assert_eq!(bid.rank.is_some(), bid.excluded.is_empty());
            prop_assert!(bid.rank.is_some() || !bid.near_tie);
        }
        let costs: Vec<f64> =
            lot.bids.iter().filter(|b| b.rank.is_some()).map(|b| b.owning_cost).collect();
        prop_assert!(costs.windows(2).all(|pair| pair[0] <= pair[1] * (1.0 + 1e-12)));
        let shares: f64 = lot.map.bids.iter().map(|cell| cell.share).sum();
        if costs.is_empty() {
            prop_assert_eq!(lot.recommended, None);
        } else {
            near(shares, 1.0, 1e-9);
        }
        let json = serde_json::to_string(&judged(&sheet)).expect("plain data");
        prop_assert!(!json.contains("NaN") && !json.contains("inf"));
    }
}
