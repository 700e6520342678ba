//! What is doubtful about a nameplate by common practice (no source): warnings, never a rejection (methods,
//! section 1).

use std::ops::RangeInclusive;

use crate::engine::columns::{Side, TestReport, Unit};

/// A value outside what is usual.
#[derive(Clone, Debug, PartialEq)]
pub struct Doubt {
    /// The quantity, by its name.
    pub quantity: &'static str,
    /// Its value.
    pub value: f64,
    /// What is usual.
    pub why: String,
}

impl std::fmt::Display for Doubt {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(f, "{} {}: {}", self.quantity, self.value, self.why)
    }
}

/// Usual short-circuit impedances: up to this rating (kVA), from, to (%).
const IMPEDANCE: [(f64, f64, f64); 3] =
    [(2500.0, 1.5, 8.0), (30_000.0, 4.0, 12.0), (f64::INFINITY, 7.0, 20.0)];

/// Winding resistances are below this (pu).
const RESISTANCE_PU: f64 = 0.05;

/// Rating above which a unit counts as large (kVA), and the efficiency it reaches at full load (%).
const LARGE_KVA: f64 = 30_000.0;
const LARGE_EFFICIENCY_PCT: f64 = 99.5;

/// Doubts about a nameplate; what is blank is not looked at.
pub fn nameplate(
    rated_kva: f64,
    impedance_pct: Option<f64>,
    no_load_loss_w: Option<f64>,
    load_loss_w: Option<f64>,
) -> Vec<Doubt> {
    let mut doubts = Vec::new();
    let band = IMPEDANCE.iter().find(|(kva, ..)| rated_kva <= *kva);
    if let (Some(z), Some((_, from, to))) = (impedance_pct, band)
        && !(*from..=*to).contains(&z)
    {
        let why = format!("usual at {rated_kva} kVA are {from} to {to} %, rising with the voltage");
        doubts.push(Doubt { quantity: "impedance_pct", value: z, why });
    }
    if let Some(pk) = load_loss_w
        && pk / (1000.0 * rated_kva) >= RESISTANCE_PU
    {
        let why = format!(
            "is {RESISTANCE_PU} pu of the rating or more; windings have less, large ones far less"
        );
        doubts.push(Doubt { quantity: "load_loss_w", value: pk, why });
    }
    if let (Some(p0), Some(pk)) = (no_load_loss_w, load_loss_w)
        && rated_kva > LARGE_KVA
    {
        let efficiency = 100.0 / (1.0 + (p0 + pk) / (1000.0 * rated_kva));
        if efficiency <= LARGE_EFFICIENCY_PCT {
            let why = format!(
                "gives {efficiency:.3} % at full load; large units reach more than {LARGE_EFFICIENCY_PCT} %"
            );
            doubts.push(Doubt { quantity: "load_loss_w", value: pk, why });
        }
    }
    doubts
}

/// Figures of a nameplate that cannot all be right (losses at the rating); what is blank is not looked at.
pub fn contradictions(
    rated_kva: f64,
    impedance_pct: Option<f64>,
    no_load_current_pct: Option<f64>,
    no_load_loss_w: Option<f64>,
    load_loss_w: Option<f64>,
) -> Vec<Doubt> {
    let mut doubts = Vec::new();
    let percent = |loss_w: f64| 100.0 * loss_w / (1000.0 * rated_kva);
    if let (Some(z), Some(r)) = (impedance_pct, load_loss_w.map(percent))
        && z < r
    {
        let why = format!("is below the winding resistance of {r:.3} % that the load loss states");
        doubts.push(Doubt { quantity: "impedance_pct", value: z, why });
    }
    if let (Some(i0), Some(iw)) = (no_load_current_pct, no_load_loss_w.map(percent))
        && i0 < iw
    {
        let why = format!("is below the {iw:.3} % that the no-load loss alone draws");
        doubts.push(Doubt { quantity: "no_load_current_pct", value: i0, why });
    }
    doubts
}

/// Whether the rating at which the load loss is quoted lies far from the rating: cooling stages do not.
pub fn loss_base_is_far(rated_kva: f64, loss_base_kva: Option<f64>) -> bool {
    loss_base_kva.is_some_and(|base| !(0.25..=4.0).contains(&(base / rated_kva)))
}

/// Whether anything about the losses (at the rating) and the impedance of a nameplate is doubtful.
pub fn is_odd(
    rated_kva: f64,
    impedance_pct: Option<f64>,
    no_load_loss_w: f64,
    load_loss_w: f64,
) -> bool {
    let (p0, pk) = (Some(no_load_loss_w), Some(load_loss_w));
    no_load_loss_w == 0.0
        || load_loss_w == 0.0
        || !nameplate(rated_kva, impedance_pct, p0, pk).is_empty()
        || !contradictions(rated_kva, impedance_pct, None, p0, pk).is_empty()
}

/// Open-circuit voltages of tests over rated voltage.
const TEST_VOLTAGE_PU: RangeInclusive<f64> = 0.9..=1.1;
/// Short-circuit currents of tests over rated current.
const TEST_CURRENT_PU: RangeInclusive<f64> = 0.25..=1.1;
/// A tested loss over that of the nameplate; the windings of a test may be cold.
const TESTED_LOSS_PU: RangeInclusive<f64> = 0.7..=1.3;

/// Doubts about a test report, beside the unit that it is of: first what is unusual, then what cannot be. What is
/// blank is not looked at.
pub fn test_report(unit: &Unit, report: &TestReport) -> (Vec<Doubt>, Vec<Doubt>) {
    let (mut unusual, mut impossible) = (Vec::new(), Vec::new());
    // The phases that carry power: a voltage between lines and a current in a line.
    let phases = match unit.phases {
        Some(1) => 1.0,
        Some(3) => 3.0_f64.sqrt(),
        _ => return (unusual, impossible),
    };
    let rated_v = |side: Side| match side {
        Side::Hv => unit.hv_kv.map(|kv| 1000.0 * kv),
        Side::Lv => unit.lv_kv.map(|kv| 1000.0 * kv),
    };
    let of =
        |value: Option<f64>, rated: Option<f64>| Some(value? / rated.filter(|rated| *rated > 0.0)?);
    let voltage_pu =
        of(report.open_circuit_voltage_v, rated_v(report.open_circuit_side.unwrap_or(Side::Lv)));
    let rated_a = rated_v(report.short_circuit_side.unwrap_or(Side::Hv))
        .map(|volt| 1000.0 * unit.rated_kva / (phases * volt));
    let current_pu = of(report.short_circuit_current_a, rated_a);
    let mut doubt =
        |quantity, value: Option<f64>, is: Option<f64>, usual: &RangeInclusive<f64>, what: &str| {
            if let (Some(value), Some(is)) = (value, is)
                && !usual.contains(&is)
            {
                let (from, to) = (usual.start(), usual.end());
                let why = format!("is {is:.3} of {what}; usual are {from} to {to}");
                unusual.push(Doubt { quantity, value, why });
            }
        };
    let voltage = report.open_circuit_voltage_v;
    doubt("open_circuit_voltage_v", voltage, voltage_pu, &TEST_VOLTAGE_PU, "the rated voltage");
    let current = report.short_circuit_current_a;
    doubt("short_circuit_current_a", current, current_pu, &TEST_CURRENT_PU, "the rated current");
    let at_rated = |power: Option<f64>, pu: Option<f64>| Some(power? / (pu? * pu?));
    let (iron, copper) = (report.open_circuit_power_w, report.short_circuit_power_w);
    let is = of(at_rated(iron, voltage_pu), unit.no_load_loss_w);
    doubt("open_circuit_power_w", iron, is, &TESTED_LOSS_PU, "no_load_loss_w at rated voltage");
    let plate = unit.load_loss_w.filter(|_| unit.loss_base_kva.is_none());
    let is = of(at_rated(copper, current_pu), plate);
    doubt("short_circuit_power_w", copper, is, &TESTED_LOSS_PU, "load_loss_w at rated current");
    for (quantity, power, volt, ampere) in [
        (
            "open_circuit_power_w",
            iron,
            report.open_circuit_voltage_v,
            report.open_circuit_current_a,
        ),
        (
            "short_circuit_power_w",
            copper,
            report.short_circuit_voltage_v,
            report.short_circuit_current_a,
        ),
    ] {
        if let (Some(value), Some(volt), Some(ampere)) = (power, volt, ampere)
            && value > phases * volt * ampere
        {
            let apparent = phases * volt * ampere;
            let why = format!("is more than the {apparent:.0} VA of voltage and current");
            impossible.push(Doubt { quantity, value, why });
        }
    }
    (unusual, impossible)
}

/// Doubt about the thickness of core sheets (mm) at 50 or 60 Hz.
pub fn lamination(thickness_mm: f64) -> Option<Doubt> {
    let why = "core sheets at 50 or 60 Hz are 0.2 to 1 mm thick".to_owned();
    let doubt = Doubt { quantity: "thickness_mm", value: thickness_mm, why };
    (!(0.2..=1.0).contains(&thickness_mm)).then_some(doubt)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_cannot_be() {
        let names = |z, i0, p0, pk| -> Vec<&str> {
            contradictions(100.0, z, i0, p0, pk).iter().map(|d| d.quantity).collect()
        };
        assert_eq!(names(Some(2.9), None, None, Some(3000.0)), ["impedance_pct"]);
        assert_eq!(names(None, Some(0.49), Some(500.0), None), ["no_load_current_pct"]);
        assert!(names(Some(3.0), Some(0.5), Some(500.0), Some(3000.0)).is_empty());
        assert!(names(Some(0.1), Some(0.1), None, None).is_empty());
    }

    #[test]
    fn test_reports() {
        let unit = Unit {
            phases: Some(3),
            rated_kva: 400.0,
            hv_kv: Some(20.0),
            lv_kv: Some(0.4),
            no_load_loss_w: Some(900.0),
            load_loss_w: Some(4600.0),
            ..Unit::blank()
        };
        let good = TestReport {
            open_circuit_voltage_v: Some(400.0),
            open_circuit_current_a: Some(8.0),
            open_circuit_power_w: Some(910.0),
            short_circuit_voltage_v: Some(800.0),
            short_circuit_current_a: Some(11.547),
            short_circuit_power_w: Some(4000.0),
            ..TestReport::blank()
        };
        assert_eq!(test_report(&unit, &good), (vec![], vec![]));
        let names = |report: &TestReport| {
            let (unusual, impossible) = test_report(&unit, report);
            let of = |doubts: Vec<Doubt>| doubts.iter().map(|d| d.quantity).collect::<Vec<_>>();
            (of(unusual), of(impossible))
        };
        let wrong_side = TestReport { open_circuit_side: Some(Side::Hv), ..good.clone() };
        assert_eq!(names(&wrong_side).0, ["open_circuit_voltage_v", "open_circuit_power_w"]);
        let milli = TestReport { short_circuit_current_a: Some(0.011_547), ..good.clone() };
        assert_eq!(
            names(&milli),
            (
                vec!["short_circuit_current_a", "short_circuit_power_w"],
                vec!["short_circuit_power_w"]
            )
        );
        let kilo = TestReport { open_circuit_power_w: Some(9.1), ..good.clone() };
        assert_eq!(names(&kilo), (vec!["open_circuit_power_w"], vec![]));
        assert_eq!(test_report(&Unit { phases: None, ..unit }, &milli), (vec![], vec![]));
    }

    #[test]
    fn odd_nameplates() {
        assert!(!is_odd(400.0, Some(4.0), 430.0, 4600.0));
        assert!(is_odd(400.0, Some(4.0), 0.0, 4600.0) && is_odd(400.0, None, 430.0, 0.0));
        assert!(is_odd(400.0, Some(40.0), 430.0, 4600.0) && is_odd(400.0, None, 430.0, 4e4));
        assert!(!loss_base_is_far(400.0, None) && !loss_base_is_far(400.0, Some(250.0)));
        assert!(loss_base_is_far(400.0, Some(4.0)) && loss_base_is_far(400.0, Some(4e5)));
    }

    #[test]
    fn bands() {
        let names = |kva, z, p0, pk| -> Vec<&str> {
            nameplate(kva, z, p0, pk).iter().map(|d| d.quantity).collect()
        };
        assert!(names(400.0, Some(4.0), Some(600.0), Some(4000.0)).is_empty());
        assert_eq!(names(400.0, Some(9.0), None, None), ["impedance_pct"]);
        assert_eq!(names(2501.0, Some(3.0), None, None), ["impedance_pct"]);
        assert!(names(40_000.0, Some(16.2), Some(18_000.0), Some(136_000.0)).is_empty());
        assert_eq!(names(40_000.0, None, Some(80_000.0), Some(200_000.0)), ["load_loss_w"]);
        assert_eq!(names(50.0, None, None, Some(2500.0)), ["load_loss_w"]);
        assert!(lamination(0.27).is_none() && lamination(2.7).is_some());
    }
}
