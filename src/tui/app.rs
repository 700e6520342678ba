//! The state of the dashboard and how it changes: an event becomes an action, an action changes the state and
//! may ask the worker something. Nothing here draws, waits or touches the terminal.

use std::sync::Arc;

use ratatui::crossterm::event::{KeyEvent, KeyEventKind};
use ratatui::layout::Size;

use super::action::{self, Action, Place, Screen};
use super::caps::Caps;
use super::clipboard::Clipboard;
use super::entry::{Entry, Of};
use super::keys::Key;
use super::list::{List, Step};
use super::session::{Awarding, JournalLine, Session};
use super::theme::Theme;
use super::work::{Answer, Done, Job, Kind, Question, Ranked, View, ViewSpec, Writes};
use super::{basis, frame, help, tender, text, unit, working};
use crate::engine::columns::BasisSheet;
use crate::study::rank::By;
use crate::study::{StudyError, Watch};

/// Why the dashboard was left.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ExitReason {
    /// The user left.
    Quit,
    /// A signal asked for it, or Ctrl-C (as SIGINT).
    Signal(i32),
}

impl ExitReason {
    /// The exit code of the program: 0, or 128 and the number of the signal.
    pub fn code(self) -> u8 {
        match self {
            Self::Quit => 0,
            Self::Signal(n) => u8::try_from(128 + n).unwrap_or(u8::MAX),
        }
    }
}

/// What the loop is to do with the terminal.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Wish {
    /// Hand it to the shell.
    Suspend,
    /// Draw everything anew.
    Redraw,
    /// Write this to it.
    Write(String),
}

/// What is being waited for.
#[derive(Debug)]
pub(super) struct Busy {
    pub(super) what: &'static str,
    pub(super) watch: Arc<Watch>,
}

/// Questions on their way: the newest number of each kind.
#[derive(Debug, Default)]
struct Asking {
    generation: [u64; Kind::COUNT],
    busy: [Option<Busy>; Kind::COUNT],
    outbox: Vec<Job>,
}

/// What was opened.
#[derive(Debug)]
pub(super) struct Opened {
    pub(super) title: String,
    pub(super) basis_source: String,
    pub(super) journal: Vec<JournalLine>,
    pub(super) writes: Writes,
}

/// The state of the dashboard.
#[derive(Debug)]
pub struct App {
    pub(super) theme: Theme,
    pub(super) size: Size,
    pub(super) screen: Screen,
    /// First line of the help that is shown; none = closed.
    pub(super) help: Option<List>,
    /// How a figure comes about; none = closed.
    pub(super) working: Option<working::Panel>,
    pub(super) message: Option<String>,
    pub(super) opened: Option<Opened>,
    /// The fleet under the basis as it is stored.
    pub(super) stored: Option<Arc<Ranked>>,
    /// The fleet under the basis as it stands now.
    pub(super) ranked: Option<Arc<Ranked>>,
    pub(super) view: View,
    /// The view that was asked for last.
    pub(super) wanted: ViewSpec,
    pub(super) fleet: List,
    pub(super) show_left_out: bool,
    pub(super) left_out: List,
    /// The line that is typed.
    pub(super) typing: Option<Entry>,
    pub(super) unit: unit::State,
    /// The unit under the cursor of the fleet, where it is shown beside the list.
    pub(super) glance: unit::State,
    pub(super) tender: tender::State,
    pub(super) basis: basis::State,
    pub(super) journal: List,
    asking: Asking,
    exit: Option<Result<ExitReason, StudyError>>,
    /// Leaves when what is being stored is stored.
    leaving: bool,
    /// What the loop is to do with the terminal.
    wish: Option<Wish>,
}

impl App {
    /// A dashboard that has asked for what it is to show.
    pub fn new(caps: Caps, size: Size) -> Self {
        let mut app = Self {
            theme: Theme::new(caps),
            size,
            screen: Screen::Fleet,
            help: None,
            working: None,
            message: None,
            opened: None,
            stored: None,
            ranked: None,
            view: View::default(),
            wanted: ViewSpec::default(),
            fleet: List::default(),
            show_left_out: false,
            left_out: List::default(),
            typing: None,
            unit: unit::State::default(),
            glance: unit::State::default(),
            tender: tender::State::default(),
            basis: basis::State::default(),
            journal: List::default(),
            asking: Asking::default(),
            exit: None,
            leaving: false,
            wish: None,
        };
        app.ask("Reading the book", Question::Open);
        app
    }

    /// The screen that is shown.
    pub fn screen(&self) -> Screen {
        self.screen
    }

    /// How the dashboard was left; none while it runs.
    pub fn take_exit(&mut self) -> Option<Result<ExitReason, StudyError>> {
        self.exit.take()
    }

    /// Takes what is to be done with the terminal.
    pub fn take_wish(&mut self) -> Option<Wish> {
        self.wish.take()
    }

    /// Takes the questions that were asked since.
    pub fn take_questions(&mut self) -> Vec<Job> {
        std::mem::take(&mut self.asking.outbox)
    }

    /// Whether something is being waited for.
    pub fn is_busy(&self) -> bool {
        self.busy().is_some()
    }

    pub(super) fn busy(&self) -> Option<&Busy> {
        self.asking.busy.iter().flatten().next()
    }

    /// Asks the worker; an older question of the kind is stopped.
    pub(super) fn ask(&mut self, what: &'static str, question: Question) {
        let kind = question.kind() as usize;
        if let Some(older) = self.asking.busy[kind].take() {
            older.watch.stop();
        }
        self.asking.generation[kind] += 1;
        let watch = Arc::new(Watch::default());
        self.asking.busy[kind] = Some(Busy { what, watch: Arc::clone(&watch) });
        self.asking.outbox.push(Job { generation: self.asking.generation[kind], watch, question });
    }

    /// The places in which a key is looked up, innermost first.
    pub fn places(&self) -> Vec<Place> {
        if self.help.is_some() {
            vec![Place::Help, Place::List, Place::Everywhere]
        } else {
            self.places_below_help()
        }
    }

    /// The same, were the help closed.
    pub(super) fn places_below_help(&self) -> Vec<Place> {
        if let Some(entry) = &self.typing {
            vec![entry.place()]
        } else if self.working.is_some() {
            vec![Place::Working, Place::List, Place::Everywhere]
        } else if self.moves_inputs() {
            vec![Place::WhatIf, Place::On(self.screen), Place::List, Place::Everywhere]
        } else {
            vec![Place::On(self.screen), Place::List, Place::Everywhere]
        }
    }

    /// Whether the inputs of a tender take the keys.
    pub(super) fn moves_inputs(&self) -> bool {
        self.screen == Screen::Tender && self.tender.what_if.open
    }

    /// Takes a key press.
    pub fn key(&mut self, event: KeyEvent) {
        if event.kind != KeyEventKind::Press {
            return;
        }
        let key = Key::of(event);
        let action = action::of_key(&self.places(), key);
        // Any key but the one that stores takes the question away.
        if self.basis.storing && action != Some(Action::Save) {
            self.basis.storing = false;
            self.message = None;
            if action == Some(Action::Quit) {
                self.message = Some("Nothing was stored; the same key again quits.".to_owned());
                return;
            }
        }
        match (action, &mut self.typing) {
            (Some(action), _) => self.act(action),
            (None, Some(entry)) if self.help.is_none() => {
                if entry.key(key) {
                    self.typed();
                } else if let Some(action) =
                    action::of_key(&[Place::Everywhere], key).filter(|_| key.typed().is_none())
                {
                    // Keys that type nothing still do what they do everywhere.
                    self.act(action);
                }
            }
            _ => {}
        }
        self.settle();
    }

    /// Takes pasted text: into the line that is typed, else nowhere.
    pub fn paste(&mut self, text: &str) {
        if let Some(entry) = &mut self.typing {
            entry.paste(text);
            self.typed();
            self.settle();
        }
    }

    /// Takes a new size of the terminal.
    pub fn resize(&mut self, size: Size) {
        self.size = size;
        self.settle();
    }

    /// Does an action.
    pub fn act(&mut self, action: Action) {
        self.message = None;
        let storing = std::mem::take(&mut self.basis.storing);
        match action {
            Action::Quit if self.is_storing() => self.leaving = true,
            Action::Quit => self.exit = Some(Ok(ExitReason::Quit)),
            Action::Interrupt => self.exit = Some(Ok(ExitReason::Signal(2))),
            Action::Suspend => self.wish = Some(Wish::Suspend),
            Action::Redraw => self.wish = Some(Wish::Redraw),
            Action::Help => self.help = Some(List::default()),
            Action::Back => self.back(),
            Action::Go(screen) => self.go(screen),
            Action::NextScreen => self.turn(1),
            Action::PreviousScreen => self.turn(Screen::ALL.len() - 1),
            Action::Up => self.step(Step::Lines(-1)),
            Action::Down => self.step(Step::Lines(1)),
            Action::PageUp => self.step(Step::Pages(-1)),
            Action::PageDown => self.step(Step::Pages(1)),
            Action::First => self.step(Step::First),
            Action::Last => self.step(Step::Last),
            Action::Open => {
                if let Some(i) = self.under_cursor() {
                    self.open_unit(i);
                    self.screen = Screen::Unit;
                }
            }
            Action::Working => match working::open(self) {
                Some(Ok(panel)) => self.working = Some(panel),
                Some(Err(error)) => self.message = Some(error.to_string()),
                None => {}
            },
            Action::NextFigure | Action::PreviousFigure => {
                if let Some(panel) = &mut self.working {
                    let back = panel.len().saturating_sub(1);
                    let by = if action == Action::NextFigure { 1 } else { back };
                    if let Err(error) = panel.turn(by) {
                        self.message = Some(error.to_string());
                    }
                }
            }
            Action::NextPart | Action::PreviousPart => {
                let turned = self.working.as_mut().map(|p| p.part(action == Action::NextPart));
                if let Some(Err(error)) = turned {
                    self.message = Some(error.to_string());
                }
            }
            Action::Copy => self.copy(),
            Action::Filter => {
                self.typing = Some(Entry::filter(self.wanted.filter.clone()));
            }
            Action::FilterKeep | Action::EntryLeave => self.typing = None,
            Action::FilterDrop => {
                self.typing = None;
                self.show(ViewSpec { filter: String::new(), ..self.wanted.clone() });
            }
            Action::EntryErase => {
                if let Some(entry) = &mut self.typing {
                    entry.input.reset();
                    self.typed();
                }
            }
            Action::EntryTake => self.take_entry(),
            Action::Award => match tender::award(self) {
                Ok(of) => {
                    self.typing = Some(Entry::new(of));
                    if !tender::shows_all(self) {
                        self.tender.view = tender::View::Bids;
                    }
                }
                Err(why) => self.message = Some(self.theme.spell(&why).into_owned()),
            },
            Action::TypeValue => match self.basis.can_type() {
                Ok(()) => self.typing = Some(Entry::new(Of::Value)),
                Err(why) => self.message = Some(why),
            },
            Action::Sort => {
                let at = By::WORDS.iter().position(|(by, _)| *by == self.wanted.by).unwrap_or(0);
                let by = By::WORDS[(at + 1) % By::WORDS.len()].0;
                self.show_left_out = false;
                self.show(ViewSpec { by, ..self.wanted.clone() });
            }
            Action::LeftOut => self.show_left_out = !self.show_left_out,
            Action::NextUnit => self.neighbour(Step::Lines(1)),
            Action::PreviousUnit => self.neighbour(Step::Lines(-1)),
            Action::Table => self.unit.table = !self.unit.table,
            Action::NextLot => self.tender.turn(self.lots(), 1),
            Action::PreviousLot => {
                let lots = self.lots();
                self.tender.turn(lots, lots.saturating_sub(1));
            }
            Action::NextTender => {
                self.tender.next_tender(self.ranked.as_ref().map_or(0, |r| r.tenders.len()));
            }
            Action::TenderView => self.tender.view = self.tender.view.next(),
            Action::WhatIf => {
                self.tender.what_if.open = tender::under_cursor(self).is_some();
                if !tender::shows_all(self) {
                    self.tender.view = tender::View::Bids;
                }
            }
            Action::Risk => self.ask_risk(),
            Action::Less | Action::More | Action::MuchLess | Action::MuchMore
                if self.moves_inputs() =>
            {
                let by = match action {
                    Action::Less => -1,
                    Action::More => 1,
                    Action::MuchLess => -10,
                    _ => 10,
                };
                self.move_input(tender::Move::By(by));
            }
            Action::Reset if self.moves_inputs() => self.move_input(tender::Move::Reset),
            Action::ResetAll if self.moves_inputs() => self.move_input(tender::Move::ResetAll),
            Action::Less => self.nudge(-1, false),
            Action::More => self.nudge(1, false),
            Action::MuchLess => self.nudge(-1, true),
            Action::MuchMore => self.nudge(1, true),
            Action::Reset => self.reset(false),
            Action::ResetAll => self.reset(true),
            Action::Save => self.save(storing),
        }
        self.settle();
    }

    /// Stops what runs; else closes the innermost thing; else goes back to the fleet.
    fn back(&mut self) {
        if self.help.take().is_some() || self.working.take().is_some() {
            return;
        }
        if self.moves_inputs() {
            self.tender.what_if.open = false;
            return;
        }
        let ranking = Kind::Rank as usize;
        if let Some(busy) = self.asking.busy[ranking].take() {
            busy.watch.stop();
            self.asking.generation[ranking] += 1;
            self.stopped();
        } else if tender::can_go_back(self) {
            self.tender.view = tender::View::Bids;
        } else if self.screen != Screen::Fleet {
            self.screen = Screen::Fleet;
        } else if self.show_left_out {
            self.show_left_out = false;
        } else if !self.wanted.filter.is_empty() {
            self.show(ViewSpec { filter: String::new(), ..self.wanted.clone() });
        }
    }

    /// Whether there is something to go back from.
    pub(super) fn can_go_back(&self) -> bool {
        if self.help.is_some() || self.working.is_some() {
            return false;
        }
        self.screen != Screen::Fleet || self.show_left_out || !self.wanted.filter.is_empty()
    }

    fn go(&mut self, screen: Screen) {
        let from = std::mem::replace(&mut self.screen, screen);
        self.typing = None;
        self.working = None;
        if screen == Screen::Unit
            && (from == Screen::Fleet || self.unit.index.is_none())
            && let Some(i) = self.under_cursor()
        {
            self.open_unit(i);
        }
    }

    /// Lots of the tender that is shown.
    fn lots(&self) -> usize {
        let result = tender::shown(self).and_then(|tender| tender.result.as_ref().ok());
        result.map_or(0, |result| result.lots.len())
    }

    fn turn(&mut self, by: usize) {
        let at = Screen::ALL.iter().position(|(screen, _)| *screen == self.screen).unwrap_or(0);
        self.go(Screen::ALL[(at + by) % Screen::ALL.len()].0);
    }

    fn step(&mut self, step: Step) {
        let height = frame::list_height(self);
        if let Some(mut list) = self.help {
            list.scroll(step, help::lines(self, usize::from(self.size.width)).len(), height);
            self.help = Some(list);
            return;
        }
        if let Some(mut panel) = self.working.take() {
            let lines = working::lines(self, &panel, usize::from(self.size.width)).len();
            panel.list.scroll(step, lines, height);
            self.working = Some(panel);
            return;
        }
        let len = self.len();
        let list = match self.screen {
            Screen::Fleet if self.show_left_out => &mut self.left_out,
            Screen::Fleet => &mut self.fleet,
            Screen::Unit => {
                match unit::table_len(self) {
                    Some((lines, seen)) => self.unit.years.scroll(step, lines, seen),
                    None => self.unit.facts.scroll(step, len, height),
                }
                return;
            }
            Screen::Basis => &mut self.basis.list,
            Screen::Journal => &mut self.journal,
            Screen::Tender if self.tender.what_if.open => {
                self.tender.what_if.list.step(step, tender::INPUTS, tender::INPUTS);
                return self.tender.list.settle(len, height);
            }
            Screen::Tender => &mut self.tender.list,
        };
        list.step(step, len, height);
    }

    /// Lines of the list on the screen.
    fn len(&self) -> usize {
        match self.screen {
            Screen::Fleet if self.show_left_out => self.view.left_out.len(),
            Screen::Fleet => self.view.places.len(),
            Screen::Unit => unit::facts_len(self),
            Screen::Basis => basis::len(),
            Screen::Journal => self.opened.as_ref().map_or(0, |o| o.journal.len()),
            Screen::Tender => tender::len(self),
        }
    }

    /// Keeps every cursor in its list and its window.
    fn settle(&mut self) {
        let height = frame::list_height(self);
        if self.working.is_some() || self.help.is_some() {
            self.step(Step::Lines(0));
        } else if self.screen == Screen::Fleet {
            self.fleet.settle(self.view.places.len(), height);
            self.left_out.settle(self.view.left_out.len(), height);
            if let (true, Some(ranked), Some(i)) =
                (frame::shows_detail(self), &self.ranked, self.under_cursor())
                && !self.glance.shows(ranked, i)
            {
                self.glance.open(ranked, i);
            }
        } else {
            self.step(Step::Lines(0));
        }
    }

    /// The unit under the cursor of the fleet.
    pub(super) fn under_cursor(&self) -> Option<usize> {
        let ranking = &self.ranked.as_ref()?.ranking;
        if self.show_left_out {
            let n = *self.view.left_out.get(self.left_out.cursor)?;
            return ranking.left_out.get(n as usize).map(|i| *i as usize);
        }
        let place = *self.view.places.get(self.fleet.cursor)?;
        ranking.order.get(place as usize).map(|i| *i as usize)
    }

    fn neighbour(&mut self, step: Step) {
        let list = if self.show_left_out { &mut self.left_out } else { &mut self.fleet };
        let len = if self.show_left_out { &self.view.left_out } else { &self.view.places }.len();
        let height = list.cursor.saturating_sub(list.offset) + 1;
        list.step(step, len, height);
        if let Some(i) = self.under_cursor() {
            self.open_unit(i);
        }
    }

    /// Hands the opened working to the terminal as text.
    fn copy(&mut self) {
        let Some(panel) = &self.working else { return };
        match self.theme.caps().clipboard.sequence(&panel.text()) {
            Ok(sequence) => {
                self.wish = Some(Wish::Write(sequence));
                let said = if self.theme.caps().clipboard == Clipboard::Tmux {
                    "Handed to tmux, which passes it on where its allow-passthrough is on."
                } else {
                    "Handed to the terminal; if nothing arrives, it takes no text from programs."
                };
                self.message = Some(said.to_owned());
            }
            Err(why) => self.message = Some(why),
        }
    }

    /// Shows a unit on its screen.
    fn open_unit(&mut self, i: usize) {
        let Some(ranked) = self.ranked.clone() else { return };
        if self.unit.index != Some(i) {
            self.unit.facts = List::default();
            self.unit.years = List::default();
            self.unit.record = None;
        }
        self.unit.open(&ranked, i);
        if self.unit.more.is_none() {
            self.ask("Reading the unit", Question::Record(ranked, i));
        }
    }

    /// Asks for another view of the ranked fleet.
    fn show(&mut self, spec: ViewSpec) {
        if self.wanted == spec {
            return;
        }
        self.wanted = spec.clone();
        if let Some(ranked) = &self.ranked {
            self.ask("Looking through the fleet", Question::View(Arc::clone(ranked), spec));
        }
    }

    /// Something was typed: what was said of it no longer holds, and a filter is at work at once.
    fn typed(&mut self) {
        self.message = None;
        if let Some(Entry { of: Of::Filter, input }) = &self.typing {
            let filter = input.value().to_owned();
            self.show(ViewSpec { filter, ..self.wanted.clone() });
        }
    }

    /// Takes the line that was typed; what cannot be taken stays and says why.
    fn take_entry(&mut self) {
        let Some(Entry { of, input }) = &self.typing else { return };
        let (of, text) = (of.clone(), input.value().trim().to_owned());
        let taken = match of {
            Of::Filter => Ok(()),
            Of::Value => self.take_value(&text),
            Of::Reason { lot, bid } => self.take_award(lot, bid, &text),
        };
        match taken {
            Ok(()) => self.typing = None,
            Err(why) => self.message = Some(self.theme.spell(&why).into_owned()),
        }
    }

    fn take_value(&mut self, text: &str) -> Result<(), String> {
        if self.is_storing() {
            return Ok(());
        }
        let Some(ranked) = &self.ranked else { return Ok(()) };
        if self.basis.set(&ranked.desk, text)? {
            self.rank_draft();
        }
        Ok(())
    }

    fn take_award(&mut self, lot: String, bid: String, why: &str) -> Result<(), String> {
        tender::reasoned(self, &bid, why)?;
        let (Some(sheet), Some(ranked)) = (tender::shown(self), &self.ranked) else {
            return Ok(());
        };
        let asked = Awarding {
            sheet: Arc::clone(&sheet.sheet),
            basis: Box::new(ranked.desk.sheet.clone()),
            lot,
            bid,
            why: (!why.is_empty()).then(|| why.to_owned()),
        };
        self.ask("Storing the award", Question::Award(Box::new(asked)));
        Ok(())
    }

    /// Takes an answer of the worker; one that is not the newest of its kind is dropped.
    pub fn done(&mut self, done: Done) {
        let kind = done.kind as usize;
        if done.generation != self.asking.generation[kind] {
            return;
        }
        self.asking.busy[kind] = None;
        match done.answer {
            Ok(Answer::Opened(session, writes)) => self.take_session(*session, writes),
            Ok(Answer::Ranked(ranked, view)) => {
                if self.stored.is_none() {
                    self.stored = Some(Arc::clone(&ranked));
                }
                let unit = self.under_cursor();
                let bid = tender::under_cursor(self).map(|(_, _, bid)| bid.to_owned());
                self.basis.in_effect(&ranked.desk.sheet.basis);
                self.ranked = Some(Arc::clone(&ranked));
                // What it explains is of another basis.
                self.working = None;
                tender::keep_on(self, &bid.unwrap_or_default());
                self.evaluate_draft();
                if view.spec != self.wanted {
                    let spec = self.wanted.clone();
                    self.ask(
                        "Looking through the fleet",
                        Question::View(Arc::clone(&ranked), spec),
                    );
                }
                self.look(view, unit);
                if let Some(i) = self.unit.index {
                    self.open_unit(i);
                }
            }
            Ok(Answer::View(ranked, view)) => {
                if self.ranked.as_ref().is_some_and(|now| Arc::ptr_eq(now, &ranked)) {
                    let unit = self.under_cursor();
                    self.look(view, unit);
                }
            }
            Ok(Answer::Record(ranked, i, record, more)) => {
                self.unit.take_record(&ranked, i, record, more);
            }
            Ok(Answer::WhatIf(evaluated, number)) => {
                if self.tender.counts(number) {
                    let bid = tender::under_cursor(self).map(|(_, _, bid)| bid.to_owned());
                    if let Err(why) = self.tender.what_if.take(evaluated) {
                        self.message = Some(why);
                    }
                    tender::keep_on(self, &bid.unwrap_or_default());
                }
            }
            Ok(Answer::Risk(risk, lot, number)) => {
                if self.tender.counts(number) {
                    self.tender.risk = Some((lot, risk));
                }
            }
            Ok(Answer::Saved(sheet, journal)) => self.saved(*sheet, journal),
            Ok(Answer::Awarded(asked, journal)) => self.awarded(&asked, journal),
            Err(error) if done.kind == Kind::Open => self.exit = Some(Err(error)),
            Err(error) if self.ranked.is_none() => self.exit = Some(Err(error)),
            Err(StudyError::Stopped) => self.stopped(),
            Err(error) => {
                self.message = Some(error.to_string());
                self.leaving = false;
                if done.kind == Kind::Rank {
                    self.basis.refused();
                }
            }
        }
        self.settle();
    }

    fn take_session(&mut self, session: Session, writes: Writes) {
        let Session { title, desk, basis_source, journal, .. } = session;
        self.opened = Some(Opened { title, basis_source, journal, writes });
        self.basis.open(&desk);
        self.ask("Ranking the fleet", Question::Rank(Box::new(desk), self.wanted.clone()));
    }

    /// Shows a view, with the cursor on the unit where it was; in another order it starts at the top.
    fn look(&mut self, view: View, unit: Option<usize>) {
        if view.spec.by != self.view.spec.by {
            self.fleet = List::default();
            self.view = view;
            return;
        }
        self.view = view;
        let Some(ranked) = &self.ranked else { return };
        if let Some(i) = unit.filter(|_| !self.show_left_out) {
            let place = ranked.place[i];
            let line = self.view.places.iter().position(|p| *p == place);
            let shift = self.fleet.cursor.saturating_sub(self.fleet.offset);
            self.fleet.cursor = line.unwrap_or(0);
            self.fleet.offset = self.fleet.cursor.saturating_sub(shift);
        }
    }

    /// What was asked for was stopped: back to what is known.
    fn stopped(&mut self) {
        if let Some(ranked) = &self.ranked {
            self.basis.back_to(&ranked.desk.sheet.basis);
            self.message = Some("Stopped. The figures are those of before.".to_owned());
        } else {
            self.exit = Some(Ok(ExitReason::Quit));
        }
    }

    /// Moves an input of the tender.
    fn move_input(&mut self, how: tender::Move) {
        match tender::move_input(self, how) {
            Ok(()) => self.evaluate_draft(),
            Err(why) => self.message = Some(self.theme.spell(&why).into_owned()),
        }
    }

    /// Evaluates the tender that was changed on the screen, if one was.
    fn evaluate_draft(&mut self) {
        let number = self.tender.moved();
        if let (Some(sheet), Some(ranked)) = (self.tender.what_if.sheet(), self.ranked.clone()) {
            self.ask("Evaluating the tender", Question::WhatIf(ranked, sheet, number));
        }
    }

    fn ask_risk(&mut self) {
        let Some((lot, ranked)) =
            tender::under_cursor(self).map(|(_, lot, _)| lot.to_owned()).zip(self.ranked.clone())
        else {
            return;
        };
        let Some(sheet) = tender::shown(self).map(|shown| Arc::clone(&shown.sheet)) else { return };
        let number = self.tender.moved();
        self.ask("Drawing the uncertain inputs", Question::Risk(ranked, sheet, lot, number));
    }

    fn nudge(&mut self, steps: i32, large: bool) {
        if self.is_storing() {
            return;
        }
        let Some(ranked) = &self.ranked else { return };
        match self.basis.nudge(&ranked.desk, steps, large) {
            Ok(()) => self.rank_draft(),
            Err(why) => self.message = Some(self.theme.spell(&why).into_owned()),
        }
    }

    /// What is being stored stays as it is until it is stored.
    fn is_storing(&mut self) -> bool {
        let busy = |kind: Kind| self.asking.busy[kind as usize].is_some();
        let storing = busy(Kind::Save) || busy(Kind::Award);
        if storing {
            self.message = Some("The book is being written; one moment.".to_owned());
        }
        storing
    }

    fn reset(&mut self, all: bool) {
        if self.is_storing() {
            return;
        }
        if self.basis.reset(all) {
            self.rank_draft();
        } else {
            self.message = Some("It stands as it is stored.".to_owned());
        }
    }

    /// Stores the changed basis; the first time it only asks.
    fn save(&mut self, asked_before: bool) {
        let (Some(sheet), Some(ranked)) = (self.basis.sheet(), &self.ranked) else { return };
        let name = text::cut(&ranked.desk.sheet.basis.name, 24);
        let changes = match self.basis.changes() {
            1 => "1 change".to_owned(),
            n => format!("{n} changes"),
        };
        self.message = Some(if !self.opened.as_ref().is_some_and(|opened| opened.writes.basis) {
            "The book is open for reading only; nothing can be stored.".to_owned()
        } else if !self.basis.is_changed() {
            "Nothing was changed.".to_owned()
        } else if !self.basis.is_in_effect() {
            "The ranking is not of these assumptions yet; nothing was stored.".to_owned()
        } else if asked_before {
            self.ask("Storing the basis", Question::Save(Box::new(sheet)));
            return;
        } else {
            self.basis.storing = true;
            format!("Store {changes} in basis {name}? w again stores, any other key does not.")
        });
    }

    fn saved(&mut self, sheet: BasisSheet, journal: Vec<JournalLine>) {
        self.basis.is_stored(sheet);
        self.stored.clone_from(&self.ranked);
        if let Some(opened) = &mut self.opened {
            opened.journal = journal;
        }
        self.message = Some("Stored. The journal keeps the values of before.".to_owned());
        if self.leaving {
            self.exit = Some(Ok(ExitReason::Quit));
        }
    }

    fn awarded(&mut self, asked: &Awarding, journal: Vec<JournalLine>) {
        if let Some(opened) = &mut self.opened {
            opened.journal = journal;
        }
        // The tender as it stands now comes with the ranking.
        self.rank_draft();
        let (lot, bid) = (text::cut(&asked.lot, 16), text::cut(&asked.bid, 20));
        self.message =
            Some(format!("Lot {lot} is awarded to {bid}. The journal (5) says by whom and why."));
        if self.leaving {
            self.exit = Some(Ok(ExitReason::Quit));
        }
    }

    fn rank_draft(&mut self) {
        let (Some(ranked), Some(sheet)) = (&self.ranked, self.basis.sheet()) else { return };
        let desk = ranked.desk.with_basis(sheet);
        self.ask("Ranking the fleet", Question::Rank(Box::new(desk), self.wanted.clone()));
    }
}
