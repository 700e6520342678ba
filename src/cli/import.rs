//! `ironhum import KIND FILE`: a file into the book, all or nothing.

use std::fs::File;
use std::io::BufWriter;

use super::args::{Args, Format, Import};
use super::book;
use super::exit::{Exit, Failure};
use super::print::Printer;
use crate::book::Book;
use crate::exchange::{Hints, Source};
use crate::study::Watch;
use crate::study::intake::{IntakeError, Options, Report, What, import as take_in};

pub(super) fn import(
    args: &Args,
    options: &Import,
    printer: &mut Printer,
) -> Result<Exit, Failure> {
    let map = options.map.iter().map(|pair| renamed(pair)).collect::<Result<Vec<_>, _>>()?;
    if options.current && options.what != What::Basis {
        return Err(Failure::new(Exit::Usage, "--current goes with: import basis"));
    }
    let source = if options.file.as_os_str() == "-" {
        Source::read("-", std::io::stdin())
    } else {
        Source::open(&options.file)
    }
    .map_err(|error| Failure::new(Exit::Failed, error.to_string()))?;
    let path = book::path(args)?;
    let fresh = !path.exists();
    let mut book = match (options.dry_run, fresh) {
        (true, true) => Book::in_memory()?,
        // A trial stores nothing: it may be made on a book that is not to be changed.
        (true, false) if args.read_only => book::open_to_read(args)?.book.apart()?,
        _ => book::open_to_write(args)?.book,
    };
    let rejects = match &options.rejects {
        None => None,
        Some(path) => {
            let file = File::create_new(path).map_err(|error| {
                Failure::new(Exit::Failed, format!("{}: {error}", path.display()))
            })?;
            Some(Box::new(BufWriter::new(file)) as Box<dyn std::io::Write>)
        }
    };
    let intake = Options {
        map,
        ignore_unknown: options.ignore_unknown,
        clear_blank: options.clear_blank,
        skip_bad: options.skip_bad,
        dry_run: options.dry_run,
        rejects,
        name: options.name.clone(),
        current: options.current,
        hints: Hints {
            delimiter: options.delimiter,
            decimal: options.decimal,
            encoding: options.encoding,
        },
    };
    let actor = book::actor(options.why.clone());
    let report = take_in(&mut book, options.what, source, intake, &actor, &Watch::default())?;
    say(printer, &report, options.dry_run)?;
    Ok(if report.rejected { Exit::Rejected } else { Exit::Done })
}

fn renamed(pair: &str) -> Result<(String, String), Failure> {
    match pair.split_once('=') {
        Some((theirs, ours)) if !theirs.is_empty() && !ours.is_empty() => {
            Ok((theirs.to_owned(), ours.to_owned()))
        }
        _ => Err(Failure::new(Exit::Usage, format!("--map {pair}: write THEIRS=OURS"))),
    }
}

/// What was recognised and wrong goes to standard error, what became of the rows is the result.
fn say(printer: &mut Printer, report: &Report, dry_run: bool) -> Result<(), Failure> {
    if let Some(recognised) = &report.recognised {
        printer.complain(&format!("{}: read as {recognised}", report.file));
    }
    for problem in report.problems.list() {
        printer.complain(&problem.to_string());
    }
    let unsaid = report.problems.count().saturating_sub(report.problems.list().len() as u64);
    if unsaid > 0 {
        printer.complain(&format!("and {unsaid} more problems"));
    }
    for warning in report.warnings.iter().filter(|_| !report.rejected) {
        printer.complain(&format!("{}: {warning}", report.file));
    }
    match printer.format {
        Format::Json => printer.json(report)?,
        Format::Csv => {
            const KEYS: &[&str] =
                &["what", "file", "rows", "new", "changed", "same", "bad", "stored"];
            printer.csv(KEYS, std::iter::once(report))?;
        }
        Format::Text => {
            let t = report.tally;
            let what = report.what.word();
            if report.rejected && (report.rows <= 1 || report.bad == 0) {
                printer.complain("nothing was stored: the file itself is wrong; correct it");
            } else if report.rejected {
                printer.complain(&format!(
                    "nothing was stored: {} of {} {what} rows are wrong; correct them, or leave them with --skip-bad",
                    report.bad, report.rows
                ));
            } else {
                let would = if dry_run { "would be " } else { "" };
                let left = match report.bad {
                    0 => String::new(),
                    n => format!(", {n} left out as wrong"),
                };
                printer.line(format!(
                    "{what}: {} {would}new, {} {would}changed, {} the same{left}.",
                    t.new, t.changed, t.same
                ))?;
            }
        }
    }
    Ok(())
}

impl From<IntakeError> for Failure {
    fn from(error: IntakeError) -> Self {
        match error {
            IntakeError::Book(error) => error.into(),
            IntakeError::NoName => Self::new(Exit::Usage, error.to_string()),
            _ => Self::new(Exit::Failed, error.to_string()),
        }
    }
}
