//! The dossier of a unit from outside: heat, fit and law, through the program.

mod support;

use serde_json::Value;
use support::Program;

const BASIS: &str = r#"
name = "b"
currency = "EUR"
first_year = 2026
horizon_years = 10
discount_rate_pct = 5
energy_price_per_kwh = 0.1
capital_recovery = "full"
"#;

/// Two units of one load: liquid and dry; an offer for them.
fn small() -> Program {
    let program = Program::new();
    let hours = |n: usize| if (6..18).contains(&(n % 24)) { 100 } else { 40 };
    let steps = (0..8760).map(|n| format!("{},{}", n + 1, hours(n)));
    let profile = format!("interval,day\n{}\n", steps.collect::<Vec<_>>().join("\n"));
    let profile = program.write("profile.csv", profile);
    let units = program.write(
        "units.csv",
        "unit,phases,rated_kva,hv_kv,lv_kv,vector_group,cooling,insulation,impedance_pct,\
         no_load_loss_w,load_loss_w,peak_kva,profile\n\
         W1,3,400,20,0.4,Dyn5,ONAN,liquid,4,800,4000,380,day\n\
         D1,3,400,20,0.4,Dyn5,AN,dry,6,900,4400,380,day\n",
    );
    let offers = program.write(
        "offers.csv",
        "offer,rated_kva,phases,hv_kv,lv_kv,vector_group,cooling,insulation,impedance_pct,\
         no_load_loss_w,load_loss_w,price\n\
         L630,630,3,20,0.4,Dyn5,ONAN,liquid,4,600,4600,9000\n",
    );
    program.import("profiles", &profile, &[]);
    program.import("units", &units, &[]);
    program.import("offers", &offers, &[]);
    program.import("basis", &program.write("basis.toml", BASIS), &[]);
    program
}

fn number(value: &Value, pointer: &str) -> f64 {
    value.pointer(pointer).and_then(Value::as_f64).unwrap_or_else(|| panic!("{pointer}"))
}

#[test]
fn heat_of_a_unit_and_of_its_replacement() {
    let program = small();
    let dossier = program.json(&["unit", "W1", "--format", "json"]);
    // IEC 60076-7, distribution ONAN (constants text, rises memory), R = 4000/800: 20 + 55·((1 + 5·0.95²)/6)^0.8
    // and 1.1·23·0.95^1.6 above it.
    let oil = 20.0 + 55.0 * ((1.0_f64 + 5.0 * 0.95 * 0.95) / 6.0).powf(0.8);
    let hot = oil + 1.1 * 23.0 * 0.95_f64.powf(1.6);
    assert!((number(&dossier, "/thermal/own/steady_top_oil_c") - oil).abs() < 1e-9);
    assert!((number(&dossier, "/thermal/own/steady_hot_spot_c") - hot).abs() < 1e-9);
    // Twelve hours at the peak end below the steady state, the last of them is the hottest.
    let hottest = number(&dossier, "/thermal/own/hottest_hot_spot_c");
    assert!(hottest < hot && hottest > hot - 3.0, "{hottest} {hot}");
    assert_eq!(number(&dossier, "/thermal/own/hottest_hour") % 24.0, 18.0);
    let replaced = number(&dossier, "/thermal/replacement/hottest_hot_spot_c");
    assert!(replaced < hottest - 20.0, "a larger unit under the same load stays cooler");
    assert_eq!(dossier["thermal"]["replacement"]["offer"], "L630");

    // All temperatures move with a constant ambient; the hot-spot limit is passed at the end.
    let warm = program.json(&["unit", "W1", "--ambient-c", "50", "--format", "json"]);
    assert!((number(&warm, "/thermal/own/hottest_hot_spot_c") - hottest - 30.0).abs() < 1e-9);
    assert_eq!(number(&dossier, "/thermal/own/hours_above_hot_spot"), 0.0);
    assert!(number(&warm, "/thermal/own/hours_above_hot_spot") > 365.0);
    // Paper that is not upgraded doubles its ageing every 6 K.
    let life = |d: &Value| number(d, "/thermal/own/life_used_hours");
    assert!((life(&warm) / life(&dossier) / (30.0_f64 / 6.0).exp2() - 1.0).abs() < 1e-9);

    // The same constant as a file says the same; a shorter year is asked back.
    let year = |n: usize| {
        let rows = (0..n).map(|k| format!("{},50", k + 1)).collect::<Vec<_>>().join("\n");
        format!("interval,ambient_c\n{rows}\n")
    };
    let file = program.write("air.csv", year(8760));
    let file = file.to_string_lossy();
    let filed = program.json(&["unit", "W1", "--ambient", &file, "--format", "json"]);
    assert_eq!(life(&filed), life(&warm));
    let other = program.write("quarters.csv", year(35040));
    let other =
        program.json(&["unit", "W1", "--ambient", &other.to_string_lossy(), "--format", "json"]);
    let why = other["thermal"]["why"].as_str().expect("says why");
    assert!(why.contains("35040 steps of 15 min") && why.contains("day has 8760"), "{why}");
    let hot = program.write("hot.csv", "interval,ambient_c\n1,900\n");
    let output = program.run(&["unit", "W1", "--ambient", &hot.to_string_lossy()]);
    assert_eq!(output.status.code(), Some(3));
}

#[test]
fn dry_units_have_no_thermal_dossier() {
    let program = small();
    let dossier = program.json(&["unit", "D1", "--format", "json"]);
    assert_eq!(dossier["thermal"]["own"], Value::Null);
    let why = dossier["thermal"]["why"].as_str().expect("says why");
    assert!(why.contains("liquid-immersed units only") && why.contains("IEC 60076-12"), "{why}");
}

/// By hand: 400 kVA at 4 % is 10 MVA, at 4 % 630 kVA is 15.75 MVA; shares of a load go with S/z where R/X is equal.
#[test]
fn fit_of_an_offer_beside_another_unit() {
    let program = small();
    let fit = |more: &[&str]| {
        let all = [&["unit", "W1", "--fit", "L630", "--format", "json"], more].concat();
        program.json(&all)["fit"].clone()
    };
    let alone = fit(&[]);
    assert_eq!(alone["fits"], true);
    assert_eq!(
        (&alone["misses"], &alone["unknown"]),
        (&serde_json::json!([]), &serde_json::json!([]))
    );
    assert!((number(&alone, "/fault_level_mva") - 0.63 / 0.04).abs() < 1e-9);
    let ampere = 1e6 * 0.63 / 0.04 / (3.0_f64.sqrt() * 400.0);
    assert!((number(&alone, "/fault_current_a") / ampere - 1.0).abs() < 1e-12);
    assert!((number(&alone, "/peak_pu") - 380.0 / 630.0).abs() < 1e-12);
    // β·(R·cosφ + X·sinφ) to first order, at power factor 0.9.
    let (r, z) = (4600.0 / 630_000.0, 0.04_f64);
    let x = (z * z - r * r).sqrt();
    let first = 38_000.0 / 630.0 * (r * 0.9 + x * 0.19_f64.sqrt());
    assert!((number(&alone, "/regulation_pct") - first).abs() < 0.05);

    // Its twin, of which the test report alone knows the impedance: 800 V drive the rated 11.547 A, 4 %.
    let twin = "unit,phases,rated_kva,hv_kv,lv_kv,vector_group,cooling,insulation,no_load_loss_w,peak_kva,profile\n\
                W2,3,400,20,0.4,Dyn5,ONAN,liquid,800,380,day\n";
    program.import("units", &program.write("twin.csv", twin), &[]);
    let report = "unit,short_circuit_voltage_v,short_circuit_current_a,short_circuit_power_w\n\
                  W2,800,11.547005383792516,4000\n";
    program.import("tests", &program.write("report.csv", report), &[]);
    let itself = program.run(&["unit", "W1", "--fit", "L630", "--beside", "W1"]);
    assert_eq!(itself.status.code(), Some(3));
    assert!(String::from_utf8_lossy(&itself.stderr).contains("stands there itself"));
    let beside = fit(&["--beside", "W2", "--network-mva", "100", "--fault-limit-mva", "20"]);
    let level = 1.0 / (1.0 / (15.75 + 10.0) + 0.01);
    assert!((number(&beside, "/fault_level_mva") / level - 1.0).abs() < 1e-12);
    assert_eq!(
        (&beside["within_fault_limit"], &beside["misses"][0]),
        (&Value::Bool(false), &Value::from("fault_limit_mva"))
    );
    assert_eq!(number(&beside, "/beside/load_kva"), 760.0);
    assert!(number(&beside, "/beside/impedance_difference_pct").abs() < 1e-9);
    // Equal impedances on own ratings: both at nearly the same loading; their R/X differs a little.
    let (own, other) =
        (number(&beside, "/beside/loading_pu"), number(&beside, "/beside/beside_loading_pu"));
    assert!((own - 760.0 / 1030.0).abs() < 2e-3 && (other - 760.0 / 1030.0).abs() < 2e-3);
    assert_eq!(number(&beside, "/beside/circulating_pu"), 0.0);

    let dry = fit(&["--beside", "D1"]);
    assert_eq!(dry["misses"], serde_json::json!(["impedance_beside"]));
    let unknown = program.run(&["unit", "W1", "--fit", "L63"]);
    assert!(String::from_utf8_lossy(&unknown.stderr).contains("did you mean L630?"));
}

/// Table I.1 of Regulation (EU) 548/2014, tier 2: 400 kVA 387 W and 3 250 W, 630 kVA 540 W and 4 600 W
/// (reference/eu_548_2014_table_I1_liquid_le3150kva.csv).
#[test]
fn the_law_in_the_dossier() {
    let program = small();
    let lawful = BASIS.replace("name = \"b\"", "name = \"lawful\"\nlaw = \"eu-548-2014\"");
    program.import("basis", &program.write("lawful.toml", lawful), &[]);
    let dossier =
        program.json(&["unit", "W1", "--fit", "L630", "--basis", "lawful", "--format", "json"]);
    let law = &dossier["law"];
    assert_eq!((law["meets"].as_bool(), law["on"].as_str()), (Some(false), Some("2026-01-01")));
    assert_eq!((number(law, "/limits/0/limit"), number(law, "/limits/1/limit")), (387.0, 3250.0));
    assert_eq!((number(law, "/limits/0/value"), number(law, "/limits/1/value")), (800.0, 4000.0));
    let offered = &dossier["fit"]["law"];
    assert_eq!(offered["limits"][0]["meets"], false, "600 W of iron against 540 W");
    assert_eq!(offered["limits"][1]["meets"], true, "4 600 W of copper equals the limit");
    assert_eq!(dossier["fit"]["misses"], serde_json::json!(["law"]));
    assert_eq!(
        program.json(&["unit", "W1", "--basis", "b", "--format", "json"])["law"],
        Value::Null
    );
}

/// The three traps of loss evaluation, met on the way to `factors` and `unit`.
#[test]
fn traps_are_asked_back() {
    let program = small();
    let complaint = |what: &str, name: &str, text: &str| {
        let file = program.write(name, text);
        let output = program.run(&["import", what, &file.to_string_lossy()]);
        assert_eq!(output.status.code(), Some(3), "{text}");
        String::from_utf8_lossy(&output.stderr).into_owned()
    };
    // Responsibility on load or on losses, an investment or its yearly cost, money per kW or per W.
    let said = complaint("basis", "r.toml", &format!("{BASIS}responsibility_factor = 0.8\n"));
    assert!(said.contains("on load or on losses") && said.contains("square root"), "{said}");
    let said = complaint("basis", "i.toml", &format!("{BASIS}investment_per_kw = 900\n"));
    assert!(said.contains("paid once") && said.contains("yearly charge rate"), "{said}");
    let tender = "tender = \"t\"\ncurrency = \"EUR\"\n[[lot]]\nlot = \"L\"\nrated_kva = 400\nfactor_a = 4.5\n";
    let said = complaint("tender", "t.toml", tender);
    assert!(said.contains("per W times 1000") && said.contains("paid once"), "{said}");
    let said = complaint("units", "u.csv", "unit,rated_kva,responsibility\nX,400,0.8\n");
    assert!(said.contains("on load or on losses"), "{said}");

    // What names do not reveal figures may: a charge above the energy of a whole year, a price per MWh.
    let basis = |name: &str, more: &str| {
        let text = BASIS.replace("name = \"b\"", &format!("name = \"{name}\"\n{more}"));
        let text = match name {
            "mwh" => text.replace("energy_price_per_kwh = 0.1", "energy_price_per_kwh = 100"),
            _ => text,
        };
        program.import("basis", &program.write("more.toml", text), &[]);
        let ask = |command: &[&str]| {
            let asked = [command, &["--basis", name, "--format", "json"]].concat();
            program.json(&asked)["flags"].to_string()
        };
        (ask(&["factors"]), ask(&["unit", "W1"]))
    };
    let (factors, unit) = basis("once", "demand_charge_per_kw_year = 1200");
    assert!(factors.contains("capacity_scale") && unit.contains("capacity_scale"));
    assert!(program.done(&["check", "--basis", "once"]).contains("investment, paid once"));
    let levelized =
        "factor_method = \"levelized\"\nfixed_charge_rate_pct = 9\ndemand_charge_per_kw_year = 40";
    assert!(basis("levelized", levelized).0.contains("demand_unused"));
    assert!(basis("present", "investment_per_kw_year = 40").0.contains("investment_unused"));
    let (_, unit) = basis("mwh", "");
    assert!(unit.contains("loss_value_scale"), "{unit}");
    let (factors, unit) = basis("sound", "demand_charge_per_kw_year = 40\nresponsibility_pu = 0.8");
    assert_eq!((factors.as_str(), unit.as_str()), ("[]", "[]"));
    let stated =
        program.json(&["factors", "--basis", "b", "--load-factor-pu", "0.5", "--format", "json"]);
    assert_eq!(stated["flags"], serde_json::json!(["loss_factor_estimated"]));
    let refused = program.run(&[
        "factors",
        "--basis",
        "b",
        "--load-factor-pu",
        "0.5",
        "--loss-factor-pu",
        "0.6",
    ]);
    assert!(String::from_utf8_lossy(&refused.stderr).contains("LF² ≤ LsF ≤ LF"));
}

/// A level saving: 9 000 against s a year for ten years at 5 %.
#[test]
fn indicators_of_a_replacement() {
    let program = small();
    let basis = BASIS.replace("name = \"b\"", "name = \"co2\"\ncarbon_kg_per_kwh = 0.4");
    program.import("basis", &program.write("co2.toml", basis), &[]);
    let dossier = program.json(&["unit", "W1", "--basis", "co2", "--format", "json"]);
    let k = |key: &str| number(&dossier, &format!("/keep_or_replace/{key}"));
    let own = |key: &str| number(&dossier, &format!("/losses/{key}"));
    let copper = 4.6 * (380.0_f64 / 630.0).powi(2) * own("loss_factor_pu");
    let new = 8760.0 * (0.6 + copper);
    let saved = 0.1 * (own("no_load_energy_kwh") + own("load_energy_kwh") - new);
    let annuity = |i: f64, n: f64| (1.0 - (1.0 + i).powf(-n)) / i;
    // Ten years do not bring 9 000 back: the rate of return is below the discount rate, maybe below zero.
    let rate = k("now_irr_pct") / 100.0;
    assert!((saved * annuity(rate, 10.0) / 9000.0 - 1.0).abs() < 1e-9, "{rate} {saved}");
    assert!((k("keep_euac") * annuity(0.05, 10.0) / k("keep_pv") - 1.0).abs() < 1e-12);
    // A dearer price of energy pays it back: n with s·a(i, n) = 9 000, linear within its last year.
    let basis = BASIS.replace("name = \"b\"", "name = \"dear\"\ncarbon_kg_per_kwh = 0.4");
    let basis = basis.replace("energy_price_per_kwh = 0.1", "energy_price_per_kwh = 0.4");
    program.import("basis", &program.write("dear.toml", basis), &[]);
    let dossier = program.json(&["unit", "W1", "--basis", "dear", "--format", "json"]);
    let k = |key: &str| number(&dossier, &format!("/keep_or_replace/{key}"));
    assert_eq!(k("best_year_offset"), 0.0);
    let saved = 0.4 * k("energy_saved_kwh");
    assert!((k("payback_years") - 9000.0 / saved).abs() < 1e-9);
    let whole = (1..=10).take_while(|n| saved * annuity(0.05, f64::from(*n)) < 9000.0).count();
    let n = f64::from(u32::try_from(whole).expect("small"));
    let rest = (9000.0 - saved * annuity(0.05, n)) / (saved * 1.05_f64.powf(-n - 1.0));
    assert!((k("discounted_payback_years") - n - rest).abs() < 1e-9);
    let tonnes = 10.0 * 0.4 * k("energy_saved_kwh") / 1000.0;
    assert!((k("co2_avoided_t") / tonnes - 1.0).abs() < 1e-12);
    let per_tonne = (9000.0 - saved * annuity(0.05, 10.0)) / tonnes;
    assert!((k("cost_per_t_co2") - per_tonne).abs() < 1e-9, "saves money besides");
}

/// By the equation of methods section 2: 380 kVA on 25 kVA at 4 % is βZ = 0.6, above the 0.5 of the collapse at power
/// factor 1; on 630 kVA it is 0.024.
#[test]
fn a_fit_by_voltage_drop_asks_whether_the_voltage_holds() {
    let program = small();
    let offer = "offer,rated_kva,impedance_pct,no_load_loss_w,load_loss_w,price,life_years\n\
                 L25,25,4,70,600,3500,40\n";
    program.import("offers", &program.write("small.csv", offer), &[]);
    let drop = BASIS.replace("name = \"b\"", "name = \"drop\"\nvoltage_model = \"drop\"");
    program.import("basis", &program.write("drop.toml", drop), &[]);
    let fit = |offer, basis| {
        let asked = ["unit", "W1", "--fit", offer, "--basis", basis, "--format", "json"];
        program.json(&asked)["fit"].clone()
    };
    assert_eq!(fit("L630", "drop")["holds_voltage"], true);
    let small = fit("L25", "drop");
    assert_eq!((&small["holds_voltage"], &small["fits"]), (&false.into(), &false.into()));
    assert_eq!(small["misses"], serde_json::json!(["voltage_drop"]));
    assert_eq!(fit("L25", "b")["holds_voltage"], Value::Null);
}
