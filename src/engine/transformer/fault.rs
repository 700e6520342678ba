//! Short circuit at the secondary: fault level with the network behind it, and the current into a fault.

use super::circuit::{Circuit, positive};
use super::complex::Complex;
use super::nameplate::Phases;
use crate::engine::Refusal;
use crate::engine::working::{Formula, Recorder};

const FAULT_LEVEL: Formula = Formula {
    name: "fault level at the secondary",
    symbol: "S_k",
    formula: "1/(z/S_r + 1/S_net)",
    unit: "MVA",
    source: "impedances of equal angle; methods, section 2",
};
const INFINITE: Formula = Formula {
    name: "fault level at the secondary, network without impedance",
    symbol: "S_k",
    formula: "S_r/z",
    unit: "MVA",
    source: "methods, section 2",
};

/// Fault level at the secondary (MVA): `network_mva` is that of the network at the primary, none = infinite.
///
/// # Errors
/// A rating, impedance or network fault level that is not above zero.
pub fn fault_level<R: Recorder>(
    w: &mut R,
    rated_mva: f64,
    z_pu: f64,
    network_mva: Option<f64>,
) -> Result<f64, Refusal> {
    positive("rated_kva", rated_mva, "must be above zero")?;
    positive("impedance_pct", z_pu, "must be above zero; take it from the nameplate")?;
    let Some(network) = network_mva else {
        return Ok(w.step(&INFINITE, &[("S_r", rated_mva), ("z", z_pu)], rated_mva / z_pu));
    };
    positive("network_mva", network, "must be above zero; leave it out for an infinite network")?;
    let value = 1.0 / (z_pu / rated_mva + 1.0 / network);
    let inputs = [("z", z_pu), ("S_r", rated_mva), ("S_net", network)];
    Ok(w.step(&FAULT_LEVEL, &inputs, value))
}

const FAULT_CURRENT: Formula = Formula {
    name: "fault current",
    symbol: "I_k",
    formula: "1000·S_k/(m·V)",
    unit: "A",
    source: "definition; m is √3 between lines, else 1; S_k in MVA, V in kV",
};

/// Current of a fault level (MVA) at a voltage (kV), in A.
///
/// # Errors
/// A voltage that is not above zero.
pub fn fault_current<R: Recorder>(
    w: &mut R,
    phases: Phases,
    fault_level_mva: f64,
    kv: f64,
) -> Result<f64, Refusal> {
    positive("lv_kv", kv, "must be above zero")?;
    let value = 1000.0 * fault_level_mva / (phases.root() * kv);
    let inputs = [("S_k", fault_level_mva), ("m", phases.root()), ("V", kv)];
    Ok(w.step(&FAULT_CURRENT, &inputs, value))
}

/// The current into a fault behind the transformer, seen from the winding that feeds it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct FaultThrough {
    /// Current in the feeding winding.
    pub current_a: f64,
    /// Angle of the current against the voltage, negative when it lags.
    pub angle_deg: f64,
    /// Series resistance of the transformer at the feeding winding.
    pub resistance_ohm: f64,
    /// Series reactance of the transformer at the feeding winding.
    pub reactance_ohm: f64,
}

/// Where and how a fault is fed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Feed {
    /// Single or three phase.
    pub phases: Phases,
    /// Rated power.
    pub rated_kva: f64,
    /// Rated voltage of the feeding winding (between lines if three-phase).
    pub rated_v: f64,
    /// Rated voltage of the winding with the fault.
    pub far_v: f64,
    /// Voltage that is applied to the feeding winding.
    pub applied_v: f64,
}

const SERIES: Formula = Formula {
    name: "series impedance at the feeding winding",
    symbol: "|Z_T|",
    formula: "z·V_r²/(1000·S_r)",
    unit: "Ω",
    source: "definition of per unit",
};
const INTO_FAULT: Formula = Formula {
    name: "current in the feeding winding",
    symbol: "I",
    formula: "V/(m·√((R_T + R_f·(V_r/V_far)²)² + X_T²))",
    unit: "A",
    source: "series circuit; m is √3 between lines, else 1",
};

/// Current into a fault of `fault_ohm` at the far winding.
///
/// # Errors
/// Values that are not above zero, a negative fault resistance.
pub fn into_fault<R: Recorder>(
    w: &mut R,
    feed: &Feed,
    circuit: &Circuit,
    fault_ohm: f64,
) -> Result<FaultThrough, Refusal> {
    positive("rated_kva", feed.rated_kva, "must be above zero")?;
    positive("hv_kv", feed.rated_v, "must be above zero")?;
    positive("lv_kv", feed.far_v, "must be above zero")?;
    positive("impedance_pct", circuit.z_pu(), "must be above zero; take it from the nameplate")?;
    if fault_ohm < 0.0 {
        let why = "cannot be negative; 0 is a fault without resistance";
        return Err(Refusal::new("fault_resistance_ohm", fault_ohm, why));
    }
    let base = feed.rated_v * feed.rated_v / (1000.0 * feed.rated_kva);
    let z = circuit.impedance().scaled(base);
    let inputs = [("z", circuit.z_pu()), ("V_r", feed.rated_v), ("S_r", feed.rated_kva)];
    w.step(&SERIES, &inputs, z.abs());
    let ratio = feed.rated_v / feed.far_v;
    let whole = z + Complex { re: fault_ohm * ratio * ratio, im: 0.0 };
    let current = feed.applied_v / (feed.phases.root() * whole.abs());
    let inputs = [
        ("V", feed.applied_v),
        ("m", feed.phases.root()),
        ("R_T", z.re),
        ("X_T", z.im),
        ("R_f", fault_ohm),
        ("V_r", feed.rated_v),
        ("V_far", feed.far_v),
    ];
    w.step(&INTO_FAULT, &inputs, current);
    Ok(FaultThrough {
        current_a: current,
        angle_deg: -whole.degrees(),
        resistance_ohm: z.re,
        reactance_ohm: z.im,
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    /// A bolted fault from an infinite network draws 1/z of rated current, by either way.
    #[test]
    fn both_ways_agree() {
        let circuit = Circuit { r_pu: 0.018, x_pu: 0.0357 };
        let feed = Feed {
            phases: Phases::Three,
            rated_kva: 50.0,
            rated_v: 3300.0,
            far_v: 400.0,
            applied_v: 3300.0,
        };
        let through = into_fault(&mut Silent, &feed, &circuit, 0.0).expect("sound");
        let level = fault_level(&mut Silent, 0.05, circuit.z_pu(), None).expect("sound");
        let current = fault_current(&mut Silent, Phases::Three, level, 3.3).expect("sound");
        assert!((through.current_a / current - 1.0).abs() < 1e-12);
        assert!(fault_level(&mut Silent, 0.05, 0.0, None).is_err());
    }
}
