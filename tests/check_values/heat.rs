//! Check values T5: top oil, hot spot, ageing.

use crate::harness::{Answers, Arg, Figures, In, Outcome, work, worked};

/// Inputs of `hot-spot` that the examples of IEC 60076-7 share.
fn thermal(i: &In) -> Vec<(&'static str, Arg)> {
    let mut inputs = Vec::new();
    let names = [
        ("dtheta_or_K", "top_oil_rise_k"),
        ("gr_K", "gradient_k"),
        ("dtheta_hr_K", "gradient_k"),
        ("H", "hot_spot_factor"),
        ("R", "loss_ratio"),
        ("x", "oil_exponent"),
        ("y", "winding_exponent"),
        ("k11", "k11"),
        ("k21", "k21"),
        ("k22", "k22"),
        ("tau_o_min", "oil_minutes"),
        ("tau_w_min", "winding_minutes"),
    ];
    for (theirs, ours) in names {
        if let Some(value) = i.0[theirs].as_f64() {
            inputs.push((ours, value.into()));
        }
        // Where the rated hot-spot rise is given whole, it is H·gr.
        if theirs == "dtheta_hr_K" && !i.0[theirs].is_null() {
            inputs.push(("hot_spot_factor", 1.0.into()));
        }
    }
    inputs
}

pub(crate) fn heat(id: &str, i: &In) -> Outcome {
    match id {
        "T5-IEC60076-7-AnnexI-initial" => {
            let mut inputs = thermal(i);
            inputs.extend([("load_pu", i.n("K").into()), ("ambient_c", i.n("amb_C").into())]);
            let s = worked("hot-spot", inputs);
            Figures::of("theta_o0_C", s.l("top_oil_c")[0])
                .and("dtheta_h1_K", s.l("gradient_1_k")[0])
                .and("dtheta_h2_K", s.l("gradient_2_k")[0])
                .into()
        }
        "T5-IEC60076-7-AnnexI-Euler" => {
            let (k, ambient) = (i.list("K"), i.list("ambient_C"));
            let mut start = thermal(i);
            start.extend([("load_pu", k[0].into()), ("ambient_c", ambient[0].into())]);
            let start = worked("hot-spot", start);
            let mut run = thermal(i);
            run.extend([
                ("load_pu", k[1..].to_vec().into()),
                ("ambient_c", ambient[1..].to_vec().into()),
                ("initial_load_pu", k[0].into()),
                ("initial_ambient_c", ambient[0].into()),
                ("minutes", i.n("dt_min").into()),
                ("scheme", "euler".into()),
                ("paper", "upgraded".into()),
            ]);
            let run = worked("hot-spot", run);
            let minutes = [0.0, 3.0, 6.0, 30.0, 60.0, 90.0, 120.0];
            let at = |name: &str| -> Vec<f64> {
                let all = [start.l(name), run.l(name)].concat();
                let row = |m: &f64| (m / i.n("dt_min")).round();
                #[expect(
                    clippy::cast_possible_truncation,
                    clippy::cast_sign_loss,
                    reason = "small"
                )]
                minutes.iter().map(|m| all[row(m) as usize]).collect()
            };
            let life_min = 60.0 * run.n("life_used_hours");
            Figures::default()
                .list("minutes", &minutes)
                .list("top_oil_C", &at("top_oil_c"))
                .list("hot_spot_C", &at("hot_spot_c"))
                .and("max_hot_spot_C", run.n("hottest_hot_spot_c"))
                .and("ageing_TUP_min", life_min)
                .and("ageing_TUP_days", life_min / 1440.0)
                .into()
        }
        "T5-IEC60076-7-AnnexH-steps" => {
            let ends = i.list("end_min");
            let minutes: Vec<f64> = ends
                .iter()
                .scan(0.0, |from, end| Some(end - std::mem::replace(from, *end)))
                .collect();
            let mut run = thermal(i);
            run.extend([
                ("load_pu", i.list("K").into()),
                ("ambient_c", i.n("ambient_C").into()),
                ("minutes", minutes.into()),
                ("initial_top_oil_c", (i.n("ambient_C") + i.n("initial_top_oil_rise_K")).into()),
            ]);
            let run = worked("hot-spot", run);
            let (oil, hot) = (run.l("top_oil_c"), run.l("hot_spot_c"));
            // The note: 0.1 K but for the step that ends at 500 min, where the text is 1.1 K off.
            for (n, end) in ends.iter().enumerate() {
                let limit = if *end == 500.0 { 1.1 } else { 0.1 };
                let expected = [61.9, 44.4, 89.2, 35.0, 67.9, 60.3][n];
                assert!((oil[n] - expected).abs() < limit, "{end} min: {} {expected}", oil[n]);
                let expected = [83.8, 54.0, 127.0, 37.54, 138.6, 75.3][n];
                assert!((hot[n] - expected).abs() < limit, "{end} min: {} {expected}", hot[n]);
            }
            Figures::default().list("top_oil_C", &oil).list("hot_spot_C", &hot).into()
        }
        "T5-ttm-steady-distribution" | "T5-ttm-steady-power" => {
            let mut inputs = thermal(i);
            let mode = if id.ends_with("power") { "onaf" } else { "distribution-onan" };
            inputs.extend([
                ("load_pu", i.list("K").into()),
                ("ambient_c", i.n("ambient_C").into()),
                ("cooling_mode", mode.into()),
            ]);
            let s = worked("hot-spot", inputs);
            Figures::default()
                .list("top_oil_C", &s.l("top_oil_c"))
                .list("hot_spot_C", &s.l("hot_spot_c"))
                .into()
        }
        "T5-IEC-V-table" => {
            let at = |paper: &'static str| {
                work!("ageing", hot_spot_c = i.list("theta_h_C"), paper = paper).l("ageing_rate")
            };
            Figures::default()
                .list("V_nonupgraded", &at("normal"))
                .list("V_upgraded", &at("upgraded"))
                .into()
        }
        "T5-ttm-ageing-100C" => {
            let at = |paper: &'static str| {
                let hours = 24.0 * i.n("days");
                let a =
                    work!("ageing", hot_spot_c = i.n("theta_h_C"), hours = hours, paper = paper);
                a.n("life_used_hours") / hours
            };
            Figures::of("V_normal", at("normal")).and("V_TUP", at("upgraded")).into()
        }
        "T5-FAA-table" => {
            let a = work!("ageing", hot_spot_c = i.list("theta_h_C"));
            Figures::default().list("FAA", &a.l("acceleration_factor")).into()
        }
        "T5-per-unit-life" => {
            let a = work!(
                "ageing",
                hot_spot_c = i.n("theta_h_C"),
                normal_life_hours = i.n("normal_life_h")
            );
            Figures::of("pu_life_110", a.l("per_unit_life_pu")[0])
                .and("life_years", a.l("insulation_life_years")[0])
                .into()
        }
        "T5-FEQA" => {
            let a = work!("ageing", hot_spot_c = i.list("hot_spot_C_hourly"));
            Figures::of("FEQA", a.n("equivalent_factor"))
                .and("LOL_pct_per_day", a.n("life_lost_pct"))
                .into()
        }
        _ => panic!("{id} has no handler: add one"),
    }
}
