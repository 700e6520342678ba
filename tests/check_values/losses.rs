//! Check values T4: core, harmonics, temperature and waveform corrections.

use ironhum::engine::transformer::efficiency::loss_of;
use ironhum::engine::working::Silent;

use crate::harness::{Answers, Arg, Figures, In, Outcome, not_the_wrong_one, work, worked};
use crate::unit::efficiency;

pub(crate) fn losses(id: &str, i: &In) -> Outcome {
    match id {
        "T4-Theraja-32.29" => {
            let split = work!(
                "core-split",
                frequency_hz = vec![40.0, 60.0],
                core_loss_w = vec![i.n("W40_W"), i.n("W60_W")],
                at_frequency_hz = i.n("f_target_Hz"),
            );
            Figures::of("hyst_W", split.n("hysteresis_w")).and("eddy_W", split.n("eddy_w")).into()
        }
        "T4-Hubert-2.12" => {
            let (kva, pf) = (i.n("S_kVA"), i.n("pf"));
            let copper = 1000.0 * kva * i.n("R_pu");
            let all = loss_of(&mut Silent, 1000.0 * kva * pf, i.n("eff")).expect("sound");
            let new = work!(
                "core-loss-at",
                core_loss_w = all - copper,
                hysteresis_share_pu = i.n("hyst_fraction"),
                from_voltage_v = i.n("V_V"),
                to_voltage_v = i.n("V2_V"),
                from_frequency_hz = i.n("f_Hz"),
                to_frequency_hz = i.n("f2_Hz"),
                exponent = i.n("n"),
            );
            // Rated current at the lower voltage: the rating falls, the copper loss does not.
            let kva2 = kva * i.n("V2_V") / i.n("V_V");
            let eta = efficiency(kva2, new.n("core_loss_w"), copper, 1.0, pf);
            Figures::of("Pcore_W", all - copper)
                .and("Pcore2_W", new.n("core_loss_w"))
                .and("eff2_pct", eta.n("efficiency_pct"))
                .into()
        }
        "T4-eddy-thickness" => {
            let e = work!(
                "eddy-loss",
                eddy_loss_w = i.n("Pe_W"),
                from_thickness_mm = i.n("t_mm"),
                to_thickness_mm = i.n("t2_mm"),
                from_frequency_hz = i.n("f"),
                to_frequency_hz = i.n("f2"),
                from_flux_t = i.n("B"),
                to_flux_t = i.n("B2"),
            );
            Figures::of("Pe2_W", e.n("eddy_loss_w")).into()
        }
        "T4-C57.110-example" => {
            let h = work!(
                "harmonic-factor",
                harmonic_order = i.list("h"),
                harmonic_current_pu = i.list("Ih_over_I"),
                eddy_pu = i.n("PEC_R_pu"),
            );
            Figures::of("FHL", h.n("harmonic_loss_factor"))
                .and("Imax_pu", h.n("permissible_current_pu"))
                .into()
        }
        "T4-loadloss-temp" => {
            let at = |more: (&'static str, Arg)| {
                let inputs = vec![
                    ("load_loss_w", i.n("P_meas_W").into()),
                    ("resistive_loss_w", i.n("I2R_meas_W").into()),
                    ("test_temp_c", i.n("t_meas_C").into()),
                    ("reference_temp_c", i.n("t_ref_C").into()),
                    more,
                ];
                worked("load-loss-temperature", inputs).n("load_loss_w")
            };
            let copper = at(("winding_metal", "copper".into()));
            not_the_wrong_one(id, copper, 1414.4);
            Figures::of("Cu_total_W", copper)
                .and("Al_total_W", at(("winding_metal", "aluminium".into())))
                .and("Cu_T0_234_5_W", at(("vanishing_temp_c", 234.5.into())))
                .tighter("Cu_total_W", 1e-8)
                .into()
        }
        "T4-noload-waveform" => {
            let (mean, rms) = (i.n("U_mean_volt"), i.n("U_rms"));
            let p = work!(
                "no-load-correction",
                measured_w = i.n("Pm_W"),
                mean_voltage_v = mean,
                rms_voltage_v = rms
            );
            Figures::of("P0_W", p.n("no_load_loss_w"))
                .and("d", p.n("no_load_loss_w") / i.n("Pm_W") - 1.0)
                .into()
        }
        "T4-noload-waveform-IEEE" => {
            let p = work!(
                "no-load-correction",
                measured_w = i.n("Pm_W"),
                form = "ieee",
                mean_voltage_v = i.n("Ea_V"),
                rms_voltage_v = i.n("Er_V"),
                hysteresis_pu = i.n("P1"),
                eddy_pu = i.n("P2"),
            );
            Figures::of("P0_W", p.n("no_load_loss_w")).into()
        }
        "T4-noload-temp-DOE" => {
            let p = work!(
                "no-load-correction",
                measured_w = i.n("Pm_W"),
                test_temp_c = i.n("Tm_C"),
                reference_temp_c = i.n("Tr_C"),
            );
            Figures::of("P_W", p.n("no_load_loss_w")).into()
        }
        _ => panic!("{id} has no handler: add one"),
    }
}
