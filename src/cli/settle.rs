//! `ironhum settle T`: measured against guaranteed losses.

use serde::Serialize;

use super::args::{Args, Format, Settle};
use super::book::{self, Opened};
use super::exit::{Exit, Failure};
use super::factors::working as write_working;
use super::print::Printer;
use super::tender::warn_of_scale;
use crate::study::StudyError;
use crate::study::explain::Explained as _;
use crate::study::settle::{LotSettlement, SettleResult, Settled, UnitSettlement, letter};
use crate::study::tender::Case;

const KEYS: &[&str] = &[
    "lot",
    "bid",
    "serial",
    "no_load_excess_w",
    "load_excess_w",
    "auxiliary_excess_w",
    "penalty",
    "beyond_tolerance",
];

#[derive(Serialize)]
struct Line<'a> {
    lot: &'a str,
    bid: &'a str,
    #[serde(flatten)]
    unit: &'a UnitSettlement,
}

pub(super) fn settle(
    args: &Args,
    options: &Settle,
    printer: &mut Printer,
) -> Result<Exit, Failure> {
    let Opened { book, .. } = book::open_to_read(args)?;
    let case = Case::to_settle(&book, &options.tender, args.basis.as_deref())?;
    let full = case.settle(None)?;
    let mut result = case.settle(options.lot.as_deref())?;
    if let Some(only) = &options.bid {
        let bids: Vec<String> = result.lots.iter().map(|lot| lot.bid.clone()).collect();
        if !bids.contains(only) {
            let place = format!("the measured units of tender {}", result.tender);
            let known = bids.iter().map(String::as_str);
            return Err(StudyError::unknown("bid", only, place, known).into());
        }
        result.lots.retain(|lot| lot.bid == *only);
    }
    if let Some(only) = &options.serial {
        let units = result.lots.iter().flat_map(|lot| &lot.units);
        let mut serials = units.map(|unit| unit.serial.as_str());
        if !serials.clone().any(|serial| serial == only) {
            let place = format!("tender {}", result.tender);
            return Err(StudyError::unknown("serial", only, place, &mut serials).into());
        }
    }
    for lot in &result.lots {
        warn_of_scale(printer, &lot.lot, &lot.flags);
        for unit in &lot.units {
            warn_of_scale(printer, &format!("{}, unit {}", lot.lot, unit.serial), &unit.flags);
        }
    }
    match printer.format {
        Format::Json => printer.json(&result)?,
        Format::Csv => {
            let lines = result.lots.iter().flat_map(|lot| {
                lot.units.iter().map(|unit| Line { lot: &lot.lot, bid: &lot.bid, unit })
            });
            printer.csv(KEYS, lines)?;
        }
        Format::Text => {
            let settled = Settled(&case);
            if let Some(figure) = options.working.as_ref().filter(|figure| !figure.is_empty()) {
                let figure = &in_place(options, &full, &settled.figures()?, figure);
                let steps = settled.working(figure)?;
                printer.line(format!("How {figure} comes about:"))?;
                write_working(printer, &steps, 1, case.money())?;
                return Ok(Exit::Done);
            }
            printer.letter(&letter::settlement(&result))?;
            let only = options.serial.as_deref();
            for (n, lot) in full.lots.iter().enumerate() {
                let shown = |own: &LotSettlement| own.lot == lot.lot && own.bid == lot.bid;
                if !result.lots.iter().any(shown) || (options.working.is_none() && only.is_none()) {
                    continue;
                }
                for (figure, called) in to_open(lot, n, only) {
                    printer.line("")?;
                    printer.line(called)?;
                    write_working(printer, &settled.working(&figure)?, 0, case.money())?;
                }
            }
        }
    }
    Ok(Exit::Done)
}

/// The full name of a figure that is named from the lot, the bid or the unit that is asked for; else as it is written.
fn in_place(
    options: &Settle,
    full: &SettleResult,
    known: &[(String, f64)],
    figure: &str,
) -> String {
    if options.lot.is_none() && options.bid.is_none() && options.serial.is_none() {
        return figure.to_owned();
    }
    let is = |asked: &Option<String>, name: &str| asked.as_ref().is_none_or(|asked| asked == name);
    let mut places = Vec::new();
    for (n, lot) in full.lots.iter().enumerate() {
        if !is(&options.lot, &lot.lot) || !is(&options.bid, &lot.bid) {
            continue;
        }
        match &options.serial {
            None => places.push(format!("lots.{n}.{figure}")),
            Some(serial) => {
                let of = lot.units.iter().enumerate().filter(|(_, unit)| unit.serial == *serial);
                places.extend(of.map(|(m, _)| format!("lots.{n}.units.{m}.{figure}")));
            }
        }
    }
    places.retain(|place| known.iter().any(|(name, _)| name == place));
    match places.as_slice() {
        [one] => one.clone(),
        _ => figure.to_owned(),
    }
}

/// The figures of a settled lot that are opened, each with what it is called: all, or those of one unit.
fn to_open(lot: &LotSettlement, n: usize, only: Option<&str>) -> Vec<(String, String)> {
    let mut open = Vec::new();
    let wanted = |unit: &&(usize, &UnitSettlement)| only.is_none_or(|only| only == unit.1.serial);
    for (m, unit) in lot.units.iter().enumerate().collect::<Vec<_>>().iter().filter(wanted) {
        let serial = &unit.serial;
        open.push((format!("lots.{n}.units.{m}.penalty"), format!("Unit {serial}")));
        let cost = format!("lots.{n}.units.{m}.owning_cost_delivered");
        open.push((cost, format!("Owning cost of {serial} as delivered")));
        for (k, part) in unit.exceeds.iter().enumerate().filter(|(_, p)| p.excess_pct.is_some()) {
            let figure = format!("lots.{n}.units.{m}.exceeds.{k}.excess_pct");
            open.push((figure, format!("How far the {} of {serial} lies above", part.loss)));
        }
    }
    if only.is_some() {
        return open;
    }
    let of = format!("lot {}, bid {}", lot.lot, lot.bid);
    for (key, called, there) in [
        ("owning_cost_promised", "Owning cost of one unit as promised", true),
        ("owning_cost_delivered", "Mean owning cost as delivered", true),
        ("penalty", "Penalty", true),
        (
            "penalty_without_rejectable",
            "Penalty without the units that may be rejected",
            lot.penalty_without_rejectable.is_some(),
        ),
        (
            "penalty_in_bid_currency",
            "Penalty in the currency of the bid",
            lot.penalty_in_bid_currency.is_some(),
        ),
    ] {
        if there {
            open.push((format!("lots.{n}.{key}"), format!("{called}: {of}")));
        }
    }
    open
}
