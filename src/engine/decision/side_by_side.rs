//! Two transformers side by side: how far one that may be bought agrees with the one that stands in a place, how
//! both share a load in parallel, and how hard the busbar behind them is.

use crate::engine::Refusal;
use crate::engine::columns::Unit;
use crate::engine::transformer::circuit::{Circuit, PowerFactor, of_nameplate};
use crate::engine::transformer::fault;
use crate::engine::transformer::nameplate::Phases;
use crate::engine::transformer::parallel::{self, Member, Tapped};
use crate::engine::transformer::vector_group;
use crate::engine::working::{Formula, Recorder};

/// Voltages this far apart still agree (percent, either way): methods, section 7.
pub const VOLTAGE_PCT: f64 = 2.0;
/// Ratios this far apart run in parallel without a circulating current worth a look (percent). Common practice,
/// no source.
pub const RATIO_PCT: f64 = 0.5;
/// Impedances this far apart share a load well (percent). Common practice, no source.
pub const IMPEDANCE_PCT: f64 = 10.0;

/// A transformer as its terminals show it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Rated<'a> {
    /// Number of phases.
    pub phases: Option<i64>,
    /// Rated power.
    pub rated_kva: f64,
    /// Rated high voltage.
    pub hv_kv: Option<f64>,
    /// Rated low voltage.
    pub lv_kv: Option<f64>,
    /// Vector group.
    pub vector_group: Option<&'a str>,
    /// Short-circuit impedance.
    pub impedance_pct: Option<f64>,
    /// Load loss at the rating; none where it is not known.
    pub load_loss_w: Option<f64>,
}

impl<'a> Rated<'a> {
    /// The terminals of a unit with its load loss at the rating.
    pub fn of(unit: &'a Unit, load_loss_w: Option<f64>) -> Self {
        Self {
            phases: unit.phases,
            rated_kva: unit.rated_kva,
            hv_kv: unit.hv_kv,
            lv_kv: unit.lv_kv,
            vector_group: unit.vector_group.as_deref(),
            impedance_pct: unit.impedance_pct,
            load_loss_w,
        }
    }

    /// The series circuit; none where impedance or load loss are not known.
    ///
    /// # Errors
    /// An impedance below its resistance.
    pub fn circuit<R: Recorder>(&self, w: &mut R) -> Result<Option<Circuit>, Refusal> {
        let (Some(z), Some(pk)) = (self.impedance_pct, self.load_loss_w) else { return Ok(None) };
        of_nameplate(w, self.rated_kva, pk, z).map(Some)
    }

    fn ratio<R: Recorder>(&self, w: &mut R) -> Option<f64> {
        let (hv, lv) = (self.hv_kv?, self.lv_kv?);
        Some(w.step(&RATIO, &[("V_hv", hv), ("V_lv", lv)], hv / lv))
    }
}

const RATIO: Formula = Formula {
    name: "voltage ratio",
    symbol: "n",
    formula: "V_hv/V_lv",
    unit: "",
    source: "definition",
};
const DIFFERENCE: Formula = Formula {
    name: "how far it lies from the other",
    symbol: "difference",
    formula: "100·(own/other − 1)",
    unit: "%",
    source: "definition",
};
const LOADING: Formula = Formula {
    name: "load of a transformer of the bank over its rating",
    symbol: "loading",
    formula: "S_n/S_r",
    unit: "pu",
    source: "definition",
};
const OF_RATED: Formula = Formula {
    name: "circulating current over the rated current of the transformer",
    symbol: "i_c",
    formula: "I_c·m·V/(1000·S_r)",
    unit: "pu",
    source: "definition; m is √3 between lines, else 1",
};
const HARDNESS: Formula = Formula {
    name: "short-circuit power of transformers in parallel, network without impedance",
    symbol: "S_T",
    formula: "Σ S_r/z",
    unit: "MVA",
    source: "impedances of equal angle; methods, section 2",
};

const TOGETHER: Formula = Formula {
    name: "peak loads of year 1 of both places together",
    symbol: "S",
    formula: "S_own + S_beside",
    unit: "kVA",
    source: "as if both peaks came at once",
};

/// The load that two places ask of a bank (kVA), as if their peaks came at once.
pub fn load_together<R: Recorder>(w: &mut R, own_kva: f64, beside_kva: f64) -> f64 {
    w.step(&TOGETHER, &[("S_own", own_kva), ("S_beside", beside_kva)], own_kva + beside_kva)
}

/// How far `own` lies from `other` in percent.
pub fn difference_pct<R: Recorder>(w: &mut R, own: f64, other: f64) -> f64 {
    w.step(&DIFFERENCE, &[("own", own), ("other", other)], 100.0 * (own / other - 1.0))
}

/// How far the voltage ratio of one lies from that of the other in percent; none where a voltage is not known.
pub fn ratio_difference_pct<R: Recorder>(w: &mut R, own: &Rated, other: &Rated) -> Option<f64> {
    let (own, other) = (own.ratio(w)?, other.ratio(w)?);
    Some(difference_pct(w, own, other))
}

/// Whether a difference in percent lies within a limit either way; equality passes.
pub fn within(difference_pct: f64, limit_pct: f64) -> bool {
    difference_pct.abs() <= limit_pct * (1.0 + 1e-9)
}

/// Whether two vector groups can be matched at the terminals; none where a clock number is not known.
pub fn groups_agree(own: &Rated, other: &Rated) -> Option<bool> {
    let clock = |rated: &Rated| rated.vector_group.and_then(vector_group::clock);
    Some(vector_group::clocks_match(clock(own)?, clock(other)?))
}

/// What a bank of two carries.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Sharing {
    /// Load of each over its rating (pu).
    pub loading_pu: [f64; 2],
    /// Load at which the first of them is full (kVA).
    pub bank_limit_kva: f64,
}

/// How two transformers share a load in parallel; none where a circuit is not known. Steps are stated about
/// `transformer 1` and `transformer 2`, the bank's limit last.
///
/// # Errors
/// A circuit that contradicts itself, no load.
pub fn sharing<R: Recorder>(
    w: &mut R,
    pair: [&Rated; 2],
    load_kva: f64,
    pf: PowerFactor,
) -> Result<Option<Sharing>, Refusal> {
    let [Some(first), Some(second)] = [pair[0].circuit(w)?, pair[1].circuit(w)?] else {
        return Ok(None);
    };
    let members = [
        Member { rated_kva: pair[0].rated_kva, circuit: first },
        Member { rated_kva: pair[1].rated_kva, circuit: second },
    ];
    let shares = parallel::sharing(w, &members, load_kva * pf.cos, load_kva * pf.sin)?;
    let mut loading_pu = [0.0; 2];
    for (n, (share, member)) in shares.iter().zip(&members).enumerate() {
        let inputs = [("S_n", share.kva()), ("S_r", member.rated_kva)];
        loading_pu[n] = w.step(&LOADING, &inputs, share.loading_pu);
        w.about(&|| format!("transformer {}", n + 1));
    }
    let bank_limit_kva = parallel::bank_limit(w, &shares, load_kva)?;
    Ok(Some(Sharing { loading_pu, bank_limit_kva }))
}

/// The current that circulates at no load between two transformers fed from one busbar, over the rated current of
/// the first (pu); none where a voltage or a circuit is not known.
///
/// # Errors
/// A circuit that contradicts itself.
pub fn circulating_pu<R: Recorder>(w: &mut R, pair: [&Rated; 2]) -> Result<Option<f64>, Refusal> {
    let [own, other] = pair;
    let (Some(first), Some(second)) = (own.circuit(w)?, other.circuit(w)?) else { return Ok(None) };
    let voltages = own.hv_kv.zip(own.lv_kv).zip(other.hv_kv.zip(other.lv_kv));
    let Some(((own_hv, own_lv), (other_hv, other_lv))) = voltages else { return Ok(None) };
    let phases = Phases::of(own.phases.or(other.phases).unwrap_or(3))?;
    // Both at the rated high voltage of the first.
    let tapped = |rated: &Rated, circuit, lv: f64, hv: f64| Tapped {
        member: Member { rated_kva: rated.rated_kva, circuit },
        rated_v: 1000.0 * lv,
        no_load_v: 1000.0 * lv * own_hv / hv,
    };
    let (a, b) = (tapped(own, first, own_lv, own_hv), tapped(other, second, other_lv, other_hv));
    let circulating = parallel::circulating(w, phases, a, b)?;
    let inputs = [
        ("I_c", circulating.current_a),
        ("m", phases.root()),
        ("V", a.rated_v),
        ("S_r", own.rated_kva),
    ];
    Ok(Some(w.step(&OF_RATED, &inputs, circulating.of_first_pu)))
}

/// Fault level at the busbar behind one transformer or two in parallel (MVA); `network_mva` is that of the network
/// at the primary, none = infinite. None where an impedance is not known.
///
/// # Errors
/// An impedance or network fault level that is not above zero.
pub fn fault_level<R: Recorder>(
    w: &mut R,
    bank: &[&Rated],
    network_mva: Option<f64>,
) -> Result<Option<f64>, Refusal> {
    let mut hardness = 0.0;
    for rated in bank {
        let Some(z) = rated.impedance_pct else { return Ok(None) };
        hardness += fault::fault_level(w, rated.rated_kva / 1000.0, z / 100.0, None)?;
    }
    if bank.len() > 1 {
        w.step(&HARDNESS, &[], hardness);
    }
    match network_mva {
        // A bank is a transformer of its own short-circuit power with an impedance of 1.
        Some(_) => fault::fault_level(w, hardness, 1.0, network_mva).map(Some),
        None => Ok(Some(hardness)),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    fn rated(rated_kva: f64, impedance_pct: f64, lv_kv: f64) -> Rated<'static> {
        Rated {
            phases: Some(3),
            rated_kva,
            hv_kv: Some(20.0),
            lv_kv: Some(lv_kv),
            vector_group: Some("Dyn5"),
            impedance_pct: Some(impedance_pct),
            load_loss_w: Some(10.0 * rated_kva),
        }
    }

    /// Equal impedances share by rating; the lower impedance takes more, in inverse proportion (same R/X).
    #[test]
    fn sharing_by_hand() {
        let pf = PowerFactor::lagging(0.9).expect("sound");
        let share = |a: &Rated, b: &Rated| {
            sharing(&mut Silent, [a, b], 600.0, pf).expect("sound").expect("known")
        };
        let even = share(&rated(250.0, 4.0, 0.4), &rated(500.0, 4.0, 0.4));
        assert!(even.loading_pu.iter().all(|loading| (loading - 0.8).abs() < 1e-12));
        assert!((even.bank_limit_kva - 750.0).abs() < 1e-9);
        let weak = Rated { load_loss_w: Some(4000.0), ..rated(400.0, 4.0, 0.4) };
        let stiff = Rated { load_loss_w: Some(5000.0), ..rated(400.0, 5.0, 0.4) };
        let uneven = share(&weak, &stiff);
        assert!((uneven.loading_pu[0] / uneven.loading_pu[1] - 1.25).abs() < 1e-12);
        // 5/9 of the load on a 400 kVA unit: full at 720 kVA.
        assert!((uneven.bank_limit_kva - 720.0).abs() < 1e-9);
    }

    /// 2.5 % of voltage over the impedance of both, 4 % each on one base: 0.025/0.08 of rated current.
    #[test]
    fn circulating_current_by_hand() {
        let pair = [&rated(400.0, 4.0, 0.4), &rated(400.0, 4.0, 0.41)];
        let current = circulating_pu(&mut Silent, pair).expect("sound").expect("known");
        // The second has the higher base voltage: its 4 % are 4 %·(0.41/0.4)² on the first's base.
        let want = 0.025 / (0.04 + 0.04 * (0.41_f64 / 0.4).powi(2));
        assert!((current / want - 1.0).abs() < 1e-3, "{current} {want}");
        let none = circulating_pu(&mut Silent, [pair[0], pair[0]]).expect("sound");
        assert_eq!(none, Some(0.0));
    }

    /// 0.4 MVA at 4 %: 10 MVA; with a second one 20 MVA; behind 20 MVA of network 10 MVA.
    #[test]
    fn fault_level_of_a_bank() {
        let one = rated(400.0, 4.0, 0.4);
        let level = |bank: &[&Rated], network| {
            fault_level(&mut Silent, bank, network).expect("sound").expect("known")
        };
        assert!((level(&[&one], None) - 10.0).abs() < 1e-12);
        assert!((level(&[&one, &one], None) - 20.0).abs() < 1e-12);
        assert!((level(&[&one, &one], Some(20.0)) - 10.0).abs() < 1e-12);
    }

    #[test]
    fn agreement() {
        let (a, b) = (rated(400.0, 4.0, 0.4), rated(400.0, 4.0, 0.41));
        let difference = ratio_difference_pct(&mut Silent, &a, &b).expect("known");
        assert!((difference - 2.5).abs() < 1e-12 && !within(difference, VOLTAGE_PCT));
        assert!(within(-2.0, VOLTAGE_PCT), "equality passes");
        let other = Rated { vector_group: Some("Yyn0"), ..a };
        let blank = Rated { vector_group: None, ..a };
        assert_eq!(groups_agree(&a, &b), Some(true));
        assert_eq!(groups_agree(&a, &other), Some(false));
        assert_eq!(groups_agree(&a, &blank), None);
    }
}
