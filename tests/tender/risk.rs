//! How sure the winner is: against an independent simulation (`tests/reference/tender_cloud.py`), at any thread
//! count, and one input at a time.

use ironhum::engine::columns::{
    Basis, BasisRange, BasisSheet, Bid, Distribution, Lot, TenderSheet,
};
use ironhum::engine::decision::uncertainty::RankCorrelation;
use ironhum::engine::loading::PriceSeries;
use ironhum::study::tender::risk::{Question, RiskResult, risk};
use ironhum::study::tender::{BasisForFactors, evaluate};

use crate::sheets::{basis, bid, near, resolved, sheet};

fn range(quantity: &str, distribution: Distribution, low: f64, high: f64) -> BasisRange {
    BasisRange {
        quantity: quantity.into(),
        distribution: Some(distribution),
        low: Some(low),
        high: Some(high),
        ..BasisRange::blank()
    }
}

fn about(quantity: &str, distribution: Distribution, deviation: f64) -> BasisRange {
    BasisRange {
        quantity: quantity.into(),
        distribution: Some(distribution),
        deviation: Some(deviation),
        ..BasisRange::blank()
    }
}

/// The case of the reference.
fn uncertain_basis() -> BasisSheet {
    let basis = Basis {
        demand_charge_per_kw_year: Some(40.0),
        responsibility_pu: Some(0.8),
        energy_escalation_pct: Some(1.5),
        load_growth_pct: Some(1.0),
        load_growth_years: Some(15),
        ..basis("EUR", 25, 6.0, 0.09)
    };
    let ranges = vec![
        range("discount_rate_pct", Distribution::Triangular, 4.0, 9.0),
        range("energy_price_per_kwh", Distribution::Triangular, 0.06, 0.15),
        range("energy_escalation_pct", Distribution::Uniform, 0.0, 3.0),
        about("load_growth_pct", Distribution::Normal, 0.5),
        about("demand_charge_per_kw_year", Distribution::Lognormal, 0.3),
        range("peak_pu", Distribution::Triangular, 0.3, 0.9),
    ];
    BasisSheet { basis, ranges, budgets: Vec::new() }
}

fn tender() -> TenderSheet {
    let lot = Lot {
        lot: "L".into(),
        rated_kva: 630.0,
        peak_pu: Some(0.5),
        loss_factor_pu: Some(0.35),
        ..Lot::blank()
    };
    let bids = vec![
        bid("cheap", 8000.0, 1100.0, 6500.0),
        Bid { auxiliary_loss_w: Some(30.0), ..bid("lean", 10_500.0, 610.0, 5400.0) },
        bid("iron", 9800.0, 500.0, 7200.0),
        bid("copper", 11_000.0, 900.0, 3300.0),
    ];
    sheet("EUR", lot, bids)
}

fn simulate(basis: &BasisSheet, seed: u64, draws: usize) -> RiskResult {
    let correlations = [RankCorrelation {
        quantities: ["energy_price_per_kwh".into(), "energy_escalation_pct".into()],
        rank_correlation: 0.6,
    }];
    let (assumptions, market) = resolved(&basis.basis);
    let today = BasisForFactors { assumptions: &assumptions, market: &market };
    let question = Question { basis, series: None, correlations: &correlations, seed, draws };
    risk(&tender(), &today, "L", &question).expect("complete")
}

#[test]
fn agrees_with_an_independent_simulation() {
    let text = include_str!("../reference/tender_cloud.json");
    let reference: serde_json::Value = serde_json::from_str(text).expect("JSON");
    let number = |value: &serde_json::Value| value.as_f64().expect("number");
    let (own, draws) = (number(&reference["own_draws"]), number(&reference["compared_draws"]));
    let result = simulate(&uncertain_basis(), 20_270_101, 20_000);
    assert_eq!((result.draws, result.cloud.len(), result.moved_draws), (20_000, 20_000, 0));
    near(draws, 20_000.0, 0.0);
    for expected in reference["bids"].as_array().expect("bids") {
        let bid = result.bids.iter().find(|bid| expected["bid"] == bid.bid).expect("known bid");
        let four_errors = |deviation: f64| 4.0 * deviation * (1.0 / draws + 1.0 / own).sqrt();
        let p = number(&expected["probability_pu"]);
        let away = (bid.probability_pu - p).abs();
        assert!(away <= four_errors((p * (1.0 - p)).sqrt()), "{bid:?} {expected}");
        let away = (bid.mean_regret - number(&expected["mean_regret"])).abs();
        assert!(away <= four_errors(number(&expected["regret_deviation"])), "{bid:?} {expected}");
        let quantiles = [
            ("p5", bid.owning_cost_p5),
            ("p50", bid.owning_cost_p50),
            ("p95", bid.owning_cost_p95),
        ];
        for (name, got) in quantiles {
            let (low, high) = (number(&expected[name][0]), number(&expected[name][1]));
            assert!((low..=high).contains(&got), "{name} {bid:?} {expected}");
        }
    }
    near(result.bids.iter().map(|bid| bid.probability_pu).sum::<f64>(), 1.0, 1e-12);
}

#[test]
fn same_bytes_at_any_thread_count() {
    let at = |threads: usize| {
        let pool =
            rayon::ThreadPoolBuilder::new().num_threads(threads).build().expect("starts threads");
        let result = pool.install(|| simulate(&uncertain_basis(), 42, 3001));
        (serde_json::to_string(&result).expect("plain data"), result.cloud)
    };
    let one = at(1);
    assert_eq!(one, at(2));
    assert_eq!(one, at(7));
    // The first draws of a longer run are those of the shorter one.
    let longer = simulate(&uncertain_basis(), 42, 4000);
    assert_eq!(longer.cloud[..3001], one.1[..]);
    assert_ne!(simulate(&uncertain_basis(), 43, 3001).cloud, one.1);
}

/// Without ranges the cloud is today's point, and the winner is sure.
#[test]
fn without_ranges_nothing_is_uncertain() {
    let certain = BasisSheet { ranges: Vec::new(), ..uncertain_basis() };
    let (assumptions, market) = resolved(&certain.basis);
    let today = BasisForFactors { assumptions: &assumptions, market: &market };
    let question =
        Question { basis: &certain, series: None, correlations: &[], seed: 1, draws: 10 };
    let result = risk(&tender(), &today, "L", &question).expect("complete");
    let evaluated = evaluate(&tender(), Some(&today), None).expect("complete").lots.remove(0);
    assert_eq!((result.bids[0].probability_pu, result.bids[0].mean_regret), (1.0, 0.0));
    for (bid, of_today) in result.bids.iter().zip(&evaluated.bids) {
        assert_eq!(bid.bid, of_today.bid);
        near(bid.owning_cost_p50, of_today.owning_cost, 1e-12);
        assert_eq!(bid.owning_cost_p5, bid.owning_cost_p95);
    }
    assert!(result.swing.is_empty());
    assert_eq!(result.cloud[9], [evaluated.factor_a_per_kw, evaluated.factor_b_per_kw]);
}

/// Each end of a swing is an evaluation with that one input changed.
#[test]
fn swings_are_evaluations_one_at_a_time() {
    let sheet = uncertain_basis();
    let result = simulate(&sheet, 1, 100);
    assert_eq!(result.swing.len(), 6);
    let widths: Vec<f64> =
        result.swing.iter().map(|s| (s.owning_cost_high - s.owning_cost_low).abs()).collect();
    assert!(widths.windows(2).all(|pair| pair[0] >= pair[1]), "greatest first: {widths:?}");
    let winner = &result.bids[0].bid;
    let swing = |name: &str| result.swing.iter().find(|s| s.quantity == name).expect("has a range");
    let rate = swing("discount_rate_pct");
    assert_eq!((rate.low, rate.high), (4.0, 9.0));
    let price = swing("energy_price_per_kwh");
    let at = |basis: &Basis| {
        let (assumptions, market) = resolved(basis);
        let today = BasisForFactors { assumptions: &assumptions, market: &market };
        evaluate(&tender(), Some(&today), None).expect("complete").lots.remove(0)
    };
    let dear = at(&Basis { energy_price_per_kwh: Some(0.15), ..sheet.basis.clone() });
    let own = dear.bids.iter().find(|bid| bid.bid == *winner).expect("known");
    near(price.owning_cost_high, own.owning_cost, 1e-12);
    assert_eq!(Some(&price.winner_high), dear.least_owning_cost.as_ref());
    let rival = dear.bids.iter().find(|bid| bid.bid != *winner).expect("four bids");
    near(price.lead_high.expect("has rivals"), rival.owning_cost - own.owning_cost, 1e-9);
    // A normal has no bounds: it is swung between its P5 and P95.
    near(swing("load_growth_pct").low, 1.0 - 0.5 * 1.644_853_626_951_472_7, 1e-12);
}

#[test]
fn price_series_take_no_flat_price() {
    let mut sheet = uncertain_basis();
    sheet.basis.energy_price_per_kwh = None;
    sheet.basis.price_series = Some("spot".into());
    let (assumptions, _) = resolved(&uncertain_basis().basis);
    let market = ironhum::engine::loading::Market::flat(0.09, 0.0, 0);
    let today = BasisForFactors { assumptions: &assumptions, market: &market };
    let spot = PriceSeries {
        name: "spot".into(),
        step_minutes: 60,
        first_timestamp: None,
        price_per_kwh: vec![0.06, 0.12],
        co2_kg_per_kwh: None,
        system_load: None,
    };
    let ask = |sheet: &BasisSheet, series: Option<&PriceSeries>, draws: usize| {
        let question = Question { basis: sheet, series, correlations: &[], seed: 1, draws };
        risk(&tender(), &today, "L", &question)
    };
    let why = |result: Result<RiskResult, _>| -> String {
        result
            .map(|_| ())
            .map_err(|error: ironhum::study::StudyError| error.to_string())
            .expect_err("must be refused")
    };
    assert!(why(ask(&sheet, Some(&spot), 5)).contains("takes its prices from spot"));
    sheet.ranges.remove(1);
    assert!(why(ask(&sheet, None, 5)).contains("price_series spot: is not in the book"));
    assert!(why(ask(&sheet, Some(&spot), 0)).starts_with("lot L: draws 0: must lie between"));
    // The series' mean is 0.09, as the flat price was: the same cloud.
    let mut flat = uncertain_basis();
    flat.ranges.remove(1);
    let series = ask(&sheet, Some(&spot), 5).expect("complete");
    assert_eq!(series.cloud, ask(&flat, None, 5).expect("complete").cloud);
}

/// A bid quoted at 85 °C for a lot at 75 °C with its split unknown: under 0 stray it has the least owning cost, with
/// more of it the rival has. The lot states its factors: nothing else is uncertain.
#[test]
fn the_stray_share_of_converted_bids_acts() {
    let lot = Lot {
        lot: "L".into(),
        rated_kva: 630.0,
        reference_temp_c: Some(75.0),
        factor_a_per_kw: Some(10_000.0),
        factor_b_per_kw: Some(3000.0),
        factor_aux_per_kw: Some(9000.0),
        ..Lot::blank()
    };
    let at = |c: f64, bid: Bid| Bid { reference_temp_c: Some(c), ..bid };
    let bids = vec![
        at(85.0, bid("hot", 10_000.0, 500.0, 4500.0)),
        at(75.0, bid("cold", 10_000.0, 500.0, 4450.0)),
    ];
    let tender = sheet("EUR", lot, bids);
    let with = |share: Option<f64>| Basis { stray_share_pu: share, ..basis("EUR", 25, 6.0, 0.09) };
    let evaluated = |share: f64| {
        let (assumptions, market) = resolved(&with(Some(share)));
        let today = BasisForFactors { assumptions: &assumptions, market: &market };
        evaluate(&tender, Some(&today), None).expect("complete").lots.remove(0)
    };
    let uncertain = BasisSheet {
        basis: with(None),
        ranges: vec![range("stray_share_pu", Distribution::Uniform, 0.0, 0.4)],
        budgets: Vec::new(),
    };
    let (assumptions, market) = resolved(&uncertain.basis);
    let today = BasisForFactors { assumptions: &assumptions, market: &market };
    let ask = |draws: usize| {
        let question =
            Question { basis: &uncertain, series: None, correlations: &[], seed: 7, draws };
        risk(&tender, &today, "L", &question).expect("complete")
    };
    let result = ask(4000);
    let (low, high) = (evaluated(0.0), evaluated(0.4));
    let cost = |lot: &ironhum::study::tender::LotResult| {
        lot.bids.iter().find(|bid| bid.bid == "hot").expect("known").owning_cost
    };
    let swing = &result.swing[0];
    assert_eq!((swing.quantity, result.swing.len()), ("stray_share_pu", 1));
    near(swing.owning_cost_low, cost(&low), 1e-12);
    near(swing.owning_cost_high, cost(&high), 1e-12);
    assert_eq!((swing.winner_low.as_str(), swing.winner_high.as_str()), ("hot", "cold"));
    assert_eq!(low.least_owning_cost.as_deref(), Some("hot"));
    assert_eq!(high.least_owning_cost.as_deref(), Some("cold"));
    // It must move to where both cost the same, and that part of the draws is won by the converted bid.
    let change = low.changes.0.iter().find(|change| change.quantity == "stray_share_pu");
    let change = change.expect("a bid is converted");
    let up = change.up.as_ref().expect("cold wins above");
    assert_eq!((change.base, &change.down, up.bid.as_str()), (0.0, &None, "cold"));
    let there = evaluated(up.to);
    near(there.bids[0].owning_cost, there.bids[1].owning_cost, 1e-12);
    near(result.bids[0].probability_pu, up.to / 0.4, 0.03);
    // The same bytes at any thread count.
    let at = |threads: usize| {
        let pool =
            rayon::ThreadPoolBuilder::new().num_threads(threads).build().expect("starts threads");
        serde_json::to_string(&pool.install(|| ask(3001))).expect("plain data")
    };
    assert_eq!(at(1), at(3));
    // Where no bid is converted it moves nothing, and is not told.
    let mut plain = tender.clone();
    plain.bids[0].reference_temp_c = Some(75.0);
    let lot = evaluate(&plain, Some(&today), None).expect("complete").lots.remove(0);
    assert!(lot.changes.0.iter().all(|change| change.quantity != "stray_share_pu"));
}
