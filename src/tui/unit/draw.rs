//! Drawing of the unit screen.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::text::{Line, Span};

use super::{Dossier, Known, LEGEND, span, year};
use crate::tui::app::App;
use crate::tui::bar;
use crate::tui::chart::{self, Reference};
use crate::tui::frame::{put, put_line, put_right};
use crate::tui::text;
use crate::tui::theme::Theme;

/// Where the parts of the screen stand.
pub(in crate::tui) struct Areas {
    pub(in crate::tui) head: Rect,
    pub(in crate::tui) choices: Rect,
    pub(in crate::tui) facts: Rect,
    pub(in crate::tui) years: Rect,
}

/// Lines of the choices, with an empty one below.
const CHOICES: u16 = 7;

/// Lays the screen out: the facts stand right of the years, on a large screen also right of the choices.
///
/// A table takes the whole width of a small screen.
pub(in crate::tui) fn areas(body: Rect, table: bool) -> Areas {
    let head = Rect { height: body.height.min(1), ..body };
    let rest = Rect { y: body.y + head.height, height: body.height - head.height, ..body };
    let large = rest.width >= 110;
    let wide_table = table && !large;
    let beside = match rest.width {
        TWO_COLUMNS.. => 2 * COLUMN + GAP,
        width => (width * 2 / 5).min(COLUMN),
    };
    let left = rest.width - beside;
    let top = CHOICES.min(rest.height);
    let below = Rect { y: rest.y + top, height: rest.height - top, ..rest };
    let facts = match (large, wide_table) {
        (true, _) => rest,
        (false, true) => Rect { height: 0, ..below },
        (false, false) => below,
    };
    Areas {
        head,
        choices: Rect { width: if large { left - 2 } else { rest.width }, height: top, ..rest },
        facts: Rect { x: rest.x + left, width: if wide_table { 0 } else { beside }, ..facts },
        years: Rect {
            width: if wide_table { rest.width } else { left.saturating_sub(2) },
            ..below
        },
    }
}

/// Cells of a column of facts, and between two; the least width of a body that has two.
const COLUMN: u16 = 44;
const GAP: u16 = 3;
const TWO_COLUMNS: u16 = 150;

/// The columns of the facts.
pub(in crate::tui) fn columns(facts: Rect) -> Vec<Rect> {
    if facts.width < 2 * COLUMN {
        return vec![facts];
    }
    let column = |n: u16| Rect { x: facts.x + n * (COLUMN + GAP), width: COLUMN, ..facts };
    vec![column(0), column(1)]
}

/// Draws the screen.
pub(in crate::tui) fn draw(app: &App, area: Rect, buffer: &mut Buffer) {
    let theme = app.theme;
    let (Some(dossier), Some(i)) = (&app.unit.dossier, app.unit.index) else {
        put(
            buffer,
            area,
            1,
            "No unit is open. Choose one in the fleet (1) and press Enter.",
            theme.muted(),
        );
        return;
    };
    let areas = areas(area, app.unit.table);
    let fleet = &dossier.ranked.desk.fleet;
    let place = dossier.ranked.place[i];
    let ranked = text::count(dossier.ranked.ranking.order.len());
    let place = match place {
        u32::MAX => "not ranked".to_owned(),
        place => {
            let row = dossier.ranked.ranking.row(&dossier.ranked.desk, place as usize);
            let span = row.and_then(|row| span(&row));
            let span = span.map_or(String::new(), |span| format!(", could be {span}"));
            format!("place {} of {ranked} by saving{span}", text::count(place as usize + 1))
        }
    };
    let line = Line::from(vec![
        Span::styled(format!(" {}", text::cut(fleet.unit.get(i), 30)), theme.heading()),
        Span::raw(format!("   {}", text::cut(fleet.site(i).unwrap_or(""), 30))),
    ]);
    put_line(buffer, areas.head, 0, &line);
    let room = usize::from(areas.head.width).saturating_sub(line.width() + 3);
    put_right(buffer, areas.head, 0, &Line::raw(format!("{} ", text::cut(&place, room))));

    let columns = columns(areas.facts);
    let wide = columns.first().map_or(0, |column| usize::from(column.width));
    let lines = super::facts::lines(app, wide);
    let mut lines = lines.iter().skip(app.unit.facts.cursor);
    for column in columns {
        for (y, line) in (0..column.height).zip(lines.by_ref()) {
            put_line(buffer, column, y, line);
        }
    }
    if let Ok(known) = &dossier.known {
        choices(theme, dossier, known, areas.choices, buffer);
        if app.unit.table {
            super::table::draw(app, dossier, known, areas.years, buffer);
        } else {
            years(theme, dossier, known, areas.years, buffer);
        }
    }
}

fn choices(theme: Theme, dossier: &Dossier, known: &Known, area: Rect, buffer: &mut Buffer) {
    let desk = &dossier.ranked.desk;
    let a = &dossier.ranked.ranking.context.assumptions;
    let title = format!(" Present value over {} years, {}", a.years, text::cut(&a.currency, 8));
    put(buffer, area, 0, &title, theme.heading());
    let legend = Line::from(bar::legend(theme, &LEGEND));
    if text::width(&title) + legend.width() < usize::from(area.width) {
        put_right(buffer, area, 0, &legend);
    }
    let rows = super::choices(desk, known, a.first_year);
    let scale = super::scale(&rows);
    let pv = |value: Option<f64>| value.map_or(String::new(), |v| text::number(v, 0));
    let wide = rows.iter().map(|row| text::width(&pv(row.pv))).max().unwrap_or(0);
    let offers = rows.iter().map(|row| text::width(&row.offer)).max().unwrap_or(0).min(14);
    for (y, row) in (1..).zip(rows) {
        let mut spans = vec![Span::raw(format!(
            " {} {} {}  ",
            text::left(&row.word, 12),
            text::left(&row.offer, offers),
            text::right(&pv(row.pv), wide)
        ))];
        if row.pv.is_none() {
            let why = super::not_yet_words(known.not_yet.as_ref());
            let room = usize::from(area.width).saturating_sub(text::width(&why) + 2);
            spans = vec![Span::raw(format!(" {} {why}", text::left(&row.word, room.min(12))))];
        }
        if let Some(cost) = row.cost {
            let cells = usize::from(area.width).saturating_sub(spans[0].width());
            spans.extend(bar::bar(theme, &cost, scale, u16::try_from(cells).unwrap_or(0)));
        }
        put_line(buffer, area, y, &Line::from(spans));
    }
    let row = dossier.ranked.ranking.row(desk, dossier.ranked.place[dossier.index] as usize);
    let Some(row) = row else { return };
    let money = |value: f64| format!("{} {}", text::number(value, 0), a.currency);
    let mut said = vec![format!("saving {}", money(row.saving_pv))];
    if row.best_year_offset == Some(0) {
        said.push(format!("a year's delay costs {}", money(row.waiting_pv)));
    }
    if let Some(capital) = row.capital {
        said.push(format!("capital {}", money(capital)));
        let years = |years| format!("{} years", text::number(years, 1));
        said.push(format!("payback {}", row.payback_years.map_or("none".to_owned(), years)));
    }
    put(buffer, area, 4, &format!(" {}", said.join("   ")), theme.heading());
    if let (Some(energy), Some(co2)) = (row.energy_saved_kwh, row.co2_saved_kg) {
        let (energy, co2) = (text::number(energy, 0), text::number(co2, 0));
        let said = format!(" in its first year it saves {energy} kWh and {co2} kg CO2");
        put(buffer, area, 5, &said, theme.plain());
    }
}

fn years(theme: Theme, dossier: &Dossier, known: &Known, area: Rect, buffer: &mut Buffer) {
    let a = &dossier.ranked.ranking.context.assumptions;
    let title = format!(" Replacing in each year, {} present value", text::cut(&a.currency, 8));
    put(buffer, area, 0, &title, theme.heading());
    let points: Vec<(i64, f64)> =
        known.decision.years.iter().map(|choice| (year(a.first_year, choice), choice.pv)).collect();
    let below =
        Rect { y: area.y + area.height.min(1), height: area.height.saturating_sub(1), ..area };
    let keep = Reference { word: "keep", value: known.decision.keep_pv };
    let best = known.decision.best.map(|choice| (year(a.first_year, &choice), choice.pv));
    chart::draw(theme, &points, best, &keep, below, buffer);
}
