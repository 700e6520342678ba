//! `ironhum unit ID`: one unit's dossier.

use super::args::{Args, Format, Unit};
use super::book::{self, Opened};
use super::exit::{Exit, Failure};
use super::factors::working;
use super::print::{Printer, TextColumn};
use crate::engine::columns;
use crate::study::Desk;
use crate::study::estimate::EstimatedRow;
use crate::study::explain::{Explained as _, Opening};
use crate::study::figures::group;
use crate::study::losses::flag_meaning;
use crate::study::unit::{Dossier, Question};

pub(super) fn unit(args: &Args, options: &Unit, printer: &mut Printer) -> Result<Exit, Failure> {
    let Opened { book, .. } = book::open_to_read(args)?;
    let unit = book.unit(&options.unit)?;
    let desk = Desk::read(&book, args.basis.as_deref())?;
    let context = desk.context()?;
    let question = Question::new(&desk, &context, &unit)?;
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
                text(printer, &dossier)?;
            }
            for figure in &dossier.working {
                printer.line("")?;
                printer.line(format!("How {} comes about:", figure.figure))?;
                working(printer, &figure.steps, 1)?;
            }
        }
    }
    Ok(Exit::Done)
}

fn text(printer: &mut Printer, d: &Dossier<'_>) -> Result<(), Failure> {
    printer.line(format!("Unit {}, basis {}", d.unit, d.basis))?;
    printer.line("")?;
    for column in columns::Unit::COLUMNS {
        let value = d.nameplate.get(column.name).filter(|v| !v.is_null());
        if let Some(value) = value.filter(|_| column.name != "unit") {
            let value = value.as_str().map_or_else(|| value.to_string(), str::to_owned);
            printer.line(format!("  {:<22} {value} {}", column.name, column.unit()))?;
        }
    }
    if let Some(c) = &d.circuit {
        printer.line("")?;
        printer.line(format!(
            "Circuit, per unit of its rating: R {}, X {}, Z {}",
            group(c.r_pu, 5),
            group(c.x_pu, 5),
            group(c.z_pu, 5)
        ))?;
    }
    if d.losses.is_some() {
        printer.line("")?;
        let best = d.best_load_pu.map_or("unknown".to_owned(), |pu| format!("{} pu", group(pu, 3)));
        printer.line(format!(
            "At power factor {} (best efficiency at {best}):",
            group(d.power_factor, 2)
        ))?;
        let column = |key, heading: &str, unit: &str, places| TextColumn {
            key,
            heading: heading.to_owned(),
            unit: unit.to_owned(),
            places,
        };
        let columns = [
            column("load_pu", "load", "pu", 2),
            column("efficiency_pct", "efficiency", "%", 3),
            column("regulation_pct", "regulation", "%", 3),
        ];
        printer.table(&columns, d.load_points.iter())?;
    }
    for (name, loss) in d.estimated.iter().flat_map(EstimatedRow::losses) {
        printer.line(format!(
            "Estimated {name}: {} W, with 95 % between {} and {} W; from {} units by {}{}.",
            group(loss.estimate_w, 0),
            group(loss.low_w, 0),
            group(loss.high_w, 0),
            loss.known_units,
            loss.terms.join(", "),
            match loss.units_set_aside {
                0 => String::new(),
                aside => format!(", {aside} set aside as misread"),
            }
        ))?;
    }
    if let Some(l) = &d.losses {
        printer.line("")?;
        printer.line(format!(
            "Year 1: iron {} kWh, copper {} kWh, auxiliaries {} kWh, cost {} {}.",
            group(l.no_load_energy_kwh, 0),
            group(l.load_energy_kwh, 0),
            group(l.auxiliary_energy_kwh, 0),
            group(l.loss_cost, 0),
            d.currency
        ))?;
    }
    printer.line("")?;
    if let Some(why) = d.left_out {
        printer.line(format!("Not ranked: {why}."))?;
    }
    if let Some(k) = &d.keep_or_replace {
        let currency = &d.currency;
        printer.line(format!("Keep it to the end: {} {currency}", group(k.keep_pv, 0)))?;
        match (k.best_year, k.best_offer) {
            (Some(year), Some(offer)) => printer.line(format!(
                "Best: replace in {year} by {offer}: {} {currency}, saves {} {currency} (present value).",
                group(k.best_pv, 0),
                group(k.saving_pv, 0)
            ))?,
            _ => printer.line("Best: keep it; no offer pays within the years looked at.")?,
        }
        if k.waiting_pv > 0.0 {
            printer.line(format!(
                "A year's delay costs at least {} {currency}.",
                group(k.waiting_pv, 0)
            ))?;
        }
        printer.line("")?;
        printer.line("Best offer in each year:")?;
        let column = |key, heading: &str, unit: &str| TextColumn {
            key,
            heading: heading.to_owned(),
            unit: unit.to_owned(),
            places: 0,
        };
        let columns = [
            column("year", "year", ""),
            column("offer", "offer", ""),
            column("pv", "present value", currency),
        ];
        printer.table(&columns, k.years.iter())?;
    }
    for flag in &d.flags {
        printer.line(format!("! {flag}: {}", flag_meaning(flag).unwrap_or_default()))?;
    }
    Ok(())
}
