//! The fleet screen: the ranking as a table with a cost bar, the units left out, the unit under the cursor
//! beside it. Only the visible lines are made.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::text::{Line, Span};

use super::app::App;
use super::bar::{self, Parts};
use super::frame::{put, put_line, select};
use super::text;
use super::theme::Part;
use super::unit::{LEGEND, choices, not_yet_words, scale, span};
use super::words::currency_in;
use super::work::Ranked;
use crate::study::figures::{Figure, figure};
use crate::study::losses;
use crate::study::offers_open::left_out_because;
use crate::study::rank::{By, RankRow};

/// Lines above the list: headings, units.
pub(super) const HEADER: u16 = 2;

/// Where the parts of the screen stand.
pub(super) struct Areas {
    pub(super) list: Rect,
    pub(super) detail: Option<Rect>,
}

/// Lays the screen out: the unit under the cursor stands beside the list where there is room.
pub(super) fn areas(body: Rect) -> Areas {
    if body.width < 120 {
        return Areas { list: body, detail: None };
    }
    let wide = 44;
    let list = Rect { width: body.width - wide - 1, ..body };
    let detail = Rect { x: list.right() + 1, width: wide, ..body };
    Areas { list, detail: Some(detail) }
}

/// Lines below the units left out that say the whole reason, where nothing beside the list does.
const REASON: u16 = 3;

/// Lines of the list.
pub(super) fn rows(app: &App, body: Rect) -> u16 {
    let areas = areas(body);
    let below = if app.show_left_out && areas.detail.is_none() { REASON } else { 0 };
    areas.list.height.saturating_sub(HEADER + below)
}

/// A column of the table.
struct Column {
    key: &'static str,
    /// Flush right.
    number: bool,
    /// Columns of the highest rank give way first.
    rank: u8,
    /// Widest.
    most: usize,
}

const COLUMNS: [Column; 13] = [
    Column { key: "rank", number: true, rank: 0, most: 9 },
    Column { key: COULD_BE, number: false, rank: 1, most: 13 },
    Column { key: "unit", number: false, rank: 0, most: 16 },
    Column { key: "site", number: false, rank: 4, most: 18 },
    Column { key: "rated_kva", number: true, rank: 2, most: 9 },
    Column { key: "year_made", number: true, rank: 5, most: 4 },
    Column { key: "peak_pu", number: true, rank: 6, most: 6 },
    Column { key: "keep_pv", number: true, rank: 7, most: 14 },
    Column { key: "saving_pv", number: true, rank: 0, most: 14 },
    Column { key: "waiting_pv", number: true, rank: 8, most: 14 },
    Column { key: "best_year", number: true, rank: 1, most: 5 },
    Column { key: "best_offer", number: false, rank: 3, most: 14 },
    Column { key: "flags", number: true, rank: 9, most: 5 },
];

/// Cells of the narrowest and the widest bar.
const BAR: (usize, usize) = (18, 40);

/// Where units of estimated losses could stand; there is no such column where none is estimated.
const COULD_BE: &str = "rank_low";

fn cell(row: &RankRow, key: &str) -> String {
    let money = |value: f64| text::number(value, 0);
    let whole = |n: Option<i64>| n.map_or(String::new(), |n| n.to_string());
    match key {
        "rank" => text::count(row.rank),
        COULD_BE => span(row).unwrap_or_default(),
        "unit" => row.unit.to_owned(),
        "site" => row.site.unwrap_or("").to_owned(),
        "rated_kva" => text::plain(row.rated_kva, 1),
        "year_made" => whole(row.year_made),
        "peak_pu" => text::number(row.peak_pu, 2),
        "keep_pv" => money(row.keep_pv),
        "saving_pv" => money(row.saving_pv),
        "waiting_pv" => money(row.waiting_pv),
        "best_year" => row.best_year.map_or("never".to_owned(), |year| year.to_string()),
        "best_offer" => row.best_offer.unwrap_or("").to_owned(),
        "flags" if row.flags.is_empty() => String::new(),
        "flags" => format!("!{}", row.flags.len()),
        _ => String::new(),
    }
}

fn year_cost(ranked: &Ranked, i: usize) -> Option<Parts> {
    let row = losses::of_unit(&ranked.desk, &ranked.ranking.context, i).ok()?;
    Some(bar::of_year(&row.cost))
}

/// Draws the screen.
pub(super) fn draw(app: &App, area: Rect, buffer: &mut Buffer) {
    let Some(ranked) = &app.ranked else { return };
    let areas = areas(area);
    if app.show_left_out {
        left_out(app, ranked, areas.list, rows(app, area), buffer);
    } else {
        ranking(app, ranked, areas.list, buffer);
    }
    if let Some(detail) = areas.detail {
        beside(app, ranked, detail, buffer);
    }
}

fn ranking(app: &App, ranked: &Ranked, area: Rect, buffer: &mut Buffer) {
    let (theme, list) = (app.theme, app.fleet);
    let height = area.height.saturating_sub(HEADER);
    let currency = text::cut(&ranked.desk.sheet.basis.currency, 8);
    let visible = app.view.places.iter().skip(list.offset).take(usize::from(height));
    let rows: Vec<(RankRow, Option<Parts>)> = visible
        .filter_map(|place| {
            let i = *ranked.ranking.order.get(*place as usize)? as usize;
            Some((ranked.ranking.row(&ranked.desk, *place as usize)?, year_cost(ranked, i)))
        })
        .collect();
    if rows.is_empty() {
        let said = if app.view.spec.filter.is_empty() {
            " No unit could be ranked. Press x to see why each is left out."
        } else {
            " No ranked unit has these words in its name or site. Esc shows all again."
        };
        put(buffer, area, 1, said, theme.muted());
        return;
    }
    let figures: Vec<(&Column, &Figure)> =
        COLUMNS.iter().filter_map(|c| Some((c, figure(c.key)?))).collect();
    let heading = |n: usize| {
        let (column, figure): (&Column, &Figure) = figures[n];
        if column.key == COULD_BE { "could be" } else { figure.heading }
    };
    let cells: Vec<Vec<String>> = rows
        .iter()
        .map(|(row, _)| figures.iter().map(|(c, _)| cell(row, c.key)).collect())
        .collect();
    let unit = |figure: &Figure| currency_in(figure.unit, &currency);
    let widths: Vec<usize> = figures
        .iter()
        .enumerate()
        .map(|(n, (column, figure))| {
            let heading = text::width(heading(n)).max(text::width(&unit(figure)));
            ranked.extent.width(column.key).min(column.most).max(heading)
        })
        .collect();
    // Columns give way, the least important first, until the bar fits. What the list is ordered by stays.
    let ordered_by = match app.view.spec.by {
        By::Saving | By::Unit => "",
        By::Waiting => "waiting_pv",
        By::Keep => "keep_pv",
        By::Rating => "rated_kva",
        By::Made => "year_made",
    };
    let rank = |n: usize| {
        let column = figures[n].0;
        if column.key == ordered_by { 0 } else { column.rank }
    };
    let room = usize::from(area.width).saturating_sub(2);
    let estimates = !ranked.ranking.could_stand.is_empty();
    let mut kept: Vec<usize> =
        (0..figures.len()).filter(|n| estimates || figures[*n].0.key != COULD_BE).collect();
    let used = |kept: &[usize]| kept.iter().map(|n| widths[*n] + 2).sum::<usize>();
    while used(&kept) + BAR.0 > room {
        let Some(least) = kept.iter().copied().max_by_key(|n| rank(*n)) else { break };
        if rank(least) == 0 {
            break;
        }
        kept.retain(|n| *n != least);
    }
    let cells_of_bar = room.saturating_sub(used(&kept)).min(BAR.1);
    let scale = app.view.scale;

    let join = |texts: &mut dyn Iterator<Item = (usize, String)>| {
        texts.fold("  ".to_owned(), |mut line, (n, shown)| {
            let shown = if figures[n].0.number {
                text::right(&shown, widths[n])
            } else {
                text::left(&shown, widths[n])
            };
            line.push_str(&shown);
            line.push_str("  ");
            line
        })
    };
    let headings = join(&mut kept.iter().map(|n| (*n, heading(*n).to_owned())));
    let units = join(&mut kept.iter().map(|n| (*n, unit(figures[*n].1))));
    let mut above = vec![Span::styled(headings, theme.heading())];
    above.extend(bar::legend(theme, &[(Part::Iron, "iron"), (Part::Copper, "copper")]));
    put_line(buffer, area, 0, &Line::from(above));
    let full = format!("{} {currency}/year", text::number(scale, 0));
    let said = format!("full {full}");
    let scale_said = if text::width(&said) <= cells_of_bar { said } else { full };
    let scale_said = text::right(&scale_said, cells_of_bar);
    put(buffer, area, 1, &format!("{units}{scale_said}"), theme.muted());

    for (y, (shown, (_, cost))) in (HEADER..).zip(cells.iter().zip(&rows)) {
        let at_cursor = list.offset + usize::from(y - HEADER) == list.cursor;
        let mark = if at_cursor { theme.mark() } else { ' ' };
        let line = join(&mut kept.iter().map(|n| (*n, shown[*n].clone())));
        let line = format!("{mark}{}", line.get(1..).unwrap_or(""));
        let wide = u16::try_from(text::width(&line)).unwrap_or(u16::MAX);
        put(buffer, area, y, &line, theme.plain());
        if at_cursor {
            // The bar keeps its colours: reversed it would read as another one.
            select(
                buffer,
                Rect {
                    y: area.y + y,
                    width: wide.saturating_sub(1).min(area.width),
                    height: 1,
                    ..area
                },
            );
        }
        if let Some(cost) = cost {
            let at = Rect {
                x: area.x + wide.min(area.width),
                width: area.width.saturating_sub(wide),
                ..area
            };
            let cells = u16::try_from(cells_of_bar).unwrap_or(0);
            put_line(buffer, at, y, &Line::from(bar::bar(theme, cost, scale, cells)));
        }
    }
}

fn left_out(app: &App, ranked: &Ranked, area: Rect, height: u16, buffer: &mut Buffer) {
    let (theme, list) = (app.theme, app.left_out);
    if app.view.left_out.is_empty() {
        put(buffer, area, 1, " No unit is left out. Press x for the ranking.", theme.muted());
        return;
    }
    let row = |unit: &str, site: &str, why: &str| {
        format!(" {}  {}  {}", text::left(unit, 12), text::left(site, 16), text::clean(why))
    };
    put(
        buffer,
        area,
        0,
        &format!(" {}", row("unit", "site", "why it is left out")),
        theme.heading(),
    );
    let visible = app.view.left_out.iter().enumerate().skip(list.offset).take(usize::from(height));
    for (y, (at, n)) in (HEADER..).zip(visible) {
        let Some(out) = ranked.ranking.left_out_row(&ranked.desk, *n as usize) else { continue };
        let i = ranked.ranking.left_out[*n as usize] as usize;
        let site = ranked.desk.fleet.site(i).unwrap_or("");
        let mark = if at == list.cursor { theme.mark() } else { ' ' };
        put(buffer, area, y, &format!("{mark}{}", row(out.unit, site, out.why)), theme.plain());
        if at == list.cursor {
            select(buffer, Rect { y: area.y + y, height: 1, ..area });
            let below = Rect { y: area.y + HEADER + height, ..area }.intersection(area);
            let said = text::wrap(out.why, usize::from(area.width.saturating_sub(3)));
            for (y, said) in (1..below.height).zip(said) {
                put(buffer, below, y, &format!("  {said}"), theme.plain());
            }
        }
    }
}

/// The unit under the cursor, in short.
fn beside(app: &App, ranked: &Ranked, area: Rect, buffer: &mut Buffer) {
    for y in 0..area.height {
        put(buffer, Rect { x: area.x - 1, width: 1, ..area }, y, "│", app.theme.muted());
    }
    let Some(i) = app.under_cursor() else { return };
    let area = Rect { x: area.x + 1, width: area.width.saturating_sub(1), ..area };
    for (y, line) in (0..area.height).zip(detail(app, ranked, i, usize::from(area.width))) {
        put_line(buffer, area, y, &line);
    }
}

/// The unit under the cursor in lines.
fn detail(app: &App, ranked: &Ranked, i: usize, cells: usize) -> Vec<Line<'static>> {
    let (theme, fleet) = (app.theme, &ranked.desk.fleet);
    let currency = text::cut(&ranked.desk.sheet.basis.currency, 8);
    let mut lines = vec![
        Line::styled(text::cut(fleet.unit.get(i), cells), theme.heading()),
        Line::raw(text::cut(fleet.site(i).unwrap_or(""), cells)),
        Line::default(),
    ];
    let Some(row) = ranked.ranking.row(&ranked.desk, ranked.place[i] as usize) else {
        let why = ranked.ranking.outcomes[i]
            .left_out
            .map_or("", |why| left_out_because(&ranked.desk, &ranked.ranking.context, i, why));
        let said = text::wrap(&format!("left out: {why}"), cells);
        lines.extend(said.into_iter().map(Line::raw));
        return lines;
    };
    if let Some(span) = span(&row) {
        let said =
            format!("place {}, could be {span} by its estimated losses", text::count(row.rank));
        lines.pop();
        lines.extend(text::wrap(&said, cells).into_iter().map(Line::raw));
        lines.push(Line::default());
    }
    if let Some(Ok(known)) = app.glance.dossier.as_ref().map(|dossier| &dossier.known) {
        let choices = choices(&ranked.desk, known, ranked.ranking.context.assumptions.first_year);
        let scale = scale(&choices);
        for choice in choices {
            let said = format!("{} {}", text::left(&choice.word, 13), text::cut(&choice.offer, 14));
            let Some(pv) = choice.pv else {
                let said = format!("{}: {}", choice.word, not_yet_words(known.not_yet.as_ref()));
                lines.extend(text::wrap(&said, cells).into_iter().take(2).map(Line::raw));
                lines.resize(lines.len() | 1, Line::default());
                continue;
            };
            let pv = text::number(pv, 0);
            let room = cells.saturating_sub(text::width(&said) + 1);
            lines.push(Line::raw(format!("{said} {}", text::right(&pv, room))));
            let wide = u16::try_from(cells).unwrap_or(u16::MAX);
            let bar = choice.cost.map(|cost| bar::bar(theme, &cost, scale, wide));
            lines.push(Line::from(bar.unwrap_or_default()));
        }
        lines.push(Line::from(bar::legend(theme, &LEGEND)));
        lines.push(Line::default());
    }
    let mut fact = |key: &str, value: Option<String>| {
        if let (Some(value), Some(figure)) = (value, figure(key)) {
            let unit = currency_in(figure.unit, &currency);
            let value = format!("{} {}", text::cut(&value, 18), text::left(&unit, 5));
            let room = cells.saturating_sub(text::width(&value) + 1);
            lines.push(Line::raw(format!("{} {value}", text::left(figure.heading, room))));
        }
    };
    let number = |value: f64| Some(text::number(value, 0));
    fact("rated_kva", Some(text::plain(row.rated_kva, 1)));
    fact("year_made", row.year_made.map(|year| year.to_string()));
    fact("peak_pu", Some(text::number(row.peak_pu, 2)));
    fact("saving_pv", number(row.saving_pv));
    fact("waiting_pv", number(row.waiting_pv));
    fact("payback_years", row.payback_years.map(|years| text::number(years, 1)));
    fact("capital", row.capital.and_then(number));
    fact("energy_saved_kwh", row.energy_saved_kwh.and_then(number));
    fact("co2_saved_kg", row.co2_saved_kg.and_then(number));
    if let Ok(year) = losses::of_unit(&ranked.desk, &ranked.ranking.context, i) {
        fact("loss_cost", number(year.loss_cost));
    }
    if !row.flags.is_empty() {
        lines.push(Line::default());
    }
    for meaning in ranked.ranking.outcomes[i].flags.meanings() {
        for (n, said) in text::wrap(meaning, cells.saturating_sub(2)).into_iter().enumerate() {
            let mark = Span::styled(if n == 0 { "! " } else { "  " }, theme.warning());
            lines.push(Line::from(vec![mark, Span::raw(said)]));
        }
    }
    lines
}

/// The counts, and the sums over all ranked units: the most of them that there is room for, in the status line.
pub(super) fn status(app: &App) -> (Line<'static>, Vec<Line<'static>>) {
    let Some(ranked) = &app.ranked else { return Default::default() };
    let (ranking, currency) = (&ranked.ranking, &ranked.desk.sheet.basis.currency);
    let shown = if app.show_left_out { app.view.left_out.len() } else { app.view.places.len() };
    let (ranks, out) = (text::count(ranking.order.len()), text::count(ranking.left_out.len()));
    let said = match app.view.spec.filter.as_str() {
        "" => format!("{ranks} ranked, {out} left out"),
        filter => format!("{} with {:?}", text::count(shown), text::cut(filter, 16)),
    };
    let by = match app.view.spec.by {
        By::Saving => String::new(),
        _ if app.show_left_out => String::new(),
        by => format!(", by {}", by.word()),
    };
    let said = format!(" {said}{by}");
    let totals = ranking.totals;
    let money = |value: f64| text::number(value, 0);
    let (keep, best) = (money(totals.keep_pv), money(totals.best_pv));
    let (saving, currency) = (money(totals.saving_pv), text::cut(currency, 8));
    let sums = [
        format!("all, {currency}: keep {keep}  best {best}  saving {saving} "),
        format!("{currency}: keep {keep} best {best} saving {saving} "),
        format!("saving {saving} {currency} "),
    ];
    (Line::raw(said), sums.into_iter().map(Line::raw).collect())
}
