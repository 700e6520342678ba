//! Tests of the registry: its facts, how inputs are read, and the questions that it asks back.

use super::*;
use crate::engine::working::flatten;

fn refusal(key: &str, inputs: &str) -> String {
    let inputs: Vec<&str> = inputs.split_whitespace().collect();
    run(key, &inputs).expect_err(key).to_string()
}

fn worked(key: &str, inputs: &str) -> Worked {
    let inputs: Vec<&str> = inputs.split_whitespace().collect();
    run(key, &inputs).unwrap_or_else(|refusal| panic!("{key} {inputs:?}: {refusal}"))
}

/// The calculations that the contract names.
const PROMISED: &str = "tests-to-nameplate load-loss-temperature base-change transfer efficiency all-day-efficiency \
    regulation parallel-sharing circulating-current fault-level units-in-parallel harmonic-factor core-split \
    loss-factor equivalent-peak factors owning-cost annuity growing-annuity economic-life payback weibull \
    hot-spot ageing peak-efficiency-index";

#[test]
fn every_promised_calculation_is_there_once() {
    for key in PROMISED.split_whitespace() {
        assert_eq!(known().filter(|calc| calc.key == key).count(), 1, "{key}");
    }
    for calc in known() {
        assert_eq!(known().filter(|other| other.key == calc.key).count(), 1, "{}", calc.key);
        assert!(!calc.summary.is_empty() && !calc.source.is_empty());
    }
}

/// Every default is a value that its own input accepts, and every number has a unit or says in its meaning what it is.
#[test]
fn inputs_are_sound() {
    for calc in known() {
        for (n, input) in calc.inputs.iter().enumerate() {
            let name = input.column.name;
            assert!(!input.column.meaning.is_empty(), "{} {name}", calc.key);
            assert!(!calc.inputs[..n].iter().any(|other| other.column.name == name));
            assert!(!input.column.required || input.default.is_empty(), "{} {name}", calc.key);
            if !input.column.required {
                let read = input.read(None).expect(name);
                assert_eq!(read[0] == Value::Blank, input.default.is_empty(), "{name}");
            }
            assert!(!calc.asks.iter().any(|(ask, _)| *ask == name), "{} {name}", calc.key);
        }
    }
}

#[test]
fn inputs_are_read_strictly() {
    let e = |inputs: &str| refusal("efficiency", inputs);
    assert!(e("rated_kav=150").contains("the nearest is rated_kva"));
    assert!(e("150").contains("is not name=value"));
    assert!(e("rated_kva=150").contains("no_load_loss_w: is missing: no-load (iron) loss W"));
    assert!(e("rated_kva=150 rated_kva=160").contains("given twice"));
    assert!(
        e("rated_kva=0 no_load_loss_w=1 load_loss_w=1").contains("check the value and its unit")
    );
    assert!(e("rated_kva=1,5 no_load_loss_w=1 load_loss_w=1").contains("is one value"));
    assert!(e("rated_kva=x no_load_loss_w=1 load_loss_w=1").contains("is not a number"));
    assert!(refusal("eficiency", "").contains("the nearest is efficiency"));
    let d = |inputs: &str| refusal("all-day-efficiency", inputs);
    let base = "rated_kva=100 no_load_loss_w=300 load_loss_w=1000 load_kw=50,60 hours=";
    assert!(d(&format!("{base}1,2,3")).contains("has 3 values where 2 are needed"));
    assert!(d(&format!("{base}1,,3")).contains("empty place"));
}

#[test]
fn a_result_shows_its_inputs_and_steps() {
    let w = worked("regulation", "r_pct=1 x_pct=5 power_factor=0.8");
    assert_eq!(w.inputs[0], ("r_pct", Datum::Number(1.0)));
    assert!(w.inputs.contains(&("load_pu", Datum::Number(1.0))), "defaults are shown");
    assert!(!w.inputs.iter().any(|(name, _)| *name == "impedance_pct"), "blanks are not");
    let steps = flatten(&w.steps);
    assert!(steps.iter().any(|s| s.substituted == "1·(0.01·0.8 + 0.05·0.6)" && s.value == 0.038));
}

/// Trap 1: money per W against per kW, once against per year.
#[test]
fn per_watt_and_per_year_are_asked_back() {
    let unit = "price=24000 no_load_loss_w=250 load_loss_w=4000";
    let w = |more: &str| worked("owning-cost", &format!("{unit} {more}")).number("owning_cost");
    let r = |more: &str| refusal("owning-cost", &format!("{unit} {more}"));
    assert_eq!(w("factor_a_per_kw=4500 factor_b_per_kw=2000"), Some(33_125.0));
    assert_eq!(w("factor_a_per_w=4.5 factor_b_per_w=2"), Some(33_125.0));
    let small = r("factor_a_per_kw=4.5 factor_b_per_kw=2");
    assert!(small.contains("meant per W, not per kW") && small.contains("sure=yes"), "{small}");
    let large = r("factor_a_per_w=4500 factor_b_per_w=2000");
    assert!(large.contains("meant per kW, not per W"), "{large}");
    assert!(w("factor_a_per_kw=4.5 factor_b_per_kw=2 sure=yes").is_some());
    let per_kw = "factor_a_per_kw=4500 factor_b_per_kw=2000";
    assert!(r(&format!("{per_kw} evaluation_years=3")).contains("paid=per-year"));
    assert!(r(&format!("{per_kw} evaluation_years=3 paid=once")).contains("leave it out"));
    assert!(r(&format!("{per_kw} paid=per-year")).contains("is needed"));
    assert_eq!(w(&format!("{per_kw} paid=per-year evaluation_years=3")), Some(51_375.0));
    assert!(r(&format!("{per_kw} factor_a_per_w=4.5")).contains("keep one of the two"));
    assert!(r("factor_a=4500 factor_b=2000").contains("needs its unit"));
}

/// Trap 2: responsibility on load against on losses. Trap 3: investment against its yearly cost.
#[test]
fn responsibility_and_investment_are_asked_back() {
    let base =
        "years=20 discount_rate_pct=7 energy_price_per_kwh=0.1 peak_pu=0.6 loss_factor_pu=0.3";
    let r = |more: &str| refusal("factors", &format!("{base} {more}"));
    let b = |more: &str| worked("factors", &format!("{base} {more}")).number("factor_b_per_kw");
    assert!(r("responsibility_factor=0.8").contains("on load or on losses"));
    assert!(r("responsibility_pu=0.8 responsibility_on_losses_pu=0.64").contains("keep one"));
    let demand = "demand_charge_per_kw_year=60";
    let (load, losses) = (
        b(&format!("{demand} responsibility_pu=0.8")).expect("a number"),
        b(&format!("{demand} responsibility_on_losses_pu=0.64")).expect("a number"),
    );
    assert!((load / losses - 1.0).abs() < 1e-12);
    assert!(r("investment_per_kw=900").contains("paid once"));
    assert!(r("investment_per_kw_year=90").contains("demand_charge_per_kw_year there"));
    assert!(
        r("method=levelized fixed_charge_rate_pct=12 demand_charge_per_kw_year=60")
            .contains("investment_per_kw_year there")
    );
    assert!(r("method=levelized").contains("fixed_charge_rate_pct"));
}

/// Physical nonsense gets a message that says what to do.
#[test]
fn nonsense_is_refused_with_advice() {
    assert!(
        refusal("loss-factor", "load_factor_pu=0.5 loss_factor_pu=0.6").contains("LF² ≤ LsF ≤ LF")
    );
    assert!(
        refusal("loss-factor", "load_factor_pu=0.5 loss_factor_weight_pu=1.2")
            .contains("outside 0 … 1")
    );
    assert!(refusal("annuity", "discount_rate_pct=-100 years=5").contains("above −100 %"));
    let sc =
        "rated_kva=20 phases=1 hv_kv=2.2 short_circuit_voltage_v=86 short_circuit_current_a=10.5";
    assert!(
        refusal("tests-to-nameplate", &format!("{sc} short_circuit_power_w=1000"))
            .contains("contradicts itself")
    );
    let split = format!(
        "{sc} short_circuit_power_w=360 lv_kv=0.22 hv_resistance_ohm=2 lv_resistance_ohm=0.02"
    );
    assert!(refusal("tests-to-nameplate", &split).contains("stray loss would be negative"));
    assert!(
        refusal("tests-to-nameplate", "rated_kva=100 vector_group=YNa0")
            .contains("auto-transformer")
    );
    assert!(
        refusal("load-loss-temperature", "load_loss_w=1200 resistive_loss_w=1300 test_temp_c=28")
            .contains("stray loss would be negative")
    );
    let drop = "rated_kva=400 no_load_loss_w=600 load_loss_w=4000 impedance_pct=6";
    assert!(
        refusal("voltage-drop", &format!("{drop} load_pu=9 power_factor=0.8"))
            .contains("cannot be carried")
    );
    assert!(refusal("hot-spot", "load_pu=1 insulation=dry").contains("liquid-immersed units only"));
    let bank = "rated_kva=100,100 r_pct=1 x_pct=4 load_kva=150";
    assert!(
        refusal("parallel-sharing", &format!("{bank} vector_group=Dyn11,Yyn0"))
            .contains("must not be paralleled")
    );
    assert!(
        worked("parallel-sharing", &format!("{bank} vector_group=Dyn11,Dyn5"))
            .numbers("share_kva")
            .is_some()
    );
    assert!(refusal("internal-rate", "flows=100,200").contains("net present value"));
    assert!(
        refusal(
            "legal-minimum",
            "law=eu date=2024-01-01 rated_kva=400 no_load_loss_w=1 load_loss_w=1"
        )
        .contains("known are eu-548-2014")
    );
}

/// A calculation that leaves the range of numbers says so instead of printing infinity.
#[test]
fn infinity_never_appears() {
    assert!(
        refusal("growing-annuity", "discount_rate_pct=0 growth_pct=900000 years=1000")
            .contains("leaves the range")
    );
}
