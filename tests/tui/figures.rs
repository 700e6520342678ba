//! The figures behind the bars: what is left of a present value when its parts are taken off is its failures.

use ironhum::study::rank::{By, rank};
use ironhum::study::unit::{choice_costs, decision};
use ironhum::study::{Desk, Watch};

/// Present values of choices taken apart, over the whole demo fleet: the parts, summed year by year, leave nothing of
/// the value of the ranking, which sums otherwise, where nothing fails; else what failures cost.
#[test]
fn parts_of_a_choice_leave_its_failures() {
    for failures in [true, false] {
        let mut desk = crate::demo::session().desk;
        if !failures {
            desk.sheet.basis.failure_shape = None;
            desk.sheet.basis.failure_scale_years = None;
        }
        let ranking = rank(&desk, By::Saving, None, &Watch::default()).unwrap();
        assert!(ranking.order.len() > 200);
        for i in ranking.order.iter().map(|i| *i as usize) {
            let (place, decision) = decision(&desk, &ranking.context, i).unwrap().unwrap();
            let costs = choice_costs(&ranking.context, &place, &decision).unwrap();
            let check = |cost: ironhum::engine::decision::parts::PolicyCost, pv: f64| {
                // Nothing fails: nothing is left for failures. Else they cost something.
                let rounding = 1e-9 * pv.abs();
                if failures {
                    assert!(cost.failures > -rounding, "{cost:?}");
                } else {
                    assert!(cost.failures.abs() <= rounding, "{cost:?}");
                }
                assert!(cost.no_load > 0.0 && cost.load > 0.0);
            };
            check(costs.keep, decision.keep_pv);
            if let (Some(cost), Some(now)) = (costs.now, decision.now) {
                check(cost, now.pv);
            }
            if let (Some(cost), Some(best)) = (costs.best, decision.best) {
                check(cost, best.pv);
            }
        }
    }
}

/// Where no offer is open, the rule that leaves none is named.
#[test]
fn the_rule_that_leaves_no_offer_is_named() {
    use ironhum::engine::columns::{Basis, Offer};
    type Change = fn(&mut Vec<Offer>, &mut Basis);
    let why = |change: Change| {
        let desk = crate::demo::session().desk;
        let (mut offers, mut sheet) = (desk.offers.to_vec(), desk.sheet);
        change(&mut offers, &mut sheet.basis);
        let (profiles, series) = (desk.profiles.to_vec(), desk.series.to_vec());
        let desk = Desk::new(desk.fleet, offers, profiles, series, sheet).unwrap();
        let ranking = rank(&desk, By::Saving, None, &Watch::default()).unwrap();
        let of = |n| ranking.left_out_row(&desk, n);
        let rows: Vec<_> = (0..ranking.left_out.len()).filter_map(of).collect();
        rows.iter().find(|row| row.unit == "ZQ-0105").map_or("", |row| row.why)
    };
    let cases: [(Change, &str); 6] = [
        (|_, _| {}, ""),
        (|offers, _| offers.clear(), "the book holds none"),
        (|offers, _| offers.iter_mut().for_each(|of| of.phases = Some(1)), "number of phases"),
        (|offers, _| offers.iter_mut().for_each(|of| of.hv_kv = Some(66.0)), "its voltages"),
        (
            |offers, _| offers.iter_mut().for_each(|of| of.lead_time_years = Some(30.0)),
            "delivered by the latest year",
        ),
        (|_, basis| basis.loading_limit_pu = Some(0.1), "loading_limit_pu"),
    ];
    for (change, said) in cases {
        let why = why(change);
        assert!(why.contains(said) && why.is_empty() == said.is_empty(), "{said}: {why}");
    }
}
