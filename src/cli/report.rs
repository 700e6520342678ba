//! `ironhum report`: what a study found, as a Markdown file to hand on.

use std::path::Path;

use super::args::{Args, Report, ReportTender, Reported};
use super::book::{self, Opened};
use super::exit::{Exit, Failure};
use super::print::Printer;
use super::tender::{draws, said};
use crate::exchange::{Letter, target};
use crate::study::tender::{Case, Draws, letter};

pub(super) fn report(
    args: &Args,
    options: &Report,
    printer: &mut Printer,
) -> Result<Exit, Failure> {
    match &options.what {
        Reported::Tender(options) => tender(args, options, printer),
    }
}

fn tender(args: &Args, options: &ReportTender, printer: &mut Printer) -> Result<Exit, Failure> {
    is_markdown(&options.file)?;
    let Opened { book, .. } = book::open_to_read(args)?;
    let case = Case::read(&book, &options.tender, args.basis.as_deref())?;
    let case = if options.from_basis { case.from_basis() } else { case };
    let lot = options.lot.as_deref();
    let mut result = case.evaluate(lot)?;
    let asked = draws(&options.drawn)?;
    // Draws that were asked for must be made; else the report stands without them.
    match (case.has_ranges(), asked != Draws::default()) {
        (_, true) => case.add_risk(&mut result, &asked)?,
        (true, false) => {
            if let Err(error) = case.add_risk(&mut result, &asked) {
                printer.complain(&format!("the report says nothing of risk: {error}"));
            }
        }
        (false, false) => {}
    }
    let report = letter::report(&case, &result, &case.settle(lot)?)?;
    write(&options.file, &report, printer)?;
    Ok(said(printer, &result))
}

fn is_markdown(file: &Path) -> Result<(), Failure> {
    let ending = file.extension().map(std::ffi::OsStr::to_ascii_lowercase);
    if file.as_os_str() == "-" || ending.is_some_and(|ending| ending == "md") {
        return Ok(());
    }
    let why = format!(
        "{}: reports are written as Markdown; name a file that ends in .md, or - for standard output",
        file.display()
    );
    Err(Failure::new(Exit::Usage, why))
}

/// Writes a letter as Markdown, to a file or to standard output.
fn write(file: &Path, letter: &Letter, printer: &mut Printer) -> Result<(), Failure> {
    let text = letter.to_markdown();
    if file.as_os_str() == "-" {
        return Ok(printer.text(&text)?);
    }
    target::write(file, text.as_bytes())
        .map_err(|error| Failure::new(Exit::Failed, format!("{}: {error}", file.display())))?;
    printer.complain(&format!("{} is written", file.display()));
    Ok(())
}
