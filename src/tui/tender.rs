//! The tender screen: bids by owning cost, what is out and why, who wins at other factors, what would change the
//! winner. State here; drawing in `draw`, the winner map in `map`.

mod award;
pub(super) mod draw;
mod map;
mod regions;
mod what_if;

pub(super) use award::{award, reasoned};

use std::sync::Arc;

use super::action::Screen;
use super::app::App;
use super::frame;
use super::list::List;
use super::work::Evaluated;
use crate::engine::columns::{Lot, TenderSheet};
use crate::study::tender::LotResult;
use crate::study::tender::risk::RiskResult;

/// Number of inputs that can be moved.
pub(super) const INPUTS: usize = what_if::LEN;

/// What is shown where there is no room for everything.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub(super) enum View {
    /// The bids.
    #[default]
    Bids,
    /// The winner map.
    Map,
    /// How far inputs must move before another bid wins.
    Changes,
}

impl View {
    /// The next one.
    pub(super) fn next(self) -> Self {
        match self {
            Self::Bids => Self::Map,
            Self::Map => Self::Changes,
            Self::Changes => Self::Bids,
        }
    }
}

/// State of the screen.
#[derive(Debug, Default)]
pub(super) struct State {
    /// Which tender.
    pub(super) tender: usize,
    /// Which of its lots.
    pub(super) lot: usize,
    /// The bids of the lot.
    pub(super) list: List,
    pub(super) view: View,
    pub(super) what_if: what_if::State,
    /// How sure the winner of a lot is, where that was asked.
    pub(super) risk: Option<(String, Box<RiskResult>)>,
    /// Counts what changes the figures: an answer to an older question is dropped.
    number: u64,
}

impl State {
    /// Something changed of which the figures are: what was simulated no longer holds.
    pub(super) fn moved(&mut self) -> u64 {
        self.risk = None;
        self.number += 1;
        self.number
    }

    /// Whether an answer is to the question that counts.
    pub(super) fn counts(&self, number: u64) -> bool {
        self.number == number
    }

    /// Shows another lot; `by` goes round.
    pub(super) fn turn(&mut self, lots: usize, by: usize) {
        if lots > 0 {
            self.lot = (self.lot + by) % lots;
            self.list = List::default();
        }
    }

    /// Shows the next tender.
    pub(super) fn next_tender(&mut self, tenders: usize) {
        if tenders > 0 {
            self.moved();
            *self = Self {
                tender: (self.tender + 1) % tenders,
                view: self.view,
                number: self.number,
                ..Self::default()
            };
        }
    }
}

/// The tender that is shown: as it was changed on the screen, else as it is stored.
pub(super) fn shown(app: &App) -> Option<&Evaluated> {
    let stored = stored(app)?;
    Some(app.tender.what_if.of(app.tender.tender).unwrap_or(stored))
}

/// The tender as it is stored.
fn stored(app: &App) -> Option<&Evaluated> {
    app.ranked.as_ref()?.tenders.get(app.tender.tender)
}

/// The inputs of the bid under the cursor that can be moved.
fn inputs(app: &App) -> Vec<what_if::Line> {
    let lines = || {
        let (_, bid) = bid_and_lot(app)?;
        let stored = stored(app)?;
        let result = stored.result.as_ref().ok()?.lots.get(app.tender.lot)?;
        let changed = app.tender.what_if.draft.as_ref().filter(|(n, _)| *n == app.tender.tender);
        let now = changed.map_or(&*stored.sheet, |(_, sheet)| sheet);
        Some(what_if::lines(&stored.sheet, now, result, bid))
    };
    lines().unwrap_or_default()
}

fn bid_and_lot(app: &App) -> Option<(&str, &str)> {
    under_cursor(app).map(|(_, lot, bid)| (lot, bid))
}

/// How an input is moved.
#[derive(Clone, Copy, Debug)]
pub(super) enum Move {
    By(i64),
    Reset,
    ResetAll,
}

/// Moves the input under the cursor; what is to be evaluated then.
///
/// # Errors
/// Why it cannot be moved.
pub(super) fn move_input(app: &mut App, how: Move) -> Result<(), String> {
    let lines = inputs(app);
    let Some((lot, bid)) = bid_and_lot(app).map(|(l, b)| (l.to_owned(), b.to_owned())) else {
        return Ok(());
    };
    let Some(sheet) = stored(app).map(|stored| Arc::clone(&stored.sheet)) else { return Ok(()) };
    let Some(line) = lines.get(app.tender.what_if.list.cursor) else { return Ok(()) };
    let (tender, at) = (app.tender.tender, [lot.as_str(), bid.as_str()]);
    let what_if = &mut app.tender.what_if;
    match how {
        Move::By(by) => what_if.nudge(tender, &sheet, line, at, by)?,
        Move::Reset => what_if.reset(tender, &sheet, line, at),
        Move::ResetAll => what_if.clear(),
    }
    keep_on(app, &bid);
    Ok(())
}

/// Puts the cursor on a bid, wherever it ranks now.
pub(super) fn keep_on(app: &mut App, bid: &str) {
    let found = lot(app).and_then(|(_, result)| result.bids.iter().position(|b| b.bid == bid));
    if let Some(at) = found {
        app.tender.list.cursor = at;
    }
}

/// The simulation of the lot that is shown.
fn risk(app: &App) -> Option<&RiskResult> {
    let (lot, risk) = app.tender.risk.as_ref()?;
    (*lot == self::lot(app)?.1.lot).then_some(risk)
}

/// The lot that is shown, with what it asks.
fn lot(app: &App) -> Option<(&Lot, &LotResult)> {
    let evaluated = shown(app)?;
    let result = evaluated.result.as_ref().ok()?.lots.get(app.tender.lot)?;
    let lot = evaluated.sheet.lots.iter().find(|lot| lot.lot == result.lot)?;
    Some((lot, result))
}

/// Whether bids, map and changes are all seen at once: turning shows nothing else.
pub(super) fn shows_all(app: &App) -> bool {
    draw::shows_all(frame::body(app))
}

/// Whether something else than the bids is seen, from which they can be gone back to.
pub(super) fn can_go_back(app: &App) -> bool {
    app.screen == Screen::Tender && app.tender.view != View::Bids && !shows_all(app)
}

/// The bid under the cursor, with its tender and lot.
pub(super) fn under_cursor(app: &App) -> Option<(&TenderSheet, &str, &str)> {
    let (asked, result) = lot(app)?;
    let bid = result.bids.get(app.tender.list.cursor)?;
    Some((&shown(app)?.sheet, &asked.lot, &bid.bid))
}

/// Number of bids of the lot.
pub(super) fn len(app: &App) -> usize {
    lot(app).map_or(0, |(_, result)| result.bids.len())
}

/// The sign of a bid in the map: its place, then letters.
fn sign(place: usize) -> char {
    let digits = "123456789abcdefghijklmnopqrstuvwxyz";
    digits.chars().nth(place.wrapping_sub(1)).unwrap_or('#')
}
