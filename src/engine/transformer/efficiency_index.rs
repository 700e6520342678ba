//! Peak Efficiency Index of Regulation (EU) 548/2014: the best efficiency with the cooling power counted.

use super::circuit::positive;
use crate::engine::Refusal;
use crate::engine::working::{Formula, Recorder};

/// Losses that the index counts.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct IndexLosses {
    /// Rated power on which Pk is based.
    pub rated_kva: f64,
    /// No-load loss, P0 (W).
    pub no_load_loss_w: f64,
    /// Cooling power at no load, Pc0 (W); zero for ONAN and ONAN/ONAF.
    pub no_load_cooling_w: f64,
    /// Further cooling power at kPEI times rated load, Pck (W), of the 2019 form; zero for ONAN.
    pub load_cooling_w: f64,
    /// Load loss, Pk (W).
    pub load_loss_w: f64,
}

const K_PEI: Formula = Formula {
    name: "load at which the index is reached",
    symbol: "k_PEI",
    formula: "√((P0 + Pc0 + Pck)/Pk)",
    unit: "pu",
    source: "EN 50629 / IEC TS 60076-20 (memory); Regulation (EU) 2019/1783 names the symbols",
};
const PEI: Formula = Formula {
    name: "Peak Efficiency Index",
    symbol: "PEI",
    formula: "1 − 2·(P0 + Pc0 + Pck)/(1000·S_r·√((P0 + Pc0 + Pck)/Pk))",
    unit: "pu",
    source: "Regulation (EU) 548/2014 Annex II, as amended 2019/1783 (formula from memory)",
};

/// Peak Efficiency Index and the load at which it is reached (pu, pu).
///
/// # Errors
/// A rating, load loss or no-load loss that is not above zero, negative cooling power.
pub fn peak_efficiency_index<R: Recorder>(
    w: &mut R,
    l: &IndexLosses,
) -> Result<(f64, f64), Refusal> {
    positive("rated_kva", l.rated_kva, "must be above zero; take it from the nameplate")?;
    positive("load_loss_w", l.load_loss_w, "must be above zero")?;
    positive("no_load_loss_w", l.no_load_loss_w, "must be above zero")?;
    let cooling =
        [("no_load_cooling_w", l.no_load_cooling_w), ("load_cooling_w", l.load_cooling_w)];
    for (quantity, value) in cooling {
        if value.is_nan() || value < 0.0 {
            return Err(Refusal::new(quantity, value, "cannot be negative"));
        }
    }
    let constant = l.no_load_loss_w + l.no_load_cooling_w + l.load_cooling_w;
    let k = (constant / l.load_loss_w).sqrt();
    let inputs = [
        ("P0", l.no_load_loss_w),
        ("Pc0", l.no_load_cooling_w),
        ("Pck", l.load_cooling_w),
        ("Pk", l.load_loss_w),
        ("S_r", l.rated_kva),
    ];
    w.step(&K_PEI, &inputs, k);
    let pei = w.step(&PEI, &inputs, 1.0 - 2.0 * constant / (1000.0 * l.rated_kva * k));
    Ok((pei, k))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::transformer::efficiency::at_load;
    use crate::engine::transformer::losses::Losses;
    use crate::engine::working::Silent;

    /// Without cooling power the loss at kPEI relative to the load carried is 1 − PEI.
    #[test]
    fn index_is_the_best_efficiency_by_input() {
        let l = IndexLosses {
            rated_kva: 40_000.0,
            no_load_loss_w: 20_000.0,
            no_load_cooling_w: 0.0,
            load_cooling_w: 0.0,
            load_loss_w: 150_000.0,
        };
        let (pei, k) = peak_efficiency_index(&mut Silent, &l).expect("sound");
        let losses = Losses {
            rated_kva: l.rated_kva,
            no_load_loss_w: l.no_load_loss_w,
            load_loss_w: l.load_loss_w,
            auxiliary_loss_w: 0.0,
            reactance_pu: None,
        };
        let eta = at_load(&mut Silent, &losses, k, 1.0).expect("sound");
        assert!((1.0 / eta - 1.0 - (1.0 - pei)).abs() < 1e-12);
    }
}
