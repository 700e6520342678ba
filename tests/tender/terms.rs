//! How bids come to one lot's terms: currency, quoted losses, temperature, another rating, limits. Numbers by hand.

use ironhum::engine::columns::{Bid, Insulation, Lot, Tolerance};
use ironhum::study::tender::{BidResult, evaluate, margin, verdict, working};

use crate::sheets::{bid, lot, money, near, rate, sheet};

/// The only bid of a lot, evaluated.
fn only(lot: Lot, bid: Bid) -> BidResult {
    let result = evaluate(&sheet("EUR", lot, vec![bid]), None, None).expect("complete");
    result.lots[0].bids[0].clone()
}

#[test]
fn money_comes_to_the_tender_currency() {
    let foreign = Bid {
        currency: Some("USD".into()),
        freight_cost: Some(money(100.0)),
        install_cost: Some(money(50.5)),
        adder_cost: Some(money(-20.25)),
        ..bid("A", 10_000.0, 500.0, 4000.0)
    };
    let mut sheet = sheet(
        "EUR",
        Lot { quantity: Some(12), ..lot(400.0, 10_000.0, 2000.0, 0.0) },
        vec![foreign],
    );
    let refused = evaluate(&sheet, None, None).expect_err("USD has no rate").to_string();
    assert!(refused.starts_with("lot L, bid A: currency USD"), "{refused}");
    sheet.rates.push(rate("USD", 0.8));
    let result = evaluate(&sheet, None, None).expect("complete");
    let bid = &result.lots[0].bids[0];
    assert_eq!((bid.price, bid.added_cost), (8000.0, 130.25 * 0.8));
    near(bid.owning_cost, 8000.0 + 104.2 + 5000.0 + 8000.0, 1e-12);
    assert_eq!(bid.lot_cost, 12.0 * bid.owning_cost);
}

/// 4000 W at 85 °C with 5 % stray to 75 °C, copper: x = 310/320; 3800·x + 200/x.
#[test]
fn load_loss_comes_to_the_lots_temperature() {
    let at = |c| Lot { reference_temp_c: c, ..lot(400.0, 0.0, 1000.0, 0.0) };
    let quoted = |c| Bid { reference_temp_c: c, ..bid("A", 1.0, 500.0, 4000.0) };
    let basis = ironhum::engine::columns::Basis {
        stray_share_pu: Some(0.05),
        ..crate::sheets::basis("EUR", 10, 5.0, 0.1)
    };
    let (assumptions, market) = crate::sheets::resolved(&basis);
    let basis =
        ironhum::study::tender::BasisForFactors { assumptions: &assumptions, market: &market };
    let sheet = sheet("EUR", at(Some(75.0)), vec![quoted(Some(85.0))]);
    let result = evaluate(&sheet, Some(&basis), None).expect("complete");
    let x = 310.0 / 320.0;
    near(result.lots[0].bids[0].load_cost, 3800.0 * x + 200.0 / x, 1e-12);
    assert_eq!(result.lots[0].bids[0].flags, ["split_unknown"]);

    assert_eq!(only(at(Some(75.0)), quoted(Some(75.0))).load_cost, 4000.0);
    for blank in [only(at(None), quoted(Some(85.0))), only(at(Some(75.0)), quoted(None))] {
        assert_eq!((blank.load_cost, blank.flags), (4000.0, vec!["no_reference_temp"]));
    }
}

/// Total 9000 W at the 30 MVA stage of a 50 MVA unit: Pk = (9000 − 2000)·(50/30)². The lot asks for 40 MVA:
/// B counts (40/50)² for this bid, in the evaluation and at tolerance.
#[test]
fn other_ratings_and_quoted_totals() {
    let lot = Lot { tolerance: Some(Tolerance::Iec), ..lot(40_000.0, 3000.0, 1000.0, 0.0) };
    let staged = Bid {
        rated_kva: Some(50_000.0),
        loss_base_kva: Some(30_000.0),
        load_loss_w: None,
        total_loss_w: Some(9000.0),
        ..bid("A", 100.0, 2000.0, 0.0)
    };
    let result = only(lot, staged);
    let pk = 7000.0 * 25.0 / 9.0;
    near(result.load_cost, 0.64 * pk, 1e-12);
    assert_eq!(result.flags, ["load_loss_from_total", "loss_base_differs", "no_reference_temp"]);
    // A 3000 exceeds B_bid 640: iron first (15 %), then copper up to 10 % of the total.
    let (x, all) = (0.15 * 2000.0, 0.1 * (2000.0 + pk));
    let worst = 3.0 * x + 0.64 * (all - x);
    near(result.owning_cost_at_tolerance, result.owning_cost + worst, 1e-12);
}

#[test]
fn limits_exclude_by_key_and_equality_passes() {
    let strict = Lot {
        vector_group: Some("Dyn11".into()),
        max_no_load_loss_w: Some(500.0),
        max_load_loss_w: Some(4000.0),
        impedance_pct: Some(6.0),
        impedance_tolerance_pct: Some(10.0),
        max_sound_db: Some(50.0),
        max_mass_kg: Some(2000.0),
        max_delivery_weeks: Some(30.0),
        law: Some("eu-548-2014".into()),
        ..lot(400.0, 1000.0, 1000.0, 0.0)
    };
    let exact = Bid {
        reference_temp_c: Some(75.0),
        vector_group: Some("Dyn5".into()),
        impedance_pct: Some(6.6),
        sound_db: Some(50.0),
        mass_kg: Some(2000.0),
        delivery_weeks: Some(30.0),
        ..bid("A", 1.0, 500.0, 4000.0)
    };
    let good = only(strict.clone(), exact.clone());
    assert_eq!((good.rank, good.excluded.len()), (Some(1), 0));
    assert_eq!(good.flags, ["no_reference_temp", "law_not_checked"]);

    let blank = only(strict.clone(), bid("A", 1.0, 500.0, 4000.0));
    assert!(blank.excluded.is_empty() && blank.flags.contains(&"limit_unknown"));
    let named =
        ["vector_group", "impedance_pct", "max_sound_db", "max_mass_kg", "max_delivery_weeks"];
    assert_eq!(blank.limits_unknown, named);

    let poor = Bid {
        rated_kva: Some(399.0),
        vector_group: Some("Yyn0".into()),
        impedance_pct: Some(5.39),
        sound_db: Some(50.1),
        mass_kg: Some(2000.1),
        delivery_weeks: Some(30.1),
        no_load_loss_w: 500.1,
        load_loss_w: Some(4000.1),
        quantity: Some(0),
        ..exact
    };
    let poor = only(strict, poor);
    let all = [
        "rated_kva",
        "vector_group",
        "max_no_load_loss_w",
        "max_load_loss_w",
        "impedance_pct",
        "max_sound_db",
        "max_mass_kg",
        "max_delivery_weeks",
    ];
    assert_eq!((poor.rank, poor.near_tie), (None, false));
    assert_eq!(poor.excluded, all);
    assert!(poor.flags.contains(&"quantity_short"));
}

/// Regulation (EU) 548/2014 as amended, table I.1, tier 2, 400 kVA liquid-immersed up to 24 kV: 387 W and
/// 3250 W at 75 °C. The law in force on the day of the tender counts; no tolerance.
#[test]
fn the_law_excludes_what_it_forbids() {
    let lot = Lot {
        hv_kv: Some(20.0),
        lv_kv: Some(0.4),
        vector_group: Some("Dyn11".into()),
        law: Some("eu-548-2014".into()),
        ..lot(400.0, 1000.0, 1000.0, 0.0)
    };
    let quoted = |name, p0, pk| Bid {
        vector_group: Some("Dyn5".into()),
        insulation: Some(Insulation::Liquid),
        reference_temp_c: Some(75.0),
        ..bid(name, 9000.0, p0, pk)
    };
    let bids = vec![quoted("kept", 387.0, 3250.0), quoted("missed", 388.0, 3250.0)];
    let mut sheet = sheet("EUR", lot, bids);
    let undated = evaluate(&sheet, None, None).expect("complete").lots.remove(0);
    assert!(undated.bids.iter().all(|bid| bid.flags.contains(&"law_not_checked")));
    sheet.tender.dated = Some("2026-02-01".into());
    let lot = evaluate(&sheet, None, None).expect("complete").lots.remove(0);
    let [kept, missed] = lot.bids.as_slice() else { panic!("two bids") };
    assert_eq!((kept.law, kept.rank, kept.excluded.len()), (Some(true), Some(1), 0));
    assert_eq!((missed.law, missed.excluded.as_slice()), (Some(false), ["law"].as_slice()));
    assert!(!kept.flags.contains(&"law_not_checked"));
    let open = verdict(&sheet, None, "L", "missed").expect("known").expect("dated");
    assert_eq!(open.limits[0].limit, 387.0);
    // Tier 1 of 2015 allows 430 W and 4600 W.
    sheet.tender.dated = Some("2020-02-01".into());
    let lot = evaluate(&sheet, None, None).expect("complete").lots.remove(0);
    assert!(lot.bids.iter().all(|bid| bid.law == Some(true)));
    sheet.lots[0].law = Some("eu-549-2014".into());
    let unknown = evaluate(&sheet, None, None).expect_err("no such law").to_string();
    assert!(unknown.contains("eu-549-2014: is not known (nearest: eu-548-2014)"), "{unknown}");
}

/// The limit holds after correction: 4100 W at 85 °C are 3972 W at 75 °C.
#[test]
fn limits_hold_after_the_temperature_correction() {
    let lot = Lot {
        reference_temp_c: Some(75.0),
        max_load_loss_w: Some(4000.0),
        ..lot(400.0, 1000.0, 1000.0, 0.0)
    };
    let hot = Bid { reference_temp_c: Some(85.0), ..bid("A", 1.0, 500.0, 4100.0) };
    assert!(only(lot.clone(), hot).excluded.is_empty());
    let cool = Bid { reference_temp_c: Some(65.0), ..bid("A", 1.0, 500.0, 3900.0) };
    assert_eq!(only(lot, cool).excluded, ["max_load_loss_w"]);
}

#[test]
fn near_ties_show_both_orders() {
    let bids = vec![
        bid("dear", 20_000.0, 100.0, 1000.0),
        bid("cheap", 18_000.0, 1000.0, 2200.0),
        bid("far", 10_000.0, 9000.0, 9000.0),
        Bid { rated_kva: Some(100.0), ..bid("small", 1.0, 1.0, 1.0) },
    ];
    let lot = Lot { near_tie_pct: Some(2.0), ..lot(400.0, 1000.0, 1000.0, 0.0) };
    let result = evaluate(&sheet("EUR", lot, bids), None, Some("L")).expect("complete");
    let lot = &result.lots[0];
    let ids: Vec<_> = lot.bids.iter().map(|b| (b.bid.as_str(), b.rank, b.near_tie)).collect();
    assert_eq!(
        ids,
        [
            ("dear", Some(1), true),
            ("cheap", Some(2), true),
            ("far", Some(3), false),
            ("small", None, false)
        ]
    );
    assert_eq!(lot.least_owning_cost.as_deref(), Some("dear"));
    assert_eq!(lot.recommended.as_deref(), Some("cheap"));
    assert_eq!(lot.near_tie_order, ["cheap", "dear"]);
    assert!(lot.map.bids.iter().all(|cell| cell.bid != "small"), "excluded bids are not drawn");
    assert_eq!(lot.map.bids.len(), 3);
}

#[test]
fn unknown_names_are_said_with_the_nearest() {
    let sheet = sheet("EUR", lot(400.0, 1.0, 1.0, 0.0), vec![bid("alpha", 1.0, 1.0, 1.0)]);
    let lot = evaluate(&sheet, None, Some("LL")).expect_err("no such lot").to_string();
    assert_eq!(lot, "lot LL is not in tender T; did you mean L?");
    let bid = working(&sheet, None, "L", "alhpa").expect_err("no such bid").to_string();
    assert_eq!(bid, "bid alhpa is not in tender T, lot L; did you mean alpha?");
    let absent = Lot { factor_b_per_kw: None, ..sheet.lots[0].clone() };
    let sheet = crate::sheets::sheet("EUR", absent, vec![]);
    let refused = evaluate(&sheet, None, None).expect_err("no basis").to_string();
    assert!(refused.starts_with("lot L: factor_b_per_kw: is absent"), "{refused}");
}

/// Each figure can be opened, and the last step is the figure to the last digit.
#[test]
fn working_ends_in_the_figures() {
    let foreign = Bid {
        currency: Some("USD".into()),
        rated_kva: Some(500.0),
        reference_temp_c: Some(85.0),
        freight_cost: Some(money(333.33)),
        auxiliary_loss_w: Some(77.0),
        ..bid("A", 12_345.67, 543.0, 4321.0)
    };
    let lot = Lot {
        quantity: Some(7),
        reference_temp_c: Some(75.0),
        ..lot(400.0, 9876.5, 1234.5, 222.2)
    };
    let mut sheet = sheet("EUR", lot, vec![foreign]);
    sheet.rates.push(rate("USD", 0.87));
    let result = evaluate(&sheet, None, None).expect("complete");
    let bid = &result.lots[0].bids[0];
    let open = working(&sheet, None, "L", "A").expect("known");
    for (steps, figure) in [
        (&open.owning_cost, bid.owning_cost),
        (&open.owning_cost_at_tolerance, bid.owning_cost_at_tolerance),
        (&open.lot_cost, bid.lot_cost),
    ] {
        assert_eq!(steps.last().map(|step| step.value.to_bits()), Some(figure.to_bits()));
    }
    assert!(matches!(margin(&sheet, None, "L"), Ok(None)), "one bid has no margin");
    sheet.bids.push(ironhum::engine::columns::Bid { bid: "B".into(), ..sheet.bids[0].clone() });
    sheet.bids[1].price = money(13_000.0);
    let result = evaluate(&sheet, None, None).expect("complete");
    let (value, steps) = margin(&sheet, None, "L").expect("complete").expect("two bids");
    assert_eq!(result.lots[0].margin_pct, Some(value));
    assert_eq!(steps.last().map(|step| step.value), Some(value));
    let parts: Vec<f64> = open.owning_cost[0].steps.iter().map(|step| step.value).collect();
    assert_eq!(parts, [bid.no_load_cost, bid.load_cost, bid.auxiliary_cost]);
    let names: Vec<&str> = open.on_terms.iter().map(|step| step.formula.symbol).collect();
    assert_eq!(names, ["Pk", "amount", "amount", "B_bid"]);
    assert_eq!(open.factors.len(), 3);
}

/// Keys and their order are what other people's scripts read.
#[test]
fn json_has_the_keys_of_the_contract() {
    let bids = vec![bid("A", 6000.0, 2000.0, 500.0), bid("B", 5000.0, 3000.0, 500.0)];
    let sheet = sheet("EUR", lot(400.0, 2000.0, 1.0, 0.0), bids);
    let result = evaluate(&sheet, None, None).expect("complete");
    let json = serde_json::to_value(&result).expect("plain data");
    let keys = |value: &serde_json::Value| -> Vec<String> {
        value.as_object().expect("object").keys().cloned().collect()
    };
    assert_eq!(keys(&json), ["tender", "currency", "lots", "awards"]);
    let lot = &json["lots"][0];
    let of_lot = "lot quantity factor_a_per_kw factor_b_per_kw factor_aux_per_kw bids least_owning_cost \
                  recommended margin_pct map changes flags near_tie_order nearest_border award";
    assert_eq!(keys(lot).join(" "), of_lot);
    let of_bid = "rank bid bidder price no_load_cost load_cost auxiliary_cost added_cost owning_cost \
                  owning_cost_at_tolerance lot_cost law near_tie excluded flags";
    assert_eq!(keys(&lot["bids"][0]).join(" "), of_bid);
    assert_eq!(keys(&lot["nearest_border"]), ["at", "distance_per_kw", "bid"]);
    assert_eq!(keys(&json["awards"]), ["by_lot", "packages"]);
    assert_eq!(keys(&lot["map"]), ["a_max", "b_max", "bids"]);
    assert_eq!(keys(&lot["map"]["bids"][0]), ["bid", "share", "polygon"]);
    assert_eq!(lot["changes"]["factor_a_per_kw"], serde_json::json!([1000.0, null]));
    let of_changes =
        "factor_a_per_kw factor_b_per_kw factor_aux_per_kw price no_load_loss_w load_loss_w";
    assert_eq!(keys(&lot["changes"]).join(" "), of_changes);
}
