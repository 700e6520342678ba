//! Calculations of losses: efficiency, all-day efficiency, core split, harmonics, Peak Efficiency Index.

use super::input::{Input, KVA, LOAD_PU, LOSS_W, List, PERCENT, SHARE, calc};
use super::{Calc, result};
use crate::engine::Refusal;
use crate::engine::transformer::core_loss::{self, CoreLoss};
use crate::engine::transformer::efficiency::{self, LoadStep};
use crate::engine::transformer::efficiency_index::{IndexLosses, peak_efficiency_index};
use crate::engine::transformer::harmonics::{self, Harmonic, LoadLossParts};
use crate::engine::transformer::losses::{Losses, at_current};
use crate::engine::transformer::plausibility::lamination;

pub(super) const CALCS: &[Calc] = &[
    EFFICIENCY,
    ALL_DAY,
    CORE_SPLIT,
    CORE_LOSS_AT,
    EDDY_LOSS,
    HARMONIC_FACTOR,
    PEAK_EFFICIENCY_INDEX,
];

calc! {
    EFFICIENCY = "efficiency",
    "efficiency at a load, and the load at which it is best",
    "definition; methods, section 2";
    {
        rated_kva: f64, KVA.required(), "rated power";
        no_load_loss_w: f64, LOSS_W.required(), "no-load (iron) loss";
        load_loss_w: f64, LOSS_W.required(), "load (copper) loss at rated load";
        load_pu: f64, LOAD_PU.default("1"), "load over the rating";
        power_factor: f64, SHARE.default("1"), "power factor of the load";
    }
    |i, w| {
        let losses = Losses {
            rated_kva: i.rated_kva,
            no_load_loss_w: i.no_load_loss_w,
            load_loss_w: i.load_loss_w,
            auxiliary_loss_w: 0.0,
            reactance_pu: None,
        };
        let lost = at_current(w, &losses, 1.0, i.load_pu);
        let eta = efficiency::at_load(w, &losses, i.load_pu, i.power_factor)?;
        let best = efficiency::best_load(w, &losses)?;
        let out = result("efficiency_pct", 100.0 * eta)
            .and("loss_w", lost)
            .and("best_load_pu", best)
            .and("best_load_kva", best * i.rated_kva);
        if best == 0.0 {
            return Ok(out.and("best_efficiency_pct", None));
        }
        let top = efficiency::at_load(w, &losses, best, i.power_factor)?;
        Ok(out.and("best_efficiency_pct", 100.0 * top))
    }
}

calc! {
    ALL_DAY = "all-day-efficiency",
    "efficiency by energy over a day of load steps; copper by kVA, iron in all energised hours",
    "methods, section 2; Theraja Ex 32.78";
    {
        rated_kva: f64, KVA.required(), "rated power";
        no_load_loss_w: Option<f64>, LOSS_W, "no-load (iron) loss";
        load_loss_w: Option<f64>, LOSS_W, "load (copper) loss at rated load";
        best_efficiency_pct: Option<f64>, PERCENT, "best efficiency, instead of both losses";
        best_load_pu: f64, LOAD_PU.default("1"), "load at which the best efficiency is reached";
        best_power_factor: f64, SHARE.default("1"), "power factor at which the best efficiency is stated";
        load_kw: List<f64>, Input::real(0.0, 1e9).list().required(), "active power of each step";
        power_factor: List<f64>, SHARE.list().default("1"), "power factor of each step, or one for all";
        hours: List<f64>, Input::real(0.0, 1e5).list().required(), "hours of each step, or one for all";
        energised_hours: f64, Input::above(0.0, 1e5).default("24"), "hours under voltage, idle ones included";
    }
    |i, w| {
        let losses = match (i.no_load_loss_w, i.load_loss_w, i.best_efficiency_pct) {
            (Some(no_load_loss_w), Some(load_loss_w), None) => Losses {
                rated_kva: i.rated_kva,
                no_load_loss_w,
                load_loss_w,
                auxiliary_loss_w: 0.0,
                reactance_pu: None,
            },
            (None, None, Some(best)) => {
                let pf = i.best_power_factor;
                efficiency::losses_of_best(w, i.rated_kva, best / 100.0, i.best_load_pu, pf)?
            }
            _ => {
                let why = "give no_load_loss_w and load_loss_w, or best_efficiency_pct instead of both";
                return Err(Refusal::new("no_load_loss_w", "", why));
            }
        };
        let n = i.load_kw.len();
        let hours = i.hours.as_long_as("hours", n)?;
        let factors = i.power_factor.as_long_as("power_factor", n)?;
        let mut steps = Vec::with_capacity(n);
        for ((kw, pf), h) in i.load_kw.iter().zip(factors).zip(hours) {
            if *kw > 0.0 && pf == 0.0 {
                let why = "cannot be 0 in a step that delivers active power";
                return Err(Refusal::new("power_factor", pf, why));
            }
            let kva = if *kw > 0.0 { kw / pf } else { 0.0 };
            steps.push(LoadStep { kva, kw: *kw, hours: h });
        }
        let eta = efficiency::all_day(w, &losses, &steps, i.energised_hours)?;
        let e = efficiency::energies(
            &mut crate::engine::working::Silent, &losses, &steps, i.energised_hours,
        )?;
        Ok(result("all_day_efficiency_pct", 100.0 * eta)
            .and("output_kwh", e.output_kwh)
            .and("no_load_energy_kwh", e.no_load_kwh)
            .and("load_energy_kwh", e.load_kwh)
            .and("no_load_loss_w", losses.no_load_loss_w)
            .and("load_loss_w", losses.load_loss_w))
    }
}

calc! {
    CORE_SPLIT = "core-split",
    "hysteresis and eddy part of a core loss measured at several frequencies and constant V/f",
    "P/f = a + b·f; Theraja Ex 32.29; methods, section 2";
    {
        frequency_hz: List<f64>, Input::above(0.0, 1e5).list().required(), "frequencies of the tests, at least two";
        core_loss_w: List<f64>, Input::above(0.0, 1e9).list().required(), "core loss at each frequency";
        at_frequency_hz: Option<f64>, Input::above(0.0, 1e5).blank("the first"), "frequency at which the parts are stated";
    }
    |i, w| {
        let losses = i.core_loss_w.as_long_as("core_loss_w", i.frequency_hz.len())?;
        let tests: Vec<(f64, f64)> = i.frequency_hz.iter().copied().zip(losses).collect();
        let split = core_loss::split(w, &tests)?;
        let at = core_loss::at_frequency(w, split, i.at_frequency_hz.unwrap_or(tests[0].0));
        Ok(result("hysteresis_w", at.hysteresis_w)
            .and("eddy_w", at.eddy_w)
            .and("core_loss_w", at.total_w())
            .and("hysteresis_per_hz", split.hysteresis_per_hz)
            .and("eddy_per_hz2", split.eddy_per_hz2))
    }
}

calc! {
    CORE_LOSS_AT = "core-loss-at",
    "core loss at another voltage and frequency",
    "Steinmetz; Hubert Ex 2.12; methods, section 2";
    {
        core_loss_w: f64, LOSS_W.required(), "core loss as measured";
        hysteresis_share_pu: f64, SHARE.required(), "hysteresis part of it";
        from_voltage_v: f64, Input::above(0.0, 1.2e6).required(), "voltage of the measurement";
        to_voltage_v: f64, Input::above(0.0, 1.2e6).required(), "new voltage";
        from_frequency_hz: f64, Input::above(0.0, 1e5).required(), "frequency of the measurement";
        to_frequency_hz: f64, Input::above(0.0, 1e5).required(), "new frequency";
        exponent: f64, Input::real(1.0, 4.0).default("1.6"), "exponent of flux density in hysteresis (Steinmetz 1.6)";
    }
    |i, w| {
        let measured = CoreLoss {
            hysteresis_w: i.core_loss_w * i.hysteresis_share_pu,
            eddy_w: i.core_loss_w * (1.0 - i.hysteresis_share_pu),
        };
        let (v, f) = (i.to_voltage_v / i.from_voltage_v, i.to_frequency_hz / i.from_frequency_hz);
        let new = core_loss::at_voltage_and_frequency(w, measured, v, f, i.exponent)?;
        Ok(result("core_loss_w", new.total_w())
            .and("hysteresis_w", new.hysteresis_w)
            .and("eddy_w", new.eddy_w)
            .and("flux_ratio", v / f))
    }
}

calc! {
    EDDY_LOSS = "eddy-loss",
    "eddy-current loss for another sheet thickness, frequency or flux density",
    "Dorf handbook eq. 64.1; methods, section 2";
    {
        eddy_loss_w: f64, LOSS_W.required(), "eddy-current loss as known";
        from_thickness_mm: f64, Input::above(0.0, 100.0).default("1"), "known sheet thickness; leave both out where it stays";
        to_thickness_mm: f64, Input::above(0.0, 100.0).default("1"), "new sheet thickness";
        from_frequency_hz: f64, Input::above(0.0, 1e5).default("1"), "known frequency; leave both out where it stays";
        to_frequency_hz: f64, Input::above(0.0, 1e5).default("1"), "new frequency";
        from_flux_t: f64, Input::above(0.0, 5.0).default("1"), "known flux density; leave both out where it stays";
        to_flux_t: f64, Input::above(0.0, 5.0).default("1"), "new flux density";
    }
    |i, w| {
        let f = i.to_frequency_hz / i.from_frequency_hz;
        let (b, t) = (i.to_flux_t / i.from_flux_t, i.to_thickness_mm / i.from_thickness_mm);
        let sheets = [i.from_thickness_mm, i.to_thickness_mm];
        let doubts: Vec<String> =
            sheets.into_iter().filter_map(lamination).map(|doubt| doubt.to_string()).collect();
        Ok(result("eddy_loss_w", core_loss::eddy_at(w, i.eddy_loss_w, f, b, t))
            .and("doubts", doubts))
    }
}

calc! {
    HARMONIC_FACTOR = "harmonic-factor",
    "harmonic loss factor and the current that may then flow",
    "IEEE C57.110 (memory)";
    {
        harmonic_order: List<f64>, Input::real(1.0, 1000.0).list().required(), "orders, 1 for the fundamental";
        harmonic_current_pu: List<f64>, Input::real(0.0, 1e6).list().required(), "current of each order, at any common scale";
        eddy_pu: Option<f64>, Input::real(0.0, 10.0).blank("no permissible current"), "winding eddy loss at rated current per unit of I²R";
        other_stray_pu: f64, Input::real(0.0, 10.0).default("0"), "other stray loss at rated current per unit of I²R (0 for dry-type)";
    }
    |i, w| {
        let n = i.harmonic_order.len();
        if i.harmonic_current_pu.len() != n {
            let why = format!("has {} values beside {n} orders; give one for each", i.harmonic_current_pu.len());
            return Err(Refusal::new("harmonic_current_pu", "", why));
        }
        let pair = |(order, current): (&f64, &f64)| Harmonic { order: *order, current: *current };
        let all: Vec<Harmonic> =
            i.harmonic_order.iter().zip(i.harmonic_current_pu.iter()).map(pair).collect();
        let (eddy, stray) = harmonics::loss_factors(w, &all)?;
        let out = result("harmonic_loss_factor", eddy).and("stray_loss_factor", stray);
        let Some(eddy_pu) = i.eddy_pu else { return Ok(out) };
        let parts = LoadLossParts { eddy_pu, other_stray_pu: i.other_stray_pu };
        let current = harmonics::permissible_current(w, parts, eddy, stray)?;
        Ok(out.and("permissible_current_pu", current))
    }
}

calc! {
    PEAK_EFFICIENCY_INDEX = "peak-efficiency-index",
    "Peak Efficiency Index of the EU regulation and the load at which it is reached",
    "Regulation (EU) 548/2014 Annex II as amended by 2019/1783 (formula from memory)";
    {
        rated_kva: f64, KVA.required(), "rated power on which the load loss is based";
        no_load_loss_w: f64, LOSS_W.required(), "no-load loss, P0";
        no_load_cooling_w: f64, LOSS_W.default("0"), "cooling power at no load, Pc0 (zero for ONAN and ONAN/ONAF)";
        load_cooling_w: f64, LOSS_W.default("0"), "further cooling power at the load of the index, Pck (zero for ONAN)";
        load_loss_w: f64, LOSS_W.required(), "load loss at reference temperature, Pk";
    }
    |i, w| {
        let losses = IndexLosses {
            rated_kva: i.rated_kva,
            no_load_loss_w: i.no_load_loss_w,
            no_load_cooling_w: i.no_load_cooling_w,
            load_cooling_w: i.load_cooling_w,
            load_loss_w: i.load_loss_w,
        };
        let (pei, k) = peak_efficiency_index(w, &losses)?;
        Ok(result("peak_efficiency_index_pct", 100.0 * pei).and("load_at_index_pu", k))
    }
}
