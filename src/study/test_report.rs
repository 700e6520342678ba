//! What the test report of a unit says of its nameplate, and the blanks that are filled from it.

use serde::Serialize;

use crate::engine::Refusal;
use crate::engine::columns::{TestReport, Unit, Value};
use crate::engine::transformer::test_report::{Plate, Tested, read};
use crate::engine::working::{Recorder, Silent};

/// A unit with its test report.
#[derive(Clone, Debug, PartialEq)]
pub struct TestedUnit {
    /// Its record, blanks as they are.
    pub unit: Unit,
    /// The report.
    pub report: TestReport,
}

impl TestedUnit {
    /// What the report says; `stray_share_pu` is the basis's, where no resistances were measured.
    ///
    /// # Errors
    /// No complete test; a test that contradicts the nameplate or itself.
    pub fn read<R: Recorder>(&self, w: &mut R, stray_share_pu: f64) -> Result<Tested, Refusal> {
        read(w, &Plate::of_unit(&self.unit, stray_share_pu)?, &self.report)
    }

    /// The record with its blanks filled; none where the report fills none or cannot be read.
    pub fn filled(&self, stray_share_pu: f64) -> Option<Unit> {
        let tested = self.read(&mut Silent, stray_share_pu).ok()?;
        Some(tested.fill(&self.unit)).filter(|filled| *filled != self.unit)
    }
}

/// A test report in a dossier, losses and circuit at the reference temperature.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result; `figures` says what they are")]
pub struct TestRow {
    pub tested_on: Option<String>,
    pub no_load_loss_w: Option<f64>,
    pub no_load_current_pct: Option<f64>,
    pub load_loss_w: Option<f64>,
    pub reference_temp_c: f64,
    pub resistive_loss_w: Option<f64>,
    pub stray_loss_w: Option<f64>,
    pub impedance_pct: Option<f64>,
    pub r_pu: Option<f64>,
    pub x_pu: Option<f64>,
    /// Columns of the nameplate that are blank and filled from it.
    pub fills: Vec<&'static str>,
    /// Why it cannot be used.
    pub why: Option<String>,
}

impl TestRow {
    /// The row of a unit with a report.
    pub fn of(tested: &TestedUnit, stray_share_pu: f64) -> Self {
        let read = tested.read(&mut Silent, stray_share_pu);
        let said = read.as_ref().copied().unwrap_or_default();
        let short = said.short.as_ref();
        let fills = match tested.filled(stray_share_pu) {
            Some(filled) => (Unit::COLUMNS.iter().zip(tested.unit.values()).zip(filled.values()))
                .filter(|((_, own), filled)| own != filled && *filled != Value::Blank)
                .map(|((column, _), _)| column.name)
                .collect(),
            None => Vec::new(),
        };
        Self {
            tested_on: tested.report.tested_on.clone(),
            no_load_loss_w: said.open.map(|open| open.no_load_loss_w),
            no_load_current_pct: said.no_load_current_pct,
            load_loss_w: short.map(|short| short.corrected.load_loss_w),
            reference_temp_c: Plate::reference_temp_c(&tested.unit),
            resistive_loss_w: short.and_then(|short| short.corrected.resistive_loss_w),
            stray_loss_w: short.and_then(|short| short.corrected.stray_loss_w),
            impedance_pct: short.map(|short| short.impedance_pct),
            r_pu: short.map(|short| short.circuit.r_pu),
            x_pu: short.map(|short| short.circuit.x_pu),
            fills,
            why: read.err().map(|why| why.to_string()),
        }
    }
}
