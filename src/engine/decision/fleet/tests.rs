//! The bulk form against the scalar form on random fleets: every figure to 1e-12 of keep_pv, every choice.

use proptest::prelude::*;

use super::*;
use crate::engine::columns::{Basis, CapitalRecovery, CashFlow, VoltageModel};
use crate::engine::decision::fit::Terminals;
use crate::engine::decision::keep_or_replace::decide;
use crate::engine::decision::place::{UnitFacts, resolve};
use crate::engine::loading::{Market, Ratios, Weights};
use crate::engine::transformer::losses::Losses;

fn basis() -> impl Strategy<Value = Basis> {
    let money = prop_oneof![Just(None), (0.0..2e4).prop_map(Some)];
    let pct = prop_oneof![Just(None), (-3.0..6.0).prop_map(Some)];
    (
        (1_i64..12, -2.0..12.0, any::<bool>(), any::<bool>(), 0_i64..12, 1_i64..12),
        (pct.clone(), pct.clone(), pct.clone(), pct.clone(), pct),
        (money.clone(), money.clone(), money.clone(), money),
        (any::<bool>(), 1.0..8.0, 5.0..60.0, 0.0..60.0),
        prop_oneof![Just(None), (0.5..1.5).prop_map(Some)],
        prop_oneof![Just(None), (0_i64..3).prop_map(Some)],
        prop_oneof![Just(None), (0_i64..3).prop_map(Some)],
        0.0..60.0,
        prop_oneof![Just(None), (0.85..1.1).prop_map(Some)],
    )
        .prop_map(|(a, b, c, f, limit, down, up, demand, voltage)| Basis {
            voltage_model: voltage.map(|_| VoltageModel::Drop),
            operating_voltage_pu: voltage,
            name: "random".into(),
            currency: "EUR".into(),
            first_year: 2026,
            horizon_years: a.0,
            discount_rate_pct: a.1,
            cash_flow: a.2.then_some(CashFlow::MidYear),
            capital_recovery: a.3.then_some(CapitalRecovery::Full),
            latest_replacement_years: Some(a.4),
            load_growth_years: Some(a.5),
            energy_price_per_kwh: Some(0.1),
            energy_escalation_pct: b.0,
            demand_escalation_pct: b.1,
            carbon_escalation_pct: b.2,
            equipment_escalation_pct: b.3,
            upkeep_age_pct: b.4,
            failure_cost: c.0,
            removal_cost: c.1,
            scrap_value: c.2,
            upkeep_per_year: c.3.map(|m| m / 100.0),
            failure_shape: f.0.then_some(f.1),
            failure_scale_years: f.0.then_some(f.2),
            emergency_premium_pct: Some(f.3),
            demand_charge_per_kw_year: Some(demand),
            carbon_price_per_t: Some(demand * 2.0),
            carbon_kg_per_kwh: Some(0.3),
            life_years: Some(30.0),
            loading_limit_pu: limit,
            offer_sizes_down: down,
            offer_sizes_up: up,
            ..Basis::blank()
        })
}

fn offer() -> impl Strategy<Value = Candidate> {
    (
        prop_oneof![Just(50.0), Just(100.0), Just(160.0), Just(250.0)],
        (20.0..400.0, 200.0..4000.0, prop_oneof![3 => Just(0.0), 1 => 0.0..50.0]),
        (500.0..9000.0, prop_oneof![Just(0.0), 0.0..2000.0]),
        prop_oneof![Just(None), (5.0..50.0).prop_map(Some)],
        prop_oneof![2 => Just(0.0), 1 => 0.0..4.0],
        prop_oneof![2 => Just(Vec::new()), 1 => prop::collection::vec(any::<bool>(), 12)],
        prop_oneof![Just(None), (0.02..0.1).prop_map(Some), (0.1..0.6).prop_map(Some)],
    )
        .prop_map(|(rated_kva, l, p, life_years, lead_time_years, lawful, reactance_pu)| {
            Candidate {
                offer: String::new(),
                losses: Losses {
                    rated_kva,
                    no_load_loss_w: l.0,
                    load_loss_w: l.1,
                    auxiliary_loss_w: l.2,
                    reactance_pu,
                },
                price: p.0,
                install_cost: p.1,
                life_years,
                lead_time_years,
                phases: None,
                hv_kv: None,
                lv_kv: None,
                clock: None,
                lawful,
            }
        })
}

fn unit() -> impl Strategy<Value = UnitFacts> {
    let maybe = |range: std::ops::Range<f64>| prop_oneof![3 => range, 1 => Just(f64::NAN)];
    (
        prop_oneof![Just(50.0), Just(100.0), Just(315.0)],
        (50.0..900.0, 300.0..6000.0, prop_oneof![3 => Just(f64::NAN), 1 => 0.0..60.0]),
        (5.0..300.0, maybe(-6.0..6.0), maybe(0.0..1.0), maybe(100.0..8760.0)),
        prop_oneof![3 => (1960_i32..2030).prop_map(f64::from), 1 => Just(f64::NAN)],
        (maybe(0.0..5000.0), maybe(0.0..500.0)),
        prop_oneof![Just(0_u32), Just(1), Just(u32::MAX)],
        (maybe(3.0..12.0), maybe(0.6..1.0)),
    )
        .prop_map(|(rated_kva, l, d, year_made, f, profile, v)| UnitFacts {
            in_service: true,
            rated_kva,
            loss_base_kva: f64::NAN,
            no_load_loss_w: l.0,
            load_loss_w: l.1,
            total_loss_w: f64::NAN,
            auxiliary_loss_w: l.2,
            auxiliary_hours: f64::NAN,
            peak_kva: d.0,
            load_factor_pu: f64::NAN,
            loss_factor_pu: 0.4,
            load_growth_pct: d.1,
            responsibility_pu: d.2,
            energised_hours: d.3,
            power_factor: v.1,
            year_made,
            failure_cost: f.0,
            removal_cost: f.1,
            scrap_value: f64::NAN,
            customers: f64::NAN,
            impedance_pct: v.0,
            phases: None,
            winding_metal: None,
            insulation: None,
            from_test: false,
            profile,
        })
}

fn context(basis: &Basis) -> Context {
    let weights = |price_per_kwh| Weights {
        price_per_kwh,
        co2_kg_per_kwh: 0.25,
        responsibility_pu: Some(0.8),
    };
    let ratios =
        |load_factor_pu, loss_factor_pu| Ratios { peak: 1.0, load_factor_pu, loss_factor_pu };
    Context {
        assumptions: Assumptions::resolve(basis).expect("a good basis"),
        market: Market {
            constant: weights(0.1),
            profiles: vec![Ok(weights(0.11)), Ok(weights(0.13))],
            series: true,
        },
        ratios: vec![ratios(0.5, 0.3), ratios(0.7, 0.55)],
        candidates: Vec::new(),
        durations: vec![
            [(0.5, 0.3), (0.4, 0.6), (0.1, 1.0)].into(),
            [(0.8, 0.7), (0.2, 1.0)].into(),
        ],
        estimate: None,
        flags: Flags::NONE,
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 2000, ..ProptestConfig::default() })]

    #[test]
    fn bulk_equals_scalar(
        basis in basis(),
        offers in prop::collection::vec(offer(), 1..6),
        // Doubles make ties.
        double in any::<bool>(),
        units in prop::collection::vec(unit(), 1..6),
    ) {
        let ctx = context(&basis);
        let mut offers = offers;
        if double { offers.extend(offers.clone()); }
        let mut fleet = FleetColumns::default();
        for (i, facts) in units.iter().enumerate() {
            let terminals = Terminals {
                phases: None, hv_kv: None, lv_kv: None, clock: None, rated_kva: facts.rated_kva,
            };
            fleet.push(&format!("U{i}"), None, 0, terminals, facts);
        }
        let kernel = Kernel::new(&ctx, &offers, &fleet).expect("has a life");
        let mut out = vec![Outcome::left_out(LeftOut::NoOffer); fleet.len()];
        kernel.evaluate(&fleet, 0..fleet.len(), &mut out);

        for (facts, got) in units.iter().zip(&out) {
            let place = match resolve(&mut Silent, facts, &ctx) {
                Ok(place) => place,
                Err(why) => {
                    prop_assert_eq!(why, LeftOut::LoadNotCarried);
                    prop_assert_eq!(got.left_out, Some(why));
                    continue;
                }
            };
            let terminals = Terminals {
                phases: None, hv_kv: None, lv_kv: None, clock: None, rated_kva: facts.rated_kva,
            };
            let fit = fitting(&terminals, &offers, ctx.assumptions.offer_sizes);
            let want = decide(&place, &offers, &fit, &ctx.assumptions).expect("has a life");
            let Some(want) = want else {
                prop_assert_eq!(got.left_out, Some(LeftOut::NoOffer));
                continue;
            };
            prop_assert_eq!(got.left_out, None);
            let scale = want.keep_pv.abs().max(want.best_pv.abs()).max(1.0);
            let near = |a: f64, b: f64| (a - b).abs() <= 1e-11 * scale;
            prop_assert!(near(got.keep_pv, want.keep_pv), "keep {} {}", got.keep_pv, want.keep_pv);
            prop_assert!(near(got.best_pv, want.best_pv), "best {} {}", got.best_pv, want.best_pv);
            prop_assert!(near(got.waiting_pv, want.waiting_pv(&mut Silent)), "wait {} {}", got.waiting_pv, want.waiting_pv(&mut Silent));
            prop_assert!(near(got.best_pv, want.recursion_pv));
            let index = |offer: u32| (offer != Outcome::NONE).then_some(offer as usize);
            prop_assert_eq!(index(got.now_offer), want.now.map(|c| c.offer));
            prop_assert_eq!(
                index(got.best_offer).map(|c| (usize::from(got.best_year_offset), c)),
                want.best.map(|c| (c.offset, c.offer))
            );
            if let Some(now) = want.now { prop_assert!(near(got.now_pv, now.pv)); }
            prop_assert_eq!(got.flags, want.flags);
        }
    }
}
