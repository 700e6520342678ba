//! What must hold of every fleet, catalogue and basis: parts sum to the total, money has no scale of its own, costs rise
//! with what causes them, limits are ordinary cases, order and threads change no bit, factors and years agree.

#![expect(
    clippy::cast_precision_loss,
    clippy::cast_possible_truncation,
    reason = "whole numbers are small here"
)]

#[path = "properties/cases.rs"]
mod cases;
mod support;

use cases::{Case, case};
use ironhum::engine::columns::{Basis, CashFlow};
use ironhum::engine::decision::fleet::Outcome;
use ironhum::engine::decision::keep_or_replace::age;
use ironhum::engine::decision::place::{Place, resolve};
use ironhum::engine::economics::discounting::{annuity, growing_annuity, payment, running};
use ironhum::engine::economics::loss_factors::present_value;
use ironhum::engine::economics::owning_cost::{Priced, owning_cost};
use ironhum::engine::economics::{Assumptions, running_cost};
use ironhum::engine::flags::Flags;
use ironhum::engine::working::Silent;
use ironhum::study::losses::losses;
use ironhum::study::rank::{By, Ranking, rank};
use ironhum::study::unit::{choice_costs, decision};
use ironhum::study::{Desk, Watch};
use proptest::prelude::*;
use proptest::strategy::ValueTree as _;
use serde_json::Value;
use support::{Program, csv_rows, data};

fn config(cases: u32) -> ProptestConfig {
    ProptestConfig { cases, failure_persistence: None, ..ProptestConfig::default() }
}

fn ranked(desk: &Desk) -> Ranking {
    rank(desk, By::Saving, None, &Watch::default()).expect("a sound basis")
}

/// Ranking and losses of a case as they are written.
fn written(case: &Case) -> (Value, Value) {
    let desk = case.desk();
    let ranking = serde_json::to_value(ranked(&desk).result(&desk)).expect("is JSON");
    (ranking, serde_json::to_value(losses(&desk).expect("a sound basis")).expect("is JSON"))
}

/// The places of a case that can be resolved, by number of the unit.
fn places(desk: &Desk) -> Vec<Place> {
    let context = desk.context().expect("a sound basis");
    let place = |i| resolve(&mut Silent, &desk.fleet.facts(i), &context).ok();
    (0..desk.fleet.len()).filter_map(place).collect()
}

fn near(a: f64, b: f64, tolerance: f64) -> bool {
    (a - b).abs() <= tolerance * a.abs().max(b.abs())
}

/// Keys that hold money.
const MONEY: &[&str] =
    &["keep_pv", "now_pv", "best_pv", "saving_pv", "waiting_pv", "capital", "loss_cost"];

/// Multiplies every money of a result.
fn times(value: &Value, factor: f64, key: &str) -> Value {
    match value {
        Value::Object(parts) => {
            parts.iter().map(|(key, part)| (key.clone(), times(part, factor, key))).collect()
        }
        Value::Array(list) => list.iter().map(|part| times(part, factor, key)).collect(),
        Value::Number(number) if MONEY.contains(&key) => {
            Value::from(number.as_f64().expect("a number") * factor)
        }
        other => other.clone(),
    }
}

fn by_unit(result: &Value) -> Vec<(&str, &Value)> {
    let rows = result["units"].as_array().expect("rows");
    let mut rows: Vec<_> = rows.iter().map(|r| (r["unit"].as_str().expect("a name"), r)).collect();
    rows.sort_by_key(|(name, _)| *name);
    rows
}

/// keep_pv and best_pv of every unit that is ranked, by name.
fn values(case: &Case) -> Vec<(String, f64, f64)> {
    let desk = case.desk();
    let ranking = ranked(&desk);
    let mut values: Vec<_> = ranking
        .order
        .iter()
        .map(|&i| {
            let outcome = &ranking.outcomes[i as usize];
            (desk.fleet.unit.get(i as usize).to_owned(), outcome.keep_pv, outcome.best_pv)
        })
        .collect();
    values.sort_by(|a, b| a.0.cmp(&b.0));
    values
}

proptest! {
    #![proptest_config(config(400))]

    #[test]
    fn parts_sum_to_the_total(case in case()) {
        let desk = case.desk();
        let context = desk.context().expect("a sound basis");
        let counts_failures = context.assumptions.failure.is_some();
        let ranking = ranked(&desk);
        for &i in &ranking.order {
            let (place, decided) =
                decision(&desk, &context, i as usize).expect("sound").expect("is ranked");
            let costs = choice_costs(&context, &place, &decided).expect("has a life");
            let fails = counts_failures && place.year_made.is_some();
            let choices = [
                (Some(costs.keep), decided.keep_pv),
                (costs.now, decided.now.map_or(0.0, |now| now.pv)),
                (costs.best, decided.best_pv),
            ];
            for (cost, pv) in choices {
                let Some(cost) = cost else { continue };
                let scale = [cost.capital, cost.no_load, cost.load, cost.upkeep, pv]
                    .iter()
                    .fold(0.0_f64, |scale, part| scale.max(part.abs()));
                prop_assert!((cost.total() - pv).abs() <= 1e-12 * scale);
                // Failures are what remains; without failures nothing does.
                prop_assert!(fails || cost.failures.abs() <= 1e-12 * scale, "{cost:?}");
                // Scrap may pay for the removal and more.
                prop_assert!(
                    place.removal_less_scrap < 0.0 || cost.failures >= -1e-12 * scale,
                    "{cost:?}"
                );
            }
        }
        let result = losses(&desk).expect("sound");
        for row in &result.units {
            let cost = row.cost;
            prop_assert_eq!(row.loss_cost, cost.no_load + cost.load + cost.auxiliary);
        }
        let sum = |of: &dyn Fn(&Outcome) -> f64| ranking.order.iter().map(|&i| of(&ranking.outcomes[i as usize])).sum::<f64>();
        let totals = ranking.totals;
        prop_assert!(near(totals.keep_pv, sum(&|o| o.keep_pv), 1e-12));
        prop_assert!(near(totals.best_pv, sum(&|o| o.best_pv), 1e-12));
        prop_assert!(near(totals.saving_pv, sum(&Outcome::saving_pv), 1e-12));
        let lost: f64 = result.units.iter().map(|row| row.loss_cost).sum();
        prop_assert!(near(result.totals.loss_cost, lost, 1e-12));
    }

    #[test]
    fn money_has_no_scale_of_its_own(
        case in case(),
        power in 1_u32..12,
        factor in prop::sample::select(vec![3_i64, 7, 10, 1000, 9999]),
    ) {
        let (ranking, losses) = written(&case);
        let two = 1_i64 << power;
        let (ranking_2, losses_2) = written(&case.in_currency(two));
        prop_assert_eq!(&ranking_2, &times(&ranking, two as f64, ""), "to the bit");
        prop_assert_eq!(&losses_2, &times(&losses, two as f64, ""), "to the bit");

        let (ranking_f, losses_f) = written(&case.in_currency(factor));
        for ((name, row), (other, scaled)) in by_unit(&ranking).into_iter().zip(by_unit(&ranking_f)) {
            prop_assert_eq!(name, other);
            // What enters a present value: it and the others of the unit, and up to 2,000 of removal and scrap.
            let size = |key: &str| row[key].as_f64().map_or(0.0, f64::abs);
            let of = [size("keep_pv"), size("best_pv"), size("now_pv"), 2_000.0];
            let scale = factor as f64 * of.into_iter().fold(0.0, f64::max);
            for key in ["keep_pv", "now_pv", "best_pv", "saving_pv"] {
                let (a, b) = (row[key].as_f64(), scaled[key].as_f64());
                let apart = a.zip(b).map(|(a, b)| (factor as f64 * a - b).abs());
                prop_assert!(apart.map_or(a == b, |apart| apart <= 1e-12 * scale), "{name} {key}");
            }
        }
        for ((_, row), (_, scaled)) in by_unit(&losses).into_iter().zip(by_unit(&losses_f)) {
            let cost = |row: &Value| row["loss_cost"].as_f64().expect("a number");
            prop_assert!(near(factor as f64 * cost(row), cost(scaled), 1e-12));
            prop_assert_eq!(&row["load_energy_kwh"], &scaled["load_energy_kwh"]);
        }
    }

    /// Keeping and the best choice cost no less when a price, a loss or a load is higher.
    #[test]
    fn costs_rise_with_prices_losses_and_loads(case in case(), change in 0_u8..9, by in 1.0..1.5_f64) {
        let mut higher = case.clone();
        let times = |value: &mut Option<f64>| *value = value.map(|value| value * by);
        for offer in &mut higher.offers {
            match change {
                0 => offer.price.0 = (offer.price.0 as f64 * by).ceil() as i64,
                1 => offer.no_load_loss_w *= by,
                2 => offer.load_loss_w *= by,
                _ => {}
            }
        }
        for unit in &mut higher.units {
            match change {
                3 => times(&mut unit.no_load_loss_w),
                4 => times(&mut unit.load_loss_w),
                // At most to the rating: far beyond it a voltage may collapse, which leaves the unit out.
                5 => unit.peak_kva = unit.peak_kva.map(|peak| peak.max((peak * by).min(unit.rated_kva))),
                _ => {}
            }
        }
        match change {
            6 => times(&mut higher.basis.energy_price_per_kwh),
            7 => times(&mut higher.basis.demand_charge_per_kw_year),
            8 => times(&mut higher.basis.failure_cost),
            _ => {}
        }
        let (low, high) = (values(&case), values(&higher));
        // The voltage of a small offer may collapse under a heavier load; nothing else takes a unit out.
        prop_assert!(high.len() == low.len() || case.basis.voltage_model.is_some());
        for (name, keep_higher, best_higher) in high {
            let (_, keep, best) = low.iter().find(|(other, ..)| *other == name).expect("is in both");
            let slack = 1e-11 * keep.abs().max(best.abs());
            prop_assert!(keep_higher >= keep - slack, "{name} keep: {keep} {keep_higher}");
            prop_assert!(best_higher >= best - slack, "{name} best: {best} {best_higher}");
        }
    }

    /// No bit of a result depends on the order of the rows, estimates included.
    #[test]
    fn order_of_rows_changes_no_bit(case in case(), seed in any::<u64>()) {
        let mut turned = case.clone();
        let n = turned.units.len();
        for at in (1..n).rev() {
            let other = (seed.wrapping_mul(6_364_136_223_846_793_005).rotate_left(at as u32) % (at as u64 + 1)) as usize;
            turned.units.swap(at, other);
        }
        let ((mut ranking, mut losses), (mut ranking_t, mut losses_t)) = (written(&case), written(&turned));
        // Units that are left out are told in the order of the book.
        for result in [&mut ranking, &mut ranking_t, &mut losses, &mut losses_t] {
            let rows = result["left_out"].as_array_mut().expect("rows");
            rows.sort_by_key(|row| row["unit"].as_str().expect("a name").to_owned());
        }
        prop_assert_eq!(ranking.to_string(), ranking_t.to_string());
        prop_assert_eq!(losses.to_string(), losses_t.to_string());
    }

    /// Owning cost by the factors of section 5 and the discounted yearly costs of section 4 are one.
    #[test]
    fn factors_give_the_discounted_years(case in case()) {
        let mut rated = case;
        rated.basis.voltage_model = None;
        let a = Assumptions::resolve(&rated.basis).expect("a sound basis");
        for place in places(&rated.desk()) {
            let (l, d) = (&place.losses, &place.duty);
            let priced = Priced {
                price: 9_000.0,
                added_cost: 700.0,
                no_load_loss_w: l.no_load_loss_w,
                load_loss_w: l.load_loss_w,
                auxiliary_loss_w: 25.0,
            };
            let l = ironhum::engine::transformer::losses::Losses { auxiliary_loss_w: 25.0, ..*l };
            let factors = present_value(&mut Silent, d, l.rated_kva, &a);
            let toc = owning_cost(&mut Silent, &priced, &factors);
            let mut years = priced.price + priced.added_cost;
            for k in 1..=a.years {
                let year = running_cost::of_year(&mut Silent, &l, d, &a, k, 0.0);
                years += running(a.rate, k, a.cash_flow) * year.loss_cost();
            }
            prop_assert!(near(toc.total(), years, 1e-12), "{} {years}", toc.total());
        }
    }

    /// A horizon of one year: its running cost, a failure at its end, and the removal of what still stands.
    #[test]
    fn a_horizon_of_one_year(case in case()) {
        let mut one = case;
        one.basis.horizon_years = 1;
        let desk = one.desk();
        let context = desk.context().expect("sound");
        let a = &context.assumptions;
        for (name, keep_pv, _) in values(&one) {
            let i = desk.find(&name).expect("is there");
            let place = resolve(&mut Silent, &desk.fleet.facts(i), &context).expect("is ranked");
            let age = age(place.year_made, a.first_year, 1);
            let run = running_cost::of_year(&mut Silent, &place.losses, &place.duty, a, 1, age);
            let h = a.failure.filter(|_| place.year_made.is_some());
            let h = h.map_or(0.0, |w| w.fails_in_year(&mut Silent, age));
            let want = running(a.rate, 1, a.cash_flow) * run.total()
                + payment(a.rate, 1) * (h * place.failure_cost + (1.0 - h) * place.removal_less_scrap);
            let scale = run.total() + h * place.failure_cost + place.removal_less_scrap.abs();
            prop_assert!((keep_pv - want).abs() <= 1e-12 * scale, "{name}: {keep_pv} {want}");
        }
    }

    /// A rate of 0 and a load without growth are ordinary: sums of equal years, and what nearby rates come to.
    #[test]
    fn zero_rate_and_zero_growth_are_limits(case in case()) {
        let mut flat = case;
        let b = &mut flat.basis;
        for value in [&mut b.energy_escalation_pct, &mut b.demand_escalation_pct, &mut b.carbon_escalation_pct, &mut b.upkeep_age_pct, &mut b.load_growth_pct] {
            *value = Some(0.0);
        }
        b.discount_rate_pct = 0.0;
        (b.failure_shape, b.failure_scale_years) = (None, None);
        for unit in &mut flat.units {
            unit.load_growth_pct = None;
        }
        let desk = flat.desk();
        let context = desk.context().expect("sound");
        let a = &context.assumptions;
        let exact = values(&flat);
        for (name, keep_pv, _) in &exact {
            let i = desk.find(name).expect("is there");
            let place = resolve(&mut Silent, &desk.fleet.facts(i), &context).expect("is ranked");
            let run = running_cost::of_year(&mut Silent, &place.losses, &place.duty, a, 1, 0.0).total();
            let want = a.years as f64 * run + place.removal_less_scrap;
            let scale = a.years as f64 * run + place.removal_less_scrap.abs();
            prop_assert!((keep_pv - want).abs() <= 1e-12 * scale, "{name}: {keep_pv} {want}");
        }
        for (rate, growth) in [(1e-9, 0.0), (-1e-9, 0.0), (0.0, 1e-9), (0.0, -1e-9)] {
            let mut close = flat.clone();
            close.basis.discount_rate_pct = rate;
            close.basis.load_growth_pct = Some(growth);
            for ((name, keep, best), (_, keep_close, best_close)) in exact.iter().zip(values(&close)) {
                // Prices and scrap of some 10,000 stand behind small differences.
                let scale = 1e-8 * keep.abs().max(best.abs()).max(1e4);
                prop_assert!((keep - keep_close).abs() <= scale, "{name} keep: {keep} {keep_close}");
                prop_assert!((best - best_close).abs() <= scale, "{name} best: {best} {best_close}");
            }
        }
    }

    /// Where price or squared load grows as fast as money is discounted, every year counts the same.
    #[test]
    fn growth_at_the_discount_rate_is_a_limit(rate in -5.0..12.0_f64, years in 1_i64..60, lsf in 0.05..1.0_f64, beta in 0.1..1.5_f64) {
        let i = rate / 100.0;
        let n = years as f64;
        prop_assert!(near(growing_annuity(&mut Silent, 3.0, i, i, n), 3.0 * n / (1.0 + i), 1e-13));
        prop_assert!(near(growing_annuity(&mut Silent, 3.0, i, i + 1e-10, n), 3.0 * n / (1.0 + i), 1e-7));
        prop_assert!(near(growing_annuity(&mut Silent, 3.0, i, 0.0, n), 3.0 * annuity(&mut Silent, i, n), 1e-12));
        prop_assert_eq!(annuity(&mut Silent, 0.0, n), n);
        let mut basis = Basis {
            name: "limit".into(),
            currency: "EUR".into(),
            first_year: 2027,
            horizon_years: years,
            discount_rate_pct: rate,
            energy_price_per_kwh: Some(0.1),
            energy_escalation_pct: Some(rate),
            life_years: Some(40.0),
            ..Basis::blank()
        };
        let duty = ironhum::engine::loading::Duty {
            peak_kva: beta,
            load_growth_pu: 0.0,
            load_factor_pu: None,
            loss_factor_pu: lsf,
            energised_hours: 8760.0,
            auxiliary_hours: 0.0,
            power_factor: None,
            responsibility_pu: 1.0,
            no_load_price_per_kwh: 0.1,
            load_price_per_kwh: 0.1,
            no_load_co2_kg_per_kwh: 0.0,
            load_co2_kg_per_kwh: 0.0,
            drop: None,
        };
        let a = Assumptions::resolve(&basis).expect("sound");
        let factors = present_value(&mut Silent, &duty, 1.0, &a);
        let value = 876.0 * n / (1.0 + i);
        prop_assert!(near(factors.factor_a_per_kw, value, 1e-12));
        prop_assert!(near(factors.factor_b_per_kw, value * beta * beta * lsf, 1e-12));
        // The same for copper by growth of the load: (1+g)² = 1+i.
        basis.energy_escalation_pct = None;
        basis.cash_flow = Some(CashFlow::YearEnd);
        let a = Assumptions::resolve(&basis).expect("sound");
        let grown = ironhum::engine::loading::Duty { load_growth_pu: (1.0 + i).sqrt() - 1.0, ..duty };
        let factors = present_value(&mut Silent, &grown, 1.0, &a);
        prop_assert!(near(factors.factor_b_per_kw, value * beta * beta * lsf, 1e-11));
    }
}

/// Rankings of 10,000 units, a tenth of them of unknown no-load loss, in pools of one, two and three threads.
#[test]
fn threads_change_no_bit() {
    let mut runner = proptest::test_runner::TestRunner::deterministic();
    let mut case = loop {
        let case = case().new_tree(&mut runner).expect("a case").current();
        if case.units.len() > 12 && ranked(&case.desk()).order.len() > 10 {
            break case;
        }
    };
    let seeds = case.units.clone();
    case.units = (0..10_000)
        .map(|n| {
            let mut unit = seeds[n % seeds.len()].clone();
            unit.unit = format!("U{n}");
            unit.peak_kva = unit.peak_kva.map(|peak| peak * (1.0 - 1e-5 * n as f64));
            unit.no_load_loss_w = unit.no_load_loss_w.map(|loss| loss * (1.0 + 3e-6 * n as f64));
            unit
        })
        .collect();
    let desk = case.desk();
    let of = |threads| {
        let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build().expect("a pool");
        pool.install(|| {
            let ranking = ranked(&desk);
            assert!(ranking.outcomes.iter().any(|o| o.flags.has(Flags::LOSS_ESTIMATED)));
            serde_json::to_string(&ranking.result(&desk)).expect("is JSON")
        })
    };
    let one = of(1);
    assert!(one.len() > 1_000_000);
    assert!(one == of(2) && one == of(3), "threads make a difference");
}

/// The same through the program: `RAYON_NUM_THREADS` and the order of the rows in the file.
#[test]
fn the_program_writes_the_same_bytes() {
    let basis = "name = \"plan\"\ncurrency = \"EUR\"\nfirst_year = 2027\nhorizon_years = 25\n\
        discount_rate_pct = 5\nenergy_price_per_kwh = 0.09\ncapital_recovery = \"full\"\n\
        failure_shape = 4\nfailure_scale_years = 60\nestimate_missing = true\n";
    let fleet = csv_rows(&data("peers/fleet_10000.csv"));
    let at = |name: &str| fleet[0].iter().position(|c| c == name).expect("a column");
    let columns =
        ["unit", "rated_kva", "hv_kv", "lv_kv", "no_load_loss_w", "load_loss_w", "peak_kva"];
    let row = |(n, row): (usize, &Vec<String>)| {
        let cell = |name: &&str| match *name {
            "no_load_loss_w" if n % 50 == 0 => "",
            name => row[at(name)].as_str(),
        };
        columns.iter().map(cell).collect::<Vec<_>>().join(",") + ",0.3,1985\n"
    };
    let rows: Vec<String> = fleet[1..].iter().enumerate().map(row).collect();
    let with = |rows: &[String]| {
        let program = Program::new();
        let rename = ["--map", "item=offer", "--map", "price_eur=price", "--ignore-unknown"];
        program.import("offers", &data("peers/catalogue.csv"), &rename);
        program.import("basis", &program.write("basis.toml", basis), &[]);
        let header = format!("{},loss_factor_pu,year_made\n", columns.join(","));
        program.import("units", &program.write("units.csv", header + &rows.concat()), &[]);
        program
    };
    let bytes = |program: &Program, threads: &str| {
        let mut command = program.command(&["rank", "--format", "json"]);
        let output = command.env("RAYON_NUM_THREADS", threads).output().expect("starts");
        assert!(output.status.success());
        output.stdout
    };
    let program = with(&rows);
    let one = bytes(&program, "1");
    assert!(String::from_utf8_lossy(&one).contains("loss_estimated"));
    assert!(one == bytes(&program, "2"), "threads make a difference");
    let turned: Vec<String> = rows.iter().rev().cloned().collect();
    assert!(one == bytes(&with(&turned), "2"), "the order of rows makes a difference");
}
