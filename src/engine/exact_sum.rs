//! A sum that does not depend on the order of what is added: totals of a fleet stay the same to the last bit however
//! its rows are ordered or shared among cores.

/// Adds numbers exactly in steps of 2⁻⁵⁶ and rounds once, at the end. A number of 0.125 or more, below 2⁶³ in size, is
/// added as it is; a smaller one to the nearest step below it.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct ExactSum {
    whole: i128,
    steps: i128,
}

/// Steps to a unit.
const STEPS: i64 = 1 << 56;

impl ExactSum {
    /// Adds a number.
    #[inline]
    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_precision_loss,
        reason = "the whole part of a number below 2^63, and what is left of it, are exact"
    )]
    pub fn add(&mut self, number: f64) {
        let whole = number as i64;
        let steps = (number - whole as f64) * STEPS as f64;
        self.whole += i128::from(whole);
        self.steps += i128::from(steps as i64);
    }

    /// Adds all that another sum holds.
    pub fn merge(&mut self, other: Self) {
        self.whole += other.whole;
        self.steps += other.steps;
    }

    /// The sum, rounded to the nearest number.
    #[expect(clippy::cast_precision_loss, reason = "this is where it is rounded")]
    pub fn value(self) -> f64 {
        let steps = self.whole.saturating_mul(STEPS.into()).saturating_add(self.steps);
        steps as f64 / STEPS as f64
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn sum(numbers: &[f64]) -> f64 {
        let mut sum = ExactSum::default();
        for number in numbers {
            sum.add(*number);
        }
        sum.value()
    }

    #[test]
    fn nothing_is_lost_on_the_way() {
        assert_eq!(sum(&[]), 0.0);
        assert_eq!(sum(&[0.1]), 0.1);
        assert_eq!(sum(&[-123_456.789]), -123_456.789);
        // Plainly added, both give another number.
        assert_eq!(sum(&[1e16, 1.0, -1e16, 0.5]), 1.5);
        assert_eq!(sum(&[0.1; 10]), 1.0);
    }

    #[test]
    fn order_and_parts_make_no_difference() {
        let numbers: Vec<f64> = (1..2000_i32).map(|n| f64::from(n).sqrt() * 1e5 - 2e6).collect();
        let mut turned = numbers.clone();
        turned.reverse();
        turned.rotate_left(700);
        assert_eq!(sum(&numbers).to_bits(), sum(&turned).to_bits());
        let (mut one, mut other) = (ExactSum::default(), ExactSum::default());
        numbers[..300].iter().for_each(|n| one.add(*n));
        numbers[300..].iter().for_each(|n| other.add(*n));
        other.merge(one);
        assert_eq!(other.value().to_bits(), sum(&numbers).to_bits());
    }
}
