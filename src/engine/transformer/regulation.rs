//! Voltage regulation: how far the secondary voltage falls from no load to a load, exact and by the usual series.

use super::circuit::{Circuit, PowerFactor, positive};
use super::complex::Complex;
use crate::engine::Refusal;
use crate::engine::working::{Formula, Recorder};

const SOURCE_VOLTAGE: Formula = Formula {
    name: "source voltage that holds the load voltage",
    symbol: "v_1",
    formula: "|v_2 + (R + j·X)·(β/v_2)∠−φ|",
    unit: "pu",
    source: "series circuit; methods, section 2",
};
const EXACT: Formula = Formula {
    name: "regulation, exact",
    symbol: "reg",
    formula: "v_1 − 1",
    unit: "pu",
    source: "methods, section 2",
};
const FIRST: Formula = Formula {
    name: "regulation, first-order term",
    symbol: "reg_1",
    formula: "β·(R·cosφ + X·sinφ)",
    unit: "pu",
    source: "IEC 60076-8 (memory); sinφ negative for a leading load",
};
const SECOND: Formula = Formula {
    name: "regulation with the 1/200 term",
    symbol: "reg_2",
    formula: "reg_1 + β²·(X·cosφ − R·sinφ)²/2",
    unit: "pu",
    source: "IEC 60076-8 (memory): 1/200 where values are in percent",
};

/// Source voltage (pu) that holds `load_voltage_pu` at the load terminals with `load_pu` of rated power drawn.
///
/// # Errors
/// A load voltage that is not above zero.
pub fn source_voltage<R: Recorder>(
    w: &mut R,
    circuit: &Circuit,
    load_pu: f64,
    pf: PowerFactor,
    load_voltage_pu: f64,
) -> Result<f64, Refusal> {
    positive("load_voltage_pu", load_voltage_pu, "must be above zero")?;
    Ok(behind(w, circuit, load_pu, pf, load_voltage_pu))
}

fn behind<R: Recorder>(
    w: &mut R,
    circuit: &Circuit,
    load_pu: f64,
    pf: PowerFactor,
    load_voltage_pu: f64,
) -> f64 {
    let current = Complex { re: pf.cos, im: -pf.sin }.scaled(load_pu / load_voltage_pu);
    let value = (Complex { re: load_voltage_pu, im: 0.0 } + circuit.impedance() * current).abs();
    let inputs = [
        ("v_2", load_voltage_pu),
        ("R", circuit.r_pu),
        ("X", circuit.x_pu),
        ("β", load_pu),
        ("φ", pf.sin.atan2(pf.cos).to_degrees()),
    ];
    w.step(&SOURCE_VOLTAGE, &inputs, value)
}

/// Regulation at `load_pu` of rated current and rated secondary voltage, exact (pu).
pub fn exact<R: Recorder>(w: &mut R, circuit: &Circuit, load_pu: f64, pf: PowerFactor) -> f64 {
    w.open();
    let v = behind(w, circuit, load_pu, pf, 1.0);
    w.close(&EXACT, &[("v_1", v)], v - 1.0)
}

const EXACT_PCT: Formula = Formula { symbol: "reg_pct", formula: "100·reg", unit: "%", ..EXACT };

/// Regulation at `load_pu` of rated current, exact, in percent.
pub fn exact_pct<R: Recorder>(w: &mut R, circuit: &Circuit, load_pu: f64, pf: PowerFactor) -> f64 {
    w.open();
    let pu = exact(w, circuit, load_pu, pf);
    w.close(&EXACT_PCT, &[("reg", pu)], 100.0 * pu)
}

/// Regulation by the first-order term alone (pu).
pub fn first_order<R: Recorder>(
    w: &mut R,
    circuit: &Circuit,
    load_pu: f64,
    pf: PowerFactor,
) -> f64 {
    let value = load_pu * (circuit.r_pu * pf.cos + circuit.x_pu * pf.sin);
    let inputs = [
        ("β", load_pu),
        ("R", circuit.r_pu),
        ("cosφ", pf.cos),
        ("X", circuit.x_pu),
        ("sinφ", pf.sin),
    ];
    w.step(&FIRST, &inputs, value)
}

/// Regulation with the 1/200 term (pu).
pub fn second_order<R: Recorder>(
    w: &mut R,
    circuit: &Circuit,
    load_pu: f64,
    pf: PowerFactor,
) -> f64 {
    w.open();
    let first = first_order(w, circuit, load_pu, pf);
    let across = load_pu * (circuit.x_pu * pf.cos - circuit.r_pu * pf.sin);
    let inputs = [
        ("reg_1", first),
        ("β", load_pu),
        ("X", circuit.x_pu),
        ("cosφ", pf.cos),
        ("R", circuit.r_pu),
        ("sinφ", pf.sin),
    ];
    w.close(&SECOND, &inputs, first + across * across / 2.0)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    /// The two-term series lies within the cube of the impedance of the exact value, lag and lead.
    #[test]
    fn series_follow_the_exact_form() {
        let circuit = Circuit { r_pu: 0.01, x_pu: 0.05 };
        for pf in [PowerFactor::lagging(0.8), PowerFactor::leading(0.8), PowerFactor::lagging(1.0)]
        {
            let pf = pf.expect("sound");
            for beta in [0.25, 1.0, 1.25] {
                let e = exact(&mut Silent, &circuit, beta, pf);
                let two = second_order(&mut Silent, &circuit, beta, pf);
                assert!((e - two).abs() < (circuit.z_pu() * beta).powi(3));
            }
        }
    }
}
