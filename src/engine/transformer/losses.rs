//! Losses of a transformer at a load and over a year: iron follows voltage, copper follows current.

use super::circuit::of_nameplate;
use crate::engine::Refusal;
use crate::engine::loading::Duty;
use crate::engine::loading::duty::peak_of_year;
use crate::engine::transformer::voltage_drop;
use crate::engine::working::{Formula, Recorder};

/// Rated losses of a transformer, with the load loss at `rated_kva`, and what its current depends on.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Losses {
    /// Rated power, S_r.
    pub rated_kva: f64,
    /// No-load (iron) loss, P0.
    pub no_load_loss_w: f64,
    /// Load (copper) loss at rated current and reference temperature, Pk.
    pub load_loss_w: f64,
    /// Fans and pumps, P_aux.
    pub auxiliary_loss_w: f64,
    /// Series reactance per unit of the rating; none where it is not known. Only the drop voltage model asks.
    pub reactance_pu: Option<f64>,
}

impl Losses {
    /// The same with the reactance that a short-circuit impedance gives beside the load loss; none where it is blank
    /// or below the resistance.
    #[must_use]
    pub fn with_impedance<R: Recorder>(self, w: &mut R, impedance_pct: Option<f64>) -> Self {
        let circuit =
            impedance_pct.and_then(|z| of_nameplate(w, self.rated_kva, self.load_loss_w, z).ok());
        Self { reactance_pu: circuit.map(|circuit| circuit.x_pu), ..self }
    }
}

/// Energy lost in a year.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Energy {
    /// By the iron, E0.
    pub no_load_energy_kwh: f64,
    /// By the copper, Ek.
    pub load_energy_kwh: f64,
    /// By fans and pumps, Ea.
    pub auxiliary_energy_kwh: f64,
}

impl Energy {
    /// All three together.
    pub fn total_kwh(&self) -> f64 {
        self.no_load_energy_kwh + self.load_energy_kwh + self.auxiliary_energy_kwh
    }

    /// The three with their symbols.
    pub const fn inputs(&self) -> [(&'static str, f64); 3] {
        [
            ("E0", self.no_load_energy_kwh),
            ("Ek", self.load_energy_kwh),
            ("Ea", self.auxiliary_energy_kwh),
        ]
    }
}

const LOAD_LOSS_AT_RATING: Formula = Formula {
    name: "load loss at the rating",
    symbol: "Pk",
    formula: "Pk_base·(S_r/S_base)²",
    unit: "W",
    source: "copper follows current squared; methods, section 1",
};
const LOAD_LOSS_FROM_TOTAL: Formula = Formula {
    name: "load loss from the total loss",
    symbol: "Pk_base",
    formula: "P_total − P0",
    unit: "W",
    source: "common practice of quotations, no source; methods, section 1",
};
const NO_LOAD_FROM_TOTAL: Formula = Formula {
    name: "no-load loss from the total loss",
    symbol: "P0",
    formula: "P_total − Pk",
    ..LOAD_LOSS_FROM_TOTAL
};

/// The quoted losses of a transformer brought to its rating.
///
/// First Pk = total − P0 where only the total is given, then Pk·(rated/loss_base)²; P0 is never scaled.
///
/// # Errors
/// A loss is missing, or the total is below the no-load loss.
pub fn quoted<R: Recorder>(
    w: &mut R,
    rated_kva: f64,
    loss_base_kva: Option<f64>,
    no_load_loss_w: Option<f64>,
    load_loss_w: Option<f64>,
    total_loss_w: Option<f64>,
    auxiliary_loss_w: Option<f64>,
) -> Result<Losses, Refusal> {
    let missing = |quantity, why: &str| Err(Refusal::new(quantity, "", why));
    let (p0, base) = match (no_load_loss_w, load_loss_w, total_loss_w) {
        (Some(p0), Some(pk), _) => (p0, pk),
        (Some(p0), None, Some(total)) if total >= p0 => {
            (p0, w.step(&LOAD_LOSS_FROM_TOTAL, &[("P_total", total), ("P0", p0)], total - p0))
        }
        (Some(p0), None, Some(total)) => {
            let why = format!(
                "is below the no-load loss of {p0} W; total_loss_w is no-load plus load loss"
            );
            return Err(Refusal::new("total_loss_w", total, why));
        }
        (None, Some(pk), Some(total)) if total >= pk => {
            let inputs = [("P_total", total), ("Pk", pk)];
            (w.step(&NO_LOAD_FROM_TOTAL, &inputs, total - pk), pk)
        }
        (Some(_), None, None) => {
            return missing("load_loss_w", "load loss is blank, and so is total_loss_w");
        }
        (None, Some(_), _) => return missing("no_load_loss_w", "no-load loss is blank"),
        (None, None, Some(_)) => {
            return missing(
                "no_load_loss_w",
                "only total_loss_w is given; one of its parts is needed",
            );
        }
        (None, None, None) => return missing("no_load_loss_w", "no-load and load loss are blank"),
    };
    let load_loss_w = match loss_base_kva {
        Some(s_base) if s_base != rated_kva => {
            let value = base * (rated_kva / s_base) * (rated_kva / s_base);
            let inputs = [("Pk_base", base), ("S_r", rated_kva), ("S_base", s_base)];
            w.step(&LOAD_LOSS_AT_RATING, &inputs, value)
        }
        _ => base,
    };
    Ok(Losses {
        rated_kva,
        no_load_loss_w: p0,
        load_loss_w,
        auxiliary_loss_w: auxiliary_loss_w.unwrap_or(0.0),
        reactance_pu: None,
    })
}

/// Whether the total loss and its two parts differ by more than 1 % of it (W).
pub fn contradict(
    no_load_loss_w: Option<f64>,
    load_loss_w: Option<f64>,
    total_loss_w: Option<f64>,
) -> bool {
    match (no_load_loss_w, load_loss_w, total_loss_w) {
        (Some(p0), Some(pk), Some(total)) => (p0 + pk - total).abs() > 0.01 * total,
        _ => false,
    }
}

const AT_LOAD: Formula = Formula {
    name: "loss at a load",
    symbol: "P",
    formula: "P0·v² + Pk·i²",
    unit: "W",
    source: "IEC 60076-1: iron follows voltage, copper follows current; methods, section 2",
};

/// Loss with `v_pu` of rated voltage on the core and `current_pu` of rated current in the windings (W).
pub fn at_current<R: Recorder>(w: &mut R, losses: &Losses, v_pu: f64, current_pu: f64) -> f64 {
    let (p0, pk) = (losses.no_load_loss_w, losses.load_loss_w);
    let value = p0 * v_pu * v_pu + pk * current_pu * current_pu;
    w.step(&AT_LOAD, &[("P0", p0), ("v", v_pu), ("Pk", pk), ("i", current_pu)], value)
}

const NO_LOAD_ENERGY: Formula = Formula {
    name: "energy of the no-load loss in a year",
    symbol: "E0",
    formula: "P0·h/1000",
    unit: "kWh",
    source: "methods, section 4",
};
const NO_LOAD_ENERGY_AT_VOLTAGE: Formula = Formula {
    name: "energy of the no-load loss in a year at the operating voltage",
    formula: "P0·v_hv²·h/1000",
    source: "methods, sections 2 and 4 (drop voltage model)",
    ..NO_LOAD_ENERGY
};
const LOAD_ENERGY: Formula = Formula {
    name: "energy of the load loss in year k",
    symbol: "Ek",
    formula: "Pk·(S_k/S_r)²·LsF·h/1000",
    unit: "kWh",
    source: "methods, section 4 (rated voltage model)",
};
const AUXILIARY_ENERGY: Formula = Formula {
    name: "energy of fans and pumps in a year",
    symbol: "Ea",
    formula: "P_aux·h_aux/1000",
    unit: "kWh",
    source: "methods, section 4",
};

/// Energy of the no-load loss in a year (kWh).
fn no_load_energy<R: Recorder>(w: &mut R, losses: &Losses, duty: &Duty) -> f64 {
    let (p0, h) = (losses.no_load_loss_w, duty.energised_hours);
    let v = duty.drop.as_ref().map_or(1.0, |drop| drop.v_hv_pu);
    let formula = if duty.drop.is_some() { &NO_LOAD_ENERGY_AT_VOLTAGE } else { &NO_LOAD_ENERGY };
    w.step(formula, &[("P0", p0), ("v_hv", v), ("h", h)], p0 * v * v * h / 1000.0)
}

/// Energy of fans and pumps in a year (kWh).
pub fn auxiliary_energy<R: Recorder>(w: &mut R, losses: &Losses, duty: &Duty) -> f64 {
    let (p_aux, h_aux) = (losses.auxiliary_loss_w, duty.auxiliary_hours);
    w.step(&AUXILIARY_ENERGY, &[("P_aux", p_aux), ("h_aux", h_aux)], p_aux * h_aux / 1000.0)
}

/// Energy of the load loss in year `k` at rated voltage (kWh).
fn load_energy<R: Recorder>(
    w: &mut R,
    losses: &Losses,
    duty: &Duty,
    k: usize,
    growth_years: usize,
) -> f64 {
    w.open();
    let (peak, h) = (peak_of_year(w, duty, k, growth_years), duty.energised_hours);
    let beta = peak / losses.rated_kva;
    let value = losses.load_loss_w * (beta * beta) * duty.loss_factor_pu * h / 1000.0;
    let inputs = [
        ("Pk", losses.load_loss_w),
        ("S_k", peak),
        ("S_r", losses.rated_kva),
        ("LsF", duty.loss_factor_pu),
        ("h", h),
    ];
    w.close(&LOAD_ENERGY, &inputs, value)
}

/// Energy lost in year `k` under a duty: at rated voltage, or by the drop voltage model where the duty has one.
pub fn annual_energy<R: Recorder>(
    w: &mut R,
    losses: &Losses,
    duty: &Duty,
    k: usize,
    growth_years: usize,
) -> Energy {
    let no_load_energy_kwh = no_load_energy(w, losses, duty);
    let load_energy_kwh = match &duty.drop {
        None => load_energy(w, losses, duty, k, growth_years),
        Some(drop) => voltage_drop::load_energy(w, losses, drop, duty, k, growth_years),
    };
    let auxiliary_energy_kwh =
        if losses.auxiliary_loss_w > 0.0 { auxiliary_energy(w, losses, duty) } else { 0.0 };
    Energy { no_load_energy_kwh, load_energy_kwh, auxiliary_energy_kwh }
}

const EFFICIENCY: Formula = Formula {
    name: "efficiency over a year, by energy",
    symbol: "η",
    formula: "100·W/(W + E0 + Ek + Ea)",
    unit: "%",
    source: "all-day efficiency over a year; methods, section 2",
};
const DELIVERED: Formula = Formula {
    name: "energy delivered in year 1",
    symbol: "W",
    formula: "S_1·LF·cosφ·h",
    unit: "kWh",
    source: "methods, section 2",
};

/// Efficiency of year 1 by energy (%), at the power factor of the duty or 1; none where the load factor is not
/// known or nothing is delivered.
pub fn annual_efficiency_pct<R: Recorder>(w: &mut R, energy: &Energy, duty: &Duty) -> Option<f64> {
    let lf = duty.load_factor_pu?;
    let pf = duty.power_factor.unwrap_or(1.0);
    let delivered = duty.peak_kva * lf * pf * duty.energised_hours;
    if delivered <= 0.0 {
        return None;
    }
    w.open();
    let inputs = [("S_1", duty.peak_kva), ("LF", lf), ("cosφ", pf), ("h", duty.energised_hours)];
    w.step(&DELIVERED, &inputs, delivered);
    let value = 100.0 * delivered / (delivered + energy.total_kwh());
    let [e0, ek, ea] = energy.inputs();
    let inputs = [("W", delivered), e0, ek, ea];
    Some(w.close(&EFFICIENCY, &inputs, value))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    #[test]
    fn quoted_losses_come_to_the_rating() {
        let quote = |base, p0, pk, total| quoted(&mut Silent, 50_000.0, base, p0, pk, total, None);
        let losses =
            quote(Some(30_000.0), Some(20_000.0), None, Some(110_000.0)).expect("complete");
        assert_eq!(losses.no_load_loss_w, 20_000.0);
        assert!((losses.load_loss_w - 90_000.0 * 25.0 / 9.0).abs() < 1e-9);
        assert!(quote(None, Some(20.0), None, Some(10.0)).is_err());
        assert!(quote(None, None, None, Some(10.0)).is_err());
        assert!(quote(None, Some(1.0), None, None).is_err());
    }
}
