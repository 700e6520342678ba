//! The equivalent circuit of a two-winding transformer: series impedance and magnetising branch in per unit,
//! change of base, transfer from one winding to the other. Owns [`Circuit`] and [`PowerFactor`].

use super::complex::Complex;
use crate::engine::Refusal;
use crate::engine::columns::choice;
use crate::engine::working::{Formula, Recorder};

/// Series impedance in per unit of the transformer's own rating.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Circuit {
    /// Resistance.
    pub r_pu: f64,
    /// Reactance.
    pub x_pu: f64,
}

impl Circuit {
    /// Magnitude of the impedance (pu).
    pub fn z_pu(&self) -> f64 {
        self.r_pu.hypot(self.x_pu)
    }

    /// Magnitude of the impedance (pu), stated.
    pub fn magnitude<R: Recorder>(&self, w: &mut R) -> f64 {
        w.step(&MAGNITUDE, &[("R", self.r_pu), ("X", self.x_pu)], self.z_pu())
    }

    pub(crate) fn impedance(&self) -> Complex {
        Complex { re: self.r_pu, im: self.x_pu }
    }
}

/// Power factor of a load as cosine and sine of its angle; the sine is negative for a leading load.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct PowerFactor {
    /// cos φ.
    pub cos: f64,
    /// sin φ.
    pub sin: f64,
}

impl PowerFactor {
    /// A load whose current lags.
    ///
    /// # Errors
    /// A power factor outside 0 to 1.
    pub fn lagging(power_factor: f64) -> Result<Self, Refusal> {
        if (0.0..=1.0).contains(&power_factor) {
            let sin = ((1.0 - power_factor) * (1.0 + power_factor)).sqrt();
            return Ok(Self { cos: power_factor, sin });
        }
        let why = "lies between 0 and 1; say apart whether the load lags or leads";
        Err(Refusal::new("power_factor", power_factor, why))
    }

    /// A load whose current leads.
    ///
    /// # Errors
    /// A power factor outside 0 to 1.
    pub fn leading(power_factor: f64) -> Result<Self, Refusal> {
        Self::lagging(power_factor).map(|pf| Self { sin: -pf.sin, ..pf })
    }
}

choice! {
    /// Whether the current of a load lags or leads its voltage.
    LoadKind { Lagging = "lagging", Leading = "leading" }
}

impl LoadKind {
    /// A power factor of this kind of load.
    ///
    /// # Errors
    /// A power factor outside 0 to 1.
    pub fn power_factor(self, power_factor: f64) -> Result<PowerFactor, Refusal> {
        match self {
            Self::Lagging => PowerFactor::lagging(power_factor),
            Self::Leading => PowerFactor::leading(power_factor),
        }
    }
}

/// Holds a quantity that must be above zero.
pub(crate) fn positive(quantity: &'static str, value: f64, why: &str) -> Result<(), Refusal> {
    if value > 0.0 && value.is_finite() {
        return Ok(());
    }
    Err(Refusal::new(quantity, value, why))
}

pub(super) const R_PU: Formula = Formula {
    name: "series resistance per unit",
    symbol: "R",
    formula: "Pk/(1000·S_r)",
    unit: "pu",
    source: "load loss at rated current over rated power; methods, section 1",
};
const Z_PU: Formula = Formula {
    name: "series impedance per unit",
    symbol: "Z",
    formula: "u_k/100",
    unit: "pu",
    source: "IEC 60076-1 (memory): short-circuit impedance in percent of rated",
};
pub(super) const X_PU: Formula = Formula {
    name: "series reactance per unit",
    symbol: "X",
    formula: "√(Z² − R²)",
    unit: "pu",
    source: "methods, section 1",
};

const MAGNITUDE: Formula = Formula {
    name: "magnitude of the series impedance per unit",
    symbol: "|Z|",
    formula: "√(R² + X²)",
    unit: "pu",
    source: "methods, section 1",
};

/// Series resistance per unit from load loss (W) and rating (kVA).
pub fn resistance_pu<R: Recorder>(w: &mut R, rated_kva: f64, load_loss_w: f64) -> f64 {
    let inputs = [("Pk", load_loss_w), ("S_r", rated_kva)];
    w.step(&R_PU, &inputs, load_loss_w / (1000.0 * rated_kva))
}

/// The series circuit from nameplate values: load loss (W), rating (kVA) and impedance (%).
///
/// # Errors
/// A rating that is not above zero, an impedance smaller than its resistance.
pub fn of_nameplate<R: Recorder>(
    w: &mut R,
    rated_kva: f64,
    load_loss_w: f64,
    impedance_pct: f64,
) -> Result<Circuit, Refusal> {
    positive("rated_kva", rated_kva, "must be above zero; take it from the nameplate")?;
    let r = resistance_pu(w, rated_kva, load_loss_w);
    let z = w.step(&Z_PU, &[("u_k", impedance_pct)], impedance_pct / 100.0);
    if r < 0.0 || z < r {
        let why = format!(
            "is below the resistance of {:.4} % that the load loss gives; one of impedance_pct, load_loss_w and rated_kva is wrong",
            100.0 * r
        );
        return Err(Refusal::new("impedance_pct", impedance_pct, why));
    }
    let x = ((z - r) * (z + r)).sqrt();
    w.step(&X_PU, &[("Z", z), ("R", r)], x);
    Ok(Circuit { r_pu: r, x_pu: x })
}

/// The magnetising branch in per unit of the transformer's own rating.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Magnetising {
    /// Resistance that stands for the iron loss.
    pub core_resistance_pu: f64,
    /// Magnetising reactance; none where the no-load current is all working current.
    pub reactance_pu: Option<f64>,
}

const IW_PU: Formula = Formula {
    name: "working part of the no-load current",
    symbol: "i_w",
    formula: "P0/(1000·S_r)",
    unit: "pu",
    source: "methods, section 1",
};
const IM_PU: Formula = Formula {
    name: "magnetising part of the no-load current",
    symbol: "i_m",
    formula: "√((i_0/100)² − i_w²)",
    unit: "pu",
    source: "methods, section 1",
};

const CORE_RESISTANCE: Formula = Formula {
    name: "resistance that stands for the iron loss",
    symbol: "R_c",
    formula: "1/i_w",
    unit: "pu",
    source: "methods, section 1",
};
const MAGNETISING_REACTANCE: Formula = Formula {
    name: "magnetising reactance",
    symbol: "X_m",
    formula: "1/i_m",
    unit: "pu",
    source: "methods, section 1",
};

/// Resistance that stands for the iron loss (pu), from rating (kVA) and no-load loss (W).
///
/// # Errors
/// A rating or loss that is not above zero.
pub fn core_resistance<R: Recorder>(
    w: &mut R,
    rated_kva: f64,
    no_load_loss_w: f64,
) -> Result<f64, Refusal> {
    positive("rated_kva", rated_kva, "must be above zero; take it from the nameplate")?;
    positive("no_load_loss_w", no_load_loss_w, "must be above zero for a magnetising branch")?;
    let working = no_load_loss_w / (1000.0 * rated_kva);
    w.step(&IW_PU, &[("P0", no_load_loss_w), ("S_r", rated_kva)], working);
    Ok(w.step(&CORE_RESISTANCE, &[("i_w", working)], 1.0 / working))
}

/// The magnetising branch from nameplate values: no-load loss (W), rating (kVA), no-load current (%).
///
/// # Errors
/// A rating or loss that is not above zero, a no-load current below the working current.
pub fn magnetising<R: Recorder>(
    w: &mut R,
    rated_kva: f64,
    no_load_loss_w: f64,
    no_load_current_pct: f64,
) -> Result<Magnetising, Refusal> {
    let core_resistance_pu = core_resistance(w, rated_kva, no_load_loss_w)?;
    let working = no_load_loss_w / (1000.0 * rated_kva);
    let current = no_load_current_pct / 100.0;
    let magnetising = quadrature("no_load_current_pct", no_load_current_pct, current, working)?;
    w.step(&IM_PU, &[("i_0", no_load_current_pct), ("i_w", working)], magnetising);
    let reactance_pu = (magnetising > 0.0)
        .then(|| w.step(&MAGNETISING_REACTANCE, &[("i_m", magnetising)], 1.0 / magnetising));
    Ok(Magnetising { core_resistance_pu, reactance_pu })
}

/// √(whole² − part²); a part that exceeds the whole by rounding (0.5 %) gives zero.
pub(super) fn quadrature(
    quantity: &'static str,
    shown: f64,
    whole: f64,
    part: f64,
) -> Result<f64, Refusal> {
    if whole < part * 0.995 {
        let why = format!(
            "is below its working part of {:.4}; no-load current and no-load loss contradict each other: check both",
            shown * part / whole
        );
        return Err(Refusal::new(quantity, shown, why));
    }
    Ok(((whole - part) * (whole + part)).max(0.0).sqrt())
}

const BASE_IMPEDANCE: Formula = Formula {
    name: "base impedance",
    symbol: "Z_base",
    formula: "V²/S",
    unit: "Ω",
    source: "definition; V in kV between lines, S in MVA of all phases",
};

/// Base impedance (Ω) of a voltage (kV) and a power (MVA).
///
/// # Errors
/// A voltage or power that is not above zero.
pub fn base_impedance<R: Recorder>(w: &mut R, kv: f64, mva: f64) -> Result<f64, Refusal> {
    positive("base_kv", kv, "must be above zero")?;
    positive("base_mva", mva, "must be above zero")?;
    Ok(w.step(&BASE_IMPEDANCE, &[("V", kv), ("S", mva)], kv * kv / mva))
}

/// A base of per-unit values.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Base {
    /// Power.
    pub mva: f64,
    /// Voltage.
    pub kv: f64,
}

const CHANGE: Formula = Formula {
    name: "impedance on the new base",
    symbol: "Z_new",
    formula: "Z_old·(S_new/S_old)·(V_old/V_new)²",
    unit: "pu",
    source: "definition of per unit; methods, section 1",
};

/// A per-unit impedance (or its resistance or reactance) on another base.
///
/// # Errors
/// A base value that is not above zero.
pub fn change_base<R: Recorder>(
    w: &mut R,
    z_pu: f64,
    from: Base,
    to: Base,
) -> Result<f64, Refusal> {
    positive("from_mva", from.mva, "must be above zero")?;
    positive("to_mva", to.mva, "must be above zero")?;
    positive("from_kv", from.kv, "must be above zero")?;
    positive("to_kv", to.kv, "must be above zero")?;
    let v = from.kv / to.kv;
    let value = z_pu * (to.mva / from.mva) * (v * v);
    let inputs = [
        ("Z_old", z_pu),
        ("S_new", to.mva),
        ("S_old", from.mva),
        ("V_old", from.kv),
        ("V_new", to.kv),
    ];
    Ok(w.step(&CHANGE, &inputs, value))
}

const TRANSFER_Z: Formula = Formula {
    name: "impedance seen from the other winding",
    symbol: "Z_to",
    formula: "Z·(N_to/N_from)²",
    unit: "Ω",
    source: "ideal transformer; methods, section 1",
};
const TRANSFER_V: Formula = Formula {
    name: "voltage at the other winding",
    symbol: "V_to",
    formula: "V·N_to/N_from",
    unit: "V",
    source: "ideal transformer; methods, section 1",
};
const TRANSFER_I: Formula = Formula {
    name: "current in the other winding",
    symbol: "I_to",
    formula: "I·N_from/N_to",
    unit: "A",
    source: "ideal transformer; methods, section 1",
};

/// What is carried from one winding to the other.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Carried {
    /// An impedance (Ω): by (N_to/N_from)².
    Impedance(f64),
    /// A voltage: by N_to/N_from.
    Voltage(f64),
    /// A current: by N_from/N_to.
    Current(f64),
}

/// Carries a value from a winding of `from` turns (or rated volts) to one of `to`.
///
/// # Errors
/// A winding that is not above zero.
pub fn transfer<R: Recorder>(
    w: &mut R,
    carried: Carried,
    from: f64,
    to: f64,
) -> Result<f64, Refusal> {
    positive("from_kv", from, "must be above zero")?;
    positive("to_kv", to, "must be above zero")?;
    let n = to / from;
    let ends = [("N_to", to), ("N_from", from)];
    Ok(match carried {
        Carried::Impedance(z) => w.step(&TRANSFER_Z, &[("Z", z), ends[0], ends[1]], z * (n * n)),
        Carried::Voltage(v) => w.step(&TRANSFER_V, &[("V", v), ends[0], ends[1]], v * n),
        Carried::Current(i) => w.step(&TRANSFER_I, &[("I", i), ends[0], ends[1]], i / n),
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    #[test]
    fn nameplate_gives_the_circuit() {
        let circuit = of_nameplate(&mut Silent, 400.0, 5700.0, 6.0).expect("sound");
        assert!((circuit.r_pu - 0.01425).abs() < 1e-15);
        assert!((circuit.z_pu() - 0.06).abs() < 1e-15);
        assert!(of_nameplate(&mut Silent, 400.0, 25_000.0, 6.0).is_err(), "R above Z");
        assert!(of_nameplate(&mut Silent, 0.0, 5700.0, 6.0).is_err());
    }

    /// The no-load current of some published types equals P0/S to the printed digits: no reactance, no error.
    #[test]
    fn rounding_of_the_no_load_current_is_borne() {
        let branch = magnetising(&mut Silent, 630.0, 1650.0, 0.2619).expect("rounded");
        assert_eq!(branch.reactance_pu, None);
        assert!(magnetising(&mut Silent, 630.0, 1650.0, 0.2).is_err());
    }

    #[test]
    fn there_and_back_again() {
        let (a, b) = (Base { mva: 100.0, kv: 30.0 }, Base { mva: 80.0, kv: 32.0 });
        let there = change_base(&mut Silent, 0.1, a, b).expect("sound");
        assert!((change_base(&mut Silent, there, b, a).expect("sound") - 0.1).abs() < 1e-15);
        let z = transfer(&mut Silent, Carried::Impedance(2.0), 0.4, 20.0).expect("sound");
        assert!((z - 5000.0).abs() < 1e-9);
    }
}
