//! `ironhum` alone: the dashboard on a book.

use std::io::IsTerminal as _;
use std::path::{Path, PathBuf};

use super::args::{Args, Colour};
use super::book;
use super::exit::{Exit, Failure};
use crate::book::{Access, Book, JournalEntry};
use crate::engine::columns::TenderSheet;
use crate::study::figures::short;
use crate::study::tender::decide::{self, Choice};
use crate::study::{Desk, StudyError};
use crate::tui::{
    self, AwardWriter, Awarding, BasisWriter, Caps, ColourWish, ExitReason, JournalLine, Session,
};

/// Entries of the journal that are shown.
const JOURNAL: usize = 1000;

/// Opens the dashboard on the book that is meant.
pub(super) fn open(args: &Args) -> Result<Exit, Failure> {
    if !on_terminal() {
        let text = "the dashboard needs a terminal for input and output that can place text (TERM is not dumb); \
                    without one use a command, for instance: ironhum rank --format csv";
        return Err(Failure::new(Exit::Usage, text));
    }
    let path = book::path(args)?;
    if args.book.is_none() && !path.exists() {
        let text = format!(
            "there is no book at {} yet\n  ironhum demo                    shows a demo book\n  \
             ironhum import units FILE       makes your own",
            path.display()
        );
        return Err(Failure::new(Exit::Failed, text));
    }
    on(args, path)
}

/// Whether input and output are terminals on which text can be placed.
pub(super) fn on_terminal() -> bool {
    std::io::stdin().is_terminal()
        && std::io::stdout().is_terminal()
        && std::env::var_os("TERM").is_none_or(|term| term != "dumb")
}

/// Opens the dashboard on the book at `path`.
pub(super) fn on(args: &Args, path: PathBuf) -> Result<Exit, Failure> {
    // What is no book is said before the screen is taken.
    drop(Book::open(&path, Access::ReadOnly)?);
    let wish = match args.color {
        Colour::Auto => ColourWish::Auto,
        Colour::Always => ColourWish::Always,
        Colour::Never => ColourWish::Never,
    };
    let caps = Caps::of(|name| std::env::var(name).ok(), wish, args.ascii);
    let basis = args.basis.clone();
    let may_write = !args.read_only;
    let reason = tui::run(move |_| session(&path, basis.as_deref(), may_write), caps)
        .map_err(|error| Failure::new(Exit::Failed, error.to_string()))?;
    Ok(match reason {
        ExitReason::Quit => Exit::Done,
        ExitReason::Signal(n) => Exit::Signal(u8::try_from(n).unwrap_or(0)),
    })
}

fn session(path: &Path, basis: Option<&str>, may_write: bool) -> Result<Session, StudyError> {
    let book = Book::open(path, Access::ReadOnly)?;
    let desk = Desk::read(&book, basis)?.with_every_series(&book)?;
    let tenders = book
        .tenders()?
        .iter()
        .map(|tender| book.tender(&tender.tender))
        .collect::<Result<_, _>>()?;
    let journal = lines(&book)?;
    let own = path.to_owned();
    // Opened for writing only while it writes: another program may write meanwhile.
    let save: BasisWriter = Box::new(move |sheet| {
        let mut book = Book::open(&own, Access::ReadWrite)?;
        book.save_basis(sheet, &book::actor(Some("changed on the dashboard".to_owned())))?;
        lines(&book)
    });
    let own = path.to_owned();
    let award: AwardWriter = Box::new(move |asked| award(&own, asked));
    let name = path.file_name().map(|name| name.to_string_lossy().into_owned());
    Ok(Session {
        title: name.unwrap_or_default(),
        desk,
        basis_source: "book".to_owned(),
        tenders,
        journal,
        record: Some(Box::new(move |unit| book.unit(unit).ok())),
        save: may_write.then_some(save),
        award: may_write.then_some(award),
    })
}

/// The journal, newest first.
fn lines(book: &Book) -> Result<Vec<JournalLine>, StudyError> {
    Ok(book.journal(JOURNAL)?.into_iter().map(line).collect())
}

/// Awards as `ironhum award` does, if the book still holds what was shown.
fn award(path: &Path, asked: &Awarding) -> Result<(TenderSheet, Vec<JournalLine>), StudyError> {
    let mut book = Book::open(path, Access::ReadWrite)?;
    let actor = book::actor(asked.why.clone());
    let shown = (&*asked.sheet, &*asked.basis);
    // The screen says what a bid misses before the reason is typed.
    let choice = Choice { lot: &asked.lot, bid: &asked.bid, despite: true };
    decide::award_as_shown(&mut book, shown, choice, &actor)?;
    Ok((book.tender(&asked.sheet.tender.tender)?, lines(&book)?))
}

fn line(entry: JournalEntry) -> JournalLine {
    let key = entry.key.map(|key| format!(" {key}")).unwrap_or_default();
    let count = entry.what.get("rows").and_then(serde_json::Value::as_u64);
    let rows = count.filter(|n| *n != 1).map(|n| format!(" ({n} rows)")).unwrap_or_default();
    JournalLine {
        at: entry.at,
        who: entry.who,
        what: format!("{} {}{key}{rows}", entry.action, entry.kind),
        details: details(&entry.what),
        source: entry.source.unwrap_or_default(),
        why: entry.why.unwrap_or_default(),
    }
}

/// `column old → new` for each changed column; of what is new or gone the value alone.
fn details(what: &serde_json::Value) -> String {
    let text = |value: &serde_json::Value| match value {
        serde_json::Value::Null => "blank".to_owned(),
        serde_json::Value::String(text) => text.clone(),
        serde_json::Value::Number(number) if !number.is_i64() => {
            number.as_f64().map_or_else(|| number.to_string(), short)
        }
        other => other.to_string(),
    };
    let Some(columns) = what.as_object() else { return String::new() };
    let moved = columns.iter().filter_map(|(column, change)| {
        Some(match (change.get("old"), change.get("new")) {
            (Some(old), Some(new)) => format!("{column} {} → {}", text(old), text(new)),
            (Some(only), None) | (None, Some(only)) => format!("{column} {}", text(only)),
            (None, None) => return None,
        })
    });
    moved.collect::<Vec<_>>().join(", ")
}
