//! Transformers in parallel: how they share a load, what circulates between unequal ratios, how many to run.

use super::circuit::{Circuit, positive};
use super::complex::Complex;
use super::nameplate::Phases;
use crate::engine::Refusal;
use crate::engine::working::{Formula, Recorder};

/// A transformer of a bank: rating and series circuit on its own rating.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Member {
    /// Rated power.
    pub rated_kva: f64,
    /// Series circuit, per unit of its own rating.
    pub circuit: Circuit,
}

/// The part of a load that one transformer of a bank takes.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Share {
    /// Active power.
    pub kw: f64,
    /// Reactive power, positive for a lagging load.
    pub kvar: f64,
    /// Over its own rating.
    pub loading_pu: f64,
}

impl Share {
    /// Apparent power.
    pub fn kva(&self) -> f64 {
        self.kw.hypot(self.kvar)
    }
    /// Angle of lag in degrees, negative for a leading share.
    pub fn lag_deg(&self) -> f64 {
        Complex { re: self.kw, im: self.kvar }.degrees()
    }
}

const ON_COMMON_BASE: Formula = Formula {
    name: "impedance on the common base of 1 MVA",
    symbol: "|Z_n|",
    formula: "z_n·1000/S_n",
    unit: "pu",
    source: "definition of per unit",
};
const SHARE: Formula = Formula {
    name: "apparent power of a transformer of the bank",
    symbol: "|S_n|",
    formula: "S·Y_n/Y_sum",
    unit: "kVA",
    source: "S_n = S·conj(Y_n/ΣY) with Y = 1/Z, magnitudes shown; for two units S·conj(Z_B/(Z_A+Z_B)); methods, section 2",
};

/// How a bank shares a load of `load_kw` + j`load_kvar` at equal ratios.
///
/// # Errors
/// Fewer than two transformers, a rating or impedance that is not above zero.
pub fn sharing<R: Recorder>(
    w: &mut R,
    members: &[Member],
    load_kw: f64,
    load_kvar: f64,
) -> Result<Vec<Share>, Refusal> {
    if members.len() < 2 {
        let why = "give two or more transformers, their values separated by commas";
        return Err(Refusal::new("rated_kva", members.len(), why));
    }
    let mut sum = Complex { re: 0.0, im: 0.0 };
    let mut admittances = Vec::with_capacity(members.len());
    for (n, member) in members.iter().enumerate() {
        positive("rated_kva", member.rated_kva, "must be above zero")?;
        let why = "has no magnitude; without impedance the sharing is undetermined";
        positive("impedance_pct", member.circuit.z_pu(), why)?;
        let z = member.circuit.impedance().scaled(1000.0 / member.rated_kva);
        let inputs = [("z_n", member.circuit.z_pu()), ("S_n", member.rated_kva)];
        w.step(&ON_COMMON_BASE, &inputs, z.abs());
        w.about(&|| format!("transformer {}", n + 1));
        let y = Complex { re: 1.0, im: 0.0 } / z;
        sum = sum + y;
        admittances.push(y);
    }
    let load = Complex { re: load_kw, im: load_kvar };
    let mut shares = Vec::with_capacity(members.len());
    for (n, (member, y)) in members.iter().zip(admittances).enumerate() {
        let s = load * (y / sum).conj();
        w.step(&SHARE, &[("S", load.abs()), ("Y_n", y.abs()), ("Y_sum", sum.abs())], s.abs());
        w.about(&|| format!("transformer {}", n + 1));
        shares.push(Share { kw: s.re, kvar: s.im, loading_pu: s.abs() / member.rated_kva });
    }
    Ok(shares)
}

const BANK_LIMIT: Formula = Formula {
    name: "load of the bank at which its first transformer reaches its rating",
    symbol: "S_max",
    formula: "S/loading_max",
    unit: "kVA",
    source: "sharing is proportional to the load",
};

/// Load of a bank at which the first transformer reaches its rating (kVA), from its sharing of `load_kva`.
///
/// # Errors
/// No load to start from.
pub fn bank_limit<R: Recorder>(w: &mut R, shares: &[Share], load_kva: f64) -> Result<f64, Refusal> {
    let most = shares.iter().map(|s| s.loading_pu).fold(0.0, f64::max);
    positive("load_kva", most, "must be above zero to find the limit of the bank")?;
    Ok(w.step(&BANK_LIMIT, &[("S", load_kva), ("loading_max", most)], load_kva / most))
}

/// A transformer with the secondary voltage of its tap, for the current that circulates at no load.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Tapped {
    /// Rating and circuit on its own rating.
    pub member: Member,
    /// Rated secondary voltage, the base of the circuit.
    pub rated_v: f64,
    /// Secondary no-load voltage on the tap in use.
    pub no_load_v: f64,
}

/// The current between two transformers of unequal ratio at no load.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Circulating {
    /// The current.
    pub current_a: f64,
    /// Over the rated current of the first transformer.
    pub of_first_pu: f64,
    /// Over the rated current of the second.
    pub of_second_pu: f64,
    /// Difference of the voltages over the lower one.
    pub mismatch_pu: f64,
}

const OHMS: Formula = Formula {
    name: "impedance at the secondary",
    symbol: "|Z|",
    formula: "z·V²/(1000·S_r)",
    unit: "Ω",
    source: "definition of per unit",
};
const CIRCULATING: Formula = Formula {
    name: "circulating current at no load",
    symbol: "I_c",
    formula: "ΔV/(m·Z_AB)",
    unit: "A",
    source: "methods, section 2; Z_AB = |Z_A + Z_B|, m is √3 between lines, else 1",
};

/// The current that circulates at no load between two transformers of unequal secondary voltage.
///
/// # Errors
/// A rating, voltage or impedance that is not above zero.
pub fn circulating<R: Recorder>(
    w: &mut R,
    phases: Phases,
    a: Tapped,
    b: Tapped,
) -> Result<Circulating, Refusal> {
    let mut sum = Complex { re: 0.0, im: 0.0 };
    for t in [a, b] {
        positive("rated_kva", t.member.rated_kva, "must be above zero")?;
        positive("rated_voltage_v", t.rated_v, "must be above zero")?;
        positive("no_load_voltage_v", t.no_load_v, "must be above zero")?;
        let base = t.rated_v * t.rated_v / (1000.0 * t.member.rated_kva);
        let z = t.member.circuit.impedance().scaled(base);
        let inputs =
            [("z", t.member.circuit.z_pu()), ("V", t.rated_v), ("S_r", t.member.rated_kva)];
        w.step(&OHMS, &inputs, z.abs());
        sum = sum + z;
    }
    positive("impedance_pct", sum.abs(), "has no magnitude; nothing limits the current")?;
    let difference = (a.no_load_v - b.no_load_v).abs();
    let current = difference / (phases.root() * sum.abs());
    let inputs = [("ΔV", difference), ("m", phases.root()), ("Z_AB", sum.abs())];
    w.step(&CIRCULATING, &inputs, current);
    let over_rated =
        |t: Tapped| current * phases.root() * t.rated_v / (1000.0 * t.member.rated_kva);
    Ok(Circulating {
        current_a: current,
        of_first_pu: over_rated(a),
        of_second_pu: over_rated(b),
        mismatch_pu: difference / a.no_load_v.min(b.no_load_v),
    })
}

const SWITCH: Formula = Formula {
    name: "load above which n+1 equal transformers lose less than n",
    symbol: "S_n",
    formula: "S_r·√(n·(n+1)·P0/Pk)",
    unit: "kVA",
    source: "common practice; methods, section 2",
};

/// Load above which `n` + 1 equal transformers in parallel lose less than `n` (kVA).
///
/// # Errors
/// A rating or load loss that is not above zero, fewer than one transformer.
pub fn switching_load<R: Recorder>(
    w: &mut R,
    rated_kva: f64,
    no_load_loss_w: f64,
    load_loss_w: f64,
    n: f64,
) -> Result<f64, Refusal> {
    positive("rated_kva", rated_kva, "must be above zero")?;
    positive("load_loss_w", load_loss_w, "must be above zero")?;
    if n < 1.0 || no_load_loss_w < 0.0 {
        let why = "at least one transformer, and a no-load loss that is not negative, are needed";
        return Err(Refusal::new("units", n, why));
    }
    let value = rated_kva * (n * (n + 1.0) * no_load_loss_w / load_loss_w).sqrt();
    let inputs = [("S_r", rated_kva), ("n", n), ("P0", no_load_loss_w), ("Pk", load_loss_w)];
    Ok(w.step(&SWITCH, &inputs, value))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    /// Equal impedances on own ratings share in proportion to the ratings; the shares add up to the load.
    #[test]
    fn equal_impedance_shares_by_rating() {
        let member = |rated_kva| Member { rated_kva, circuit: Circuit { r_pu: 0.01, x_pu: 0.05 } };
        let bank = [member(100.0), member(250.0), member(400.0)];
        let shares = sharing(&mut Silent, &bank, 600.0, 450.0).expect("sound");
        for share in &shares {
            assert!((share.loading_pu - 1.0).abs() < 1e-12);
        }
        let (kw, kvar) = shares.iter().fold((0.0, 0.0), |(kw, kvar), s| (kw + s.kw, kvar + s.kvar));
        assert!((kw - 600.0).abs() < 1e-9 && (kvar - 450.0).abs() < 1e-9);
        assert!((bank_limit(&mut Silent, &shares, 750.0).expect("loaded") - 750.0).abs() < 1e-9);
        assert!(sharing(&mut Silent, &bank[..1], 1.0, 0.0).is_err());
    }

    /// At the switching load n and n+1 transformers lose the same.
    #[test]
    fn switching_load_is_indifferent() {
        for n in [1.0, 2.0, 5.0] {
            let s = switching_load(&mut Silent, 1000.0, 1800.0, 10_500.0, n).expect("sound");
            let lost = |n: f64| n * 1800.0 + 10_500.0 * (s / 1000.0) * (s / 1000.0) / n;
            assert!((lost(n) / lost(n + 1.0) - 1.0).abs() < 1e-12);
        }
    }
}
