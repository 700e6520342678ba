//! The tender screen: bids by owning cost, what is out and why, who wins at other factors, what would change the
//! winner. State here; drawing in `draw`, the winner map in `map`.

pub(super) mod draw;
mod map;

use super::action::Screen;
use super::app::App;
use super::frame;
use super::list::List;
use super::work::Evaluated;
use crate::engine::columns::{Lot, TenderSheet};
use crate::study::tender::LotResult;

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
}

impl State {
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
            *self =
                Self { tender: (self.tender + 1) % tenders, view: self.view, ..Self::default() };
        }
    }
}

/// The tender that is shown.
pub(super) fn shown(app: &App) -> Option<&Evaluated> {
    app.ranked.as_ref()?.tenders.get(app.tender.tender)
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
