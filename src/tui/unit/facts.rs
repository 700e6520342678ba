//! The facts of a unit as lines: doubts first, then loading and losses, then its record as far as it is known.

use ratatui::text::{Line, Span};

use crate::engine::columns::{Column, Kind, Money, Unit, Value, YesNo};
use crate::study::figures::figure;
use crate::study::{Desk, losses};
use crate::tui::app::App;
use crate::tui::text;
use crate::tui::words::{unit_of, with_unit};

/// The facts in lines of at most `cells`.
pub(super) fn lines(app: &App, cells: usize) -> Vec<Line<'static>> {
    let (Some(dossier), Some(i)) = (&app.unit.dossier, app.unit.index) else { return Vec::new() };
    let theme = app.theme;
    let desk = &dossier.ranked.desk;
    let currency = &desk.sheet.basis.currency;
    let mut lines = Vec::new();
    if let Err(why) = &dossier.known {
        for line in text::wrap(&format!("left out: {why}"), cells) {
            lines.push(Line::styled(line, theme.warning()));
        }
    }
    if let Ok(known) = &dossier.known {
        for meaning in known.decision.flags.with(known.place.flags).meanings() {
            for (n, line) in text::wrap(meaning, cells.saturating_sub(2)).into_iter().enumerate() {
                let mark = Span::styled(if n == 0 { "! " } else { "  " }, theme.warning());
                lines.push(Line::from(vec![mark, Span::raw(line)]));
            }
        }
        if let Some(more) = &app.unit.more {
            more.indicators(currency, cells, theme, &mut lines);
        }
        if let Ok(row) = losses::of_unit(desk, &dossier.ranked.ranking.context, i) {
            lines.push(Line::styled("Loading and losses of year 1", theme.heading()));
            for (key, value) in [
                ("peak_pu", Some(row.peak_pu)),
                ("load_factor_pu", row.load_factor_pu),
                ("loss_factor_pu", Some(row.loss_factor_pu)),
                ("no_load_energy_kwh", Some(row.no_load_energy_kwh)),
                ("load_energy_kwh", Some(row.load_energy_kwh)),
                ("auxiliary_energy_kwh", Some(row.auxiliary_energy_kwh).filter(|e| *e > 0.0)),
                ("loss_cost", Some(row.loss_cost)),
                ("efficiency_pct", row.efficiency_pct),
            ] {
                if let (Some(value), Some(figure)) = (value, figure(key)) {
                    let value = text::number(value, figure.places);
                    let value = with_unit(&value, figure.unit, currency);
                    lines.push(fact(figure.heading, &value, cells));
                }
            }
        }
    }
    if let Some(more) = &app.unit.more {
        more.losses(cells, theme, &mut lines);
        more.heat(cells, theme, &mut lines);
        more.law(cells, theme, &mut lines);
    }
    let record = super::record(app, desk, i);
    lines.push(Line::styled("Record", theme.heading()));
    for (column, value) in Unit::COLUMNS.iter().zip(record.values()) {
        if !matches!(column.name, "unit" | "site") && value != Value::Blank {
            let shown = shown(column, &value, currency);
            lines.push(fact(column.name, &theme.spell(&shown), cells));
        }
    }
    if let Some(more) = &app.unit.more {
        more.notes(cells, theme, &mut lines);
    }
    lines
}

pub(super) fn fact(name: &str, value: &str, cells: usize) -> Line<'static> {
    let wide = text::width(value).min(cells);
    let name = text::left(name, cells.saturating_sub(wide + 1));
    Line::raw(format!("{name} {}", text::cut(value, wide)))
}

fn shown(column: &Column, value: &Value, currency: &str) -> String {
    match value {
        Value::Blank => String::new(),
        Value::Text(text) => text.clone(),
        Value::Integer(n)
            if matches!(column.kind, Kind::Integer(..)) && column.name.contains("year") =>
        {
            n.to_string()
        }
        #[expect(clippy::cast_precision_loss, reason = "customers, phases")]
        Value::Integer(n) => text::number(*n as f64, 0),
        Value::Real(x) => with_unit(&text::plain(*x, 3), unit_of(column), currency),
        Value::Money(money) => with_unit(&text::plain(money.amount(), 2), "money", currency),
    }
}

/// What the columns of the fleet hold of a unit's record.
pub(in crate::tui) fn of_columns(desk: &Desk, i: usize) -> Unit {
    let f = desk.fleet.facts(i);
    let known = |x: f64| (!x.is_nan()).then_some(x);
    #[expect(clippy::cast_possible_truncation, reason = "whole and small")]
    let whole = |x: f64| known(x).map(|x| x as i64);
    let money = |x: f64| known(x).and_then(|x| Money::parse(&x.to_string()).ok());
    let mut unit = Unit {
        unit: desk.fleet.unit.get(i).to_owned(),
        rated_kva: f.rated_kva,
        loss_base_kva: known(f.loss_base_kva),
        no_load_loss_w: known(f.no_load_loss_w),
        load_loss_w: known(f.load_loss_w),
        total_loss_w: known(f.total_loss_w),
        auxiliary_loss_w: known(f.auxiliary_loss_w),
        auxiliary_hours: known(f.auxiliary_hours),
        peak_kva: known(f.peak_kva),
        load_factor_pu: known(f.load_factor_pu),
        loss_factor_pu: known(f.loss_factor_pu),
        load_growth_pct: known(f.load_growth_pct),
        responsibility_pu: known(f.responsibility_pu),
        energised_hours: known(f.energised_hours),
        power_factor: known(f.power_factor),
        year_made: whole(f.year_made),
        failure_cost: money(f.failure_cost),
        removal_cost: money(f.removal_cost),
        scrap_value: money(f.scrap_value),
        customers: whole(f.customers),
        in_service: (!f.in_service).then_some(YesNo::No),
        profile: desk.profiles.get(f.profile as usize).map(|p| p.profile.clone()),
        ..Unit::blank()
    };
    if let Some(terminals) = desk.fleet.terminals.get(desk.fleet.kind[i] as usize) {
        unit.phases = terminals.phases;
        unit.hv_kv = terminals.hv_kv;
        unit.lv_kv = terminals.lv_kv;
    }
    unit
}
