//! Figures of general open-source libraries (pandapower, power-grid-model, transformer-thermal-model, numpy-financial,
//! scipy) against the engine. The files in `tests/reference` say which library and version made them, and state
//! their own tolerance; the transformers are the standard types of `units.csv`.

use ironhum::engine::columns::{
    Basis, CapitalRecovery, CashFlow, FactorMethod, Insulation, WindingMetal,
};
use ironhum::engine::economics::Assumptions;
use ironhum::engine::economics::discounting::{annuity, growing_annuity};
use ironhum::engine::economics::failure::Weibull;
use ironhum::engine::economics::interest::{capital_recovery, single_payment};
use ironhum::engine::economics::irr::{internal_rate, npv};
use ironhum::engine::economics::loss_factors::{levelized, present_value};
use ironhum::engine::loading::Duty;
use ironhum::engine::transformer::circuit::{Circuit, PowerFactor, of_nameplate};
use ironhum::engine::transformer::efficiency::{at_load, best_load};
use ironhum::engine::transformer::estimate::{Build, Loss, LossModel};
use ironhum::engine::transformer::fault::{fault_current, fault_level};
use ironhum::engine::transformer::losses::{Losses, at_current};
use ironhum::engine::transformer::nameplate::Phases;
use ironhum::engine::transformer::parallel::{Member, Tapped, circulating, sharing};
use ironhum::engine::transformer::regulation;
use ironhum::engine::transformer::thermal::{
    Constants, Rises, Scheme, State, ThermalModel, steady, step,
};
use ironhum::engine::transformer::voltage_drop::{self, Supply};
use ironhum::engine::working::Silent;
use serde_json::Value;

fn read(text: &str) -> Value {
    serde_json::from_str(text).expect("the file is JSON")
}

fn n(value: &Value, name: &str) -> f64 {
    value[name].as_f64().unwrap_or_else(|| panic!("{name} of {value}"))
}

fn rows<'a>(file: &'a Value, name: &str) -> &'a Vec<Value> {
    let rows = file[name].as_array().expect("a list");
    assert!(!rows.is_empty());
    rows
}

fn list(value: &Value, name: &str) -> Vec<f64> {
    value[name].as_array().expect("a list").iter().map(|v| v.as_f64().expect("a number")).collect()
}

/// Relative difference, absolute below one.
fn near(got: f64, want: f64, tolerance: f64, what: &Value) {
    assert!((got - want).abs() <= tolerance * want.abs().max(1.0), "{got} against {want}: {what}");
}

/// A standard type of `units.csv`.
struct Unit {
    losses: Losses,
    circuit: Circuit,
    lv_kv: f64,
    impedance_pct: f64,
}

fn unit(name: &Value) -> Unit {
    let name = name.as_str().expect("a name");
    let mut reader = csv::Reader::from_reader(include_str!("reference/units.csv").as_bytes());
    let headers = reader.headers().expect("a header").clone();
    let row = reader.records().map(|r| r.expect("a row")).find(|r| &r[0] == name);
    let row = row.unwrap_or_else(|| panic!("{name} is not in units.csv"));
    let field = |name| {
        let at = headers.iter().position(|h| h == name).expect(name);
        row[at].parse::<f64>().expect(name)
    };
    let losses = Losses {
        rated_kva: field("rated_kva"),
        no_load_loss_w: field("no_load_loss_w"),
        load_loss_w: field("load_loss_w"),
        auxiliary_loss_w: 0.0,
        reactance_pu: None,
    };
    let impedance_pct = field("impedance_pct");
    let circuit = of_nameplate(&mut Silent, losses.rated_kva, losses.load_loss_w, impedance_pct);
    Unit { losses, circuit: circuit.expect("sound"), lv_kv: field("lv_kv"), impedance_pct }
}

fn power_factor(row: &Value) -> PowerFactor {
    let cos = n(row, "power_factor");
    let pf =
        if n(row, "sin_phi") < 0.0 { PowerFactor::leading(cos) } else { PowerFactor::lagging(cos) };
    pf.expect("sound")
}

/// Regulation, and the voltage left by the drop model, to 1e-8 of two power-flow libraries.
#[test]
fn regulation_and_voltage_drop() {
    let file = read(include_str!("reference/grid.json"));
    let tolerance = n(&file, "tolerance");
    for row in rows(&file, "regulation") {
        let circuit = unit(&row["unit"]).circuit;
        let (beta, power_factor) = (n(row, "beta"), power_factor(row));
        let exact = regulation::exact(&mut Silent, &circuit, beta, power_factor);
        near(exact, n(row, "regulation_pu"), tolerance, row);
        let supply = Supply { circuit, v_hv_pu: 1.0, power_factor };
        let v = voltage_drop::low_side_voltage(&mut Silent, &supply, beta).expect("carried");
        near(v, n(row, "v_lv_pu_at_1_pu_source"), tolerance, row);
    }
}

#[test]
fn parallel_transformers() {
    let file = read(include_str!("reference/grid.json"));
    let tolerance = n(&file, "tolerance");
    let member = |name: &Value| {
        let unit = unit(name);
        (Member { rated_kva: unit.losses.rated_kva, circuit: unit.circuit }, unit.lv_kv)
    };
    for row in rows(&file, "sharing") {
        let bank = [member(&row["unit_a"]).0, member(&row["unit_b"]).0];
        let shares = sharing(&mut Silent, &bank, n(row, "load_kw"), n(row, "load_kvar"));
        let shares = shares.expect("sound");
        let scale = n(row, "load_kw").hypot(n(row, "load_kvar"));
        for (share, [kw, kvar, loading]) in shares
            .iter()
            .zip([["p_a_kw", "q_a_kvar", "load_a_pu"], ["p_b_kw", "q_b_kvar", "load_b_pu"]])
        {
            near(share.kw / scale, n(row, kw) / scale, tolerance, row);
            near(share.kvar / scale, n(row, kvar) / scale, tolerance, row);
            near(share.loading_pu, n(row, loading), tolerance, row);
        }
    }
    for row in rows(&file, "circulating") {
        let side = |name: &Value, emf| {
            let (member, lv_kv) = member(name);
            let rated_v = 1000.0 * lv_kv;
            Tapped { member, rated_v, no_load_v: rated_v * n(row, emf) }
        };
        let (a, b) = (side(&row["unit_a"], "emf_a_pu"), side(&row["unit_b"], "emf_b_pu"));
        let got = circulating(&mut Silent, Phases::Three, a, b).expect("sound");
        near(got.current_a, n(row, "circulating_current_a"), tolerance, row);
        near(got.of_first_pu, n(row, "circulating_current_pu_of_a"), tolerance, row);
    }
}

/// The formula of the methods adds magnitudes: equal to the library where both impedances have the same angle, and
/// never above it.
#[test]
fn fault_levels() {
    let file = read(include_str!("reference/grid.json"));
    let tolerance = n(&file, "tolerance");
    let mut same = 0;
    for row in rows(&file, "fault_level") {
        let unit = unit(&row["unit"]);
        let (mva, z) = (unit.losses.rated_kva / 1000.0, unit.impedance_pct / 100.0);
        let network = Some(n(row, "network_mva"));
        let level = fault_level(&mut Silent, mva, z, network).expect("sound");
        near(level, n(row, "scalar_formula_mva"), tolerance, row);
        assert!(level <= n(row, "fault_level_mva") * (1.0 + tolerance), "on the low side: {row}");
        if row["same_r_over_x"] == true {
            near(level, n(row, "fault_level_mva"), tolerance, row);
            let amperes = fault_current(&mut Silent, Phases::Three, level, unit.lv_kv);
            near(amperes.expect("sound") / 1000.0, n(row, "fault_current_ka"), tolerance, row);
            same += 1;
        }
    }
    assert!(same > 0);
}

/// Against a power flow with the core behind half the impedance: voltage within 0.004 %, loss of the drop model within
/// 1.84 %; the difference of the current form is the one that the file states.
#[test]
fn losses_at_a_load() {
    let file = read(include_str!("reference/power_flow.json"));
    let (mut worst_loss, mut worst_voltage, mut worst_plain) = (0.0_f64, 0.0_f64, 0.0_f64);
    for row in rows(&file, "points") {
        let unit = unit(&row["unit"]);
        near(unit.circuit.r_pu, n(row, "r_pu"), 1e-12, row);
        near(unit.circuit.x_pu, n(row, "x_pu"), 1e-12, row);
        let (beta, v_hv, library) = (n(row, "beta"), n(row, "v_hv_pu"), n(row, "loss_w"));
        let off_pct = |loss: f64| 100.0 * (loss / library - 1.0);
        let current = at_current(&mut Silent, &unit.losses, v_hv, n(row, "current_pu"));
        near(off_pct(current), n(row, "current_form_diff_pct"), 1e-5, row);
        let supply =
            Supply { circuit: unit.circuit, v_hv_pu: v_hv, power_factor: power_factor(row) };
        let v = voltage_drop::low_side_voltage(&mut Silent, &supply, beta).expect("carried");
        worst_voltage = worst_voltage.max(100.0 * (v / n(row, "v_lv_pu") - 1.0).abs());
        let i = voltage_drop::current(&mut Silent, &supply, beta).expect("carried");
        let drop = at_current(&mut Silent, &unit.losses, v_hv, i);
        worst_loss = worst_loss.max(off_pct(drop).abs());
        worst_plain =
            worst_plain.max(off_pct(at_current(&mut Silent, &unit.losses, 1.0, beta)).abs());
    }
    assert!(worst_voltage < 0.004, "{worst_voltage} %");
    assert!(worst_loss < 1.84, "{worst_loss} %");
    assert!((worst_plain - 33.588).abs() < 0.001, "the plain form is far off: {worst_plain} %");
}

#[test]
fn temperatures() {
    let file = read(include_str!("reference/thermal.json"));
    let tolerance = n(&file, "tolerance");
    for case in rows(&file, "cases") {
        let u = &file["units"][case["unit"].as_str().expect("a name")];
        let model = ThermalModel {
            constants: Constants {
                oil_exponent: n(u, "x"),
                winding_exponent: n(u, "y"),
                k11: n(u, "k11"),
                k21: n(u, "k21"),
                k22: n(u, "k22"),
                oil_minutes: n(u, "tau_o_min"),
                winding_minutes: n(u, "tau_w_min"),
            },
            rises: Rises {
                top_oil_k: n(u, "top_oil_rise_k"),
                gradient_k: n(u, "gr_k"),
                loss_ratio: n(u, "r"),
                hot_spot_factor: n(u, "h"),
            },
        };
        let mut state = match case["initial_k"].as_f64() {
            Some(k) => steady(&mut Silent, &model, k, n(case, "initial_ambient_c")),
            None => State {
                top_oil_c: n(case, "initial_top_oil_c"),
                gradient_1_k: n(case, "initial_gradient_k"),
                gradient_2_k: 0.0,
            },
        };
        let (minutes, k) = (list(case, "minutes"), list(case, "k"));
        let (ambient, oil) = (list(case, "ambient_c"), list(case, "top_oil_c"));
        let hot = list(case, "hot_spot_c");
        for at in 0..minutes.len() {
            if at > 0 {
                let length = minutes[at] - minutes[at - 1];
                let next =
                    step(&mut Silent, &model, Scheme::Exact, state, k[at], ambient[at], length);
                state = next.expect("sound");
            }
            near(state.top_oil_c, oil[at], tolerance, &case["case"]);
            near(state.hot_spot_c(), hot[at], tolerance, &case["case"]);
        }
    }
}

const FINANCE: &str = include_str!("reference/finance.json");

/// Annuities at year ends and, by half a year of interest, at mid-years.
#[test]
fn annuities() {
    let file = read(FINANCE);
    for row in rows(&file, "annuities") {
        let (i, years) = (n(row, "discount_rate"), n(row, "years"));
        let half = (1.0 + i).sqrt();
        let a = annuity(&mut Silent, i, years);
        near(a, n(row, "annuity"), 1e-12, row);
        near(a * half, n(row, "annuity_mid_year"), 1e-12, row);
        near(capital_recovery(&mut Silent, i, years), n(row, "capital_recovery"), 1e-12, row);
        let end = 1.0 / single_payment(&mut Silent, i, years);
        near(end, n(row, "future_value_of_one"), 1e-12, row);
    }
    for row in rows(&file, "growing_flows") {
        let (i, g) = (n(row, "discount_rate"), n(row, "growth"));
        let pv = growing_annuity(&mut Silent, n(row, "first_flow"), i, g, n(row, "years"));
        near(pv, n(row, "present_value"), 1e-12, row);
        near(pv * (1.0 + i).sqrt(), n(row, "present_value_mid_year"), 1e-12, row);
    }
}

#[test]
fn capitalised_factors() {
    let file = read(FINANCE);
    for row in rows(&file, "loss_factors") {
        let pct = |name| Some(100.0 * n(row, name));
        #[expect(clippy::cast_possible_truncation, reason = "whole years")]
        let years = |name| n(row, name) as i64;
        let mid_year = row["mid_year"] == true;
        let basis = Basis {
            horizon_years: years("years"),
            discount_rate_pct: 100.0 * n(row, "discount_rate"),
            cash_flow: Some(if mid_year { CashFlow::MidYear } else { CashFlow::YearEnd }),
            energy_price_per_kwh: Some(n(row, "no_load_price_per_kwh")),
            energy_escalation_pct: pct("energy_escalation"),
            demand_charge_per_kw_year: Some(n(row, "demand_per_kw_year")),
            demand_escalation_pct: pct("demand_escalation"),
            carbon_price_per_t: Some(n(row, "carbon_price_per_t")),
            carbon_escalation_pct: pct("carbon_escalation"),
            load_growth_years: Some(years("load_growth_years")),
            capital_recovery: Some(CapitalRecovery::Full),
            factor_method: Some(FactorMethod::PresentValue),
            fixed_charge_rate_pct: Some(100.0),
            ..Basis::blank()
        };
        let assumptions = Assumptions::resolve(&basis).expect("sound");
        let duty = Duty {
            power_factor: None,
            peak_kva: n(row, "peak_pu"),
            load_growth_pu: n(row, "load_growth"),
            load_factor_pu: None,
            loss_factor_pu: n(row, "loss_factor_pu"),
            energised_hours: n(row, "hours"),
            auxiliary_hours: n(row, "auxiliary_hours"),
            responsibility_pu: n(row, "responsibility_pu"),
            no_load_price_per_kwh: n(row, "no_load_price_per_kwh"),
            load_price_per_kwh: n(row, "load_price_per_kwh"),
            no_load_co2_kg_per_kwh: n(row, "no_load_carbon_kg_per_kwh"),
            drop: None,
            load_co2_kg_per_kwh: n(row, "load_carbon_kg_per_kwh"),
        };
        let got = present_value(&mut Silent, &duty, 1.0, &assumptions);
        near(got.factor_a_per_kw, n(row, "factor_a_per_kw"), 1e-11, row);
        near(got.factor_b_per_kw, n(row, "factor_b_per_kw"), 1e-11, row);
        near(got.factor_aux_per_kw, n(row, "factor_aux_per_kw"), 1e-11, row);
        // At a fixed charge rate of one and without investment, A is h·EC and B is h·EC·LsF·PUL².
        let level = levelized(&mut Silent, &duty, 1.0, &assumptions).expect("sound");
        let price = level.factor_a_per_kw / duty.energised_hours;
        near(price, n(row, "levelised_price_per_kwh"), 1e-12, row);
        let square = level.factor_b_per_kw / (level.factor_a_per_kw * duty.loss_factor_pu);
        near(square, n(row, "levelised_square_of_peak"), 1e-12, row);
    }
}

#[test]
fn internal_rates() {
    let file = read(FINANCE);
    for row in rows(&file, "internal_rates") {
        let flows = list(row, "flows");
        let rate = internal_rate(&mut Silent, &flows).expect("one rate");
        near(rate, n(row, "internal_rate"), 1e-10, row);
        near(npv(&mut Silent, &flows, 0.07).expect("sound"), n(row, "npv_at_7_pct"), 1e-12, row);
    }
}

#[test]
fn failures_and_best_loads() {
    let file = read(FINANCE);
    for row in rows(&file, "weibull") {
        let weibull = Weibull::new(n(row, "shape"), n(row, "scale_years")).expect("sound");
        let age = n(row, "age");
        let p = weibull.fails_in_year(&mut Silent, age);
        assert!((p / n(row, "failure_probability") - 1.0).abs() < 1e-10, "{p} {row}");
        near(weibull.survival(&mut Silent, age), n(row, "survival_to_age"), 1e-12, row);
    }
    for row in rows(&file, "best_loads") {
        let losses = unit(&row["unit"]).losses;
        let best = best_load(&mut Silent, &losses).expect("sound");
        // An optimiser on a flat minimum: good to 1e-6 in the load and 1e-9 in the efficiency.
        near(best, n(row, "best_load_pu"), 1e-6, row);
        for (pf, name) in
            [(1.0, "efficiency_at_best_load_pf_1"), (0.8, "efficiency_at_best_load_pf_0_8")]
        {
            let eta = at_load(&mut Silent, &losses, best, pf).expect("sound");
            near(eta, n(row, name), 1e-9, row);
        }
    }
}

/// Missing losses: estimate and both ends of the interval to 1e-9 of numpy and scipy, from the same known units and
/// with the same terms.
#[test]
fn estimated_losses() {
    let file = read(include_str!("reference/estimate.json"));
    assert!((n(&file, "coverage_of_2000_drawn_units") - 0.95).abs() < 0.015);
    let build = |row: &Value| Build {
        rated_kva: n(row, "rated_kva"),
        year_made: row["year_made"].as_f64(),
        winding_metal: row["winding_metal"].as_str().and_then(WindingMetal::from_word),
        insulation: row["insulation"].as_str().and_then(Insulation::from_word),
        phases: row["phases"].as_i64(),
    };
    for fleet in rows(&file, "fleets") {
        let known: Vec<_> =
            rows(fleet, "known").iter().map(|row| (build(row), n(row, "loss_w"))).collect();
        let model = LossModel::learn(Loss::NoLoad, known);
        for asked in rows(fleet, "asked") {
            let got = model.estimate(&mut Silent, &build(asked)).expect("enough units");
            let terms: Vec<&str> = fleet["terms"]
                .as_array()
                .expect("a list")
                .iter()
                .filter_map(Value::as_str)
                .collect();
            assert_eq!(got.regression.terms(), terms);
            assert_eq!(got.regression.units, rows(fleet, "known").len());
            near(got.regression.exponent(), n(asked, "exponent"), 1e-9, asked);
            for (got, want) in
                [(got.loss_w, "loss_w"), (got.low_w, "low_w"), (got.high_w, "high_w")]
            {
                let want = n(asked, want);
                assert!((got / want - 1.0).abs() < 1e-9, "{got} against {want}: {asked}");
            }
        }
    }
}
