//! Nameplate values from test reports: open circuit, short circuit scaled to rated current, resistances that
//! split the load loss, corrections for waveform and temperature (methods, section 1).

use super::circuit::{Circuit, R_PU, X_PU, positive, quadrature};
use super::temperature::{load_loss_at, load_loss_at_reference, vanishing_temp_c};
use crate::engine::Refusal;
use crate::engine::columns::WindingMetal;
use crate::engine::working::{Formula, Recorder};

/// Number of phases.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Phases {
    /// Single phase: voltages and currents of the winding.
    One,
    /// Three phase: voltages between lines, currents of the lines.
    Three,
}

impl Phases {
    /// One or three, from a column.
    ///
    /// # Errors
    /// Any other number.
    pub fn of(phases: i64) -> Result<Self, Refusal> {
        match phases {
            1 => Ok(Self::One),
            3 => Ok(Self::Three),
            _ => Err(Refusal::new("phases", phases, "is 1 or 3")),
        }
    }

    /// √3 between lines, else 1.
    pub(crate) fn root(self) -> f64 {
        if self == Self::Three { 3.0_f64.sqrt() } else { 1.0 }
    }

    /// Number of phases as a factor.
    pub(crate) fn count(self) -> f64 {
        if self == Self::Three { 3.0 } else { 1.0 }
    }
}

/// One winding test: what was fed and what was read.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Test {
    /// Voltage (V).
    pub voltage_v: f64,
    /// Current (A).
    pub current_a: f64,
    /// Power (W).
    pub power_w: f64,
}

impl Test {
    fn check(&self, names: [&'static str; 3]) -> Result<(), Refusal> {
        let why = "must be above zero; take it from the test report";
        positive(names[0], self.voltage_v, why)?;
        positive(names[1], self.current_a, why)?;
        positive(names[2], self.power_w, why)
    }
}

const RATED_CURRENT: Formula = Formula {
    name: "rated current of the winding that was fed",
    symbol: "I_r",
    formula: "1000·S_r/(m·V_r)",
    unit: "A",
    source: "definition; m is √3 for three phases, else 1",
};

/// Rated current of a winding of rated voltage `rated_v` (A).
///
/// # Errors
/// A rating or voltage that is not above zero.
pub fn rated_current<R: Recorder>(
    w: &mut R,
    phases: Phases,
    rated_kva: f64,
    rated_v: f64,
) -> Result<f64, Refusal> {
    positive("rated_kva", rated_kva, "must be above zero; take it from the nameplate")?;
    positive("rated_v", rated_v, "must be above zero; take it from the nameplate")?;
    let value = 1000.0 * rated_kva / (phases.root() * rated_v);
    let inputs = [("S_r", rated_kva), ("m", phases.root()), ("V_r", rated_v)];
    Ok(w.step(&RATED_CURRENT, &inputs, value))
}

/// What the open-circuit test says of the iron; values of the winding that was fed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct OpenCircuit {
    /// Loss at rated voltage, P0.
    pub no_load_loss_w: f64,
    /// Part of the current in phase with the voltage.
    pub working_current_a: f64,
    /// Part of the current across the voltage.
    pub magnetising_current_a: f64,
    /// Resistance that stands for the iron loss.
    pub core_resistance_ohm: f64,
    /// Magnetising reactance; none where all the current is working current.
    pub magnetising_reactance_ohm: Option<f64>,
}

const P0: Formula = Formula {
    name: "no-load loss",
    symbol: "P0",
    formula: "P",
    unit: "W",
    source: "power of the open-circuit test at rated voltage; methods, section 1",
};
const IW: Formula = Formula {
    name: "working part of the no-load current",
    symbol: "I_w",
    formula: "P0/(m·V)",
    unit: "A",
    source: "methods, section 1; m is √3 for three phases, else 1",
};
const IM: Formula = Formula {
    name: "magnetising part of the no-load current",
    symbol: "I_m",
    formula: "√(I0² − I_w²)",
    unit: "A",
    source: "methods, section 1",
};
const RC: Formula = Formula {
    name: "resistance that stands for the iron loss",
    symbol: "R_c",
    formula: "V²/P0",
    unit: "Ω",
    source: "methods, section 1",
};
const XM: Formula = Formula {
    name: "magnetising reactance",
    symbol: "X_m",
    formula: "V/(m·I_m)",
    unit: "Ω",
    source: "methods, section 1; m is √3 for three phases, else 1",
};

/// Farthest that an open-circuit test may be from rated voltage (pu). Common practice, no source.
const OPEN_CIRCUIT_VOLTAGE_PU: f64 = 0.02;

/// Evaluates an open-circuit test made at rated voltage; `rated_v` of the fed winding where it is known.
///
/// # Errors
/// Values that are not above zero, a voltage off the rated one, a current below its working part.
pub fn open_circuit<R: Recorder>(
    w: &mut R,
    phases: Phases,
    test: Test,
    rated_v: Option<f64>,
) -> Result<OpenCircuit, Refusal> {
    test.check(["open_circuit_voltage_v", "open_circuit_current_a", "open_circuit_power_w"])?;
    let (v, m) = (test.voltage_v, phases.root());
    if let Some(rated) = rated_v
        && (v / rated - 1.0).abs() > OPEN_CIRCUIT_VOLTAGE_PU
    {
        let why = format!(
            "is not the rated {rated} V of the winding that was fed; iron does not scale by a simple law, so the test is made at rated voltage: check open_circuit_side and the voltage"
        );
        return Err(Refusal::new("open_circuit_voltage_v", v, why));
    }
    w.step(&P0, &[("P", test.power_w)], test.power_w);
    let working = test.power_w / (m * v);
    w.step(&IW, &[("P0", test.power_w), ("m", m), ("V", v)], working);
    let current = test.current_a;
    let magnetising = quadrature("open_circuit_current_a", current, current, working)?;
    w.step(&IM, &[("I0", test.current_a), ("I_w", working)], magnetising);
    let core = w.step(&RC, &[("V", v), ("P0", test.power_w)], v * v / test.power_w);
    let reactance = (magnetising > 0.0).then(|| v / (m * magnetising));
    if let Some(x) = reactance {
        w.step(&XM, &[("V", v), ("m", m), ("I_m", magnetising)], x);
    }
    Ok(OpenCircuit {
        no_load_loss_w: test.power_w,
        working_current_a: working,
        magnetising_current_a: magnetising,
        core_resistance_ohm: core,
        magnetising_reactance_ohm: reactance,
    })
}

/// What the short-circuit test says of the windings at rated current and test temperature; ohms of the fed winding.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ShortCircuit {
    /// Load loss at rated current, Pk.
    pub load_loss_w: f64,
    /// Voltage that drives rated current, V_z.
    pub impedance_voltage_v: f64,
    /// Series impedance.
    pub impedance_ohm: f64,
    /// Series resistance.
    pub resistance_ohm: f64,
    /// Series reactance.
    pub reactance_ohm: f64,
    /// The same in per unit of the rating.
    pub circuit: Circuit,
}

const SCALED_LOSS: Formula = Formula {
    name: "load loss at rated current",
    symbol: "Pk",
    formula: "P·(I_r/I)²",
    unit: "W",
    source: "copper follows current squared; methods, section 1",
};
const SCALED_VOLTAGE: Formula = Formula {
    name: "impedance voltage at rated current",
    symbol: "V_z",
    formula: "V·(I_r/I)",
    unit: "V",
    source: "methods, section 1",
};
const Z_OHM: Formula = Formula {
    name: "series impedance",
    symbol: "Z_Ω",
    formula: "V/(m·I)",
    unit: "Ω",
    source: "methods, section 1; m is √3 for three phases, else 1",
};
const R_OHM: Formula = Formula {
    name: "series resistance",
    symbol: "R_Ω",
    formula: "P/(n·I²)",
    unit: "Ω",
    source: "methods, section 1; n phases",
};
const X_OHM: Formula = Formula {
    name: "series reactance",
    symbol: "X_Ω",
    formula: "√(Z_Ω² − R_Ω²)",
    unit: "Ω",
    source: "methods, section 1",
};
const Z_FROM_VOLTAGE: Formula = Formula {
    name: "series impedance per unit",
    symbol: "Z",
    formula: "V_z/V_r",
    unit: "pu",
    source: "methods, section 1",
};

/// Test currents that are believed, over rated current. Common practice, no source.
const SHORT_CIRCUIT_CURRENT_PU: std::ops::RangeInclusive<f64> = 0.1..=2.0;

/// Evaluates a short-circuit test, scaled to rated current first. `rated_v` is of the winding that was fed.
///
/// # Errors
/// Values that are not above zero, a current far from rated, more power than the volt-amperes carry.
pub fn short_circuit<R: Recorder>(
    w: &mut R,
    phases: Phases,
    test: Test,
    rated_kva: f64,
    rated_v: f64,
) -> Result<ShortCircuit, Refusal> {
    test.check(["short_circuit_voltage_v", "short_circuit_current_a", "short_circuit_power_w"])?;
    let rated = rated_current(w, phases, rated_kva, rated_v)?;
    let ratio = rated / test.current_a;
    if !SHORT_CIRCUIT_CURRENT_PU.contains(&(1.0 / ratio)) {
        let why = format!(
            "is far from the rated {rated:.4} A of the winding that was fed; check short_circuit_side, rated_kva and the current"
        );
        return Err(Refusal::new("short_circuit_current_a", test.current_a, why));
    }
    let (m, n, i) = (phases.root(), phases.count(), test.current_a);
    let currents = [("I_r", rated), ("I", i)];
    let loss = test.power_w * ratio * ratio;
    w.step(&SCALED_LOSS, &[("P", test.power_w), currents[0], currents[1]], loss);
    let voltage = test.voltage_v * ratio;
    w.step(&SCALED_VOLTAGE, &[("V", test.voltage_v), currents[0], currents[1]], voltage);
    let z = test.voltage_v / (m * i);
    let r = test.power_w / (n * i * i);
    if r > z {
        let why = format!(
            "is more than the {:.4} VA of the test: the report contradicts itself; check voltage, current, power and phases",
            m * test.voltage_v * i
        );
        return Err(Refusal::new("short_circuit_power_w", test.power_w, why));
    }
    let x = ((z - r) * (z + r)).sqrt();
    w.step(&Z_OHM, &[("V", test.voltage_v), ("m", m), ("I", i)], z);
    w.step(&R_OHM, &[("P", test.power_w), ("n", n), ("I", i)], r);
    w.step(&X_OHM, &[("Z_Ω", z), ("R_Ω", r)], x);
    let circuit = per_unit(w, rated_kva, loss, voltage / rated_v, Some((voltage, rated_v)));
    Ok(ShortCircuit {
        load_loss_w: loss,
        impedance_voltage_v: voltage,
        impedance_ohm: z,
        resistance_ohm: r,
        reactance_ohm: x,
        circuit,
    })
}

fn per_unit<R: Recorder>(
    w: &mut R,
    rated_kva: f64,
    loss_w: f64,
    z: f64,
    voltages: Option<(f64, f64)>,
) -> Circuit {
    let r = loss_w / (1000.0 * rated_kva);
    w.step(&R_PU, &[("Pk", loss_w), ("S_r", rated_kva)], r);
    if let Some((vz, vr)) = voltages {
        w.step(&Z_FROM_VOLTAGE, &[("V_z", vz), ("V_r", vr)], z);
    }
    let x = ((z - r) * (z + r)).max(0.0).sqrt();
    w.step(&X_PU, &[("Z", z), ("R", r)], x);
    Circuit { r_pu: r, x_pu: x }
}

/// Measured winding resistances (Ω): of the winding, or the mean between lines if three-phase.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Resistances {
    /// Of the high-voltage winding.
    pub hv_ohm: f64,
    /// Of the low-voltage winding.
    pub lv_ohm: f64,
    /// Winding temperature of the measurement (°C); none: the temperature of the short-circuit test.
    pub temp_c: Option<f64>,
}

const RESISTIVE: Formula = Formula {
    name: "I²R of both windings at rated current, at the temperature of the resistances",
    symbol: "P_I2R",
    formula: "c·(I_hv²·R_hv + I_lv²·R_lv)",
    unit: "W",
    source: "methods, section 1; c is 1.5 for mean resistances between lines, 1 for a single phase",
};
const TO_TEST: Formula = Formula {
    name: "I²R at the temperature of the short-circuit test",
    symbol: "P_I2R",
    formula: "P_measured·(T0+θ)/(T0+θ_R)",
    unit: "W",
    source: "resistance of a metal against temperature, IEC 60076-1 (memory)",
};
const STRAY: Formula = Formula {
    name: "stray loss",
    symbol: "P_stray",
    formula: "Pk − P_I2R",
    unit: "W",
    source: "methods, section 1",
};

/// The I²R part of a load loss at the temperature of the short-circuit test, from measured resistances (W).
///
/// The rated currents are of the high- and low-voltage winding (A); `t0_c` is the temperature at which the
/// resistance vanishes, negated; `test_temp_c` of the short-circuit test (°C).
///
/// # Errors
/// A resistance that is not above zero; more I²R than load loss.
pub fn resistive_loss<R: Recorder>(
    w: &mut R,
    phases: Phases,
    resistances: Resistances,
    [hv_current_a, lv_current_a]: [f64; 2],
    load_loss_w: f64,
    t0_c: f64,
    test_temp_c: Option<f64>,
) -> Result<f64, Refusal> {
    let why = "must be above zero; take it from the test report";
    positive("hv_resistance_ohm", resistances.hv_ohm, why)?;
    positive("lv_resistance_ohm", resistances.lv_ohm, why)?;
    let c = if phases == Phases::Three { 1.5 } else { 1.0 };
    let (hv, lv) = (resistances.hv_ohm, resistances.lv_ohm);
    let measured = c * (hv_current_a * hv_current_a * hv + lv_current_a * lv_current_a * lv);
    let inputs =
        [("c", c), ("I_hv", hv_current_a), ("R_hv", hv), ("I_lv", lv_current_a), ("R_lv", lv)];
    w.step(&RESISTIVE, &inputs, measured);
    let resistive = match (resistances.temp_c, test_temp_c) {
        (Some(from), Some(to)) if from != to => {
            let value = measured * (t0_c + to) / (t0_c + from);
            let inputs = [("P_measured", measured), ("T0", t0_c), ("θ", to), ("θ_R", from)];
            w.step(&TO_TEST, &inputs, value)
        }
        _ => measured,
    };
    let stray = load_loss_w - resistive;
    if stray < 0.0 {
        let why = format!(
            "is below the I²R of {resistive:.4} W that the resistances give, so stray loss would be negative: the report contradicts itself; check resistances, temperatures, phases and whether resistances are between lines"
        );
        return Err(Refusal::new("load_loss_w", load_loss_w, why));
    }
    w.step(&STRAY, &[("Pk", load_loss_w), ("P_I2R", resistive)], stray);
    Ok(resistive)
}

/// Temperatures and metal by which a measured load loss is brought to the reference temperature.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Correction {
    /// Winding metal.
    pub metal: WindingMetal,
    /// Winding temperature of the short-circuit test (°C); none: the loss is corrected already.
    pub test_temp_c: Option<f64>,
    /// Reference temperature (°C).
    pub reference_temp_c: f64,
    /// Stray part of the load loss at the reference temperature where the split is unknown.
    pub stray_share_pu: f64,
}

/// A load loss at the reference temperature with its parts.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CorrectedLoss {
    /// Load loss at the reference temperature.
    pub load_loss_w: f64,
    /// I²R part where resistances were measured.
    pub resistive_loss_w: Option<f64>,
    /// Stray part where resistances were measured.
    pub stray_loss_w: Option<f64>,
}

const RESISTIVE_AT_REFERENCE: Formula = Formula {
    name: "I²R part of the load loss at the reference temperature",
    symbol: "P_I2R_ref",
    formula: "P_measured·x",
    unit: "W",
    source: "IEC 60076-1 Annex E (memory)",
};
const STRAY_AT_REFERENCE: Formula = Formula {
    name: "stray part of the load loss at the reference temperature",
    symbol: "P_stray_ref",
    formula: "P_measured/x",
    unit: "W",
    source: "IEC 60076-1 Annex E (memory)",
};

/// Brings a load loss at test temperature to the reference temperature; `resistive_w` is its I²R part at test
/// temperature where resistances were measured.
pub fn at_reference<R: Recorder>(
    w: &mut R,
    load_loss_w: f64,
    resistive_w: Option<f64>,
    correction: Correction,
) -> CorrectedLoss {
    let t0 = vanishing_temp_c(correction.metal);
    let to = correction.reference_temp_c;
    let from = correction.test_temp_c.unwrap_or(to);
    let Some(resistive) = resistive_w else {
        let loss = if from == to {
            load_loss_w
        } else {
            load_loss_at_reference(w, load_loss_w, correction.stray_share_pu, t0, from, to)
        };
        return CorrectedLoss { load_loss_w: loss, resistive_loss_w: None, stray_loss_w: None };
    };
    let stray = load_loss_w - resistive;
    if from == to {
        return CorrectedLoss {
            load_loss_w,
            resistive_loss_w: Some(resistive),
            stray_loss_w: Some(stray),
        };
    }
    let loss = load_loss_at(w, resistive, stray, t0, from, to);
    let x = (t0 + to) / (t0 + from);
    let (own, other) = (resistive * x, stray / x);
    w.step(&RESISTIVE_AT_REFERENCE, &[("P_measured", resistive), ("x", x)], own);
    w.step(&STRAY_AT_REFERENCE, &[("P_measured", stray), ("x", x)], other);
    CorrectedLoss { load_loss_w: loss, resistive_loss_w: Some(own), stray_loss_w: Some(other) }
}

/// The per-unit circuit with its load loss brought to another temperature: the reactance stays.
pub fn circuit_at<R: Recorder>(
    w: &mut R,
    measured: Circuit,
    rated_kva: f64,
    load_loss_w: f64,
) -> Circuit {
    let r = load_loss_w / (1000.0 * rated_kva);
    w.step(&R_PU, &[("Pk", load_loss_w), ("S_r", rated_kva)], r);
    Circuit { r_pu: r, x_pu: measured.x_pu }
}

const OPEN_CIRCUIT_COPPER: Formula = Formula {
    name: "copper loss of the no-load current in the winding that was fed",
    symbol: "P_cu0",
    formula: "n·I0²·R_Ω/2",
    unit: "W",
    source: "half of the series resistance taken for each winding; Kosow Ex 14.20; normally neglected",
};

/// Copper loss inside an open-circuit test (W): `resistance_ohm` is the series resistance at the fed winding.
pub fn open_circuit_copper<R: Recorder>(
    w: &mut R,
    phases: Phases,
    current_a: f64,
    resistance_ohm: f64,
) -> f64 {
    let value = phases.count() * current_a * current_a * resistance_ohm / 2.0;
    let inputs = [("n", phases.count()), ("I0", current_a), ("R_Ω", resistance_ohm)];
    w.step(&OPEN_CIRCUIT_COPPER, &inputs, value)
}

const CORE: Formula = Formula {
    name: "core loss: no-load loss less the copper loss of the no-load current",
    symbol: "P_core",
    formula: "P0 − P_cu0",
    unit: "W",
    source: "Kosow Ex 14.20; normally neglected",
};

/// Core loss inside an open-circuit test (W).
pub fn core_loss<R: Recorder>(w: &mut R, no_load_loss_w: f64, copper_w: f64) -> f64 {
    let inputs = [("P0", no_load_loss_w), ("P_cu0", copper_w)];
    w.step(&CORE, &inputs, no_load_loss_w - copper_w)
}

const NO_LOAD_CURRENT: Formula = Formula {
    name: "no-load current in percent of rated current",
    symbol: "I0_pct",
    formula: "100·I0/I_r",
    unit: "%",
    source: "definition",
};

/// No-load current in percent of the rated current of the winding that was fed.
pub fn no_load_current_pct<R: Recorder>(w: &mut R, current_a: f64, rated_a: f64) -> f64 {
    let inputs = [("I0", current_a), ("I_r", rated_a)];
    w.step(&NO_LOAD_CURRENT, &inputs, 100.0 * current_a / rated_a)
}

const WAVEFORM: Formula = Formula {
    name: "no-load loss corrected for the waveform",
    symbol: "P0",
    formula: "P_m·(1 + (U_mean − U)/U_mean)",
    unit: "W",
    source: "IEC 60076-1 11.5 (memory)",
};

/// Corrects a measured no-load loss for the waveform, IEC form: `mean_v` is the reading of the mean-value
/// voltmeter (scaled to rms), `rms_v` of the rms voltmeter (W).
///
/// # Errors
/// A distortion above 3 %, at which the standard does not accept the test.
pub fn waveform_iec<R: Recorder>(
    w: &mut R,
    measured_w: f64,
    mean_v: f64,
    rms_v: f64,
) -> Result<f64, Refusal> {
    positive("mean_voltage_v", mean_v, "must be above zero; read it at the mean-value voltmeter")?;
    let d = (mean_v - rms_v) / mean_v;
    if d.abs() > 0.03 {
        let why = format!(
            "differs from the mean-value reading of {mean_v} V by {:.2} %; more than 3 % is not accepted: repeat the test with a better supply",
            100.0 * d.abs()
        );
        return Err(Refusal::new("rms_voltage_v", rms_v, why));
    }
    let inputs = [("P_m", measured_w), ("U_mean", mean_v), ("U", rms_v)];
    Ok(w.step(&WAVEFORM, &inputs, measured_w * (1.0 + d)))
}

const WAVEFORM_US: Formula = Formula {
    name: "no-load loss corrected for the waveform",
    symbol: "P0",
    formula: "P_m/(P_1 + (E_r/E_a)²·P_2)",
    unit: "W",
    source: "IEEE C57.12.90 8.3; 10 CFR 431 subpart K appendix A (memory)",
};

/// Corrects a measured no-load loss for the waveform, IEEE form: `hysteresis_pu` and `eddy_pu` are the parts of
/// the loss (½ each unless known), `rms_v` and `mean_v` the test voltages (W).
///
/// # Errors
/// Parts that do not add up to one, a mean voltage that is not above zero.
pub fn waveform_ieee<R: Recorder>(
    w: &mut R,
    measured_w: f64,
    mean_v: f64,
    rms_v: f64,
    hysteresis_pu: f64,
    eddy_pu: f64,
) -> Result<f64, Refusal> {
    positive("mean_voltage_v", mean_v, "must be above zero; read it at the mean-value voltmeter")?;
    if (hysteresis_pu + eddy_pu - 1.0).abs() > 1e-9 || hysteresis_pu < 0.0 || eddy_pu < 0.0 {
        let why = format!("and hysteresis_pu {hysteresis_pu} must add up to 1; unknown: 0.5 each");
        return Err(Refusal::new("eddy_pu", eddy_pu, why));
    }
    let k = (rms_v / mean_v) * (rms_v / mean_v);
    let value = measured_w / (hysteresis_pu + k * eddy_pu);
    let inputs = [
        ("P_m", measured_w),
        ("P_1", hysteresis_pu),
        ("E_r", rms_v),
        ("E_a", mean_v),
        ("P_2", eddy_pu),
    ];
    Ok(w.step(&WAVEFORM_US, &inputs, value))
}

const NO_LOAD_TEMPERATURE: Formula = Formula {
    name: "no-load loss at the reference temperature",
    symbol: "P0",
    formula: "P_m·(1 + 0.00065·(θ_m − θ_ref))",
    unit: "W",
    source: "US practice: 10 CFR 431 subpart K appendix A 4.4.2 (memory)",
};

/// Brings a no-load loss from the oil temperature of the test to a reference temperature (20 °C), US practice (W).
pub fn no_load_temperature<R: Recorder>(
    w: &mut R,
    measured_w: f64,
    test_c: f64,
    reference_c: f64,
) -> f64 {
    let value = measured_w * (1.0 + 0.00065 * (test_c - reference_c));
    let inputs = [("P_m", measured_w), ("θ_m", test_c), ("θ_ref", reference_c)];
    w.step(&NO_LOAD_TEMPERATURE, &inputs, value)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    fn test(voltage_v: f64, current_a: f64, power_w: f64) -> Test {
        Test { voltage_v, current_a, power_w }
    }

    /// T3-SC-test-off-rated-current: 86 V, 10.5 A, 360 W at 20 kVA and 2200 V.
    #[test]
    fn short_circuit_comes_to_rated_current() {
        let got = short_circuit(&mut Silent, Phases::One, test(86.0, 10.5, 360.0), 20.0, 2200.0)
            .expect("sound");
        assert!((got.load_loss_w / 269.860_010_1 - 1.0).abs() < 1e-9);
        assert!((got.impedance_voltage_v / 74.458_874_46 - 1.0).abs() < 1e-9);
        assert!((got.resistance_ohm / 3.265_306_12 - 1.0).abs() < 1e-8);
        let ohms = got.circuit.r_pu * 2200.0 * 2200.0 / 20_000.0;
        assert!((ohms / got.resistance_ohm - 1.0).abs() < 1e-12, "per unit and ohms agree");
    }

    /// Three phases of a bank are three single phases: 3 × the power, √3 × the voltage.
    #[test]
    fn three_phases_are_three_times_one() {
        let root = 3.0_f64.sqrt();
        let one = short_circuit(&mut Silent, Phases::One, test(86.0, 10.5, 360.0), 20.0, 2200.0)
            .expect("sound");
        let three = short_circuit(
            &mut Silent,
            Phases::Three,
            test(86.0 * root, 10.5, 1080.0),
            60.0,
            2200.0 * root,
        )
        .expect("sound");
        assert!((three.circuit.r_pu / one.circuit.r_pu - 1.0).abs() < 1e-12);
        assert!((three.circuit.x_pu / one.circuit.x_pu - 1.0).abs() < 1e-12);
        assert!((three.reactance_ohm / one.reactance_ohm - 1.0).abs() < 1e-12);
        let iron = |phases, v, i, p| {
            open_circuit(&mut Silent, phases, test(v, i, p), None).expect("sound")
        };
        let (a, b) =
            (iron(Phases::One, 220.0, 4.2, 148.0), iron(Phases::Three, 220.0 * root, 4.2, 444.0));
        assert!((a.working_current_a / b.working_current_a - 1.0).abs() < 1e-12);
        let (x, y) = (a.magnetising_reactance_ohm, b.magnetising_reactance_ohm);
        assert!((x.expect("magnetised") / y.expect("magnetised") - 1.0).abs() < 1e-12);
        assert!((a.core_resistance_ohm / b.core_resistance_ohm - 1.0).abs() < 1e-12);
    }

    #[test]
    fn contradictions_are_refused() {
        let sc = |t| short_circuit(&mut Silent, Phases::One, t, 20.0, 2200.0);
        assert!(sc(test(86.0, 10.5, 1000.0)).is_err(), "more watts than volt-amperes");
        assert!(sc(test(86.0, 105.0, 360.0)).is_err(), "the current of the other winding");
        assert!(sc(test(86.0, 0.0, 360.0)).is_err());
        let oc = |t, rated| open_circuit(&mut Silent, Phases::One, t, rated);
        assert!(oc(test(220.0, 0.5, 148.0), None).is_err(), "current below its working part");
        assert!(oc(test(220.0, 4.2, 148.0), Some(2200.0)).is_err(), "another winding");
        let split = |loss| {
            let r = Resistances { hv_ohm: 1.5, lv_ohm: 0.015, temp_c: None };
            resistive_loss(&mut Silent, Phases::One, r, [9.0909, 90.909], loss, 235.0, None)
        };
        assert!(split(270.0).is_ok() && split(200.0).is_err(), "negative stray loss");
        assert!(waveform_iec(&mut Silent, 1000.0, 400.0, 413.0).is_err());
        assert!(waveform_ieee(&mut Silent, 1000.0, 400.0, 404.0, 0.5, 0.6).is_err());
    }

    /// With the split measured and with the same split given as a share, the loss at reference is the same.
    #[test]
    fn measured_split_and_share_agree() {
        let correction = Correction {
            metal: WindingMetal::Copper,
            test_temp_c: Some(28.0),
            reference_temp_c: 75.0,
            stray_share_pu: 0.0,
        };
        let measured = at_reference(&mut Silent, 1200.0, Some(1050.0), correction);
        assert!((measured.load_loss_w / 1_364.900_65 - 1.0).abs() < 1e-8);
        let stray_share_pu = measured.stray_loss_w.expect("split") / measured.load_loss_w;
        let share =
            at_reference(&mut Silent, 1200.0, None, Correction { stray_share_pu, ..correction });
        assert!((share.load_loss_w / measured.load_loss_w - 1.0).abs() < 1e-12);
    }
}
