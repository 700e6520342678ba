//! `ironhum award T` and `ironhum deliver T`: what was chosen, and what came of it into the fleet.

use super::args::{Args, Award, Deliver, Format};
use super::book::{self, Opened};
use super::exit::{Exit, Failure};
use super::print::Printer;
use super::tender::warn_of_scale;
use crate::study::tender::decide::{self, AwardResult, Choice};
use crate::study::tender::deliver::{self, Wanted};
use crate::study::tender::{Case, letter};

const AWARD_KEYS: &[&str] = &[
    "tender",
    "lot",
    "outcome",
    "bid",
    "bidder",
    "awarded_by",
    "awarded_at",
    "why",
    "recommended",
    "basis",
    "factor_a_per_kw",
    "factor_b_per_kw",
    "factor_aux_per_kw",
    "stray_share_pu",
    "owning_cost",
];
const UNIT_KEYS: &[&str] = &[
    "unit",
    "serial",
    "lot",
    "bid",
    "rated_kva",
    "no_load_loss_w",
    "load_loss_w",
    "reference_temp_c",
    "outcome",
    "rejectable",
];

/// A line of the CSV file: the award with what it is of.
#[derive(serde::Serialize)]
struct Line<'a> {
    tender: &'a str,
    lot: &'a str,
    outcome: &'a str,
    #[serde(flatten)]
    award: &'a crate::study::tender::Awarded,
}

pub(super) fn award(args: &Args, options: &Award, printer: &mut Printer) -> Result<Exit, Failure> {
    let Opened { mut book, .. } = book::open_to_change(args)?;
    let case = Case::read(&book, &options.tender, args.basis.as_deref())?;
    let actor = book::actor(options.why.clone());
    let result = match &options.bid {
        Some(bid) => {
            let choice = Choice { lot: &options.lot, bid, despite: options.despite };
            decide::award(&mut book, &case, choice, &actor)?
        }
        None => decide::withdraw(&mut book, &case, &options.lot, &actor)?,
    };
    let AwardResult { tender, lot, outcome, award, flags, .. } = &result;
    warn_of_scale(printer, lot, flags);
    match printer.format {
        Format::Json => printer.json(&result)?,
        Format::Csv => {
            printer.csv(AWARD_KEYS, std::iter::once(Line { tender, lot, outcome, award }))?;
        }
        Format::Text => printer.letter(&letter::award(&result))?,
    }
    Ok(Exit::Done)
}

pub(super) fn deliver(
    args: &Args,
    options: &Deliver,
    printer: &mut Printer,
) -> Result<Exit, Failure> {
    let Opened { mut book, .. } = book::open_to_change(args)?;
    let case = Case::to_settle(&book, &options.tender, args.basis.as_deref())?;
    let wanted = Wanted {
        lot: options.lot.as_deref(),
        except: &options.except,
        also: &options.also,
        prefix: options.prefix.as_deref().unwrap_or_default(),
    };
    let actor = book::actor(options.why.clone());
    let result = deliver::deliver(&mut book, &case, &wanted, &actor)?;
    match printer.format {
        Format::Json => printer.json(&result)?,
        Format::Csv => printer.csv(UNIT_KEYS, result.units.iter())?,
        Format::Text => printer.letter(&letter::delivered(&result))?,
    }
    Ok(Exit::Done)
}
