//! The working of a figure as results carry it: steps with formula, numbers put in, value, unit and source.
//! [`Explained`] is what a result can be asked: which figures it has, and how each comes about.

use serde::Serialize;
use serde_json::Value;

use super::StudyError;
use crate::engine::Refusal;
use crate::engine::working::{Step, Working};

/// What steps call an amount in any currency.
pub const MONEY: &str = "money";

/// One step of a working.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct StepRow {
    /// What it gives.
    pub name: String,
    /// Symbol and formula.
    pub formula: String,
    /// The formula with the numbers put in.
    pub substituted: String,
    /// The value in full precision.
    pub value: f64,
    /// Unit of the value.
    pub unit: &'static str,
    /// Where the formula is published.
    pub source: &'static str,
    /// What the step is about where one formula is used several times: a year, an offer.
    #[serde(skip)]
    pub of: String,
    /// The steps that gave the numbers put in.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub steps: Vec<StepRow>,
}

impl StepRow {
    /// The rows of a tree of steps.
    pub fn tree(steps: &[Step]) -> Vec<Self> {
        let row = |step: &Step| Self { steps: Self::tree(&step.steps), ..Self::alone(step) };
        steps.iter().map(row).collect()
    }

    /// One step without its parts.
    pub fn alone(step: &Step) -> Self {
        let name = step.formula.name;
        Self {
            name: if step.of.is_empty() { name.to_owned() } else { format!("{name}: {}", step.of) },
            formula: format!("{} = {}", step.formula.symbol, step.formula.formula),
            substituted: step.substituted.clone(),
            value: step.value,
            unit: step.formula.unit,
            source: step.formula.source,
            of: step.of.clone(),
            steps: Vec::new(),
        }
    }

    /// Whether a row goes on with three or more by one formula that have parts of their own, as years do.
    fn goes_on(rows: &[Self], n: usize) -> bool {
        let same = |row: &&Self| row.formula == rows[n].formula && !row.of.is_empty();
        let before = rows[..n].iter().rev().take_while(same).count();
        let after = rows[n..].iter().take_while(same).count();
        before > 0 && before + after >= 3 && !rows[n].steps.is_empty()
    }

    /// A working as lines, `depth` steps in: parts indented below the figure that they give. Of three or
    /// more years by one formula the first is written in full, the others in a line each. Amounts are written in
    /// `currency`; [`MONEY`] leaves it open.
    pub fn lines(rows: &[Self], depth: usize, currency: &str) -> Vec<String> {
        let indent = "    ".repeat(depth);
        let mut lines = Vec::new();
        for (n, row) in rows.iter().enumerate() {
            let unit = row.unit.replace(MONEY, currency);
            if Self::goes_on(rows, n) {
                let (of, value) = (&row.of, readable(row.value));
                lines.push(format!("{indent}{of}: {} = {value} {unit}", row.substituted));
                continue;
            }
            if let Some(symbol) = row.formula.strip_suffix(" = as stated") {
                let value = readable(row.value);
                lines.push(format!("{indent}{symbol} = {value} {unit}   {}", row.name));
                continue;
            }
            lines.push(format!("{indent}{}", row.name));
            lines.push(format!("{indent}  {}", row.formula));
            // What has no numbers of its own to put in is not said twice.
            if !row.formula.ends_with(&row.substituted) {
                lines.push(format!("{indent}  = {}", row.substituted));
            }
            let value = readable(row.value);
            lines.push(format!("{indent}  = {value} {unit}   [{}]", row.source));
            lines.extend(Self::lines(&row.steps, depth + 1, currency));
        }
        lines
    }
}

/// A value as text shows it: twelve significant digits, which leaves out the noise of the last ones. JSON is exact.
fn readable(value: f64) -> f64 {
    format!("{value:.11e}").parse().unwrap_or(value)
}

/// How a figure comes about; the last step is the figure.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct FigureWorking {
    /// Its place in the result, as `keep_or_replace.keep_pv` or `load_points.2.efficiency_pct`.
    pub figure: String,
    /// The steps.
    pub steps: Vec<StepRow>,
}

/// Which figures are opened.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Opening<'a> {
    /// All.
    All,
    /// All but those below this part of the result.
    Without(&'a str),
    /// The one of this name: its place in the result, or the end of it where only one figure ends so.
    One(&'a str),
}

/// A result of which every figure can be opened.
pub trait Explained {
    /// What the result is called, as in "the dossier of unit T-17".
    fn called(&self) -> String;

    /// Every figure that can be opened, by its place in the result, with its value.
    ///
    /// # Errors
    /// There is no result.
    fn figures(&self) -> Result<Vec<(String, f64)>, StudyError>;

    /// States how the figure at a place of the result comes about; the last step is the figure.
    ///
    /// # Errors
    /// What the engine refuses.
    fn state(&self, w: &mut Working, place: &[&str]) -> Result<(), StudyError>;

    /// How one figure comes about.
    ///
    /// # Errors
    /// A figure that is not in the result, or a name that several have; what the engine refuses.
    fn working(&self, figure: &str) -> Result<Vec<StepRow>, StudyError> {
        let opened = self.workings(Opening::One(figure))?;
        Ok(opened.into_iter().next().map(|figure| figure.steps).unwrap_or_default())
    }

    /// How figures come about.
    ///
    /// # Errors
    /// As [`Explained::working`].
    fn workings(&self, which: Opening) -> Result<Vec<FigureWorking>, StudyError> {
        let figures = self.figures()?;
        let names = figures.iter().map(|(name, _)| name.as_str());
        let names: Vec<&str> = match which {
            Opening::All => names.collect(),
            Opening::Without(part) => {
                names.filter(|name| name.split('.').next() != Some(part)).collect()
            }
            Opening::One(figure) => vec![named(figure, names, || self.called())?],
        };
        let open = |figure: &str| {
            let mut w = Working::default();
            self.state(&mut w, &figure.split('.').collect::<Vec<_>>())?;
            Ok(FigureWorking { figure: figure.to_owned(), steps: StepRow::tree(w.steps()) })
        };
        names.into_iter().map(open).collect()
    }
}

/// The place of a figure by its end.
fn named<'n>(
    figure: &str,
    names: impl Iterator<Item = &'n str>,
    called: impl Fn() -> String,
) -> Result<&'n str, StudyError> {
    let end = format!(".{figure}");
    let names: Vec<&str> = names.collect();
    if let Some(name) = names.iter().find(|name| **name == figure) {
        return Ok(name);
    }
    let fit: Vec<&str> = names.iter().filter(|name| name.ends_with(&end)).copied().collect();
    match fit[..] {
        [name] => Ok(name),
        [] => {
            let mut ends: Vec<&str> = Vec::new();
            for end in names.iter().filter_map(|name| name.rsplit('.').next()) {
                if !ends.contains(&end) {
                    ends.push(end);
                }
            }
            if figure == "?" {
                let why = format!("in {} can be opened: {}", called(), ends.join(", "));
                return Err(Refusal::new("figure", figure, why).into());
            }
            Err(StudyError::unknown("figure", figure, called(), ends))
        }
        _ => {
            let why = format!("names {}; write one of them", fit.join(", "));
            Err(Refusal::new("figure", figure, why).into())
        }
    }
}

/// The numbers of a result by their places. Parts named in `without` and keys named in `labels` hold none.
pub(super) fn numbers(
    result: &impl Serialize,
    without: &[&str],
    labels: &[&str],
) -> Vec<(String, f64)> {
    let mut found = Vec::new();
    if let Ok(Value::Object(parts)) = serde_json::to_value(result) {
        let told = |key: &str| !without.contains(&key) && !labels.contains(&key);
        for (key, part) in parts.iter().filter(|(key, _)| told(key)) {
            leaves(key, part, labels, &mut found);
        }
    }
    found
}

fn leaves(place: &str, value: &Value, labels: &[&str], found: &mut Vec<(String, f64)>) {
    match value {
        Value::Number(number) => found.extend(number.as_f64().map(|x| (place.to_owned(), x))),
        Value::Array(list) => {
            for (n, part) in list.iter().enumerate() {
                leaves(&format!("{place}.{n}"), part, labels, found);
            }
        }
        Value::Object(parts) => {
            for (key, part) in parts.iter().filter(|(key, _)| !labels.contains(&key.as_str())) {
                leaves(&format!("{place}.{key}"), part, labels, found);
            }
        }
        _ => {}
    }
}

/// The item of a list whose place is written in a figure's name.
pub(super) fn nth<'a, T>(list: &'a [T], n: &str) -> Result<(&'a T, usize), Refusal> {
    let place = n.parse().ok();
    let item = place.and_then(|n: usize| Some((list.get(n)?, n)));
    item.ok_or_else(|| Refusal::new("figure", n, "is no place in the result"))
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Text leaves out the noise of the last digits and names the currency; JSON is the number itself.
    #[test]
    fn text_is_readable_and_json_is_exact() {
        let noisy = 36_552.659_999_999_996;
        let row = |unit| StepRow {
            name: "owning cost".to_owned(),
            formula: "TOC = a + b".to_owned(),
            substituted: "1 + 2".to_owned(),
            value: noisy,
            unit,
            source: "definition",
            of: String::new(),
            steps: Vec::new(),
        };
        let shown = |unit| StepRow::lines(&[row(unit)], 0, "EUR").join("\n");
        assert!(
            shown("money").ends_with("\n  = 36552.66 EUR   [definition]"),
            "{}",
            shown("money")
        );
        assert!(shown("money/kW").contains("= 36552.66 EUR/kW "));
        let json = serde_json::to_string(&row("money")).expect("plain data");
        assert!(json.contains("36552.659999999996") && json.contains("\"money\""), "{json}");
        assert_eq!([readable(0.0), readable(1.0 / 3.0)], [0.0, 0.333_333_333_333]);
        assert!(readable(f64::MAX).is_finite());
    }
}
