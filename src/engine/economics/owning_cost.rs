//! Owning cost: price plus what its losses are worth plus every adder, each part shown.

use super::loss_factors::LossFactors;
use crate::engine::working::{Formula, Recorder};

/// What is bought: losses with the price and adders of one unit.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Priced {
    /// Price of one unit.
    pub price: f64,
    /// Freight, installation and other adders of one unit.
    pub added_cost: f64,
    /// No-load loss.
    pub no_load_loss_w: f64,
    /// Load loss at rated load.
    pub load_loss_w: f64,
    /// Auxiliary loss.
    pub auxiliary_loss_w: f64,
}

/// An owning cost in its parts; money per unit.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct OwningCost {
    /// Price.
    pub price: f64,
    /// Capitalised no-load loss.
    pub no_load_cost: f64,
    /// Capitalised load loss.
    pub load_cost: f64,
    /// Capitalised auxiliary loss.
    pub auxiliary_cost: f64,
    /// Adders.
    pub added_cost: f64,
}

impl OwningCost {
    /// The sum of the parts.
    pub fn total(&self) -> f64 {
        self.price + self.no_load_cost + self.load_cost + self.auxiliary_cost + self.added_cost
    }
}

const NO_LOAD: Formula = Formula {
    name: "capitalised no-load loss",
    symbol: "iron",
    formula: "A·P0/1000",
    unit: "money",
    source: "owning-cost method, RUS Bulletin 1724E-301; methods, section 6",
};
const LOAD: Formula = Formula {
    name: "capitalised load loss",
    symbol: "copper",
    formula: "B·Pk/1000",
    unit: "money",
    source: "owning-cost method, RUS Bulletin 1724E-301; methods, section 6",
};
const AUXILIARY: Formula = Formula {
    name: "capitalised auxiliary loss",
    symbol: "aux",
    formula: "A_aux·P_aux/1000",
    unit: "money",
    source: "owning-cost method, RUS Bulletin 1724E-301; methods, section 6",
};
const TOTAL: Formula = Formula {
    name: "owning cost",
    symbol: "TOC",
    formula: "price + iron + copper + aux + adders",
    unit: "money",
    source: "owning-cost method, RUS Bulletin 1724E-301; methods, section 6",
};

/// Owning cost by the factors.
pub fn owning_cost<R: Recorder>(w: &mut R, priced: &Priced, factors: &LossFactors) -> OwningCost {
    w.open();
    let (a, b, x) = (factors.factor_a_per_kw, factors.factor_b_per_kw, factors.factor_aux_per_kw);
    let iron = a * priced.no_load_loss_w / 1000.0;
    w.step(&NO_LOAD, &[("A", a), ("P0", priced.no_load_loss_w)], iron);
    let copper = b * priced.load_loss_w / 1000.0;
    w.step(&LOAD, &[("B", b), ("Pk", priced.load_loss_w)], copper);
    let auxiliary = x * priced.auxiliary_loss_w / 1000.0;
    w.step(&AUXILIARY, &[("A_aux", x), ("P_aux", priced.auxiliary_loss_w)], auxiliary);
    let cost = OwningCost {
        price: priced.price,
        no_load_cost: iron,
        load_cost: copper,
        auxiliary_cost: auxiliary,
        added_cost: priced.added_cost,
    };
    let inputs = [
        ("price", cost.price),
        ("iron", iron),
        ("copper", copper),
        ("aux", auxiliary),
        ("adders", cost.added_cost),
    ];
    w.close(&TOTAL, &inputs, cost.total());
    cost
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    /// RUS Bulletin 1724E-301 section 1: the dearer bid is the cheaper to own.
    #[test]
    fn published_bid_comparison() {
        let factors = LossFactors {
            factor_a_per_kw: 2450.0,
            factor_b_per_kw: 1304.0,
            factor_aux_per_kw: 756.0,
        };
        let own = |price, p0, pk, aux| {
            let priced = Priced {
                price,
                added_cost: 0.0,
                no_load_loss_w: p0,
                load_loss_w: pk,
                auxiliary_loss_w: aux,
            };
            owning_cost(&mut Silent, &priced, &factors)
        };
        let (a, b) = (own(424_500.0, 59e3, 224e3, 2e3), own(436_000.0, 53e3, 218e3, 2.5e3));
        assert_eq!((a.no_load_cost, a.load_cost, a.auxiliary_cost), (144_550.0, 292_096.0, 1512.0));
        assert_eq!((a.total(), b.total()), (862_658.0, 852_012.0));
    }
}
