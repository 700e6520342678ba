//! `ironhum tender T`: the bids of a tender by what they cost to own.

use serde::Serialize;

use super::args::{Args, Format, Tender};
use super::book::{self, Opened};
use super::exit::{Exit, Failure};
use super::factors::working as write_working;
use super::print::{Printer, TextColumn};
use crate::book::Book;
use crate::engine::columns::TenderSheet;
use crate::engine::decision::Context;
use crate::study::Desk;
use crate::study::explain::StepRow;
use crate::study::figures::group;
use crate::study::losses::flag_meaning;
use crate::study::tender::{
    BasisForFactors, BidResult, LotResult, TenderResult, evaluate, working,
};

const KEYS: &[&str] = &[
    "lot",
    "rank",
    "bid",
    "bidder",
    "price",
    "no_load_cost",
    "load_cost",
    "auxiliary_cost",
    "added_cost",
    "owning_cost",
    "owning_cost_at_tolerance",
    "lot_cost",
    "law",
    "near_tie",
    "excluded",
];

/// A bid with its lot: a line of the CSV file.
#[derive(Serialize)]
struct Line<'a> {
    lot: &'a str,
    #[serde(flatten)]
    bid: &'a BidResult,
}

/// Evaluates a tender of a book.
pub(super) fn of_book(
    args: &Args,
    book: &Book,
    tender: &str,
    lot: Option<&str>,
) -> Result<(TenderSheet, Option<Context>, TenderResult), Failure> {
    let sheet = book.tender(tender)?;
    let context = context_for(args, book, &sheet)?;
    let result = evaluate(&sheet, basis(context.as_ref()).as_ref(), lot)?;
    Ok((sheet, context, result))
}

/// The basis of a tender; needed only where a lot leaves factors to it.
pub(super) fn context_for(
    args: &Args,
    book: &Book,
    sheet: &TenderSheet,
) -> Result<Option<Context>, Failure> {
    let lacking = |lot: &crate::engine::columns::Lot| {
        lot.factor_a_per_kw.is_none()
            || lot.factor_b_per_kw.is_none()
            || lot.factor_aux_per_kw.is_none()
    };
    if !sheet.lots.iter().any(lacking) && args.basis.is_none() {
        return Ok(None);
    }
    match Desk::basis_only(book, args.basis.as_deref()) {
        Ok(desk) => Ok(Some(desk.context()?)),
        // Without any basis the evaluation says which factor is missing.
        Err(_) if args.basis.is_none() => Ok(None),
        Err(error) => Err(error.into()),
    }
}

pub(super) fn basis(context: Option<&Context>) -> Option<BasisForFactors<'_>> {
    context.map(|context| BasisForFactors {
        assumptions: &context.assumptions,
        market: &context.market,
    })
}

pub(super) fn tender(
    args: &Args,
    options: &Tender,
    printer: &mut Printer,
) -> Result<Exit, Failure> {
    let Opened { book, .. } = book::open_to_read(args)?;
    let (sheet, context, result) = of_book(args, &book, &options.tender, options.lot.as_deref())?;
    match printer.format {
        Format::Json => printer.json(&result)?,
        Format::Csv => {
            let lines = result
                .lots
                .iter()
                .flat_map(|lot| lot.bids.iter().map(|bid| Line { lot: &lot.lot, bid }));
            printer.csv(KEYS, lines)?;
        }
        Format::Text => {
            write(printer, &result)?;
            if options.working {
                for lot in &result.lots {
                    for bid in &lot.bids {
                        let basis = basis(context.as_ref());
                        let w = working(&sheet, basis.as_ref(), &lot.lot, &bid.bid)?;
                        printer.line("")?;
                        printer.line(format!("Lot {}, bid {}", lot.lot, bid.bid))?;
                        for steps in [&w.factors, &w.on_terms, &w.owning_cost] {
                            write_working(printer, &StepRow::tree(steps), 0)?;
                        }
                        for steps in [&w.owning_cost_at_tolerance, &w.lot_cost] {
                            write_working(printer, &StepRow::tree(steps), 0)?;
                        }
                    }
                }
            }
        }
    }
    Ok(Exit::Done)
}

/// The result as text.
pub(super) fn write(printer: &mut Printer, result: &TenderResult) -> Result<(), Failure> {
    printer
        .line(format!("Tender {}: owning cost per unit in {}.", result.tender, result.currency))?;
    for lot in &result.lots {
        printer.line("")?;
        write_lot(printer, lot, &result.currency)?;
    }
    Ok(())
}

const TEXT: &[&str] = &[
    "rank",
    "bid",
    "bidder",
    "price",
    "added_cost",
    "no_load_cost",
    "load_cost",
    "auxiliary_cost",
    "owning_cost",
    "near_tie",
];

fn write_lot(printer: &mut Printer, lot: &LotResult, currency: &str) -> Result<(), Failure> {
    printer.line(format!(
        "Lot {}, {} units. A {} B {} aux {} {currency} per kW of loss, once.",
        lot.lot,
        lot.quantity,
        group(lot.factor_a_per_kw, 2),
        group(lot.factor_b_per_kw, 2),
        group(lot.factor_aux_per_kw, 2)
    ))?;
    let ranked = lot.bids.iter().filter(|bid| bid.rank.is_some());
    printer.table(&TextColumn::list(TEXT, currency), ranked)?;
    match (&lot.least_owning_cost, &lot.recommended) {
        (Some(least), Some(leads)) if least == leads => {
            printer.line(format!("{least} costs least to own."))?;
        }
        (Some(least), Some(leads)) => printer.line(format!(
            "{least} costs least to own; {leads} leads inside the near-tie band, its price with adders is lowest."
        ))?,
        _ => printer.line("No bid can be ranked.")?,
    }
    if let Some(margin) = lot.margin_pct {
        printer.line(format!("The second costs {} % more to own.", group(margin, 2)))?;
    }
    for bid in lot.bids.iter().filter(|bid| bid.rank.is_none()) {
        printer.line(format!("Out: {} misses {}.", bid.bid, bid.excluded.join(", ")))?;
    }
    for flag in &lot.flags {
        printer.line(format!("! {flag}: {}", flag_meaning(flag).unwrap_or_default()))?;
    }
    Ok(())
}
