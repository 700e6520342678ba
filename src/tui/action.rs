//! What can be done, as data: one table of actions with their keys, the place where they hold and their words.
//! Key dispatch, the context line, the help and the documentation are read from it.

use ratatui::crossterm::event::KeyCode;

use super::keys::Key;

/// A screen, in the order of its digit.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Screen {
    /// The fleet ranked.
    #[default]
    Fleet,
    /// One unit.
    Unit,
    /// Bids of a tender.
    Tender,
    /// The assumptions.
    Basis,
    /// What was changed in the book.
    Journal,
}

impl Screen {
    /// All screens with their titles, in the order of their digits.
    pub const ALL: [(Self, &str); 5] = [
        (Self::Fleet, "Fleet"),
        (Self::Unit, "Unit"),
        (Self::Tender, "Tender"),
        (Self::Basis, "Basis"),
        (Self::Journal, "Journal"),
    ];
}

/// Where an action holds.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Place {
    /// Wherever nothing nearer takes the key.
    Everywhere,
    /// Wherever there is a list or text to move in.
    List,
    /// On a screen.
    On(Screen),
    /// While the filter is typed.
    Filter,
    /// While a value of the basis is typed.
    Value,
    /// While the reason of an award is typed.
    Reason,
    /// In the help.
    Help,
    /// In the panel that opens a figure.
    Working,
    /// In the inputs of a tender that can be moved.
    WhatIf,
}

impl Place {
    /// Its heading in the help.
    pub fn title(self) -> &'static str {
        match self {
            Self::Everywhere => "Everywhere",
            Self::List => "Moving",
            Self::Filter => "While typing a filter",
            Self::Value => "While typing a value",
            Self::Reason => "While typing why it is awarded",
            Self::Help => "In the help",
            Self::Working => "In the working of a figure",
            Self::WhatIf => "What if",
            Self::On(screen) => {
                Screen::ALL.iter().find(|(s, _)| *s == screen).map_or("", |(_, title)| title)
            }
        }
    }
}

/// What can be done.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[expect(missing_docs, reason = "the table says what each does")]
pub enum Action {
    Go(Screen),
    NextScreen,
    PreviousScreen,
    Back,
    Help,
    Quit,
    Interrupt,
    Suspend,
    Redraw,
    Up,
    Down,
    PageUp,
    PageDown,
    First,
    Last,
    Open,
    Working,
    NextFigure,
    PreviousFigure,
    NextPart,
    PreviousPart,
    Copy,
    Filter,
    FilterKeep,
    FilterDrop,
    EntryTake,
    EntryLeave,
    EntryErase,
    Sort,
    LeftOut,
    NextUnit,
    PreviousUnit,
    Table,
    NextLot,
    PreviousLot,
    NextTender,
    TenderView,
    WhatIf,
    Risk,
    Award,
    TypeValue,
    Less,
    More,
    MuchLess,
    MuchMore,
    Reset,
    ResetAll,
    Save,
}

/// One line of the table.
#[derive(Clone, Copy, Debug)]
pub struct ActionDef {
    /// What is done.
    pub action: Action,
    /// Its name in documents.
    pub id: &'static str,
    /// Where it holds.
    pub place: Place,
    /// The keys.
    pub keys: &'static [Key],
    /// One or two words.
    pub title: &'static str,
    /// A sentence.
    pub help: &'static str,
    /// Whether the context line names it.
    pub shown: bool,
}

macro_rules! actions {
    ($($place:expr => { $($id:literal $action:expr, [$($key:expr),+], $title:literal, $help:literal $(, $shown:ident)?;)+ })+) => {
        /// Every action with its keys.
        pub const ACTIONS: &[ActionDef] = &[$($(ActionDef {
            action: $action, id: $id, place: $place, keys: &[$($key),+], title: $title, help: $help,
            shown: false $(|| actions!(@ $shown))?,
        },)+)+];
    };
    (@ shown) => { true };
}

const fn char(c: char) -> Key {
    Key::char(c)
}
const fn key(code: KeyCode) -> Key {
    Key::plain(code)
}
const FLEET: Place = Place::On(Screen::Fleet);
const UNIT: Place = Place::On(Screen::Unit);
const TENDER: Place = Place::On(Screen::Tender);
const BASIS: Place = Place::On(Screen::Basis);

actions! {
    Place::Filter => {
        "filter-keep" Action::FilterKeep, [key(KeyCode::Enter), key(KeyCode::Tab)], "keep", "Stop typing and keep the filter.", shown;
        "filter-drop" Action::FilterDrop, [key(KeyCode::Esc)], "drop", "Stop typing and show all units again.", shown;
        "filter-erase" Action::EntryErase, [Key::ctrl('u')], "erase", "Erase what was typed.", shown;
        "filter-up" Action::Up, [key(KeyCode::Up)], "up", "One line up in the list.";
        "filter-down" Action::Down, [key(KeyCode::Down)], "down", "One line down in the list.";
    }
    Place::Value => {
        "value-take" Action::EntryTake, [key(KeyCode::Enter)], "take", "Take the value; the ranking follows at once. The word blank leaves it open. Nothing is stored yet.", shown;
        "value-leave" Action::EntryLeave, [key(KeyCode::Esc)], "leave", "Leave the value as it is.", shown;
        "value-erase" Action::EntryErase, [Key::ctrl('u')], "erase", "Erase what was typed.", shown;
    }
    Place::Reason => {
        "reason-award" Action::EntryTake, [key(KeyCode::Enter)], "award", "Award the lot: who, when, why and the terms go into the book and its journal.", shown;
        "reason-leave" Action::EntryLeave, [key(KeyCode::Esc)], "leave", "Award nothing; nothing is stored.", shown;
        "reason-erase" Action::EntryErase, [Key::ctrl('u')], "erase", "Erase what was typed.", shown;
    }
    FLEET => {
        "open" Action::Open, [key(KeyCode::Enter), char('o')], "open", "Open the unit under the cursor.", shown;
        "fleet-working" Action::Working, [char('e'), key(KeyCode::F(6))], "explain", "How the losses of the unit under the cursor come about, step by step.";
        "filter" Action::Filter, [char('/'), char('f')], "filter", "Show only units whose name or site holds the words that you type.", shown;
        "sort" Action::Sort, [char('s'), key(KeyCode::F(4))], "sort", "Order by saving, cost of waiting, cost of keeping, rating, age, name.", shown;
        "left-out" Action::LeftOut, [char('x'), key(KeyCode::F(3))], "left out", "Show the units that could not be ranked, with the reason; again: the ranking.", shown;
    }
    UNIT => {
        "next-unit" Action::NextUnit, [key(KeyCode::Right), char('n')], "next unit", "The next unit of the list.", shown;
        "previous-unit" Action::PreviousUnit, [key(KeyCode::Left), char('p')], "previous", "The previous unit of the list.", shown;
        "unit-working" Action::Working, [char('e'), key(KeyCode::F(6))], "explain", "How the figures come about, step by step.", shown;
        "table" Action::Table, [char('t'), key(KeyCode::F(3))], "chart/table", "Show the years as a table instead of a chart, and back.", shown;
    }
    TENDER => {
        "next-lot" Action::NextLot, [key(KeyCode::Right), char('n')], "next lot", "The next lot of the tender.", shown;
        "previous-lot" Action::PreviousLot, [key(KeyCode::Left), char('p')], "previous", "The previous lot of the tender.";
        "bid-working" Action::Working, [char('e'), key(KeyCode::F(6))], "explain", "How the figures of the bid under the cursor come about, step by step.", shown;
        "tender-view" Action::TenderView, [char('m'), key(KeyCode::F(3))], "map", "In turn: the bids, the map of who wins at other factors, what must move before another wins.", shown;
        "what-if" Action::WhatIf, [char('v'), key(KeyCode::F(7))], "what if", "Move a factor, or the price or a loss of the bid under the cursor, and see the ranking follow. Nothing is stored.", shown;
        "risk" Action::Risk, [char('u'), key(KeyCode::F(9))], "how sure", "Draw the uncertain inputs of the basis: how probably each bid of the lot is the cheapest to own.", shown;
        "award" Action::Award, [char('w'), key(KeyCode::F(2))], "award", "Award the lot to the bid under the cursor: asks why, and stores nothing before Enter.", shown;
        "next-tender" Action::NextTender, [char('t'), key(KeyCode::F(4))], "next tender", "The next tender of the book.";
    }
    BASIS => {
        "type-value" Action::TypeValue, [key(KeyCode::Enter), char('v')], "type", "Type the value of the assumption under the cursor.", shown;
        "less" Action::Less, [key(KeyCode::Left), char('-')], "less", "A small step down, or the word before.", shown;
        "more" Action::More, [key(KeyCode::Right), char('+'), char('=')], "more", "A small step up, or the next word.", shown;
        "much-less" Action::MuchLess, [char('<'), char(','), Key::shift(KeyCode::Left)], "far less", "A step down ten times as large.";
        "much-more" Action::MuchMore, [char('>'), char('.'), Key::shift(KeyCode::Right)], "far more", "A step up ten times as large.";
        "store" Action::Save, [char('w'), key(KeyCode::F(2))], "store", "Store the changed assumptions in the book; asks once more. The journal keeps the old ones.", shown;
        "reset" Action::Reset, [char('r'), key(KeyCode::Delete)], "reset", "Put the assumption under the cursor back as it is stored.", shown;
        "reset-all" Action::ResetAll, [char('R'), key(KeyCode::F(8))], "reset all", "Put every assumption back as it is stored.";
    }
    Place::List => {
        "up" Action::Up, [key(KeyCode::Up), char('k')], "up", "One line up.";
        "down" Action::Down, [key(KeyCode::Down), char('j')], "down", "One line down.";
        "page-up" Action::PageUp, [key(KeyCode::PageUp), char('K')], "page up", "One page up.";
        "page-down" Action::PageDown, [key(KeyCode::PageDown), char('J'), char(' ')], "page down", "One page down.";
        "first" Action::First, [key(KeyCode::Home), char('g')], "first", "To the first line.";
        "last" Action::Last, [key(KeyCode::End), char('G')], "last", "To the last line.";
    }
    Place::Help => {
        "help-close" Action::Back, [key(KeyCode::Esc), char('?'), key(KeyCode::F(1)), char('q'), key(KeyCode::Enter)], "close", "Close the help.", shown;
    }
    Place::WhatIf => {
        "what-if-less" Action::Less, [key(KeyCode::Left), char('-')], "less", "A small step down.", shown;
        "what-if-more" Action::More, [key(KeyCode::Right), char('+'), char('=')], "more", "A small step up.", shown;
        "what-if-much-less" Action::MuchLess, [char('<'), char(','), Key::shift(KeyCode::Left)], "far less", "A step down ten times as large.", shown;
        "what-if-much-more" Action::MuchMore, [char('>'), char('.'), Key::shift(KeyCode::Right)], "far more", "A step up ten times as large.", shown;
        "what-if-reset" Action::Reset, [char('r'), key(KeyCode::Delete)], "reset", "Put the input under the cursor back as it is stored.", shown;
        "what-if-reset-all" Action::ResetAll, [char('R'), key(KeyCode::F(8))], "reset all", "Put everything back as it is stored.", shown;
        "what-if-close" Action::Back, [key(KeyCode::Esc), char('v'), key(KeyCode::F(7)), key(KeyCode::Enter)], "bids", "Back to the bids; what was moved stays moved.", shown;
    }
    Place::Working => {
        "working-close" Action::Back, [key(KeyCode::Esc), char('e'), char('q'), key(KeyCode::F(6)), key(KeyCode::Enter), key(KeyCode::Backspace)], "close", "Close the working.", shown;
        "next-figure" Action::NextFigure, [key(KeyCode::Right), char('n')], "next figure", "The working of the next figure.", shown;
        "previous-figure" Action::PreviousFigure, [key(KeyCode::Left), char('p')], "previous", "The working of the figure before.";
        "next-part" Action::NextPart, [char('>'), char('.'), Key::shift(KeyCode::Right)], "next part", "The first figure of the next part: losses, loading, heat, law.", shown;
        "previous-part" Action::PreviousPart, [char('<'), char(','), Key::shift(KeyCode::Left)], "previous part", "The first figure of the part before.";
        "copy" Action::Copy, [char('y'), char('c')], "copy", "Hand the working to the terminal as text to be copied.", shown;
    }
    Place::Everywhere => {
        "fleet" Action::Go(Screen::Fleet), [char('1')], "Fleet", "The fleet, ranked by what replacing saves.";
        "unit" Action::Go(Screen::Unit), [char('2')], "Unit", "One unit: keep or replace, and why.";
        "tender" Action::Go(Screen::Tender), [char('3')], "Tender", "Bids by owning cost.";
        "basis" Action::Go(Screen::Basis), [char('4')], "Basis", "The economic assumptions; change one and see the ranking move.";
        "journal" Action::Go(Screen::Journal), [char('5')], "Journal", "What was changed in the book, by whom and why.";
        "next-screen" Action::NextScreen, [key(KeyCode::Tab)], "next screen", "The next screen.";
        "previous-screen" Action::PreviousScreen, [key(KeyCode::BackTab)], "previous screen", "The previous screen.";
        "back" Action::Back, [key(KeyCode::Esc), key(KeyCode::Backspace)], "back", "Stop what is running; else close the innermost thing; else go back to the fleet.", shown;
        "help" Action::Help, [char('?'), key(KeyCode::F(1))], "help", "All keys of this place, and what the bars mean.", shown;
        "quit" Action::Quit, [char('q'), key(KeyCode::F(10))], "quit", "Leave. What was changed and not stored is forgotten.", shown;
        "interrupt" Action::Interrupt, [Key::ctrl('c')], "interrupt", "Leave at once, with exit code 130.";
        "suspend" Action::Suspend, [Key::ctrl('z')], "suspend", "Back to the shell; `fg` continues.";
        "redraw" Action::Redraw, [Key::ctrl('l'), key(KeyCode::F(5))], "redraw", "Draw the whole screen anew.";
    }
}

/// The action of a key, in the innermost place that knows it.
pub fn of_key(places: &[Place], key: Key) -> Option<Action> {
    places.iter().find_map(|place| {
        ACTIONS
            .iter()
            .find(|def| def.place == *place && def.keys.contains(&key))
            .map(|def| def.action)
    })
}

/// The actions that can be reached in some places: an inner place hides the keys it takes from an outer one.
pub fn reachable(places: &[Place]) -> Vec<(&'static ActionDef, Vec<Key>)> {
    let mut taken: Vec<Key> = Vec::new();
    let mut found = Vec::new();
    for place in places {
        let here = ACTIONS.iter().filter(|def| def.place == *place);
        let from = taken.len();
        for def in here {
            let free: Vec<Key> =
                def.keys.iter().copied().filter(|key| !taken[..from].contains(key)).collect();
            taken.extend(def.keys);
            if !free.is_empty() {
                found.push((def, free));
            }
        }
    }
    found
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_action_of_a_place_has_its_own_keys() {
        for (n, def) in ACTIONS.iter().enumerate() {
            for other in &ACTIONS[..n] {
                assert_ne!(def.id, other.id);
                if def.place == other.place {
                    let clash = def.keys.iter().find(|key| other.keys.contains(key));
                    assert_eq!(clash, None, "{} and {}", def.id, other.id);
                }
            }
        }
    }

    /// Ctrl-A, B, Q and S belong to multiplexers and flow control.
    #[test]
    fn keys_that_terminals_take_are_left_alone() {
        for def in ACTIONS {
            for c in ['a', 'b', 'q', 's'] {
                assert!(!def.keys.contains(&Key::ctrl(c)), "{}", def.id);
            }
        }
    }

    #[test]
    fn inner_places_hide_outer_keys() {
        let places = [Place::Help, Place::List, Place::Everywhere];
        assert_eq!(of_key(&places, Key::char('q')), Some(Action::Back));
        assert_eq!(of_key(&[Place::Everywhere], Key::char('q')), Some(Action::Quit));
        let quit = reachable(&places).into_iter().find(|(def, _)| def.id == "quit");
        assert_eq!(quit.map(|(_, keys)| keys), Some(vec![Key::plain(KeyCode::F(10))]));
    }
}
