//! Awarding by lot or to one bidder: numbers by hand.

use ironhum::engine::columns::{Bid, Lot};
use ironhum::study::tender::evaluate;

use crate::sheets::{bid, lot, sheet};

#[test]
fn one_bidder_for_all_lots() {
    let of = |lot: &str, name: &str, bidder: &str, price: f64| Bid {
        lot: lot.into(),
        bidder: Some(bidder.into()),
        ..bid(name, price, 0.0, 1000.0)
    };
    let mut sheet = sheet("EUR", Lot { quantity: Some(2), ..lot(100.0, 1.0, 1.0, 0.0) }, vec![]);
    sheet.lots.push(Lot { lot: "M".into(), ..lot(100.0, 1.0, 1.0, 0.0) });
    sheet.bids = vec![
        of("L", "1", "Nord", 99.0),
        of("L", "2", "Süd", 109.0),
        of("L", "3", "Süd", 104.0),
        of("M", "4", "Nord", 299.0),
        of("M", "5", "Süd", 199.0),
        of("M", "6", "West", 149.0),
        Bid { rated_kva: Some(50.0), ..of("M", "7", "West", 1.0) },
    ];
    let result = evaluate(&sheet, None, None).expect("complete").awards;
    let ids = |bids: &[ironhum::study::tender::award::PackageBid]| {
        bids.iter().map(|bid| bid.bid.clone()).collect::<Vec<_>>()
    };
    assert_eq!(
        (ids(&result.by_lot.bids), result.by_lot.lot_cost),
        (vec!["1".into(), "6".into()], 350.0)
    );
    let packages: Vec<_> = result
        .packages
        .iter()
        .map(|p| {
            (p.bidder.as_str(), ids(&p.package.bids).join(" "), p.package.lot_cost, p.above_by_lot)
        })
        .collect();
    assert_eq!(
        packages,
        [
            ("Süd", "3 5".into(), 410.0, 60.0),
            ("Nord", "1 4".into(), 500.0, 150.0),
            ("West", "6".into(), 150.0, 0.0)
        ]
    );
    assert_eq!(result.packages[2].package.lots_missing, ["L"]);
}
