//! Check values T3 of the network: per unit, parallel units, short circuit.

use ironhum::engine::transformer::nameplate::{Phases, no_load_current_pct, rated_current};
use ironhum::engine::working::Silent;

use crate::harness::{Answers, Figures, In, Outcome, not_the_wrong_one, work};

pub(crate) fn grid(id: &str, i: &In) -> Outcome {
    match id {
        "T3-base-345kV" => {
            let base = work!("base-impedance", base_kv = i.n("kV"), base_mva = i.n("MVA"));
            Figures::of("Zbase_ohm", base.n("base_impedance_ohm")).into()
        }
        "T3-Kosow-14.29" => {
            let change = |z| {
                let new = work!(
                    "base-change",
                    impedance_pu = i.n(z),
                    from_mva = i.n("MVA_old"),
                    to_mva = i.n("MVA_new"),
                    from_kv = i.n("kV_old"),
                    to_kv = i.n("kV_new"),
                );
                new.n("impedance_pu")
            };
            let line = work!(
                "transfer",
                from_kv = i.n("kV_old"),
                to_kv = i.n("kVb_T1_HV"),
                voltage_v = i.n("kV_new")
            );
            let line_kv = line.n("voltage_v");
            let z = work!(
                "base-impedance",
                base_kv = line_kv,
                base_mva = i.n("MVA_new"),
                impedance_ohm = i.n("Zline_ohm")
            );
            Figures::of("Z1_new", change("Z1_pu"))
                .and("Z2_new", change("Z2_pu"))
                .and("Vb_line_kV", line_kv)
                .and("Zline_pu", z.n("impedance_pu"))
                .tighter("Z1_new", 5e-5)
                .tighter("Z2_new", 5e-5)
                .tighter("Zline_pu", 5e-5)
                .into()
        }
        "T3-Fitzgerald-2.12-13" => {
            let kva = i.n("VH_V") * i.n("IH_A") / 1000.0;
            let pu = |ohm| {
                let base = work!(
                    "base-impedance",
                    base_kv = i.n("VH_V") / 1000.0,
                    base_mva = kva / 1000.0,
                    impedance_ohm = ohm
                );
                base.n("impedance_pu")
            };
            let kva = i.n("VH_V") * i.n("IH_A") / 1000.0;
            let rated = rated_current(&mut Silent, Phases::One, kva, i.n("VL_V")).expect("sound");
            let exciting = no_load_current_pct(&mut Silent, i.n("Iexc_LV_A"), rated);
            Figures::of("R_pu", pu(i.n("R_ohm")))
                .and("X_pu", pu(i.n("X_ohm")))
                .and("Iexc_pu", exciting / 100.0)
                .into()
        }
        "T3-Fitzgerald-2.15" => {
            let z = i.list("Z_pu_250");
            let change = |z: f64| {
                let to = i.n("S_new_kVA") / 1000.0;
                work!("base-change", impedance_pu = z, from_mva = 0.25, to_mva = to)
                    .n("impedance_pu")
            };
            let source = work!(
                "regulation",
                r_pct = 100.0 * change(z[0]),
                x_pct = 100.0 * change(z[1]),
                load_pu = i.n("P_kW") / i.n("S_new_kVA"),
                power_factor = i.n("pf"),
                load_voltage_pu = i.n("Vload_V") / i.n("Vbase_V"),
            );
            Figures::of("VH_V", source.n("source_voltage_pu") * i.n("VH_V")).into()
        }
        "T3-parallel-Theraja-32.102" => {
            let (za, zb) = (i.list("ZA_pct"), i.list("ZB_pct"));
            let bank = work!(
                "parallel-sharing",
                rated_kva = vec![i.n("SA_kVA"), i.n("SB_kVA")],
                r_pct = vec![za[0], zb[0]],
                x_pct = vec![za[1], zb[1]],
                load_kva = i.n("load_kVA"),
                power_factor = i.n("pf_lag"),
            );
            let lag = bank.l("lag_deg");
            assert!((lag[1] - 31.1).abs() < 0.05, "B lags by 31.1 degrees: {}", lag[1]);
            not_the_wrong_one(id, lag[0], 33.4);
            Figures::of("SA_share_kVA", bank.l("share_kva")[0])
                .and("SB_share_kVA", bank.l("share_kva")[1])
                // The source counts a lagging current as a negative angle.
                .and("angA_deg", -lag[0])
                .and("loadA_pct", bank.l("loading_pct")[0])
                .and("loadB_pct", bank.l("loading_pct")[1])
                .tighter("SA_share_kVA", 1e-6)
                .tighter("SB_share_kVA", 1e-6)
                .tighter("angA_deg", 1e-4)
                .into()
        }
        "T3-parallel-Hubert-3.5" => {
            let (za, zb) = (i.list("ZA_pct"), i.list("ZB_pct"));
            let bank = work!(
                "parallel-sharing",
                rated_kva = vec![i.n("SA_kVA"), i.n("SB_kVA")],
                r_pct = vec![za[0], zb[0]],
                x_pct = vec![za[1], zb[1]],
                load_kva = i.n("SA_kVA") + i.n("SB_kVA"),
                power_factor = 1.0,
            );
            Figures::of("IA_share_pct", bank.l("share_pct")[0])
                .and("IB_share_pct", bank.l("share_pct")[1])
                .and("max_bank_A", 1000.0 * bank.n("bank_limit_kva") / i.n("V_V"))
                .into()
        }
        "T3-circulating-Hubert-3.4" => {
            let (za, zb) = (i.list("ZA_pu"), i.list("ZB_pu"));
            let c = work!(
                "circulating-current",
                phases = 1.0,
                rated_kva = i.n("S_kVA"),
                r_pct = vec![100.0 * za[0], 100.0 * zb[0]],
                x_pct = vec![100.0 * za[1], 100.0 * zb[1]],
                no_load_voltage_v = vec![i.n("VA_V"), i.n("VB_V")],
            );
            Figures::of("I_circ_A", c.n("circulating_current_a"))
                .and("pct_of_rated_A", c.n("of_first_rated_pct"))
                .and("mismatch_pct", c.n("mismatch_pct"))
                .into()
        }
        "T3-fault-Theraja-32.53" => {
            let f = work!(
                "fault-current",
                phases = 1.0,
                rated_kva = i.n("S_kVA"),
                hv_kv = i.n("V1_V") / 1000.0,
                r_pct = i.n("R_pct"),
                impedance_pct = i.n("Z_pct"),
            );
            Figures::of("X_pct", f.n("x_pct"))
                .and("Z01_ohm", f.n("series_impedance_ohm"))
                .and("Isc_A", f.n("current_a"))
                .into()
        }
        "T3-fault-Hubert-2.8" => {
            let f = work!(
                "fault-current",
                phases = 1.0,
                rated_kva = i.n("S_kVA"),
                hv_kv = i.n("VH_V") / 1000.0,
                lv_kv = i.n("VL_V") / 1000.0,
                r_pct = i.n("R_pct"),
                x_pct = i.n("X_pct"),
                fault_resistance_ohm = i.n("Zfault_ohm_LV"),
                applied_pct = 100.0 * i.n("Vapplied_V") / i.n("VH_V"),
            );
            Figures::of("Z_pct", f.n("impedance_pct"))
                .and("Req_HV", f.n("series_resistance_ohm"))
                .and("Xeq_HV", f.n("series_reactance_ohm"))
                .and("If_HV_A", f.n("current_a"))
                .and("angle_deg", f.n("angle_deg"))
                .into()
        }
        "T3-fault-level-3ph" => {
            let f = work!(
                "fault-level",
                rated_kva = 1000.0 * i.n("S_MVA"),
                impedance_pct = i.n("Z_pct"),
                lv_kv = i.n("Vlv_kV"),
                network_mva = i.n("source_MVA"),
            );
            Figures::of("fault_MVA_infinite", f.n("infinite_network_mva"))
                .and("fault_MVA", f.n("fault_level_mva"))
                .and("Isc_kA", f.n("fault_current_ka"))
                .into()
        }
        _ => panic!("{id} has no handler: add one"),
    }
}
