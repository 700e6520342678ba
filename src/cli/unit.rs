//! `ironhum unit ID`: one unit's dossier.

mod text;

use std::path::Path;

use super::args::{Args, Format, Unit};
use super::book::{self, Opened};
use super::exit::{Exit, Failure};
use super::factors::working;
use super::print::Printer;
use crate::book::Book;
use crate::exchange::{Source, SourceError};
use crate::study::Desk;
use crate::study::explain::{Explained as _, Opening};
use crate::study::unit::ambient::{self, AmbientYear};
use crate::study::unit::{FitAsked, Question};

pub(super) fn unit(args: &Args, options: &Unit, printer: &mut Printer) -> Result<Exit, Failure> {
    let Opened { book, .. } = book::open_to_read(args)?;
    let unit = book.unit(&options.unit)?;
    let desk = Desk::read(&book, args.basis.as_deref())?;
    let context = desk.context()?;
    let mut question = Question::new(&desk, &context, &unit)?;
    let ambient = options.ambient.as_deref().map(|file| ambient_year(printer, file)).transpose()?;
    if let Some(year) = &ambient {
        question.heat.ambient = year.ambient();
    } else if let Some(ambient_c) = options.ambient_c {
        question.heat.ambient = ambient::constant(ambient_c)?;
    }
    question.heat.paper = options.paper.unwrap_or(question.heat.paper);
    let fit = fit_asked(&book, &desk, options)?;
    question.fit = fit.as_ref();
    let mut dossier = question.dossier()?;
    let which = match options.working.as_deref() {
        // Present values are taken down to the years, which is long: only where asked for.
        None => Opening::Without("keep_or_replace"),
        Some("") => Opening::All,
        Some(figure) => Opening::One(figure),
    };
    if printer.format == Format::Json || options.working.is_some() {
        dossier.working = question.workings(which)?;
    }
    match printer.format {
        Format::Json => printer.json(&dossier)?,
        Format::Csv => {
            let years = dossier.keep_or_replace.as_ref().map_or(&[][..], |k| &k.years);
            printer.csv(&["offset", "year", "offer", "pv"], years.iter())?;
        }
        Format::Text => {
            if !matches!(which, Opening::One(_)) {
                text::text(printer, &dossier)?;
            }
            for figure in &dossier.working {
                printer.line("")?;
                printer.line(format!("How {} comes about:", figure.figure))?;
                working(printer, &figure.steps, 1, &dossier.currency)?;
            }
        }
    }
    Ok(Exit::Done)
}

/// What is to be fitted to the place of the unit.
fn fit_asked(book: &Book, desk: &Desk, options: &Unit) -> Result<Option<FitAsked>, Failure> {
    let mut asked = match (&options.fit, options.fit_bid.as_deref()) {
        (Some(offer), _) => FitAsked::of_offer(desk.offer(offer)?)?,
        (None, Some([tender, lot, bid])) => {
            let sheet = book.tender(tender)?;
            FitAsked::of_bid(&sheet, lot, bid)?
        }
        _ => return Ok(None),
    };
    if let Some(beside) = &options.beside {
        asked = asked.beside(desk, book.unit(beside)?, &options.unit)?;
    }
    asked.network_mva = options.network_mva;
    asked.fault_limit_mva = options.fault_limit_mva;
    Ok(Some(asked))
}

/// Reads a year of ambient temperatures; what is wrong in the file is said as an import says it.
fn ambient_year(printer: &Printer, file: &Path) -> Result<AmbientYear, Failure> {
    let failed = |error: SourceError| Failure::new(Exit::Failed, error.to_string());
    let source = Source::open(file).map_err(failed)?;
    AmbientYear::read(source).map_err(failed)?.map_err(|problems| {
        for problem in problems.list() {
            printer.complain(&problem.to_string());
        }
        Failure::new(Exit::Rejected, format!("{}: correct it", file.display()))
    })
}
