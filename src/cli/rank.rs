//! `ironhum rank`: the units by what replacing them saves.

use serde::Serialize;

use super::args::{Args, Format, Rank};
use super::book::{self, Opened};
use super::exit::{Exit, Failure};
use super::print::{Printer, TextColumn};
use super::timings::Timings;
use crate::exchange::counted;
use crate::study::figures::group;
use crate::study::losses::flag_meaning;
use crate::study::losses::voltage_words;
use crate::study::rank::{LeftOutRow, RankRow, Ranking, rank as ask};
use crate::study::{Desk, Watch};

const KEYS: &[&str] = &[
    "rank",
    "unit",
    "site",
    "rated_kva",
    "year_made",
    "peak_pu",
    "keep_pv",
    "now_offer",
    "now_pv",
    "best_offer",
    "best_year_offset",
    "best_year",
    "best_pv",
    "saving_pv",
    "waiting_pv",
    "payback_years",
    "capital",
    "energy_saved_kwh",
    "co2_saved_kg",
    "flags",
    "rank_low",
    "rank_high",
];
const TEXT: &[&str] = &[
    "rank",
    "unit",
    "site",
    "rated_kva",
    "year_made",
    "best_offer",
    "best_year",
    "saving_pv",
    "waiting_pv",
    "payback_years",
    "flags",
];

pub(super) fn rank(args: &Args, options: &Rank, printer: &mut Printer) -> Result<Exit, Failure> {
    let mut timings = Timings::start(args.timings);
    let Opened { book, .. } = book::open_to_read(args)?;
    timings.phase("open");
    let desk = Desk::read(&book, args.basis.as_deref())?;
    timings.phase("read");
    let ranking = ask(&desk, options.by, options.top, &Watch::default())?;
    timings.phase("rank");
    write(&desk, &ranking, printer)?;
    printer.flush()?;
    timings.phase("write");
    // The columns of a large fleet are given back by the end of the process faster than one by one.
    std::mem::forget((desk, ranking));
    if let Some(line) = timings.finish() {
        printer.complain(&line);
    }
    Ok(Exit::Done)
}

pub(super) fn write(desk: &Desk, ranking: &Ranking, printer: &mut Printer) -> Result<(), Failure> {
    let rows = (0..ranking.order.len()).filter_map(|place| ranking.row(desk, place));
    match printer.format {
        Format::Json => printer.json(&ranking.result(desk)),
        Format::Csv => printer.csv(KEYS, rows),
        Format::Text => {
            let a = &ranking.context.assumptions;
            let t = &ranking.totals;
            printer.line(format!(
                "Basis {}: {} ranked over {}, {} of them saving by replacing.",
                a.name,
                counted(t.units, "unit"),
                counted(a.years, "year"),
                t.units_saving
            ))?;
            printer.line(format!(
                "Present value {c} {}: keep all {}, best {}, saving {}.",
                a.first_year,
                group(t.keep_pv, 0),
                group(t.best_pv, 0),
                group(t.saving_pv, 0),
                c = a.currency,
            ))?;
            printer.line(format!("Losses are {}.", voltage_words(a.voltage_model)))?;
            printer.line("")?;
            let rows: Vec<_> = rows.collect();
            let mut columns = TextColumn::list(TEXT, &a.currency);
            let estimated = ranking.could_stand.len();
            if estimated > 0 {
                columns.extend(TextColumn::list(&["rank_low", "rank_high"], &a.currency));
            }
            printer.table(&columns, rows.iter().map(Marked::of))?;
            if estimated > 0 {
                printer.line("")?;
                printer.line(format!(
                    "{} with estimated losses: \"if low\" and \"if high\" are their places with losses at the ends of the 95 % interval.",
                    counted(estimated, "unit")
                ))?;
            }
            legend(printer, rows.iter().flat_map(|row| row.flags.iter().copied()))?;
            let left_out =
                (0..ranking.left_out.len()).filter_map(|n| ranking.left_out_row(desk, n));
            write_left_out(printer, left_out)
        }
    }
}

/// A line of the ranking whose flags are counted: their sentences stand under the table.
#[derive(Serialize)]
struct Marked<'a> {
    #[serde(flatten)]
    row: &'a RankRow<'a>,
    flags: String,
}

impl<'a> Marked<'a> {
    fn of(row: &'a RankRow<'a>) -> Self {
        Self { row, flags: "!".repeat(row.flags.len()) }
    }
}

/// The sentences of the flags of a table, each with how often it is up.
pub(super) fn legend<'a>(
    printer: &mut Printer,
    flags: impl Iterator<Item = &'a str>,
) -> Result<(), Failure> {
    let mut counts: Vec<(&str, usize)> = Vec::new();
    for flag in flags {
        match counts.iter_mut().find(|(known, _)| *known == flag) {
            Some((_, count)) => *count += 1,
            None => counts.push((flag, 1)),
        }
    }
    for (flag, count) in counts {
        let meaning = flag_meaning(flag).unwrap_or_default();
        printer.line(format!("! {flag} ({count}): {meaning}"))?;
    }
    Ok(())
}

/// The units left out, by reason.
pub(super) fn write_left_out<'a>(
    printer: &mut Printer,
    rows: impl Iterator<Item = LeftOutRow<'a>>,
) -> Result<(), Failure> {
    let mut reasons: Vec<(&str, Vec<&str>)> = Vec::new();
    for row in rows {
        match reasons.iter_mut().find(|(why, _)| *why == row.why) {
            Some((_, units)) => units.push(row.unit),
            None => reasons.push((row.why, vec![row.unit])),
        }
    }
    if reasons.is_empty() {
        return Ok(());
    }
    printer.line("")?;
    let total: usize = reasons.iter().map(|(_, units)| units.len()).sum();
    printer.line(format!("{} left out:", counted(total, "unit")))?;
    for (why, units) in reasons {
        let named: Vec<&str> = units.iter().take(12).copied().collect();
        let more = match units.len().saturating_sub(named.len()) {
            0 => String::new(),
            more => format!(" and {more} more"),
        };
        printer.line(format!("  {:>4}  {why}", units.len()))?;
        printer.line(format!("        {}{more}", named.join(", ")))?;
    }
    Ok(())
}
