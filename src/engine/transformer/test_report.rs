//! What a test report of a unit says of its nameplate: open circuit, short circuit, the split of the load loss by
//! winding resistances, and the load loss at the reference temperature (methods, section 1).

use super::circuit::{Carried, Circuit, transfer};
use super::nameplate::{
    self, CorrectedLoss, Correction, OpenCircuit, Phases, Resistances, ShortCircuit, Test,
};
use super::temperature::vanishing_temp_c;
use super::vector_group::two_windings;
use crate::engine::Refusal;
use crate::engine::columns::{Side, TestReport, Unit, WindingMetal};
use crate::engine::working::{Formula, Recorder};

/// Reference temperature of a load loss where the nameplate names none (°C).
const REFERENCE_TEMP_C: f64 = 75.0;

/// The part of a nameplate that a test is read against.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Plate<'a> {
    /// Rated power (kVA).
    pub rated_kva: f64,
    /// Number of phases.
    pub phases: Phases,
    /// Rated voltage of the high-voltage winding (kV).
    pub hv_kv: Option<f64>,
    /// Rated voltage of the low-voltage winding (kV).
    pub lv_kv: Option<f64>,
    /// Vector group.
    pub vector_group: Option<&'a str>,
    /// Winding metal.
    pub winding_metal: WindingMetal,
    /// Reference temperature of the load loss (°C).
    pub reference_temp_c: f64,
    /// Stray part of the load loss at the reference temperature where no resistances were measured (pu).
    pub stray_share_pu: f64,
}

impl<'a> Plate<'a> {
    /// The plate of a unit; what is blank falls to three phases, copper and 75 °C.
    ///
    /// # Errors
    /// A number of phases other than 1 and 3.
    pub fn of_unit(unit: &'a Unit, stray_share_pu: f64) -> Result<Self, Refusal> {
        Ok(Self {
            rated_kva: unit.rated_kva,
            phases: Phases::of(unit.phases.unwrap_or(3))?,
            hv_kv: unit.hv_kv,
            lv_kv: unit.lv_kv,
            vector_group: unit.vector_group.as_deref(),
            winding_metal: unit.winding_metal.unwrap_or(WindingMetal::Copper),
            reference_temp_c: Self::reference_temp_c(unit),
            stray_share_pu,
        })
    }

    /// Reference temperature of a unit's load loss (°C).
    pub fn reference_temp_c(unit: &Unit) -> f64 {
        unit.reference_temp_c.unwrap_or(REFERENCE_TEMP_C)
    }

    /// Rated voltage of a winding (V).
    fn rated_v(&self, side: Side) -> Option<f64> {
        if side == Side::Hv { self.hv_kv } else { self.lv_kv }.map(|kv| 1000.0 * kv)
    }

    fn needed_v(&self, side: Side, why: &str) -> Result<f64, Refusal> {
        let name = if side == Side::Hv { "hv_kv" } else { "lv_kv" };
        self.rated_v(side).ok_or_else(|| Refusal::new(name, "", why))
    }
}

/// What a report says, as far as its tests go.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Tested {
    /// Open-circuit test.
    pub open: Option<OpenCircuit>,
    /// No-load current in percent of rated current; none where the rated voltage of the fed winding is not known.
    pub no_load_current_pct: Option<f64>,
    /// Short-circuit test and what follows from it.
    pub short: Option<Shorted>,
    /// Series resistance brought to the winding that was fed in the open-circuit test (Ω), the copper loss of the no-load
    /// current in it, and the core loss that is left (W); none unless both tests and both voltages are known.
    pub open_circuit_copper: Option<[f64; 3]>,
}

/// A short-circuit test brought to the reference temperature.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Shorted {
    /// At rated current and the temperature of the test.
    pub test: ShortCircuit,
    /// At the reference temperature.
    pub corrected: CorrectedLoss,
    /// The circuit at the reference temperature.
    pub circuit: Circuit,
    /// Its impedance in percent.
    pub impedance_pct: f64,
}

const IMPEDANCE_PCT: Formula = Formula {
    name: "impedance in percent",
    symbol: "Z_pct",
    formula: "100·Z",
    unit: "%",
    source: "definition",
};

/// Reads a report against a plate.
///
/// # Errors
/// No complete test; a test that contradicts the plate or itself; a voltage that is needed and blank.
pub fn read<R: Recorder>(w: &mut R, plate: &Plate, report: &TestReport) -> Result<Tested, Refusal> {
    if let Some(group) = plate.vector_group {
        two_windings(group)?;
    }
    let test = |v, a, p| Some(Test { voltage_v: v?, current_a: a?, power_w: p? });
    let r = report;
    let open = test(r.open_circuit_voltage_v, r.open_circuit_current_a, r.open_circuit_power_w);
    let short = test(r.short_circuit_voltage_v, r.short_circuit_current_a, r.short_circuit_power_w);
    if open.is_none() && short.is_none() {
        let why =
            "voltage, current and power of an open-circuit or a short-circuit test are needed";
        return Err(Refusal::new("open_circuit_power_w", "", why));
    }
    let mut tested = Tested::default();
    let fed = r.open_circuit_side.unwrap_or(Side::Lv);
    if let Some(test) = open {
        tested.open = Some(nameplate::open_circuit(w, plate.phases, test, plate.rated_v(fed))?);
        if let Some(volts) = plate.rated_v(fed) {
            let rated = nameplate::rated_current(w, plate.phases, plate.rated_kva, volts)?;
            let percent = nameplate::no_load_current_pct(w, test.current_a, rated);
            tested.no_load_current_pct = Some(percent);
        }
    }
    let Some(short) = short else { return Ok(tested) };
    let shorted = short_circuit(w, plate, report, short)?;
    tested.short = Some(shorted);
    if let (Some(open), Some(hv), Some(lv)) =
        (open, plate.rated_v(Side::Hv), plate.rated_v(Side::Lv))
    {
        let volts = |side| if side == Side::Hv { hv } else { lv };
        let (from, to) = (volts(r.short_circuit_side.unwrap_or(Side::Hv)), volts(fed));
        let ohm = transfer(w, Carried::Impedance(shorted.test.resistance_ohm), from, to)?;
        let lost = nameplate::open_circuit_copper(w, plate.phases, open.current_a, ohm);
        let core = nameplate::core_loss(w, open.power_w, lost);
        tested.open_circuit_copper = Some([ohm, lost, core]);
    }
    Ok(tested)
}

fn short_circuit<R: Recorder>(
    w: &mut R,
    plate: &Plate,
    report: &TestReport,
    test: Test,
) -> Result<Shorted, Refusal> {
    let why = "is needed: rated voltage of the winding that was fed in the short-circuit test";
    let fed_v = plate.needed_v(report.short_circuit_side.unwrap_or(Side::Hv), why)?;
    let kva = plate.rated_kva;
    let copper = nameplate::short_circuit(w, plate.phases, test, kva, fed_v)?;
    let correction = Correction {
        metal: plate.winding_metal,
        test_temp_c: report.test_temp_c,
        reference_temp_c: plate.reference_temp_c,
        stray_share_pu: plate.stray_share_pu,
    };
    let resistive = match (report.hv_resistance_ohm, report.lv_resistance_ohm) {
        (Some(hv_ohm), Some(lv_ohm)) => {
            let why = "is needed for the current that the winding resistance carries";
            let [hv_v, lv_v] = [plate.needed_v(Side::Hv, why)?, plate.needed_v(Side::Lv, why)?];
            let hv_a = nameplate::rated_current(w, plate.phases, kva, hv_v)?;
            let lv_a = nameplate::rated_current(w, plate.phases, kva, lv_v)?;
            let measured = Resistances { hv_ohm, lv_ohm, temp_c: report.resistance_temp_c };
            let at = Some(report.test_temp_c.unwrap_or(plate.reference_temp_c));
            let (t0, loss) = (vanishing_temp_c(plate.winding_metal), copper.load_loss_w);
            let amperes = [hv_a, lv_a];
            Some(nameplate::resistive_loss(w, plate.phases, measured, amperes, loss, t0, at)?)
        }
        (None, None) => None,
        _ => {
            let why = "the resistances of both windings are needed to split the load loss";
            return Err(Refusal::new("lv_resistance_ohm", "", why));
        }
    };
    let corrected = nameplate::at_reference(w, copper.load_loss_w, resistive, correction);
    let circuit = if corrected.load_loss_w == copper.load_loss_w {
        copper.circuit
    } else {
        nameplate::circuit_at(w, copper.circuit, kva, corrected.load_loss_w)
    };
    let z = circuit.magnitude(w);
    let impedance_pct = w.step(&IMPEDANCE_PCT, &[("Z", z)], 100.0 * z);
    Ok(Shorted { test: copper, corrected, circuit, impedance_pct })
}

impl Tested {
    /// A unit with the blanks of its nameplate filled from its report. What the nameplate says, or what follows from its
    /// total loss, stays; a load loss from the report is at the rating, whatever base the nameplate names.
    #[must_use]
    pub fn fill(&self, unit: &Unit) -> Unit {
        let mut filled = unit.clone();
        let follows = |other: Option<f64>| other.is_some() && unit.total_loss_w.is_some();
        if !follows(unit.load_loss_w) {
            let tested = self.open.map(|open| open.no_load_loss_w);
            filled.no_load_loss_w = unit.no_load_loss_w.or(tested);
        }
        filled.no_load_current_pct = unit.no_load_current_pct.or(self.no_load_current_pct);
        let Some(short) = &self.short else { return filled };
        filled.impedance_pct = unit.impedance_pct.or(Some(short.impedance_pct));
        if unit.load_loss_w.is_none() && unit.total_loss_w.is_none() {
            filled.load_loss_w = Some(short.corrected.load_loss_w);
            filled.loss_base_kva = None;
        }
        filled
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    /// The 20 kVA, 2200/220 V transformer of T3-OC-SC in `tests/reference/check-values.json`.
    fn unit() -> Unit {
        let voltages = (Some(1), Some(2.2), Some(0.22));
        let mut unit = Unit { unit: "T".into(), rated_kva: 20.0, ..Unit::blank() };
        (unit.phases, unit.hv_kv, unit.lv_kv) = voltages;
        unit
    }

    fn report() -> TestReport {
        TestReport {
            unit: "T".into(),
            open_circuit_voltage_v: Some(220.0),
            open_circuit_current_a: Some(4.2),
            open_circuit_power_w: Some(148.0),
            short_circuit_voltage_v: Some(86.0),
            short_circuit_current_a: Some(10.5),
            short_circuit_power_w: Some(360.0),
            ..TestReport::blank()
        }
    }

    fn tested(unit: &Unit) -> Tested {
        let plate = Plate::of_unit(unit, 0.0).expect("one phase");
        read(&mut Silent, &plate, &report()).expect("sound")
    }

    #[test]
    fn only_blanks_are_filled() {
        let blank = unit();
        let all = tested(&blank).fill(&blank);
        assert_eq!(all.no_load_loss_w, Some(148.0));
        assert!((all.load_loss_w.expect("filled") / 269.860_010_1 - 1.0).abs() < 1e-9);
        assert!((all.impedance_pct.expect("filled") / (7_445.887_446 / 2200.0) - 1.0).abs() < 1e-9);
        assert!((all.no_load_current_pct.expect("filled") / 4.62 - 1.0).abs() < 1e-12);
        let stated = Unit {
            no_load_loss_w: Some(150.0),
            total_loss_w: Some(420.0),
            loss_base_kva: Some(15.0),
            ..unit()
        };
        let filled = tested(&stated).fill(&stated);
        assert_eq!((filled.no_load_loss_w, filled.load_loss_w), (Some(150.0), None), "follows");
        assert_eq!(filled.loss_base_kva, Some(15.0));
        let base = Unit { loss_base_kva: Some(15.0), ..unit() };
        assert_eq!(tested(&base).fill(&base).loss_base_kva, None, "a test is at the rating");
        let iron = Unit { load_loss_w: Some(270.0), total_loss_w: Some(420.0), ..unit() };
        assert_eq!(tested(&iron).fill(&iron).no_load_loss_w, None, "total less load loss");
    }
}
