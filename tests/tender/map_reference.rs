//! Shares of the winner map against scipy's half-plane intersection (`tests/reference/tender_map.py`).

use ironhum::engine::decision::tender::Plane;
use ironhum::engine::decision::tender::map::WinnerMap;
use ironhum::engine::economics::loss_factors::LossFactors;

#[test]
fn shares_agree_with_scipy() {
    let text = include_str!("../reference/tender_map.json");
    let reference: serde_json::Value = serde_json::from_str(text).expect("JSON");
    let number = |value: &serde_json::Value| value.as_f64().expect("number");
    let lots = reference["lots"].as_array().expect("lots");
    for lot in lots {
        let planes: Vec<Plane> = lot["bids"]
            .as_array()
            .expect("bids")
            .iter()
            .map(|bid| Plane {
                fixed: number(&bid[0]),
                no_load_kw: number(&bid[1]),
                load_kw: number(&bid[2]),
                ..Plane::default()
            })
            .collect();
        let factors = LossFactors {
            factor_a_per_kw: number(&lot["factor_a_per_kw"]),
            factor_b_per_kw: number(&lot["factor_b_per_kw"]),
            factor_aux_per_kw: 0.0,
        };
        let map = WinnerMap::new(&planes, &factors);
        for (cell, share) in map.cells.iter().zip(lot["shares"].as_array().expect("shares")) {
            assert!((cell.share - number(share)).abs() < 1e-9, "{} {share}", cell.share);
        }
    }
    assert_eq!(lots.len(), 36);
}
