//! `ironhum demo`: a fresh book of an invented utility, made from the files in `demo-fleet/`.

use std::io::Cursor;
use std::path::PathBuf;

use include_dir::{Dir, include_dir};

use super::args::{Args, Format};
use super::book::{actor, data_directory, make_parent};
use super::exit::{Exit, Failure};
use super::print::Printer;
use super::{dashboard, rank};
use crate::book::{Access, Book};
use crate::exchange::Source;
use crate::study::intake::{Options, What, import};
use crate::study::rank::{By, rank as ask};
use crate::study::tender::{Case, letter};
use crate::study::{Desk, Watch};

static FILES: Dir<'_> = include_dir!("$CARGO_MANIFEST_DIR/demo-fleet");

/// What is taken in, in this order.
const ORDER: &[(What, &str)] = &[
    (What::Profiles, "profiles.csv"),
    (What::Prices, "prices.csv"),
    (What::Units, "units.csv"),
    (What::Offers, "offers.csv"),
    (What::Basis, "basis.toml"),
    (What::Tender, "tender.toml"),
    (What::Bids, "bids.csv"),
    (What::Measured, "measured.csv"),
];
/// Name of the price series in the basis.
const SERIES: &str = "ossemar-zone";
/// Rows of the ranking that are printed without a terminal.
const TOP: usize = 20;

pub(super) fn demo(args: &Args, printer: &mut Printer) -> Result<Exit, Failure> {
    if args.read_only {
        return Err(Failure::new(Exit::Usage, "--read-only: the demo makes a book"));
    }
    let path = place(args)?;
    make(&path)?;
    if dashboard::on_terminal() {
        return dashboard::on(args, path);
    }
    let book = Book::open(&path, Access::ReadOnly)?;
    let desk = Desk::read(&book, args.basis.as_deref())?;
    let ranking = ask(&desk, By::Saving, Some(TOP), &Watch::default())?;
    let tenders = book.tenders()?;
    match printer.format {
        Format::Text => {
            printer.line(format!("Demo book {} (invented utility).", path.display()))?;
            printer.line("")?;
            rank::write(&desk, &ranking, printer)?;
            for t in &tenders {
                printer.line("")?;
                let case = Case::read(&book, &t.tender, args.basis.as_deref())?;
                printer.letter(&letter::result(&case, &case.evaluate(None)?))?;
            }
        }
        Format::Csv => rank::write(&desk, &ranking, printer)?,
        Format::Json => {
            let results = tenders
                .iter()
                .map(|t| Case::read(&book, &t.tender, args.basis.as_deref())?.evaluate(None))
                .collect::<Result<Vec<_>, _>>()?;
            printer.json(&serde_json::json!({
                "rank": serde_json::to_value(ranking.result(&desk))?,
                "tenders": serde_json::to_value(results)?,
            }))?;
        }
    }
    Ok(Exit::Done)
}

/// Where the demo book goes: where it was asked for, else beside the default book, never on it.
fn place(args: &Args) -> Result<PathBuf, Failure> {
    let own = data_directory()?;
    match &args.book {
        None => Ok(own.join("demo.sqlite")),
        Some(path) if *path == own.join("book.sqlite") || path.exists() => {
            let text = format!(
                "{}: the demo makes a fresh book and writes over none; name a file that is not there",
                path.display()
            );
            Err(Failure::new(Exit::Usage, text))
        }
        Some(path) => Ok(path.clone()),
    }
}

/// Makes the book afresh. The files of an older demo are removed, not written over: who has them open keeps them.
fn make(path: &PathBuf) -> Result<(), Failure> {
    make_parent(path)?;
    for tail in ["", "-wal", "-shm"] {
        let mut old = path.as_os_str().to_owned();
        old.push(tail);
        match std::fs::remove_file(&old) {
            Err(error) if error.kind() != std::io::ErrorKind::NotFound => {
                return Err(Failure::new(Exit::Failed, format!("{}: {error}", path.display())));
            }
            _ => {}
        }
    }
    fill(path)
}

fn fill(path: &PathBuf) -> Result<(), Failure> {
    let mut book = Book::open(path, Access::Create)?;
    let actor = actor(Some("demo".to_owned()));
    for (what, name) in ORDER {
        let file = FILES.get_file(name).map(include_dir::File::contents);
        let source = Source::read(name, Cursor::new(file.unwrap_or_default()))
            .map_err(|error| Failure::new(Exit::Failed, error.to_string()))?;
        let options = Options { name: Some(SERIES.to_owned()), ..Options::default() };
        let report = import(&mut book, *what, source, options, &actor, &Watch::default())?;
        if let Some(problem) = report.problems.list().first() {
            return Err(Failure::new(Exit::Failed, format!("demo-fleet: {problem}")));
        }
    }
    Ok(())
}
