//! Check values T3 of one transformer: tests, circuit, regulation, efficiency.

use ironhum::engine::transformer::circuit::{Carried, transfer};
use ironhum::engine::transformer::nameplate::{Phases, core_loss, open_circuit_copper};
use ironhum::engine::work::Worked;
use ironhum::engine::working::Silent;

use crate::harness::{Answers, Figures, In, Outcome, not_the_wrong_one, work};

/// Nameplate of a single-phase unit from both tests.
fn nameplate(i: &In) -> Worked {
    work!(
        "tests-to-nameplate",
        rated_kva = i.n("S_kVA"),
        phases = 1.0,
        hv_kv = i.n("VH_V") / 1000.0,
        lv_kv = i.n("VL_V") / 1000.0,
        open_circuit_voltage_v = i.n("Voc_V"),
        open_circuit_current_a = i.n("Ioc_A"),
        open_circuit_power_w = i.n("Poc_W"),
        short_circuit_voltage_v = i.n("Vsc_V"),
        short_circuit_current_a = i.n("Isc_A"),
        short_circuit_power_w = i.n("Psc_W"),
    )
}

fn regulation(unit: &Worked, power_factor: f64) -> f64 {
    work!(
        "regulation",
        r_pct = 100.0 * unit.n("r_pu"),
        x_pct = 100.0 * unit.n("x_pu"),
        power_factor = power_factor,
    )
    .n("regulation_pct")
}

pub(crate) fn efficiency(kva: f64, p0: f64, pk: f64, load_pu: f64, power_factor: f64) -> Worked {
    work!(
        "efficiency",
        rated_kva = kva,
        no_load_loss_w = p0,
        load_loss_w = pk,
        load_pu = load_pu,
        power_factor = power_factor,
    )
}

pub(crate) fn tests_and_efficiency(id: &str, i: &In) -> Outcome {
    match id {
        "T3-Fitzgerald-2.6" => {
            let unit = nameplate(i);
            let (p0, pk, pf) = (unit.n("no_load_loss_w"), unit.n("load_loss_w"), i.n("pf_lag"));
            let eta = efficiency(i.n("S_kVA"), p0, pk, 1.0, pf);
            Figures::of("efficiency_pct", eta.n("efficiency_pct"))
                .and("regulation_pct", regulation(&unit, pf))
                .into()
        }
        "T3-Kosow-14.20" => {
            // No impedance voltage is given, so the functions are called one by one.
            let series = Carried::Impedance(i.n("Psc_W") / (i.n("Isc_A") * i.n("Isc_A")));
            let r2 = transfer(&mut Silent, series, i.n("VH_V"), i.n("VL_V")).expect("sound");
            let copper = open_circuit_copper(&mut Silent, Phases::One, i.n("Ioc_A"), r2);
            Figures::of("Re2_mohm", 1000.0 * r2)
                .and("oc_copper_W", copper)
                .and("core_W", core_loss(&mut Silent, i.n("Poc_W"), copper))
                .tighter("Re2_mohm", 5e-4)
                .tighter("oc_copper_W", 5e-3)
                .into()
        }
        "T3-Kosow-14.19-22" => {
            let unit = work!(
                "tests-to-nameplate",
                rated_kva = i.n("S_kVA"),
                phases = 1.0,
                hv_kv = i.n("VH_V") / 1000.0,
                short_circuit_voltage_v = i.n("Vsc_V"),
                short_circuit_current_a = i.n("Isc_A"),
                short_circuit_power_w = i.n("Psc_W"),
            );
            Figures::of("Z_pu", unit.n("z_pu"))
                .and("angle_deg", unit.n("x_pu").atan2(unit.n("r_pu")).to_degrees())
                .and("reg_unity_pct", regulation(&unit, 1.0))
                .and("reg_07lag_pct", regulation(&unit, 0.7))
                .tighter("Z_pu", 2e-5)
                .tighter("reg_unity_pct", 0.01)
                .tighter("reg_07lag_pct", 0.01)
                .into()
        }
        "T3-Hubert-2.9-2.10" | "T3-Theraja-32.22" | "T3-reg-second-order" => {
            let pct = |pu, pct| if i.0[pu].is_null() { i.n(pct) } else { 100.0 * i.n(pu) };
            let (r, x) = (pct("R_pu", "R_pct"), pct("X_pu", "X_pct"));
            let at = |pf: f64, load: &'static str| {
                let rated = i.0["Vrated_V"].as_f64().unwrap_or(1.0);
                work!(
                    "regulation",
                    r_pct = r,
                    x_pct = x,
                    power_factor = pf,
                    load = load,
                    rated_voltage_v = rated
                )
            };
            let (lag, lead) = (at(i.n("pf"), "lagging"), at(i.n("pf"), "leading"));
            match id {
                "T3-Theraja-32.22" => {
                    let first = |w: &Worked| w.n("regulation_first_order_pct");
                    Figures::of("lag_pct", first(&lag))
                        .and("lead_pct", first(&lead))
                        .and("unity_pct", first(&at(1.0, "lagging")))
                        .into()
                }
                "T3-reg-second-order" => {
                    let second = |w: &Worked| w.n("regulation_second_order_pct");
                    // The tolerance of the entry is that of the series against the exact form.
                    for w in [&lag, &lead] {
                        assert!((second(w) - w.n("regulation_pct")).abs() < 0.005);
                    }
                    Figures::of("lag_pct", second(&lag))
                        .and("lead_pct", second(&lead))
                        .tighter("lag_pct", 5e-5)
                        .tighter("lead_pct", 5e-5)
                        .into()
                }
                _ => Figures::of("reg_lag", lag.n("regulation_pct") / 100.0)
                    .and("reg_lead", lead.n("regulation_pct") / 100.0)
                    .and("Vnl_lag_V", lag.n("no_load_voltage_v"))
                    .and("Vnl_lead_V", lead.n("no_load_voltage_v"))
                    .into(),
            }
        }
        "T3-Theraja-32.54" => {
            let unit = nameplate(i);
            let (kva, pf) = (i.n("S_kVA"), i.n("pf_lag"));
            let (p0, pk) = (unit.n("no_load_loss_w"), unit.n("load_loss_w"));
            let half = efficiency(kva, p0, pk, 0.5, pf).n("efficiency_pct");
            assert!((half - 97.377).abs() < 5e-4, "half load, right: {half}");
            not_the_wrong_one(id, half, 95.04);
            not_the_wrong_one(id, pk, i.n("Psc_W"));
            Figures::of("R01_ohm", unit.n("series_resistance_ohm"))
                .and("X01_ohm", unit.n("series_reactance_ohm"))
                .and("regulation_pct", regulation(&unit, pf))
                .and("eff_full_pct", efficiency(kva, p0, pk, 1.0, pf).n("efficiency_pct"))
                .into()
        }
        "T3-SC-test-off-rated-current" => {
            let unit = work!(
                "tests-to-nameplate",
                rated_kva = 2.2 * i.n("I_rated_A"),
                phases = 1.0,
                hv_kv = 2.2,
                short_circuit_voltage_v = i.n("Vsc_V"),
                short_circuit_current_a = i.n("Isc_A"),
                short_circuit_power_w = i.n("Psc_W"),
            );
            Figures::of("Pk_rated_W", unit.n("test_load_loss_w"))
                .and("Vz_rated_V", unit.n("impedance_voltage_v"))
                .into()
        }
        "T3-Theraja-32.78" | "T3-Tarlok-3.34" => {
            let day = work!(
                "all-day-efficiency",
                rated_kva = i.n("S_kVA"),
                no_load_loss_w = 1000.0 * i.n("P0_kW"),
                load_loss_w = 1000.0 * i.n("Pk_kW"),
                load_kw = i.list("kW"),
                power_factor = i.list("pf"),
                hours = i.list("hours"),
            );
            Figures::of("all_day_pct", day.n("all_day_efficiency_pct")).into()
        }
        "T3-Theraja-32.86" => {
            let day = work!(
                "all-day-efficiency",
                rated_kva = i.n("S_kVA"),
                best_efficiency_pct = 100.0 * i.n("max_eff"),
                load_kw = i.list("kW"),
                power_factor = i.list("pf"),
                hours = i.list("hours"),
            );
            Figures::of("all_day_pct", day.n("all_day_efficiency_pct")).into()
        }
        "T3-Theraja-32.61-source-error" => {
            let unit =
                efficiency(i.n("S_kVA"), 1000.0 * i.n("P0_kW"), 1000.0 * i.n("Pk_kW"), 1.0, 1.0);
            not_the_wrong_one(id, unit.n("best_load_kva"), 160.4);
            Figures::of("kVA_at_max_eff", unit.n("best_load_kva"))
                .and("max_eff_unity_pct", unit.n("best_efficiency_pct"))
                .into()
        }
        _ => crate::grid::grid(id, i),
    }
}
