//! What is doubtful about a nameplate by common practice (no source): warnings, never a rejection (methods,
//! section 1).

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

/// Losses of transformers lie above these (W per kVA of the rating); kW written in a column of W lie below.
const LEAST_NO_LOAD_W_PER_KVA: f64 = 0.02;
const LEAST_LOAD_W_PER_KVA: f64 = 0.2;

/// Whether a loss is so low for the rating that kW may stand for W; 0 W is.
pub fn looks_in_kw(rated_kva: f64, no_load_loss_w: f64, load_loss_w: f64) -> bool {
    no_load_loss_w < LEAST_NO_LOAD_W_PER_KVA * rated_kva
        || load_loss_w < LEAST_LOAD_W_PER_KVA * rated_kva
}

/// Doubts about a nameplate; what is blank is not looked at.
pub fn nameplate(
    rated_kva: f64,
    impedance_pct: Option<f64>,
    no_load_loss_w: Option<f64>,
    load_loss_w: Option<f64>,
) -> Vec<Doubt> {
    let mut doubts = unusual(rated_kva, impedance_pct, no_load_loss_w, load_loss_w);
    for (quantity, loss, least) in [
        ("no_load_loss_w", no_load_loss_w, LEAST_NO_LOAD_W_PER_KVA),
        ("load_loss_w", load_loss_w, LEAST_LOAD_W_PER_KVA),
    ] {
        if let Some(value) = loss.filter(|loss| *loss > 0.0 && *loss < least * rated_kva) {
            let why = format!(
                "W is below {least} W per kVA of the rating: were kW written in a column of W?"
            );
            doubts.push(Doubt { quantity, value, why });
        }
    }
    doubts
}

/// Doubts besides the scale of the losses.
fn unusual(
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

/// Whether anything about the losses (at the rating) and the impedance of a nameplate is doubtful besides the scale of
/// the losses, which [`looks_in_kw`] tells.
pub fn is_odd(
    rated_kva: f64,
    impedance_pct: Option<f64>,
    no_load_loss_w: f64,
    load_loss_w: f64,
) -> bool {
    let (p0, pk) = (Some(no_load_loss_w), Some(load_loss_w));
    !unusual(rated_kva, impedance_pct, p0, pk).is_empty()
        || !contradictions(rated_kva, impedance_pct, None, p0, pk).is_empty()
}

/// Farthest that a loss, and the impedance, of a nameplate may be from a test (percent of the nameplate):
/// tolerances of IEC 60076-1 table 1 (memory).
const FROM_TEST_PCT: [(&str, f64); 3] =
    [("no_load_loss_w", 15.0), ("load_loss_w", 15.0), ("impedance_pct", 10.0)];

/// Figures of a nameplate that its own test does not bear out: name, nameplate, test.
pub fn against_test(figures: [(&'static str, Option<f64>, Option<f64>); 3]) -> Vec<Doubt> {
    let doubt = |(quantity, plate, test): (&'static str, Option<f64>, Option<f64>)| {
        let (plate, test) = plate.zip(test)?;
        let allowed = FROM_TEST_PCT.iter().find(|(name, _)| *name == quantity)?.1;
        let apart = 100.0 * (test - plate);
        let off = match plate {
            0.0 => String::new(),
            _ => format!("is {:+.1} % off: ", apart / plate),
        };
        let why = format!(
            "{off}the test report gives {test:.4}, and up to {allowed} % apart is usual: are both of one unit?"
        );
        (apart.abs() > allowed * plate).then_some(Doubt { quantity, value: plate, why })
    };
    figures.into_iter().filter_map(doubt).collect()
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
    fn odd_nameplates() {
        assert!(!is_odd(400.0, Some(4.0), 430.0, 4600.0));
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
        assert_eq!(names(630.0, None, Some(0.54), Some(4.6)), ["no_load_loss_w", "load_loss_w"]);
        assert!(looks_in_kw(630.0, 0.54, 4600.0) && looks_in_kw(630.0, 540.0, 4.6));
        assert!(looks_in_kw(630.0, 0.0, 4600.0) && !looks_in_kw(630.0, 230.0, 4600.0));
        // The largest units have the lowest losses for their size.
        assert!(!looks_in_kw(1_000_000.0, 150_000.0, 1_500_000.0));
        assert!(lamination(0.27).is_none() && lamination(2.7).is_some());
    }
}
