//! Basis and tender files. A basis that the engine would refuse is not let in.

use super::{Intake, IntakeError, Report};
use crate::book::{Book, BookError, Change, Tally};
use crate::engine::columns::TenderSheet;
use crate::engine::decision::tender::Rates;
use crate::engine::decision::uncertainty::Spread;
use crate::engine::economics::Assumptions;
use crate::engine::law;
use crate::exchange::sheets::{self, Sheet};
use crate::exchange::{Problems, Recognised, Source};

impl Intake<'_> {
    pub(super) fn basis(mut self, book: &mut Book, source: Source) -> Result<Report, IntakeError> {
        let Some(sheet) = self.sheet(source, sheets::basis)? else {
            return Ok(self.report(Tally::default()));
        };
        self.rows = 1 + (sheet.content.ranges.len() + sheet.content.budgets.len()) as u64;
        let basis = &sheet.content.basis;
        if let Err(refusal) = Assumptions::resolve(basis) {
            let line = sheet.line(refusal.quantity);
            self.problems.add(line, refusal.quantity, &refusal.value, refusal.why);
        }
        self.known_law(&sheet, "law", basis.law.as_deref());
        for range in &sheet.content.ranges {
            // Where the basis leaves the input blank, a lot may give it: that is seen when it is drawn.
            let base = basis.number(&range.quantity);
            if let Some(Err(refusal)) = base.map(|base| Spread::of(range, Some(base))) {
                let line = sheet.line(&range.quantity);
                self.problems.add(line, &range.quantity, &refusal.value, refusal.why);
            }
        }
        let change = book.change(self.actor, Some(&self.file))?;
        let saved = change.save_basis(&sheet.content);
        let (current, actor) = (self.options.current, self.actor);
        let report = self.settle(change, saved, &sheet)?;
        if current && report.stored {
            book.set_current_basis(&sheet.content.basis.name, actor)?;
        }
        Ok(report)
    }

    pub(super) fn tender(mut self, book: &mut Book, source: Source) -> Result<Report, IntakeError> {
        let Some(sheet) = self.sheet(source, sheets::tender)? else {
            return Ok(self.report(Tally::default()));
        };
        let TenderSheet { rates, lots, .. } = &sheet.content;
        self.rows = 1 + (rates.len() + lots.len()) as u64;
        if let Err(refusal) = Rates::new(&sheet.content.tender, rates) {
            let own = &sheet.content.tender.currency;
            let line = sheet.line(&format!("rates.{own}"));
            self.problems.add(line, own, &refusal.value, refusal.why);
        }
        for lot in lots {
            self.known_law(&sheet, &format!("{}.law", lot.lot), lot.law.as_deref());
        }
        let change = book.change(self.actor, Some(&self.file))?;
        let saved = change.save_tender(&sheet.content);
        self.settle(change, saved, &sheet)
    }

    /// Holds that a law that is named, at `key` of the file, is known.
    fn known_law<T>(&mut self, sheet: &Sheet<T>, key: &str, law: Option<&str>) {
        if let Some(Err(refusal)) = law.map(law::named) {
            self.problems.add(sheet.line(key), "law", &refusal.value, refusal.why);
        }
    }

    fn sheet<T>(
        &mut self,
        source: Source,
        read: fn(&str, &mut Problems) -> Option<Sheet<T>>,
    ) -> Result<Option<Sheet<T>>, IntakeError> {
        self.recognised = Some(Recognised::Toml);
        // A sheet is taken as a whole: there is no bad row to leave.
        self.is_unfit = true;
        match sheets::text(source) {
            Ok(text) => Ok(read(&text, &mut self.problems)),
            Err(error) => {
                self.unfit(error)?;
                Ok(None)
            }
        }
    }

    /// Commits what was saved, or says why it cannot be.
    fn settle<T>(
        mut self,
        change: Change<'_>,
        saved: Result<(), BookError>,
        sheet: &Sheet<T>,
    ) -> Result<Report, IntakeError> {
        match saved {
            Ok(()) => {}
            Err(error @ BookError::Unknown { kind: "price series", .. }) => {
                let line = sheet.line("price_series");
                self.problems.add(line, "price_series", "", error.to_string());
            }
            Err(error @ BookError::InUse { kind: "rate", .. }) => {
                self.problems.add(sheet.line("rates"), "rates", "", error.to_string());
            }
            Err(error @ BookError::InUse { kind: "currency", .. }) => {
                self.problems.add(sheet.line("currency"), "currency", "", error.to_string());
            }
            Err(ref error @ BookError::AwardedRate { ref currency, .. }) => {
                // A rate that is gone from the file is told of the head of the rates.
                let line = sheet.line(&format!("rates.{currency}")).max(sheet.line("rates"));
                self.problems.add(line, "rates", currency, error.to_string());
            }
            Err(error @ (BookError::InUse { .. } | BookError::Awarded { .. })) => {
                self.problems.add(1, "lot", "", error.to_string());
            }
            Err(error) => return Err(error.into()),
        }
        let tally = change.tally();
        if self.stays() {
            change.commit()?;
        }
        Ok(self.report(tally))
    }
}
