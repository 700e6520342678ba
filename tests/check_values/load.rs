//! Check values T2: load and loss factor, diversity, growth.

use crate::harness::{Answers, Figures, In, Outcome, work};

pub(crate) fn load(id: &str, i: &In) -> Outcome {
    match id {
        "T2-Gonen-2.2" => {
            let l = work!(
                "loss-factor",
                loss_factor_pu = i.n("loss_factor"),
                peak_loss_kw = i.n("peak_loss_kW")
            );
            Figures::of("avg_loss_kW", l.n("mean_loss_kw"))
                .and("annual_kWh", l.n("loss_energy_kwh"))
                .into()
        }
        "T2-Gonen-2.7-2.8" => {
            let l = work!(
                "load-factor",
                energy_kwh = i.n("annual_energy_kWh"),
                peak_kw = i.n("peak_kW"),
                added_kw = i.n("added_flat_load_kW"),
                capacity_per_kw_month = i.n("capacity_cost_per_kW_month"),
                energy_price_per_kwh = i.n("energy_cost_per_kWh"),
            );
            Figures::of("avg_kW", l.n("mean_kw"))
                .and("LF", l.n("load_factor_pu"))
                .and("LF_new", l.n("load_factor_with_added_pu"))
                .and("added_annual_cost", l.n("added_cost_per_year"))
                .into()
        }
        "T2-Gonen-2.5-2.6" => {
            let one = work!(
                "diversity",
                peak_kw = i.list("peaks_kW"),
                system_peak_kw = i.n("system_peak_kW")
            );
            let two = work!(
                "diversity",
                peak_kw = i.list("class_peaks_kW"),
                at_peak_kw = i.list("class_at_peak_kW")
            );
            Figures::of("diversity", one.n("diversity_factor"))
                .and("coincidence", one.n("coincidence_factor"))
                .and("diversity2", two.n("diversity_factor"))
                .and("coincidence2", two.n("coincidence_factor"))
                .into()
        }
        "T2-LLF-0.65" | "T2-k0.08" | "T2-k0.15" | "T2-k0.2" | "T2-k0.3" => {
            let l =
                work!("loss-factor", load_factor_pu = i.n("LF"), loss_factor_weight_pu = i.n("k"));
            Figures::of("loss_factor", l.n("loss_factor_pu")).into()
        }
        "T2-exact-two-level" => {
            let l = work!("loss-factor", load = i.list("load_pu"), hours = i.list("hours"));
            Figures::of("LF", l.n("load_factor_pu"))
                .and("loss_factor", l.n("loss_factor_pu"))
                .and("rms_over_peak", l.n("rms_over_peak_pu"))
                .and("implied_k", l.n("implied_weight_pu"))
                .into()
        }
        "T2-equiv-peak-compound" | "T2-equiv-peak-linear" => {
            let compound = id.ends_with("compound");
            let growth = i.n(if compound { "growth" } else { "growth_of_initial" });
            let p = work!(
                "equivalent-peak",
                first_peak_pu = i.n("first_year_peak_pu"),
                load_growth_pct = 100.0 * growth,
                growth = if compound { "compound" } else { "linear" },
                years = i.n("years"),
                discount_rate_pct = 100.0 * i.n("discount_rate"),
            );
            Figures::of("PL_equiv_pu", p.n("equivalent_peak_pu")).into()
        }
        "T2-growth-doubling" => {
            let g = work!("growth-rate", doubling_years = i.n("doubling_years"));
            Figures::of("growth_percent", g.n("growth_pct")).into()
        }
        _ => panic!("{id} has no handler: add one"),
    }
}
