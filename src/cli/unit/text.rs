//! The dossier of a unit in words.

use crate::cli::exit::Failure;
use crate::cli::print::{Printer, TextColumn};
use crate::engine::columns;
use crate::exchange::counted;
use crate::study::estimate::EstimatedRow;
use crate::study::figures::group;
use crate::study::law::VerdictRow;
use crate::study::losses::{flag_meaning, voltage_words};
use crate::study::test_report::TestRow;
use crate::study::unit::thermal::{HeatRow, ThermalRow};
use crate::study::unit::{Dossier, FitRow, KeepOrReplace};

pub(super) fn text(printer: &mut Printer, d: &Dossier<'_>) -> Result<(), Failure> {
    printer.line(format!("Unit {}, basis {}", d.unit, d.basis))?;
    printer.line("")?;
    for column in columns::Unit::COLUMNS {
        let value = d.nameplate.get(column.name).filter(|v| !v.is_null());
        if let Some(value) = value.filter(|_| column.name != "unit") {
            let value = value.as_str().map_or_else(|| value.to_string(), str::to_owned);
            let unit = column.unit().replace("money", &d.currency);
            printer.line(format!("  {:<22} {value} {unit}", column.name))?;
        }
    }
    if let Some(tests) = &d.tests {
        report(printer, tests)?;
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
            "Estimated {name}: {} W, with 95 % between {} and {} W; from {} by {}{}.",
            group(loss.estimate_w, 0),
            group(loss.low_w, 0),
            group(loss.high_w, 0),
            counted(loss.known_units, "unit"),
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
            "Year 1: iron {} kWh, copper {} kWh, auxiliaries {} kWh, cost {} {}; losses {}.",
            group(l.no_load_energy_kwh, 0),
            group(l.load_energy_kwh, 0),
            group(l.auxiliary_energy_kwh, 0),
            group(l.loss_cost, 0),
            d.currency,
            voltage_words(d.voltage_model)
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
        indicators(printer, k, currency)?;
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
    heat(printer, &d.thermal)?;
    if let Some(row) = &d.fit {
        fit(printer, row)?;
    }
    if let Some(law) = &d.law {
        printer.line("")?;
        verdict_of(printer, "Were it bought", law)?;
    }
    if !d.flags.is_empty() {
        printer.line("")?;
    }
    for flag in &d.flags {
        printer.line(format!("! {flag}: {}", flag_meaning(flag).unwrap_or_default()))?;
    }
    Ok(())
}

/// What the test report says and fills.
fn report(printer: &mut Printer, tests: &TestRow) -> Result<(), Failure> {
    printer.line("")?;
    let on = tests.tested_on.as_deref().map_or(String::new(), |on| format!(" of {on}"));
    if let Some(why) = &tests.why {
        printer.line(format!("Test report{on}: not used. {why}."))?;
        return Ok(());
    }
    let at = format!("W at {} °C", group(tests.reference_temp_c, 0));
    let said = [
        ("no-load loss", tests.no_load_loss_w, 1, "W"),
        ("no-load current", tests.no_load_current_pct, 3, "%"),
        ("load loss", tests.load_loss_w, 1, at.as_str()),
        ("its I²R part", tests.resistive_loss_w, 1, at.as_str()),
        ("its stray part", tests.stray_loss_w, 1, at.as_str()),
        ("impedance", tests.impedance_pct, 3, "%"),
    ];
    let said = said.iter().filter_map(|(what, value, places, unit)| {
        Some(format!("{what} {} {unit}", group((*value)?, *places)))
    });
    printer.line(format!("Test report{on}: {}.", said.collect::<Vec<_>>().join(", ")))?;
    if !tests.fills.is_empty() {
        let filled = tests.fills.join(", ");
        printer.line(format!("Blank on the nameplate and filled from it: {filled}."))?;
    }
    Ok(())
}

/// What else is asked of a replacement, as far as there is an answer.
fn indicators(printer: &mut Printer, k: &KeepOrReplace<'_>, currency: &str) -> Result<(), Failure> {
    let years = format!("{currency} a year");
    let per_t = format!("{currency} per t");
    for (what, value, places, unit) in [
        ("simple payback", k.payback_years, 1, "years"),
        ("discounted payback", k.discounted_payback_years, 1, "years"),
        ("rate of return of buying now", k.now_irr_pct, 2, "%"),
        ("energy saved in its first year", k.energy_saved_kwh, 0, "kWh"),
        ("CO2 avoided over the horizon", k.co2_avoided_t, 1, "t"),
        ("cost of CO2 avoided", k.cost_per_t_co2, 2, per_t.as_str()),
        ("equal yearly cost of keeping", Some(k.keep_euac), 0, years.as_str()),
        ("equal yearly cost of the best choice", Some(k.best_euac), 0, years.as_str()),
    ] {
        if let Some(value) = value {
            printer.line(format!("  {what:<38} {} {unit}", group(value, places)))?;
        }
    }
    Ok(())
}

/// What a law says.
fn verdict_of(printer: &mut Printer, were: &str, v: &VerdictRow) -> Result<(), Failure> {
    let meets = match v.meets {
        Some(true) => "is met",
        Some(false) => "is not met",
        None => "cannot be told",
    };
    let why = if v.why.is_empty() { String::new() } else { format!(": {}", v.why) };
    printer.line(format!("{were} on {}: law {} {meets}{why}.", v.on, v.law))?;
    for limit in &v.limits {
        printer.line(format!(
            "  {} {} {} {}: {} ({})",
            limit.quantity,
            group(limit.value, 3),
            limit.bound,
            group(limit.limit, 3),
            if limit.meets { "kept" } else { "missed" },
            limit.source
        ))?;
    }
    for note in &v.notes {
        printer.line(format!("  ({note})"))?;
    }
    if v.verify {
        printer
            .line("  ! verify: the law is stated from memory; look it up in the official text")?;
    }
    Ok(())
}

/// How hot the unit and the best offer get.
fn heat(printer: &mut Printer, t: &ThermalRow) -> Result<(), Failure> {
    printer.line("")?;
    printer.line(format!("Heat, {} ambient, {} paper:", t.ambient, t.paper))?;
    let line = |row: &HeatRow| {
        let name = row.offer.as_deref().unwrap_or("the unit");
        let held = format!(
            "  {name} ({}): at its peak held for good top oil {} °C, hot spot {} °C",
            row.cooling_mode,
            group(row.steady_top_oil_c, 0),
            group(row.steady_hot_spot_c, 0)
        );
        let Some(year) = &row.year else { return held + "." };
        format!(
            "{held};\n    hottest in hour {}: hot spot {} °C, top oil up to {} °C; above {} °C hot spot {} h, above {} °C top oil {} h;\n    life used in the year {} h of {} h at rated ageing.",
            year.hottest_hour,
            group(year.hottest_hot_spot_c, 0),
            group(year.hottest_top_oil_c, 0),
            group(t.hot_spot_limit_c, 0),
            group(year.hours_above_hot_spot, 0),
            group(t.top_oil_limit_c, 0),
            group(year.hours_above_top_oil, 0),
            group(year.life_used_hours, 0),
            group(year.hours, 0)
        )
    };
    for row in [&t.own, &t.replacement].into_iter().flatten() {
        for line in line(row).lines() {
            printer.line(line)?;
        }
    }
    if let Some(why) = &t.why {
        printer.line(format!("  {why}"))?;
    }
    if t.own.is_none() {
        return Ok(());
    }
    for note in t.notes.iter().map(String::as_str).chain(t.cautions.iter().copied()) {
        printer.line(format!("  ({note})"))?;
    }
    Ok(())
}

/// How an offer fits the place.
fn fit(printer: &mut Printer, f: &FitRow) -> Result<(), Failure> {
    let yes = |known: Option<bool>| match known {
        Some(true) => "agree",
        Some(false) => "do not agree",
        None => "not known",
    };
    let figure = |value: Option<f64>, places, unit: &str| {
        value.map_or("not known".to_owned(), |value| format!("{} {unit}", group(value, places)))
    };
    printer.line("")?;
    let verdict = match (f.fits, f.unknown.is_empty()) {
        (true, true) => "fits".to_owned(),
        (true, false) => {
            format!("fits as far as is known; not looked at: {}", f.unknown.join(", "))
        }
        (false, _) => format!("does not fit: {}", f.misses.join(", ")),
    };
    printer.line(format!("{} in this place {verdict}.", f.proposed))?;
    printer.line(format!(
        "  phases {}; voltages {} (high {}, low {}); vector groups {}",
        yes(f.phases_agree),
        yes(f.voltages_agree),
        figure(f.hv_difference_pct, 2, "%"),
        figure(f.lv_difference_pct, 2, "%"),
        yes(f.vector_groups_agree)
    ))?;
    let limit =
        f.loading_limit_pu.map_or("no limit".to_owned(), |pu| format!("limit {} pu", group(pu, 2)));
    printer.line(format!(
        "  peak {} of its rating in year 1, {} at most ({limit}); regulation at the peak {}",
        figure(f.peak_pu, 2, "pu"),
        figure(f.highest_peak_pu, 2, "pu"),
        figure(f.regulation_pct, 2, "%")
    ))?;
    let limit =
        f.fault_limit_mva.map_or(String::new(), |mva| format!(", limit {} MVA", group(mva, 1)));
    printer.line(format!(
        "  fault level at the secondary {} ({}){limit}",
        figure(f.fault_level_mva, 2, "MVA"),
        figure(f.fault_current_a, 0, "A")
    ))?;
    if let Some(b) = &f.beside {
        printer.line(format!(
            "  beside {}: ratios {} ({}), vector groups {}, impedances {} ({})",
            b.unit,
            yes(b.ratios_agree),
            figure(b.ratio_difference_pct, 2, "%"),
            yes(b.vector_groups_agree),
            yes(b.impedances_agree),
            figure(b.impedance_difference_pct, 1, "%")
        ))?;
        printer.line(format!(
            "    of {} it takes {} of its rating, {} takes {}; the first is full at {}; circulating {} of rated current",
            figure(b.load_kva, 0, "kVA"),
            figure(b.loading_pu, 2, "pu"),
            b.unit,
            figure(b.beside_loading_pu, 2, "pu"),
            figure(b.bank_limit_kva, 0, "kVA"),
            figure(b.circulating_pu, 3, "pu")
        ))?;
    }
    if let Some(heat) = &f.thermal {
        printer.line(format!(
            "  at its peak held for good hot spot {}{}",
            figure(Some(heat.steady_hot_spot_c), 0, "°C"),
            heat.year.map_or(String::new(), |year| format!(
                "; hottest in the year {} °C, life used {} h",
                group(year.hottest_hot_spot_c, 0),
                group(year.life_used_hours, 0)
            ))
        ))?;
    }
    if let Some(law) = &f.law {
        verdict_of(printer, "  Bought", law)?;
    }
    for note in &f.notes {
        printer.line(format!("  ({note})"))?;
    }
    Ok(())
}
