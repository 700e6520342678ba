//! The uncertain inputs of a basis and a lot: which they are, and both records with drawn values set in.
//!
//! A range names a column of the basis, or an input of the lot's factors. A value that leaves the column's
//! physical range is moved to its edge, and the draw says so.

use super::{Copula, RankCorrelation, Spread, uniforms};
use crate::engine::Refusal;
use crate::engine::columns::{Basis, BasisSheet, Column, Kind, LEAST, Lot, Value, nearest};

/// Inputs of a lot that its factors depend on.
const OF_LOT: &[&str] =
    &["peak_pu", "loss_factor_pu", "factor_a_per_kw", "factor_b_per_kw", "factor_aux_per_kw"];

/// The names that a range may have: every numeric column of a basis, and of a lot what its factors depend on.
pub fn may_have_ranges() -> impl Iterator<Item = &'static str> {
    Basis::COLUMNS
        .iter()
        .filter(|c| is_numeric(c))
        .map(|column| column.name)
        .chain(OF_LOT.iter().copied())
}

fn is_numeric(column: &Column) -> bool {
    matches!(column.kind, Kind::Real(..) | Kind::Above(..) | Kind::Integer(..))
}

/// The record that holds an input, and its place among the columns.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Place {
    Basis(usize),
    Lot(usize),
}

/// One uncertain input.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Input {
    /// The facts of its column.
    pub column: &'static Column,
    /// How far it may lie.
    pub spread: Spread,
    place: Place,
}

impl Input {
    /// The ends between which the input is swung on its own, inside its physical range.
    pub fn ends(&self) -> [f64; 2] {
        self.spread.ends().map(|end| clamped(self.column, end))
    }
}

/// A basis and a lot with their uncertain inputs.
#[derive(Clone, Debug, PartialEq)]
pub struct Inputs {
    list: Vec<Input>,
    copula: Option<Copula>,
    basis: Vec<Value>,
    lot: Vec<Value>,
}

/// A basis and a lot with values set in.
#[derive(Clone, Debug, PartialEq)]
pub struct Drawn {
    /// The basis.
    pub basis: Basis,
    /// The lot.
    pub lot: Lot,
    /// Whether a value left its physical range and was moved to the edge.
    pub moved: bool,
}

impl Inputs {
    /// The inputs that the ranges of a basis name, in their order.
    ///
    /// # Errors
    /// A range of something that is no numeric input, is named twice, or is incomplete; correlations that
    /// cannot hold together.
    pub fn new(
        sheet: &BasisSheet,
        lot: &Lot,
        correlations: &[RankCorrelation],
    ) -> Result<Self, Refusal> {
        let (basis, lot) = (sheet.basis.values(), lot.values());
        let mut list: Vec<Input> = Vec::with_capacity(sheet.ranges.len());
        for range in &sheet.ranges {
            let (column, place) = find(&range.quantity)?;
            if list.iter().any(|input| input.place == place) {
                let why = "has two ranges; keep one";
                return Err(Refusal::new("range", &range.quantity, why));
            }
            let base = match place {
                // A blank counts as what the column says that it means.
                Place::Basis(at) => number(&basis[at]).or_else(|| column.blank.parse().ok()),
                Place::Lot(at) => number(&lot[at]),
            };
            list.push(Input { column, spread: Spread::of(range, base)?, place });
        }
        let names: Vec<&str> = list.iter().map(|input| input.column.name).collect();
        let copula =
            if correlations.is_empty() { None } else { Some(Copula::new(&names, correlations)?) };
        Ok(Self { list, copula, basis, lot })
    }

    /// The uncertain inputs.
    pub fn inputs(&self) -> &[Input] {
        &self.list
    }

    /// Draw `item` of `seed`.
    ///
    /// # Errors
    /// A value at an edge that its range does not include.
    pub fn draw(&self, seed: u64, item: u64) -> Result<Drawn, Refusal> {
        let mut parts = uniforms(seed, item, self.list.len());
        if let Some(copula) = &self.copula {
            parts = copula.join(&parts);
        }
        let values = self.list.iter().zip(parts);
        self.with(values.map(|(input, u)| (input, input.spread.quantile(u))))
    }

    /// The basis and the lot with one input at a value, all others as they are.
    ///
    /// # Errors
    /// As [`Inputs::draw`].
    pub fn with_one(&self, input: &Input, value: f64) -> Result<Drawn, Refusal> {
        self.with([(input, value)])
    }

    fn with<'a>(
        &self,
        values: impl IntoIterator<Item = (&'a Input, f64)>,
    ) -> Result<Drawn, Refusal> {
        let (mut basis, mut lot, mut moved) = (self.basis.clone(), self.lot.clone(), false);
        for (input, value) in values {
            let inside = clamped(input.column, value);
            moved |= inside != value;
            let cell = match input.column.kind {
                #[expect(clippy::cast_possible_truncation, reason = "inside the column's range")]
                Kind::Integer(..) => Value::Integer(inside.round() as i64),
                _ => Value::Real(inside),
            };
            let cell = input.column.check(cell).map_err(|why| {
                Refusal::new(input.column.name, value, why + "; narrow its range")
            })?;
            match input.place {
                Place::Basis(at) => basis[at] = cell,
                Place::Lot(at) => lot[at] = cell,
            }
        }
        match (Basis::from_values(&basis), Lot::from_values(&lot)) {
            (Some(basis), Some(lot)) => Ok(Drawn { basis, lot, moved }),
            _ => {
                Err(Refusal::new("range", "", "does not fit the columns of the basis and the lot"))
            }
        }
    }
}

fn find(name: &str) -> Result<(&'static Column, Place), Refusal> {
    let of_basis = Basis::COLUMNS.iter().position(|column| column.name == name);
    let of_lot =
        Lot::COLUMNS.iter().position(|column| column.name == name && OF_LOT.contains(&name));
    let found = match (of_basis, of_lot) {
        (Some(at), _) => Some((&Basis::COLUMNS[at], Place::Basis(at))),
        (None, Some(at)) => Some((&Lot::COLUMNS[at], Place::Lot(at))),
        (None, None) => None,
    };
    found.filter(|(column, _)| is_numeric(column)).ok_or_else(|| {
        let near = nearest(name, may_have_ranges());
        let hint = near.map(|near| format!("; did you mean {near}?")).unwrap_or_default();
        Refusal::new("range", name, format!("is not a numeric input of a basis or a lot{hint}"))
    })
}

impl Basis {
    /// The number that the basis gives for one of its columns; none where it is blank or no number.
    pub fn number(&self, quantity: &str) -> Option<f64> {
        let at = Self::COLUMNS.iter().position(|column| column.name == quantity)?;
        self.values().get(at).and_then(number)
    }
}

fn number(value: &Value) -> Option<f64> {
    match value {
        Value::Real(x) => Some(*x),
        #[expect(clippy::cast_precision_loss, reason = "counts of years and sizes")]
        Value::Integer(x) => Some(*x as f64),
        _ => None,
    }
}

/// The nearest value inside the column's physical range; next to zero that is zero.
fn clamped(column: &Column, value: f64) -> f64 {
    let value = if value.abs() < LEAST { 0.0 } else { value };
    match column.kind {
        Kind::Real(least, most) | Kind::Above(least, most) => value.clamp(least, most),
        #[expect(clippy::cast_precision_loss, reason = "counts of years and sizes")]
        Kind::Integer(least, most) => value.clamp(least as f64, most as f64),
        _ => value,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::columns::{BasisRange, Distribution};

    fn range(quantity: &str, low: f64, high: f64) -> BasisRange {
        BasisRange {
            quantity: quantity.into(),
            distribution: Some(Distribution::Uniform),
            low: Some(low),
            high: Some(high),
            ..BasisRange::blank()
        }
    }

    fn inputs(ranges: Vec<BasisRange>) -> Result<Inputs, Refusal> {
        let basis = Basis { discount_rate_pct: 6.0, horizon_years: 20, ..Basis::blank() };
        let sheet = BasisSheet { basis, ranges, budgets: Vec::new() };
        Inputs::new(&sheet, &Lot { peak_pu: Some(0.5), ..Lot::blank() }, &[])
    }

    #[test]
    fn values_are_set_where_they_belong() {
        let ranges = vec![
            range("discount_rate_pct", 5.0, 7.0),
            range("peak_pu", 0.4, 0.6),
            range("horizon_years", 10.0, 30.0),
        ];
        let inputs = inputs(ranges).expect("numeric");
        let drawn = inputs.draw(1, 0).expect("inside");
        assert!((5.0..7.0).contains(&drawn.basis.discount_rate_pct));
        assert!((10..=30).contains(&drawn.basis.horizon_years));
        assert!(drawn.lot.peak_pu.is_some_and(|peak| (0.4..0.6).contains(&peak)));
        assert!(!drawn.moved);
        let one = inputs.with_one(&inputs.inputs()[1], 0.9).expect("inside");
        assert_eq!((one.basis.discount_rate_pct, one.lot.peak_pu), (6.0, Some(0.9)));
    }

    #[test]
    fn a_blank_input_lies_about_its_default() {
        let ranges = vec![range("stray_share_pu", 0.0, 0.3)];
        let triangular =
            ranges.into_iter().map(|range| BasisRange { distribution: None, ..range }).collect();
        let inputs = inputs(triangular).expect("blank is 0");
        let spread = Spread::Triangular { low: 0.0, mode: 0.0, high: 0.3 };
        assert_eq!(inputs.inputs()[0].spread, spread);
    }

    #[test]
    fn what_leaves_its_range_is_moved_or_refused() {
        let share = inputs(vec![range("responsibility_pu", 1.5, 2.0)]).expect("numeric");
        let drawn = share.draw(1, 0).expect("moved");
        assert_eq!((drawn.basis.responsibility_pu, drawn.moved), (Some(1.0), true));
        let rate = inputs(vec![range("energy_escalation_pct", -300.0, -200.0)]).expect("numeric");
        assert!(rate.draw(1, 0).is_err(), "−100 % itself is no rate");
        let none = inputs(vec![range("responsibility_pu", 1e-13, 2e-13)]).expect("numeric");
        assert_eq!(none.draw(1, 0).expect("zero").basis.responsibility_pu, Some(0.0));
    }

    #[test]
    fn only_numeric_inputs_have_ranges() {
        let why = |name: &str| inputs(vec![range(name, 0.0, 1.0)]).expect_err(name).to_string();
        assert!(why("discount_rate").ends_with("did you mean discount_rate_pct?"));
        assert!(why("cash_flow").contains("is not a numeric input"));
        assert!(why("max_sound_db").contains("is not a numeric input"));
        let twice = vec![range("peak_pu", 0.0, 1.0), range("peak_pu", 0.0, 1.0)];
        assert!(inputs(twice).is_err());
    }
}
