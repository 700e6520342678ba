//! The working of a figure as results carry it: steps with formula, numbers put in, value, unit and source.

use serde::Serialize;

use crate::engine::working::Step;

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

    /// A working as lines, `depth` steps in: parts indented below the figure that they give. Of a row of years by
    /// one formula the first is written in full, the others in a line each.
    pub fn lines(rows: &[Self], depth: usize) -> Vec<String> {
        let indent = "    ".repeat(depth);
        let mut lines = Vec::new();
        for (n, row) in rows.iter().enumerate() {
            let again = n > 0 && !row.of.is_empty() && rows[n - 1].formula == row.formula;
            if again && !row.steps.is_empty() {
                let (of, value) = (&row.of, row.value);
                lines.push(format!("{indent}{of}: {} = {value} {}", row.substituted, row.unit));
                continue;
            }
            if let Some(symbol) = row.formula.strip_suffix(" = as stated") {
                lines.push(format!("{indent}{symbol} = {} {}   {}", row.value, row.unit, row.name));
                continue;
            }
            lines.push(format!("{indent}{}", row.name));
            lines.push(format!("{indent}  {}", row.formula));
            // What has no numbers of its own to put in is not said twice.
            if !row.formula.ends_with(&row.substituted) {
                lines.push(format!("{indent}  = {}", row.substituted));
            }
            lines.push(format!("{indent}  = {} {}   [{}]", row.value, row.unit, row.source));
            lines.extend(Self::lines(&row.steps, depth + 1));
        }
        lines
    }
}
