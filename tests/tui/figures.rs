//! The figures behind the bars: what is left of a present value when its parts are taken off is its failures.

use ironhum::study::Watch;
use ironhum::study::rank::{By, rank};
use ironhum::study::unit::{choice_costs, decision};

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
