//! The explained form of a figure: the scalar functions state each step to a [`Recorder`] as they compute it.
//!
//! There is one implementation of a formula. With [`Silent`] it only computes; with [`Working`] the same call
//! leaves a tree of steps: name, formula, numbers put in, value, unit, source.
//!
//! ```
//! use ironhum::engine::working::{Formula, Recorder, Working};
//! const COPPER: Formula = Formula {
//!     name: "copper loss at a load", symbol: "P_cu", formula: "Pk·β²", unit: "W",
//!     source: "IEC 60076-1 (current squared)",
//! };
//! fn copper<R: Recorder>(w: &mut R, pk: f64, beta: f64) -> f64 {
//!     w.step(&COPPER, &[("Pk", pk), ("β", beta)], pk * beta * beta)
//! }
//! let mut working = Working::default();
//! assert_eq!(copper(&mut working, 1000.0, 0.5), 250.0);
//! assert_eq!(working.steps()[0].substituted, "1000·0.5²");
//! ```

/// The facts of a formula.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Formula {
    /// What it gives, in trade words.
    pub name: &'static str,
    /// The symbol of its result.
    pub symbol: &'static str,
    /// The right side, in symbols.
    pub formula: &'static str,
    /// Unit of the result.
    pub unit: &'static str,
    /// Where it is published.
    pub source: &'static str,
}

/// One step of a working.
#[derive(Clone, Debug, PartialEq)]
pub struct Step {
    /// The formula used.
    pub formula: &'static Formula,
    /// What the step is about, where one formula is used several times ("" = nothing to add).
    pub of: String,
    /// The right side with the numbers put in.
    pub substituted: String,
    /// The value, in full precision.
    pub value: f64,
    /// The steps that gave the numbers put in.
    pub steps: Vec<Step>,
}

/// Takes notice of the steps of a computation.
pub trait Recorder {
    /// States one step and hands its value through. `inputs` are the symbols of the formula with their values.
    fn step(&mut self, formula: &'static Formula, inputs: &[(&str, f64)], value: f64) -> f64;
    /// Opens a step: what is stated until [`Recorder::close`] are its parts.
    fn open(&mut self);
    /// Closes the step opened last.
    fn close(&mut self, formula: &'static Formula, inputs: &[(&str, f64)], value: f64) -> f64;
    /// Says what the step stated last is about.
    fn about(&mut self, of: &dyn Fn() -> String);
    /// Whether anything is kept of what is stated: what is known already is computed again only for a listener.
    fn listens(&self) -> bool;
}

/// Computes without a word.
#[derive(Clone, Copy, Debug, Default)]
pub struct Silent;

impl Recorder for Silent {
    #[inline(always)]
    fn step(&mut self, _: &'static Formula, _: &[(&str, f64)], value: f64) -> f64 {
        value
    }
    #[inline(always)]
    fn open(&mut self) {}
    #[inline(always)]
    fn close(&mut self, _: &'static Formula, _: &[(&str, f64)], value: f64) -> f64 {
        value
    }
    #[inline(always)]
    fn about(&mut self, _: &dyn Fn() -> String) {}
    #[inline(always)]
    fn listens(&self) -> bool {
        false
    }
}

/// Keeps every step.
#[derive(Clone, Debug, Default)]
pub struct Working {
    done: Vec<Step>,
    open: Vec<Vec<Step>>,
}

impl Working {
    /// The steps on the outermost level, in the order they were taken.
    pub fn steps(&self) -> &[Step] {
        &self.done
    }

    /// The steps, given away.
    pub fn into_steps(self) -> Vec<Step> {
        self.done
    }

    /// The steps on the outermost level that give one of these symbols, given away.
    pub fn only(self, symbols: &[&str]) -> Vec<Step> {
        self.done.into_iter().filter(|step| symbols.contains(&step.formula.symbol)).collect()
    }

    /// Takes over steps that were stated elsewhere.
    pub fn append(&mut self, steps: impl IntoIterator<Item = Step>) {
        self.place().extend(steps);
    }

    fn place(&mut self) -> &mut Vec<Step> {
        self.open.last_mut().unwrap_or(&mut self.done)
    }
}

impl Recorder for Working {
    fn step(&mut self, formula: &'static Formula, inputs: &[(&str, f64)], value: f64) -> f64 {
        let substituted = substitute(formula.formula, inputs);
        self.place().push(Step {
            formula,
            of: String::new(),
            substituted,
            value,
            steps: Vec::new(),
        });
        value
    }

    fn open(&mut self) {
        self.open.push(Vec::new());
    }

    fn close(&mut self, formula: &'static Formula, inputs: &[(&str, f64)], value: f64) -> f64 {
        let steps = self.open.pop().unwrap_or_default();
        let substituted = substitute(formula.formula, inputs);
        self.place().push(Step { formula, of: String::new(), substituted, value, steps });
        value
    }

    fn about(&mut self, of: &dyn Fn() -> String) {
        if let Some(step) = self.place().last_mut() {
            step.of = of();
        }
    }

    fn listens(&self) -> bool {
        true
    }
}

/// All steps of a tree in the order they were taken, parts before the whole.
pub fn flatten(steps: &[Step]) -> Vec<&Step> {
    let mut all = Vec::new();
    for step in steps {
        all.extend(flatten(&step.steps));
        all.push(step);
    }
    all
}

/// A character that can stand inside a symbol (`P_EC`, `θ_ref`, `k11`); raised digits and operators cannot.
fn in_symbol(c: char) -> bool {
    c.is_alphanumeric() && !"²³⁰¹⁴⁵⁶⁷⁸⁹".contains(c)
        || c == '_'
        || c == '′'
        || c == '̄'
        || "₀₁₂ₖ".contains(c)
}

/// The formula with each known symbol replaced by its number; unknown ones stay.
pub fn substitute(formula: &str, inputs: &[(&str, f64)]) -> String {
    let mut out = String::with_capacity(formula.len() + 8 * inputs.len());
    let mut symbol = String::new();
    let flush = |symbol: &mut String, out: &mut String| {
        match inputs.iter().find(|(name, _)| name == symbol) {
            Some((_, value)) if *value < 0.0 => out.extend(["(", &number(*value), ")"]),
            Some((_, value)) => out.push_str(&number(*value)),
            None => out.push_str(symbol),
        }
        symbol.clear();
    };
    for c in formula.chars() {
        if in_symbol(c) {
            symbol.push(c);
        } else {
            flush(&mut symbol, &mut out);
            out.push(c);
        }
    }
    flush(&mut symbol, &mut out);
    out
}

/// A number as people read it in a formula: seven significant digits, no trailing zeros.
pub fn number(value: f64) -> String {
    if value == 0.0 {
        return "0".to_owned();
    }
    let size = value.abs();
    if !(1e-4..1e12).contains(&size) {
        return format!("{value:.6e}");
    }
    #[expect(clippy::cast_possible_truncation, reason = "between −4 and 12")]
    let places = (6 - size.log10().floor() as i32).max(0);
    #[expect(clippy::cast_sign_loss, reason = "not negative")]
    let text = format!("{value:.*}", places as usize);
    if text.contains('.') {
        text.trim_end_matches('0').trim_end_matches('.').to_owned()
    } else {
        text
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn symbols_are_replaced_whole() {
        assert_eq!(substitute("A·P0 + P0_x", &[("P0", 2.0), ("A", 3.5)]), "3.5·2 + P0_x");
        assert_eq!(substitute("(1+i)^−n", &[("i", -0.05), ("n", 3.0)]), "(1+(-0.05))^−3");
    }

    #[test]
    fn numbers_are_short() {
        assert_eq!(number(862_658.0), "862658");
        assert_eq!(number(0.1 + 0.2), "0.3");
        assert_eq!(number(1e-7), "1.000000e-7");
    }
}
