//! What if a factor, a price or a guaranteed loss were another: a tender changed on the screen and never stored.
//! State and steps; the evaluation is the worker's.

use std::sync::Arc;

use crate::engine::columns::{Bid, Column, Kind, Lot, Money, TenderSheet, Value};
use crate::study::tender::LotResult;
use crate::tui::basis::stepped;
use crate::tui::list::List;
use crate::tui::work::Evaluated;

/// Where an input stands.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Of {
    Lot,
    Bid,
}

/// The inputs that can be moved; the total loss where the load loss is not stated.
const INPUTS: [(Of, &str); 5] = [
    (Of::Lot, "factor_a_per_kw"),
    (Of::Lot, "factor_b_per_kw"),
    (Of::Bid, "price"),
    (Of::Bid, "no_load_loss_w"),
    (Of::Bid, "load_loss_w"),
];

/// A line of the inputs.
#[derive(Clone, Debug)]
pub(super) struct Line {
    pub(super) column: &'static Column,
    of: Of,
    at: usize,
    /// As in the book; a factor from the basis is as it is computed.
    pub(super) stored: f64,
    /// As it stands now.
    pub(super) now: f64,
    /// The currency that it is in.
    pub(super) currency: String,
}

/// A tender that was changed on the screen.
#[derive(Debug, Default)]
pub(in crate::tui) struct State {
    /// Its inputs take the keys.
    pub(in crate::tui) open: bool,
    /// Cursor in the inputs.
    pub(in crate::tui) list: List,
    /// The changed tender, by its number.
    pub(in crate::tui) draft: Option<(usize, TenderSheet)>,
    /// What it comes to.
    pub(in crate::tui) evaluated: Option<Evaluated>,
}

/// Number of inputs.
pub(in crate::tui) const LEN: usize = INPUTS.len();

fn number(value: &Value) -> Option<f64> {
    match value {
        Value::Real(x) => Some(*x),
        Value::Money(money) => Some(money.amount()),
        _ => None,
    }
}

fn find<'a>(sheet: &'a TenderSheet, lot: &str, bid: &str) -> Option<(&'a Lot, &'a Bid)> {
    let asked = sheet.lots.iter().find(|l| l.lot == lot)?;
    Some((asked, sheet.bids.iter().find(|b| b.lot == lot && b.bid == bid)?))
}

/// The inputs of a bid as they are stored and as they stand.
pub(super) fn lines(
    stored: &TenderSheet,
    now: &TenderSheet,
    result: &LotResult,
    bid: &str,
) -> Vec<Line> {
    let (Some(before), Some(after)) = (find(stored, &result.lot, bid), find(now, &result.lot, bid))
    else {
        return Vec::new();
    };
    let sheet_currency = stored.tender.currency.clone();
    let line = |(of, name): (Of, &'static str)| {
        let name = if name == "load_loss_w" && before.1.load_loss_w.is_none() {
            "total_loss_w"
        } else {
            name
        };
        let columns = if of == Of::Lot { Lot::COLUMNS } else { Bid::COLUMNS };
        let at = columns.iter().position(|column| column.name == name)?;
        let value = |(lot, bid): (&Lot, &Bid)| {
            let values = if of == Of::Lot { lot.values() } else { bid.values() };
            values.get(at).and_then(number)
        };
        let computed = match name {
            "factor_a_per_kw" => Some(result.factor_a_per_kw),
            "factor_b_per_kw" => Some(result.factor_b_per_kw),
            _ => None,
        };
        let stored = value(before).or(computed)?;
        let now = value(after).or(computed)?;
        let own = before.1.currency.as_ref().filter(|_| of == Of::Bid);
        let currency = own.unwrap_or(&sheet_currency).clone();
        Some(Line { column: &columns[at], of, at, stored, now, currency })
    };
    INPUTS.into_iter().filter_map(line).collect()
}

impl State {
    /// Moves an input of a bid by steps; `sheet` is the tender as it is stored.
    ///
    /// # Errors
    /// Why it cannot be moved.
    pub(super) fn nudge(
        &mut self,
        tender: usize,
        sheet: &TenderSheet,
        line: &Line,
        [lot, bid]: [&str; 2],
        by: i64,
    ) -> Result<(), String> {
        let next = stepped(line.column, line.stored, line.now, by);
        let value = match line.column.kind {
            Kind::Money(..) => Value::Money(Money::parse(&format!("{next:.3}"))?),
            _ => Value::Real(next),
        };
        let name = line.column.name;
        let value = line.column.check(value).map_err(|why| format!("{name} {why}."))?;
        self.set(tender, sheet, line, [lot, bid], &value);
        Ok(())
    }

    fn set(
        &mut self,
        tender: usize,
        sheet: &TenderSheet,
        line: &Line,
        [lot, bid]: [&str; 2],
        value: &Value,
    ) {
        if self.draft.as_ref().is_none_or(|(n, _)| *n != tender) {
            self.draft = Some((tender, sheet.clone()));
            self.evaluated = None;
        }
        let Some((_, draft)) = &mut self.draft else { return };
        match line.of {
            Of::Lot => {
                for asked in draft.lots.iter_mut().filter(|l| l.lot == lot) {
                    let mut values = asked.values();
                    values[line.at] = value.clone();
                    *asked = Lot::from_values(&values).unwrap_or_else(|| asked.clone());
                }
            }
            Of::Bid => {
                for offered in draft.bids.iter_mut().filter(|b| b.lot == lot && b.bid == bid) {
                    let mut values = offered.values();
                    values[line.at] = value.clone();
                    *offered = Bid::from_values(&values).unwrap_or_else(|| offered.clone());
                }
            }
        }
        if draft == sheet {
            self.clear();
        }
    }

    /// What the draft comes to; where it comes to nothing, the draft goes back, and why is said.
    ///
    /// # Errors
    /// Why it cannot be evaluated.
    pub(in crate::tui) fn take(&mut self, evaluated: Evaluated) -> Result<(), String> {
        if let Err(why) = evaluated.result {
            match (&mut self.draft, &self.evaluated) {
                (Some((_, draft)), Some(before)) => draft.clone_from(&before.sheet),
                _ => self.clear(),
            }
            return Err(why);
        }
        self.evaluated = Some(evaluated);
        Ok(())
    }

    /// Puts an input back as it is stored.
    pub(super) fn reset(&mut self, tender: usize, sheet: &TenderSheet, line: &Line, at: [&str; 2]) {
        let Some((lot, bid)) = find(sheet, at[0], at[1]) else { return };
        let values = if line.of == Of::Lot { lot.values() } else { bid.values() };
        if let Some(value) = values.into_iter().nth(line.at) {
            self.set(tender, sheet, line, at, &value);
        }
    }

    /// Forgets all changes.
    pub(in crate::tui) fn clear(&mut self) {
        (self.draft, self.evaluated) = (None, None);
    }

    /// The changed tender, if it is this one.
    pub(in crate::tui) fn of(&self, tender: usize) -> Option<&Evaluated> {
        let (n, _) = self.draft.as_ref()?;
        self.evaluated.as_ref().filter(|_| *n == tender)
    }

    /// The sheet to be evaluated.
    pub(in crate::tui) fn sheet(&self) -> Option<Arc<TenderSheet>> {
        self.draft.as_ref().map(|(_, sheet)| Arc::new(sheet.clone()))
    }
}
