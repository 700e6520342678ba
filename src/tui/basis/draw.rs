//! Drawing of the basis screen.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::text::{Line, Span};

use crate::engine::columns::{Basis, Column, Kind, Value};
use crate::tui::app::App;
use crate::tui::frame::{put, select};
use crate::tui::text;
use crate::tui::words::{currency_in, unit_of};
use crate::tui::work::Ranked;

/// Where the parts of the screen stand.
pub(in crate::tui) struct Areas {
    pub(in crate::tui) list: Rect,
    about: Rect,
    moved: Rect,
    ranks: Rect,
}

/// Lays the screen out: what moved stands beside the list where there is room, else below it.
pub(in crate::tui) fn areas(body: Rect) -> Areas {
    if body.width >= 110 {
        let left = (body.width / 2 + 4).max(68).min(body.width - 44);
        let list = Rect { width: left, height: body.height.saturating_sub(3), ..body };
        let about =
            Rect { y: list.bottom(), height: body.height - list.height, width: left, ..body };
        let right = Rect { x: body.x + left + 2, width: body.width - left - 2, ..body };
        let moved = Rect { height: body.height.min(7), ..right };
        let ranks = Rect { y: moved.bottom(), height: body.height - moved.height, ..right };
        return Areas { list, about, moved, ranks };
    }
    let list = Rect { height: body.height.saturating_sub(9), ..body };
    let about = Rect { y: list.bottom(), height: (body.height - list.height).min(2), ..body };
    let below = Rect { y: about.bottom(), height: body.bottom() - about.bottom(), ..body };
    let half = if below.width < 78 { below.width } else { below.width / 2 + 6 };
    let moved = Rect { width: half, ..below };
    let ranks = Rect { x: below.x + half, width: below.width - half, ..below };
    Areas { list, about, moved, ranks }
}

/// Draws the screen.
pub(in crate::tui) fn draw(app: &App, area: Rect, buffer: &mut Buffer) {
    let (Some(stored), Some(now)) = (&app.stored, &app.ranked) else { return };
    let areas = areas(area);
    list(app, areas.list, buffer);
    about(app, areas.about, buffer);
    moved(app, stored, now, areas.moved, buffer);
    ranks(app, stored, now, areas.ranks, buffer);
}

fn shown(column: &Column, value: &Value) -> String {
    match value {
        Value::Blank => String::new(),
        Value::Text(text) => text::clean(text).into_owned(),
        Value::Integer(1) if matches!(column.kind, Kind::Flag) => "yes".to_owned(),
        Value::Integer(_) if matches!(column.kind, Kind::Flag) => "no".to_owned(),
        Value::Integer(n) => n.to_string(),
        Value::Real(x) => text::plain(*x, 6),
        Value::Money(money) => text::plain(money.amount(), 3),
    }
}

/// What stands for a blank.
fn blank(column: &Column) -> String {
    match (column.required, column.blank) {
        (_, "") => "none".to_owned(),
        (_, what) => what.to_owned(),
    }
}

fn list(app: &App, area: Rect, buffer: &mut Buffer) {
    let theme = app.theme;
    let currency = currency(app);
    let (values, origins) = match area.width {
        ..66 => (14, 0),
        66..76 => (14, 8),
        76.. => (20, 8),
    };
    let row = |name: &str, value: &str, unit: &str, from: &str| {
        format!(
            "  {} {} {} {}",
            text::left(name, 26),
            text::right(value, values),
            text::left(unit, 14),
            text::left(from, origins)
        )
    };
    put(buffer, area, 0, &row("assumption", "value", "", "from"), theme.heading());
    let list = app.basis.list;
    let visible = Basis::COLUMNS.iter().enumerate().skip(list.offset);
    for (y, (n, column)) in (1..area.height).zip(visible) {
        let (Some(stored), Some(value)) = (app.basis.stored.get(n), app.basis.draft.get(n)) else {
            continue;
        };
        let (mut style, from) = match (value == stored, value) {
            (false, _) => (theme.changed(), "changed"),
            (true, Value::Blank) => (theme.muted(), "default"),
            (true, _) => (theme.plain(), "stored"),
        };
        let said = if *value == Value::Blank { blank(column) } else { shown(column, value) };
        let unit = if *value == Value::Blank && !said.starts_with(|c: char| c.is_ascii_digit()) {
            String::new()
        } else {
            theme.spell(&currency_in(unit_of(column), &currency)).into_owned()
        };
        let mut line = row(column.name, &said, &unit, from);
        if n == list.cursor {
            line.replace_range(0..1, &theme.mark().to_string());
            style = theme.plain();
        }
        put(buffer, area, y, &line, style);
        if n == list.cursor {
            let wide = u16::try_from(text::width(&line)).unwrap_or(u16::MAX).min(area.width);
            select(buffer, Rect { y: area.y + y, height: 1, width: wide, ..area });
        }
    }
}

fn currency(app: &App) -> String {
    app.ranked.as_ref().map_or(String::new(), |r| text::cut(&r.desk.sheet.basis.currency, 8))
}

fn about(app: &App, area: Rect, buffer: &mut Buffer) {
    let Some(column) = Basis::COLUMNS.get(app.basis.list.cursor) else { return };
    let mut said = Vec::new();
    if let (Some(stored), Some(now)) =
        (app.basis.stored.get(app.basis.list.cursor), app.basis.draft.get(app.basis.list.cursor))
        && now != stored
    {
        let blank = *stored == Value::Blank;
        let stored = if blank { "blank".to_owned() } else { shown(column, stored) };
        said.push(format!("stored: {stored}"));
    }
    let range = column.range();
    said.push(match range.as_str() {
        "" => column.meaning.to_owned(),
        range => format!("{} ({range})", column.meaning),
    });
    if !column.blank.is_empty() {
        said.push(format!("blank: {}", column.blank));
    }
    let said = app.theme.spell(&said.join("; ")).into_owned();
    for (y, line) in
        (0..area.height).zip(text::wrap(&said, usize::from(area.width.saturating_sub(4))))
    {
        put(buffer, area, y, &format!("  {line}"), app.theme.plain());
    }
}

fn moved(app: &App, stored: &Ranked, now: &Ranked, area: Rect, buffer: &mut Buffer) {
    let theme = app.theme;
    let currency = currency(app);
    let (before, after) = (stored.ranking.totals, now.ranking.totals);
    let row = |name: &str, before: &str, after: &str| {
        let name = text::left(name, 12);
        format!(" {name} {} {}", text::right(before, 13), text::right(after, 13))
    };
    put(buffer, area, 0, &row("whole fleet", "stored basis", "now"), theme.heading());
    let money = |value: f64| text::number(value, 0);
    let rows = [
        ("units ranked".to_owned(), text::count(before.units), text::count(after.units)),
        (
            "units saving".to_owned(),
            text::count(before.units_saving),
            text::count(after.units_saving),
        ),
        (format!("keep {currency}"), money(before.keep_pv), money(after.keep_pv)),
        (format!("best {currency}"), money(before.best_pv), money(after.best_pv)),
        (format!("saving {currency}"), money(before.saving_pv), money(after.saving_pv)),
    ];
    for (y, (name, before, after)) in (1..).zip(rows) {
        let style = if before == after { theme.plain() } else { theme.changed() };
        let mark = if before == after { "" } else { " *" };
        put(buffer, area, y, &format!("{}{mark}", row(&name, &before, &after)), style);
    }
}

/// The head of the ranking, with the place that each unit had under the stored basis.
fn ranks(app: &App, stored: &Ranked, now: &Ranked, area: Rect, buffer: &mut Buffer) {
    let theme = app.theme;
    let row = |place: &str, was: &str, unit: &str, saving: &str| {
        format!(
            " {} {}  {} {}",
            text::right(place, 4),
            text::right(was, 5),
            text::left(unit, 10),
            text::right(saving, 9)
        )
    };
    put(buffer, area, 0, &row("#", "was", "unit", "saving"), theme.heading());
    for (y, i) in (1..area.height).zip(&now.ranking.order) {
        let place = usize::from(y - 1);
        let Some(unit) = now.ranking.row(&now.desk, place) else { continue };
        let was = match stored.place.get(*i as usize) {
            Some(&was) if was != u32::MAX => text::count(was as usize + 1),
            _ => "out".to_owned(),
        };
        let here = text::count(place + 1);
        let style = if was == here { theme.plain() } else { theme.changed() };
        put(buffer, area, y, &row(&here, &was, unit.unit, &text::number(unit.saving_pv, 0)), style);
    }
}

/// What is asked for while the assumption under the cursor is typed, and what it may be.
pub(in crate::tui) fn asks(app: &App) -> (String, String) {
    let at = app.basis.list.cursor;
    let (Some(column), Some(value)) = (Basis::COLUMNS.get(at), app.basis.draft.get(at)) else {
        return Default::default();
    };
    let now =
        if *value == Value::Blank { super::typed::BLANK.to_owned() } else { shown(column, value) };
    let unit = currency_in(unit_of(column), &currency(app));
    let range = match column.kind {
        Kind::Choice(_) => String::new(),
        _ => format!("{} {unit}", column.range()),
    };
    let asks = format!("{}, now {}", column.name, text::cut(&now, 20));
    (app.theme.spell(&asks).into_owned(), app.theme.spell(range.trim()).into_owned())
}

/// Where the basis came from, in the status line.
pub(in crate::tui) fn status(app: &App) -> Line<'static> {
    let Some(opened) = &app.opened else { return Line::default() };
    let source = text::cut(&opened.basis_source, 40);
    let said = if app.basis.is_refused() {
        " The figures are of the last basis that could be computed with."
    } else if app.basis.is_changed() && opened.writes.basis {
        " Changed for all screens, not stored; w stores it."
    } else if app.basis.is_changed() {
        " Changed for all screens, not stored."
    } else {
        " As stored."
    };
    Line::from(vec![
        Span::raw(said.to_owned()),
        Span::styled(format!("  Basis from: {source}."), app.theme.muted()),
    ])
}
