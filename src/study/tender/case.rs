//! A tender of a book with the basis that fills what its lots leave open: what every command on a tender begins with.

use super::risk::{Question, risk};
use super::{
    BasisForFactors, BidWorking, LotFactors, LotResult, TenderResult, as_awarded, award_of,
    evaluate, lot_factors, working, working_as_awarded,
};
use crate::book::{Book, BookError, Change};
use crate::engine::Refusal;
use crate::engine::columns::{Lot, TenderSheet};
use crate::engine::decision::Context;
use crate::engine::decision::tender::factors::Computed;
use crate::engine::decision::uncertainty::RankCorrelation;
use crate::engine::economics::loss_factors::LossFactors;
use crate::study::explain::MONEY;
use crate::study::settle::{SettleResult, settle};
use crate::study::{Desk, StudyError};

/// A tender and its basis.
#[derive(Clone, Debug)]
pub struct Case {
    /// The tender with all that came in for it.
    pub sheet: TenderSheet,
    basis: Option<(Desk, Context)>,
    /// The lots as they were put out, where the factors that they state are set aside.
    put_out: Option<Vec<Lot>>,
    /// Version of the book's data when it was read, where it came from a book.
    read_at: Option<i64>,
}

/// How a simulation is drawn.
#[derive(Clone, Debug, PartialEq)]
pub struct Draws {
    /// How many.
    pub draws: usize,
    /// The same seed gives the same figures.
    pub seed: u64,
    /// Inputs that move together.
    pub correlations: Vec<RankCorrelation>,
}

impl Default for Draws {
    fn default() -> Self {
        Self { draws: 10_000, seed: 1, correlations: Vec::new() }
    }
}

/// The factors of a lot that states all of them.
fn stated(lot: &Lot) -> Option<LossFactors> {
    Some(LossFactors {
        factor_a_per_kw: lot.factor_a_per_kw?,
        factor_b_per_kw: lot.factor_b_per_kw?,
        factor_aux_per_kw: lot.factor_aux_per_kw?,
    })
}

impl Case {
    /// Reads a tender and the basis named, else the book's only or current one. Without any basis the case stands
    /// as long as its lots leave nothing open.
    ///
    /// # Errors
    /// The book fails or has no such tender or basis; which of several bases is meant cannot be told and a lot
    /// needs one.
    pub fn read(book: &Book, tender: &str, basis: Option<&str>) -> Result<Self, StudyError> {
        Self::read_where(book, tender, basis, |_, lot| Computed::by(lot).any())
    }

    /// The same for settling: a lot that is awarded needs no basis, it is settled by the terms of the award.
    ///
    /// # Errors
    /// As [`Case::read`].
    pub fn to_settle(book: &Book, tender: &str, basis: Option<&str>) -> Result<Self, StudyError> {
        Self::read_where(book, tender, basis, |sheet, lot| {
            Computed::by(lot).any() && award_of(sheet, &lot.lot).is_none()
        })
    }

    fn read_where(
        book: &Book,
        tender: &str,
        basis: Option<&str>,
        needs_basis: impl Fn(&TenderSheet, &Lot) -> bool,
    ) -> Result<Self, StudyError> {
        let read_at = Some(book.data_version()?);
        let sheet = book.tender(tender)?;
        let open = sheet.lots.iter().any(|lot| needs_basis(&sheet, lot));
        let desk = match Desk::basis_only(book, basis) {
            Ok(desk) => Some(desk),
            Err(StudyError::Book(BookError::WhichBasis { known })) if known.is_empty() || !open => {
                None
            }
            Err(error) => return Err(error),
        };
        Ok(Self { read_at, ..Self::new(sheet, desk)? })
    }

    /// A tender with the desk on which its basis lies.
    ///
    /// # Errors
    /// What the engine refuses of the basis.
    pub fn new(sheet: TenderSheet, desk: Option<Desk>) -> Result<Self, StudyError> {
        let ready = |desk: Desk| desk.context().map(|context| (desk, context));
        Ok(Self { sheet, basis: desk.map(ready).transpose()?, put_out: None, read_at: None })
    }

    /// Holds that a change begins on the book as the case was read from it, so that what is signed is what was compared:
    /// from its beginning nobody else writes.
    ///
    /// # Errors
    /// Others wrote since; the book fails.
    pub(super) fn still_stands(&self, change: &Change<'_>) -> Result<(), StudyError> {
        let now = change.data_version()?;
        if self.read_at.is_some_and(|read_at| read_at != now) {
            return Err(StudyError::Busy);
        }
        Ok(())
    }

    /// The same case as if no lot stated its factors: each comes from the basis, so that its ranges and what it rests
    /// on show how safe a winner by published factors is.
    #[must_use]
    pub fn from_basis(mut self) -> Self {
        self.put_out.get_or_insert_with(|| self.sheet.lots.clone());
        for lot in &mut self.sheet.lots {
            lot.factor_a_per_kw = None;
            lot.factor_b_per_kw = None;
            lot.factor_aux_per_kw = None;
        }
        self
    }

    /// Whether the factors that lots state are set aside.
    pub fn is_from_basis(&self) -> bool {
        self.put_out.is_some()
    }

    /// The basis, where there is one.
    pub fn basis(&self) -> Option<BasisForFactors<'_>> {
        self.basis.as_ref().map(|(_, context)| BasisForFactors {
            assumptions: &context.assumptions,
            market: &context.market,
        })
    }

    /// What amounts of the steps are written in: the currency of the tender, or "money" where the basis is in
    /// another and a step may be in either.
    pub fn money(&self) -> &str {
        let own = self.sheet.tender.currency.as_str();
        match &self.basis {
            Some((_, context)) if context.assumptions.currency != own => MONEY,
            _ => own,
        }
    }

    /// Name of the basis, where there is one.
    pub fn basis_name(&self) -> Option<&str> {
        self.basis.as_ref().map(|(desk, _)| desk.sheet.basis.name.as_str())
    }

    /// Whether the basis says how far this input may lie.
    pub fn has_range(&self, quantity: &str) -> bool {
        let ranges = self.basis.iter().flat_map(|(desk, _)| &desk.sheet.ranges);
        ranges.into_iter().any(|range| range.quantity == quantity)
    }

    /// Whether the basis says how far any input may lie.
    pub fn has_ranges(&self) -> bool {
        self.basis.as_ref().is_some_and(|(desk, _)| !desk.sheet.ranges.is_empty())
    }

    /// The lot of a tender that has but one.
    ///
    /// # Errors
    /// It has more, or none.
    pub fn only_lot(&self) -> Result<String, StudyError> {
        let lots: Vec<&str> = self.sheet.lots.iter().map(|lot| lot.lot.as_str()).collect();
        if let [lot] = lots[..] {
            return Ok(lot.to_owned());
        }
        let (tender, lots) = (&self.sheet.tender.tender, lots.join(", "));
        let why = format!("is needed: --lot NAME; the lots of tender {tender}: {lots}");
        Err(Refusal::new("lot", "", why).into())
    }

    /// Evaluates the bids of one lot, or of all.
    ///
    /// # Errors
    /// As [`evaluate`].
    pub fn evaluate(&self, lot: Option<&str>) -> Result<TenderResult, StudyError> {
        evaluate(&self.sheet, self.basis().as_ref(), lot)
    }

    /// The evaluation of an awarded lot by the terms of its award; none where it is not awarded, or where what lots
    /// state is set aside.
    ///
    /// # Errors
    /// As [`evaluate`].
    pub fn as_awarded(&self, lot: &str) -> Result<Option<LotResult>, StudyError> {
        if self.is_from_basis() {
            return Ok(None);
        }
        as_awarded(&self.sheet, self.basis().as_ref(), lot)
    }

    /// The working of a bid as its bidder is answered: by the terms of the award as in [`Case::as_awarded`], else today's.
    ///
    /// # Errors
    /// As [`working`].
    pub fn answering(&self, lot: &str, bid: &str) -> Result<BidWorking, StudyError> {
        let (sheet, basis) = (&self.sheet, self.basis());
        let aside = self.is_from_basis();
        let kept = if aside { None } else { working_as_awarded(sheet, basis.as_ref(), lot, bid)? };
        match kept {
            Some(kept) => Ok(kept),
            None => working(sheet, basis.as_ref(), lot, bid),
        }
    }

    /// The factors of a lot as they are published.
    ///
    /// # Errors
    /// As [`evaluate`].
    pub fn factors(&self, lot: &str) -> Result<LotFactors, StudyError> {
        let own = lot_factors(&self.sheet, self.basis().as_ref(), lot)?;
        let published = self.put_out.iter().flatten().find(|put_out| put_out.lot == lot);
        Ok(LotFactors { published: published.and_then(stated), ..own })
    }

    /// Settles the measured units of one lot, or of all, always by the lots as they were put out.
    ///
    /// # Errors
    /// As [`settle`].
    pub fn settle(&self, lot: Option<&str>) -> Result<SettleResult, StudyError> {
        match &self.put_out {
            None => settle(&self.sheet, self.basis().as_ref(), lot),
            Some(put_out) => {
                let sheet = TenderSheet { lots: put_out.clone(), ..self.sheet.clone() };
                settle(&sheet, self.basis().as_ref(), lot)
            }
        }
    }

    /// Says of each lot that has a ranked bid how sure its winner is.
    ///
    /// # Errors
    /// There is no basis; as [`risk`].
    pub fn add_risk(&self, result: &mut TenderResult, asked: &Draws) -> Result<(), StudyError> {
        let (Some((desk, _)), Some(today)) = (&self.basis, self.basis()) else {
            let why = "is needed: its ranges say what is uncertain; import one, or name it";
            return Err(Refusal::new("basis", "", why).into());
        };
        let question = Question {
            basis: &desk.sheet,
            series: desk.series.first(),
            correlations: &asked.correlations,
            seed: asked.seed,
            draws: asked.draws,
        };
        for lot in result.lots.iter_mut().filter(|lot| lot.least_owning_cost.is_some()) {
            lot.risk = Some(risk(&self.sheet, &today, &lot.lot, &question)?);
        }
        Ok(())
    }
}
