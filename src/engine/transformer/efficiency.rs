//! Efficiency at a load, at the best load, and over a day by energy; copper follows the kVA, never the kW.

use super::circuit::positive;
use super::losses::Losses;
use crate::engine::Refusal;
use crate::engine::working::{Formula, Recorder};

const EFFICIENCY: Formula = Formula {
    name: "efficiency at a load",
    symbol: "η",
    formula: "1000·β·S_r·cosφ/(1000·β·S_r·cosφ + P0 + β²·Pk)",
    unit: "pu",
    source: "IEC 60076-20 (memory); methods, section 2",
};

/// Efficiency at a load of `load_pu` of the rating at rated voltage (pu); auxiliaries are not counted.
///
/// # Errors
/// A rating that is not above zero, a negative load or loss, a power factor outside 0 to 1, no load at all.
pub fn at_load<R: Recorder>(
    w: &mut R,
    losses: &Losses,
    load_pu: f64,
    power_factor: f64,
) -> Result<f64, Refusal> {
    check(losses)?;
    let pf = super::circuit::PowerFactor::lagging(power_factor)?.cos;
    let out = 1000.0 * load_pu * losses.rated_kva * pf;
    positive(
        "load_pu",
        out,
        "times the power factor must be above zero; nothing is put out otherwise",
    )?;
    let lost = losses.no_load_loss_w + load_pu * load_pu * losses.load_loss_w;
    let inputs = [
        ("β", load_pu),
        ("S_r", losses.rated_kva),
        ("cosφ", pf),
        ("P0", losses.no_load_loss_w),
        ("Pk", losses.load_loss_w),
    ];
    Ok(w.step(&EFFICIENCY, &inputs, out / (out + lost)))
}

const EFFICIENCY_PCT: Formula =
    Formula { symbol: "η_pct", formula: "100·η", unit: "%", ..EFFICIENCY };

/// Efficiency at a load of `load_pu` of the rating in percent.
///
/// # Errors
/// As [`at_load`].
pub fn at_load_pct<R: Recorder>(
    w: &mut R,
    losses: &Losses,
    load_pu: f64,
    power_factor: f64,
) -> Result<f64, Refusal> {
    w.open();
    let pu = at_load(w, losses, load_pu, power_factor)?;
    Ok(w.close(&EFFICIENCY_PCT, &[("η", pu)], 100.0 * pu))
}

fn check(losses: &Losses) -> Result<(), Refusal> {
    positive("rated_kva", losses.rated_kva, "must be above zero; take it from the nameplate")?;
    let parts = [("no_load_loss_w", losses.no_load_loss_w), ("load_loss_w", losses.load_loss_w)];
    for (quantity, value) in parts {
        if value.is_nan() || value < 0.0 {
            return Err(Refusal::new(quantity, value, "a loss cannot be negative"));
        }
    }
    Ok(())
}

const BEST_LOAD: Formula = Formula {
    name: "load of best efficiency",
    symbol: "β_best",
    formula: "√(P0/Pk)",
    unit: "pu",
    source: "copper equals iron there; methods, section 2",
};

/// The load of best efficiency, β* (pu).
///
/// # Errors
/// A load loss that is not above zero.
pub fn best_load<R: Recorder>(w: &mut R, losses: &Losses) -> Result<f64, Refusal> {
    check(losses)?;
    let why = "must be above zero; without copper loss efficiency rises with the load for ever";
    positive("load_loss_w", losses.load_loss_w, why)?;
    let value = (losses.no_load_loss_w / losses.load_loss_w).sqrt();
    let inputs = [("P0", losses.no_load_loss_w), ("Pk", losses.load_loss_w)];
    Ok(w.step(&BEST_LOAD, &inputs, value))
}

const LOST: Formula = Formula {
    name: "loss that an efficiency stands for",
    symbol: "P_loss",
    formula: "P_out·(1/η − 1)",
    unit: "W",
    source: "definition of efficiency",
};
const HALF: Formula = Formula {
    name: "iron loss, equal to the copper loss at the load of best efficiency",
    symbol: "P0",
    formula: "P_loss/2",
    unit: "W",
    source: "methods, section 2",
};
const COPPER_OF_BEST: Formula = Formula {
    name: "load loss at rated load",
    symbol: "Pk",
    formula: "P0/β_best²",
    unit: "W",
    source: "methods, section 2",
};

/// Loss at an output of `output_w` of which the efficiency (pu) is known (W).
///
/// # Errors
/// An efficiency outside 0 to 1.
pub fn loss_of<R: Recorder>(w: &mut R, output_w: f64, efficiency_pu: f64) -> Result<f64, Refusal> {
    if efficiency_pu <= 0.0 || efficiency_pu > 1.0 || efficiency_pu.is_nan() {
        let why = "is above 0 and at most 1 (100 %)";
        return Err(Refusal::new("efficiency_pu", efficiency_pu, why));
    }
    let value = output_w * (1.0 / efficiency_pu - 1.0);
    Ok(w.step(&LOST, &[("P_out", output_w), ("η", efficiency_pu)], value))
}

/// The losses of which only the best efficiency (pu) is known, with the load and power factor at which it is
/// reached.
///
/// # Errors
/// An efficiency outside 0 to 1, a rating or load that is not above zero.
pub fn losses_of_best<R: Recorder>(
    w: &mut R,
    rated_kva: f64,
    efficiency_pu: f64,
    load_pu: f64,
    power_factor: f64,
) -> Result<Losses, Refusal> {
    positive("rated_kva", rated_kva, "must be above zero; take it from the nameplate")?;
    positive("best_load_pu", load_pu, "must be above zero")?;
    let lost = loss_of(w, 1000.0 * rated_kva * load_pu * power_factor, efficiency_pu)?;
    let iron = w.step(&HALF, &[("P_loss", lost)], lost / 2.0);
    let copper = iron / (load_pu * load_pu);
    w.step(&COPPER_OF_BEST, &[("P0", iron), ("β_best", load_pu)], copper);
    Ok(Losses {
        rated_kva,
        no_load_loss_w: iron,
        load_loss_w: copper,
        auxiliary_loss_w: 0.0,
        reactance_pu: None,
    })
}

/// A load that stands for some hours.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct LoadStep {
    /// Apparent power.
    pub kva: f64,
    /// Active power.
    pub kw: f64,
    /// How long.
    pub hours: f64,
}

/// Energies of a day.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct DayEnergy {
    /// Delivered.
    pub output_kwh: f64,
    /// Lost in the iron over all energised hours.
    pub no_load_kwh: f64,
    /// Lost in the copper.
    pub load_kwh: f64,
}

impl DayEnergy {
    /// Efficiency by energy, none where nothing is delivered (pu).
    pub fn efficiency_pu(&self) -> Option<f64> {
        let all = self.output_kwh + self.no_load_kwh + self.load_kwh;
        (self.output_kwh > 0.0).then(|| self.output_kwh / all)
    }
}

const STEP_OUTPUT: Formula = Formula {
    name: "energy delivered in a step",
    symbol: "E",
    formula: "P·Δt",
    unit: "kWh",
    source: "methods, section 2",
};
const STEP_COPPER: Formula = Formula {
    name: "squared load times hours of a step",
    symbol: "q",
    formula: "(S/S_r)²·Δt",
    unit: "h",
    source: "copper by kVA; methods, section 2",
};
const OUTPUT: Formula = Formula {
    name: "energy delivered",
    symbol: "E_out",
    formula: "Σ E",
    unit: "kWh",
    source: "methods, section 2",
};
const IRON: Formula = Formula {
    name: "energy of the no-load loss",
    symbol: "E0",
    formula: "P0·h/1000",
    unit: "kWh",
    source: "methods, section 2",
};
const COPPER: Formula = Formula {
    name: "energy of the load loss: copper by kVA",
    symbol: "Ek",
    formula: "Pk/1000·Σq",
    unit: "kWh",
    source: "methods, section 2",
};
const ALL_DAY: Formula = Formula {
    name: "all-day efficiency",
    symbol: "η_day",
    formula: "E_out/(E_out + E0 + Ek)",
    unit: "pu",
    source: "methods, section 2",
};

/// Energies of a stepped load; the iron is lost in all `energised_hours` (24 for a day), idle ones included.
///
/// # Errors
/// Steps longer than the energised hours, a step with more kW than kVA, negative values.
pub fn energies<R: Recorder>(
    w: &mut R,
    losses: &Losses,
    steps: &[LoadStep],
    energised_hours: f64,
) -> Result<DayEnergy, Refusal> {
    check(losses)?;
    let (mut output, mut copper, mut hours) = (0.0, 0.0, 0.0);
    for (n, step) in steps.iter().enumerate() {
        let about = || format!("step {}", n + 1);
        if step.kva < 0.0 || step.kw < 0.0 || step.hours < 0.0 {
            let why = "loads and hours cannot be negative";
            return Err(Refusal::new("load_kw", step.kw, why));
        }
        if step.kw > step.kva * (1.0 + 1e-12) {
            let why = format!("is more than the {} kVA of the same step", step.kva);
            return Err(Refusal::new("load_kw", step.kw, why));
        }
        let s = step.kva / losses.rated_kva;
        let inputs = [("P", step.kw), ("Δt", step.hours)];
        output += w.step(&STEP_OUTPUT, &inputs, step.kw * step.hours);
        w.about(&about);
        let inputs = [("S", step.kva), ("S_r", losses.rated_kva), ("Δt", step.hours)];
        copper += w.step(&STEP_COPPER, &inputs, s * s * step.hours);
        w.about(&about);
        hours += step.hours;
    }
    if hours > energised_hours * (1.0 + 1e-12) {
        let why = format!("add up to more than the {energised_hours} energised hours");
        return Err(Refusal::new("hours", hours, why));
    }
    w.step(&OUTPUT, &[], output);
    let iron = losses.no_load_loss_w * energised_hours / 1000.0;
    w.step(&IRON, &[("P0", losses.no_load_loss_w), ("h", energised_hours)], iron);
    let load = losses.load_loss_w / 1000.0 * copper;
    w.step(&COPPER, &[("Pk", losses.load_loss_w), ("Σq", copper)], load);
    Ok(DayEnergy { output_kwh: output, no_load_kwh: iron, load_kwh: load })
}

/// All-day efficiency of a stepped load (pu).
///
/// # Errors
/// As [`energies`]; nothing delivered.
pub fn all_day<R: Recorder>(
    w: &mut R,
    losses: &Losses,
    steps: &[LoadStep],
    energised_hours: f64,
) -> Result<f64, Refusal> {
    w.open();
    let e = energies(w, losses, steps, energised_hours)?;
    let Some(value) = e.efficiency_pu() else {
        let why = "nothing is delivered in these steps, so there is no efficiency";
        return Err(Refusal::new("load_kw", 0, why));
    };
    let inputs = [("E_out", e.output_kwh), ("E0", e.no_load_kwh), ("Ek", e.load_kwh)];
    Ok(w.close(&ALL_DAY, &inputs, value))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    fn losses() -> Losses {
        Losses {
            rated_kva: 150.0,
            no_load_loss_w: 1400.0,
            load_loss_w: 1600.0,
            auxiliary_loss_w: 0.0,
            reactance_pu: None,
        }
    }

    /// No load near the best one is better; the best one follows back from its efficiency.
    #[test]
    fn best_load_is_best() {
        let l = losses();
        let best = best_load(&mut Silent, &l).expect("sound");
        let eta = |beta| at_load(&mut Silent, &l, beta, 0.9).expect("sound");
        assert!(eta(best) > eta(best * 1.01) && eta(best) > eta(best * 0.99));
        let back = losses_of_best(&mut Silent, 150.0, eta(best), best, 0.9).expect("sound");
        assert!((back.no_load_loss_w / 1400.0 - 1.0).abs() < 1e-12);
        assert!((back.load_loss_w / 1600.0 - 1.0).abs() < 1e-12);
    }

    #[test]
    fn impossible_loads_are_refused() {
        let step = |kva, kw, hours| [LoadStep { kva, kw, hours }];
        assert!(energies(&mut Silent, &losses(), &step(100.0, 120.0, 5.0), 24.0).is_err());
        assert!(energies(&mut Silent, &losses(), &step(100.0, 80.0, 25.0), 24.0).is_err());
        assert!(all_day(&mut Silent, &losses(), &step(0.0, 0.0, 24.0), 24.0).is_err());
        assert!(at_load(&mut Silent, &losses(), 0.0, 1.0).is_err());
        assert!(at_load(&mut Silent, &losses(), 1.0, 1.2).is_err());
    }
}
