//! Calculations of the nameplate: from tests, corrections of measured losses, per unit, from winding to winding.

use super::input::{Input, KV, KVA, LOSS_W, SHARE, TEMPERATURE_C, calc};
use super::{Calc, result};
use crate::engine::Refusal;
use crate::engine::columns::{Side, TestReport, WindingMetal};
use crate::engine::transformer::circuit::{self, Base, Carried};
use crate::engine::transformer::nameplate::{self, Phases};
use crate::engine::transformer::plausibility;
use crate::engine::transformer::temperature::{
    load_loss_at, load_loss_at_reference, vanishing_temp_c,
};
use crate::engine::transformer::test_report::{self, Plate};

pub(super) const CALCS: &[Calc] = &[
    TESTS_TO_NAMEPLATE,
    NO_LOAD_CORRECTION,
    LOAD_LOSS_TEMPERATURE,
    BASE_IMPEDANCE,
    BASE_CHANGE,
    TRANSFER,
];

calc! {
    TESTS_TO_NAMEPLATE = "tests-to-nameplate",
    "losses, impedance and circuit from open-circuit and short-circuit tests",
    "textbook tests; IEC 60076-1 (memory) for temperature; methods, section 1";
    {
        rated_kva: f64, KVA.required(), "rated power";
        phases: i64, Input::integer_of(&[1, 3]).default("3"), "number of phases";
        hv_kv: Option<f64>, KV, "rated voltage of the high-voltage winding";
        lv_kv: Option<f64>, KV, "rated voltage of the low-voltage winding";
        vector_group: Option<String>, Input::text(), "vector group";
        open_circuit_voltage_v: Option<f64>, Input::above(0.0, 1.2e6), "voltage of the open-circuit test, between lines if three-phase";
        open_circuit_current_a: Option<f64>, Input::above(0.0, 1e6), "current of the open-circuit test";
        open_circuit_power_w: Option<f64>, Input::above(0.0, 1e9), "power of the open-circuit test";
        open_circuit_side: Side, Input::choice(Side::WORDS).default("lv"), "winding fed in the open-circuit test";
        short_circuit_voltage_v: Option<f64>, Input::above(0.0, 1.2e6), "voltage of the short-circuit test, between lines if three-phase";
        short_circuit_current_a: Option<f64>, Input::above(0.0, 1e6), "current of the short-circuit test";
        short_circuit_power_w: Option<f64>, Input::above(0.0, 1e9), "power of the short-circuit test";
        short_circuit_side: Side, Input::choice(Side::WORDS).default("hv"), "winding fed in the short-circuit test";
        test_temp_c: Option<f64>, TEMPERATURE_C.blank("already corrected"), "winding temperature of the short-circuit test";
        reference_temp_c: f64, TEMPERATURE_C.default("75"), "reference temperature of the load loss";
        winding_metal: WindingMetal, Input::choice(WindingMetal::WORDS).default("copper"), "winding metal";
        hv_resistance_ohm: Option<f64>, Input::above(0.0, 1e6), "resistance of the high-voltage winding (mean between lines if three-phase)";
        lv_resistance_ohm: Option<f64>, Input::above(0.0, 1e6), "resistance of the low-voltage winding (mean between lines if three-phase)";
        resistance_temp_c: Option<f64>, TEMPERATURE_C.blank("test_temp_c"), "winding temperature of the resistance measurement";
        stray_share_pu: f64, SHARE.default("0"), "stray part of the load loss at reference temperature where no resistances are given";
    }
    |i, w| {
        let plate = Plate {
            rated_kva: i.rated_kva,
            phases: Phases::of(i.phases)?,
            hv_kv: i.hv_kv,
            lv_kv: i.lv_kv,
            vector_group: i.vector_group.as_deref(),
            winding_metal: i.winding_metal,
            reference_temp_c: i.reference_temp_c,
            stray_share_pu: i.stray_share_pu,
        };
        let report = TestReport {
            unit: String::new(),
            open_circuit_voltage_v: i.open_circuit_voltage_v,
            open_circuit_current_a: i.open_circuit_current_a,
            open_circuit_power_w: i.open_circuit_power_w,
            short_circuit_voltage_v: i.short_circuit_voltage_v,
            short_circuit_current_a: i.short_circuit_current_a,
            short_circuit_power_w: i.short_circuit_power_w,
            hv_resistance_ohm: i.hv_resistance_ohm,
            lv_resistance_ohm: i.lv_resistance_ohm,
            resistance_temp_c: i.resistance_temp_c,
            test_temp_c: i.test_temp_c,
            open_circuit_side: Some(i.open_circuit_side),
            short_circuit_side: Some(i.short_circuit_side),
            tested_on: None,
        };
        let tested = test_report::read(w, &plate, &report)?;
        let mut out = super::Results::default();
        if let Some(iron) = tested.open {
            out = out
                .and("no_load_loss_w", iron.no_load_loss_w)
                .and("no_load_current_pct", tested.no_load_current_pct)
                .and("working_current_a", iron.working_current_a)
                .and("magnetising_current_a", iron.magnetising_current_a)
                .and("core_resistance_ohm", iron.core_resistance_ohm)
                .and("magnetising_reactance_ohm", iron.magnetising_reactance_ohm);
        }
        let Some(copper) = tested.short else { return Ok(out) };
        out = out
            .and("load_loss_w", copper.corrected.load_loss_w)
            .and("impedance_pct", copper.impedance_pct)
            .and("r_pu", copper.circuit.r_pu)
            .and("x_pu", copper.circuit.x_pu)
            .and("z_pu", copper.circuit.z_pu())
            .and("impedance_voltage_v", copper.test.impedance_voltage_v)
            .and("test_load_loss_w", copper.test.load_loss_w)
            .and("series_impedance_ohm", copper.test.impedance_ohm)
            .and("series_resistance_ohm", copper.test.resistance_ohm)
            .and("series_reactance_ohm", copper.test.reactance_ohm)
            .and("resistive_loss_w", copper.corrected.resistive_loss_w)
            .and("stray_loss_w", copper.corrected.stray_loss_w);
        let iron_w = tested.open.map(|iron| iron.no_load_loss_w);
        if let Some([ohm, lost, core]) = tested.open_circuit_copper {
            out = out
                .and("resistance_at_open_circuit_side_ohm", ohm)
                .and("open_circuit_copper_w", lost)
                .and("core_loss_w", core);
        }
        let (impedance, load) = (Some(copper.impedance_pct), Some(copper.corrected.load_loss_w));
        let doubts = plausibility::nameplate(i.rated_kva, impedance, iron_w, load);
        let doubts: Vec<String> = doubts.iter().map(ToString::to_string).collect();
        Ok(out.and("doubts", doubts))
    }
}

calc! {
    NO_LOAD_CORRECTION = "no-load-correction",
    "measured no-load loss corrected for the waveform and, by US practice, for temperature",
    "IEC 60076-1 11.5; IEEE C57.12.90 8.3; 10 CFR 431 subpart K appendix A (all memory)";
    {
        measured_w: f64, LOSS_W.required(), "measured no-load loss";
        mean_voltage_v: Option<f64>, Input::above(0.0, 1.2e6), "reading of the mean-value voltmeter (scaled to rms), at which the test is set";
        rms_voltage_v: Option<f64>, Input::above(0.0, 1.2e6), "reading of the rms voltmeter";
        form: String, Input::choice(&["iec", "ieee"]).default("iec"), "standard whose waveform correction is used";
        hysteresis_pu: f64, SHARE.default("0.5"), "hysteresis part of the loss (ieee)";
        eddy_pu: f64, SHARE.default("0.5"), "eddy part of the loss (ieee)";
        test_temp_c: Option<f64>, TEMPERATURE_C.blank("no temperature correction"), "oil temperature of the test";
        reference_temp_c: f64, TEMPERATURE_C.default("20"), "reference temperature of the no-load loss";
    }
    |i, w| {
        let mut loss = i.measured_w;
        match (i.mean_voltage_v, i.rms_voltage_v) {
            (Some(mean), Some(rms)) if i.form == "ieee" => {
                loss = nameplate::waveform_ieee(w, loss, mean, rms, i.hysteresis_pu, i.eddy_pu)?;
            }
            (Some(mean), Some(rms)) => loss = nameplate::waveform_iec(w, loss, mean, rms)?,
            (None, None) => {}
            _ => {
                let why = "the waveform correction needs both readings, mean_voltage_v and rms_voltage_v";
                return Err(Refusal::new("rms_voltage_v", "", why));
            }
        }
        if let Some(test) = i.test_temp_c {
            loss = nameplate::no_load_temperature(w, loss, test, i.reference_temp_c);
        }
        Ok(result("no_load_loss_w", loss))
    }
}

calc! {
    LOAD_LOSS_TEMPERATURE = "load-loss-temperature",
    "load loss brought from test to reference temperature: I²R rises, stray falls",
    "IEC 60076-1 Annex E, IEEE C57.12.90 (memory)";
    {
        load_loss_w: f64, LOSS_W.required(), "load loss at test temperature";
        resistive_loss_w: Option<f64>, LOSS_W.blank("from stray_share_pu"), "its I²R part at test temperature";
        stray_share_pu: f64, SHARE.default("0"), "stray part of the load loss at reference temperature, where resistive_loss_w is unknown";
        test_temp_c: f64, TEMPERATURE_C.required(), "winding temperature of the test";
        reference_temp_c: f64, TEMPERATURE_C.default("75"), "reference temperature";
        winding_metal: WindingMetal, Input::choice(WindingMetal::WORDS).default("copper"), "winding metal";
        vanishing_temp_c: Option<f64>, Input::above(0.0, 500.0).blank("235 copper, 225 aluminium, 230 mixed; US practice 234.5 for copper"), "temperature at which the resistance would vanish, negated";
    }
    |i, w| {
        let t0 = i.vanishing_temp_c.unwrap_or(vanishing_temp_c(i.winding_metal));
        if t0 + i.test_temp_c <= 0.0 || t0 + i.reference_temp_c <= 0.0 {
            let why = "is below the temperature at which the resistance vanishes; check both temperatures";
            return Err(Refusal::new("test_temp_c", i.test_temp_c, why));
        }
        let Some(resistive) = i.resistive_loss_w else {
            let (from, to) = (i.test_temp_c, i.reference_temp_c);
            let loss = load_loss_at_reference(w, i.load_loss_w, i.stray_share_pu, t0, from, to);
            return Ok(result("load_loss_w", loss)
                .and("stray_loss_w", i.stray_share_pu * loss));
        };
        if resistive > i.load_loss_w {
            let why = format!(
                "is more than the load loss of {} W, so stray loss would be negative: the report contradicts itself; check resistances and temperatures",
                i.load_loss_w
            );
            return Err(Refusal::new("resistive_loss_w", resistive, why));
        }
        let stray = i.load_loss_w - resistive;
        let loss = load_loss_at(w, resistive, stray, t0, i.test_temp_c, i.reference_temp_c);
        let x = (t0 + i.reference_temp_c) / (t0 + i.test_temp_c);
        Ok(result("load_loss_w", loss)
            .and("resistive_loss_w", resistive * x)
            .and("stray_loss_w", stray / x))
    }
}

calc! {
    BASE_IMPEDANCE = "base-impedance",
    "base impedance of a voltage and a power, and ohms as per unit of it",
    "definition V²/S";
    {
        base_kv: f64, KV.required(), "base voltage, between lines if three-phase";
        base_mva: f64, Input::above(0.0, 1e6).required(), "base power of all phases";
        impedance_ohm: Option<f64>, Input::real(-1e9, 1e9), "impedance, resistance or reactance to express per unit";
    }
    |i, w| {
        let base = circuit::base_impedance(w, i.base_kv, i.base_mva)?;
        Ok(result("base_impedance_ohm", base)
            .and("impedance_pu", i.impedance_ohm.map(|ohm| ohm / base)))
    }
}

calc! {
    BASE_CHANGE = "base-change",
    "per-unit impedance on another base",
    "definition of per unit; methods, section 1";
    {
        impedance_pu: f64, Input::real(-1e6, 1e6).required(), "impedance, resistance or reactance on the old base";
        from_mva: f64, Input::above(0.0, 1e6).required(), "old base power";
        to_mva: f64, Input::above(0.0, 1e6).required(), "new base power";
        from_kv: f64, KV.default("1"), "old base voltage; leave both out where it stays";
        to_kv: f64, KV.default("1"), "new base voltage";
    }
    |i, w| {
        let from = Base { mva: i.from_mva, kv: i.from_kv };
        let to = Base { mva: i.to_mva, kv: i.to_kv };
        Ok(result("impedance_pu", circuit::change_base(w, i.impedance_pu, from, to)?))
    }
}

calc! {
    TRANSFER = "transfer",
    "impedance, voltage and current carried from one winding to the other",
    "ideal transformer; methods, section 1";
    {
        from_kv: f64, Input::above(0.0, 1e9).required(), "rated voltage (or turns) of the winding that the values are of";
        to_kv: f64, Input::above(0.0, 1e9).required(), "rated voltage (or turns) of the other winding";
        impedance_ohm: Option<f64>, Input::real(-1e12, 1e12), "impedance, resistance or reactance";
        voltage_v: Option<f64>, Input::real(-1e9, 1e9), "voltage";
        current_a: Option<f64>, Input::real(-1e9, 1e9), "current";
    }
    |i, w| {
        let mut out = super::Results::default();
        if let Some(z) = i.impedance_ohm {
            let z = circuit::transfer(w, Carried::Impedance(z), i.from_kv, i.to_kv)?;
            out = out.and("impedance_ohm", z);
        }
        if let Some(v) = i.voltage_v {
            let v = circuit::transfer(w, Carried::Voltage(v), i.from_kv, i.to_kv)?;
            out = out.and("voltage_v", v);
        }
        if let Some(a) = i.current_a {
            let a = circuit::transfer(w, Carried::Current(a), i.from_kv, i.to_kv)?;
            out = out.and("current_a", a);
        }
        if out.0.is_empty() {
            let why = "give what is to be carried over: impedance_ohm, voltage_v or current_a";
            return Err(Refusal::new("impedance_ohm", "", why));
        }
        Ok(out)
    }
}
