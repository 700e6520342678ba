//! Drawing of the unit screen.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::text::{Line, Span};

use super::{Dossier, Known};
use crate::engine::decision::keep_or_replace::YearChoice;
use crate::engine::decision::parts::PolicyCost;
use crate::tui::app::App;
use crate::tui::bar::{self, Parts};
use crate::tui::chart::{self, Reference};
use crate::tui::frame::{put, put_line};
use crate::tui::text;
use crate::tui::theme::{Part, Theme};

/// Where the parts of the screen stand.
pub(in crate::tui) struct Areas {
    pub(in crate::tui) head: Rect,
    pub(in crate::tui) choices: Rect,
    pub(in crate::tui) facts: Rect,
    pub(in crate::tui) years: Rect,
}

/// Lines of the choices.
const CHOICES: u16 = 9;

/// Lays the screen out.
pub(in crate::tui) fn areas(body: Rect) -> Areas {
    let head = Rect { height: body.height.min(1), ..body };
    let rest = Rect { y: body.y + head.height, height: body.height - head.height, ..body };
    let beside = (rest.width / 2).clamp(0, 44);
    let left = rest.width - beside;
    let top = CHOICES.min(rest.height);
    // A tall or wide screen gives the facts a column of their own.
    let tall = rest.width >= 110 || rest.height >= 30;
    let facts = Rect {
        x: rest.x + left,
        width: beside,
        height: if tall { rest.height } else { top },
        ..rest
    };
    let years = Rect {
        y: rest.y + top,
        height: rest.height - top,
        width: if tall { left.saturating_sub(2) } else { rest.width },
        ..rest
    };
    Areas {
        head,
        choices: Rect { width: left.saturating_sub(2), height: top, ..rest },
        facts,
        years,
    }
}

/// Draws the screen.
pub(in crate::tui) fn draw(app: &App, area: Rect, buffer: &mut Buffer) {
    let theme = &app.theme;
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
    let areas = areas(area);
    let fleet = &dossier.ranked.desk.fleet;
    let place = dossier.ranked.place[i];
    let ranked = text::count(dossier.ranked.ranking.order.len());
    let place = match place {
        u32::MAX => "not ranked".to_owned(),
        place => format!("place {} of {ranked} by saving", text::count(place as usize + 1)),
    };
    let line = Line::from(vec![
        Span::styled(format!(" {}", text::cut(fleet.unit.get(i), 30)), theme.heading()),
        Span::raw(format!("   {}", text::cut(fleet.site(i).unwrap_or(""), 30))),
    ]);
    put_line(buffer, areas.head, 0, &line);
    let right = text::right(&place, usize::from(areas.head.width).saturating_sub(line.width() + 3));
    let at = Rect {
        x: areas.head.right().saturating_sub(u16::try_from(text::width(&right)).unwrap_or(0) + 1),
        ..areas.head
    };
    put_line(buffer, at.intersection(areas.head), 0, &Line::raw(right));

    let lines = super::facts::lines(app, usize::from(areas.facts.width));
    for (y, line) in (0..areas.facts.height).zip(lines.iter().skip(app.unit.facts.cursor)) {
        put_line(buffer, areas.facts, y, line);
    }
    if let Ok(known) = &dossier.known {
        choices(theme, dossier, known, areas.choices, buffer);
        if app.unit.table {
            table(theme, dossier, known, areas.years, buffer);
        } else {
            years(theme, dossier, known, areas.years, buffer);
        }
    }
}

fn split(cost: &PolicyCost) -> Parts {
    bar::parts(cost.capital, cost.no_load, cost.load, cost.auxiliary + cost.upkeep + cost.failures)
}

fn choices(theme: &Theme, dossier: &Dossier, known: &Known, area: Rect, buffer: &mut Buffer) {
    let (desk, decision) = (&dossier.ranked.desk, &known.decision);
    let a = &dossier.ranked.ranking.context.assumptions;
    let title = format!(" Present value over {} years, {}", a.years, text::cut(&a.currency, 8));
    put(buffer, area, 0, &title, theme.heading());
    let year = |choice: &YearChoice| a.first_year + i64::try_from(choice.offset).unwrap_or(0);
    let offer = |choice: Option<YearChoice>| {
        choice.map_or("", |choice| desk.offer_name(choice.offer)).to_owned()
    };
    let best = match decision.best {
        Some(choice) => (format!("in {}", year(&choice)), offer(decision.best)),
        None => ("never".to_owned(), String::new()),
    };
    let costs = &known.costs;
    let rows = [
        ("keep".to_owned(), String::new(), Some(decision.keep_pv), Some(costs.keep)),
        ("now".to_owned(), offer(decision.now), decision.now.map(|c| c.pv), costs.now),
        (
            format!("best {}", best.0),
            best.1,
            Some(decision.best_pv),
            costs.best.or(Some(costs.keep)),
        ),
    ];
    let scale =
        rows.iter().flat_map(|row| row.3).map(|cost| bar::whole(&split(&cost))).fold(0.0, f64::max);
    let pv = |value: Option<f64>| value.map_or("none open".to_owned(), |v| text::number(v, 0));
    let wide = rows.iter().map(|row| pv(row.2).len()).max().unwrap_or(0);
    let offers = rows.iter().map(|row| text::width(&row.1)).max().unwrap_or(0).min(14);
    for (y, (word, offer, value, cost)) in (1..).zip(rows) {
        let mut spans = vec![Span::raw(format!(
            " {} {} {}  ",
            text::left(&word, 12),
            text::left(&offer, offers),
            text::right(&pv(value), wide)
        ))];
        let used = spans[0].width();
        if let Some(cost) = cost {
            let cells = usize::from(area.width).saturating_sub(used);
            spans.extend(bar::bar(theme, &split(&cost), scale, u16::try_from(cells).unwrap_or(0)));
        }
        put_line(buffer, area, y, &Line::from(spans));
    }
    let mut legend = vec![Span::raw(" ")];
    legend.extend(bar::legend(
        theme,
        &[
            (Part::Price, "price"),
            (Part::Iron, "iron"),
            (Part::Copper, "copper"),
            (Part::Other, "failures, upkeep, fans"),
        ],
    ));
    put_line(buffer, area, 4, &Line::from(legend));
    let row = dossier.ranked.ranking.row(desk, dossier.ranked.place[dossier.index] as usize);
    let Some(row) = row else { return };
    let money = |value: f64| format!("{} {}", text::number(value, 0), a.currency);
    let mut first = format!(" saving {}", money(row.saving_pv));
    if row.best_year_offset == Some(0) {
        first.push_str(&format!("   a year's delay costs {}", money(row.waiting_pv)));
    }
    put(buffer, area, 6, &first, theme.heading());
    if let Some(capital) = row.capital {
        let payback = row
            .payback_years
            .map_or("none".to_owned(), |y| format!("{} years", text::number(y, 1)));
        put(
            buffer,
            area,
            7,
            &format!(" capital {}   payback {payback}", money(capital)),
            theme.plain(),
        );
    }
    if let (Some(energy), Some(co2)) = (row.energy_saved_kwh, row.co2_saved_kg) {
        let line = format!(
            " saves {} kWh and {} kg CO2 in its first year",
            text::number(energy, 0),
            text::number(co2, 0)
        );
        put(buffer, area, 8, &line, theme.plain());
    }
}

fn years(theme: &Theme, dossier: &Dossier, known: &Known, area: Rect, buffer: &mut Buffer) {
    let a = &dossier.ranked.ranking.context.assumptions;
    let title =
        format!(" Cost of replacing in each year, present value in {}", text::cut(&a.currency, 8));
    put(buffer, area, 0, &title, theme.heading());
    let points: Vec<(i64, f64)> = known
        .decision
        .years
        .iter()
        .map(|choice| (a.first_year + i64::try_from(choice.offset).unwrap_or(0), choice.pv))
        .collect();
    let below =
        Rect { y: area.y + area.height.min(1), height: area.height.saturating_sub(1), ..area };
    let keep = Reference { word: "keep", value: known.decision.keep_pv };
    chart::draw(theme, &points, &keep, below, buffer);
}

fn table(theme: &Theme, dossier: &Dossier, known: &Known, area: Rect, buffer: &mut Buffer) {
    let (desk, a) = (&dossier.ranked.desk, &dossier.ranked.ranking.context.assumptions);
    let title =
        format!(" Cost of replacing in each year, present value in {}", text::cut(&a.currency, 8));
    put(buffer, area, 0, &title, theme.heading());
    let years = &known.decision.years;
    let least = years.iter().map(|c| c.pv).fold(f64::INFINITY, f64::min);
    let value = |pv: f64| text::number(pv, 0);
    let wide = years.iter().map(|c| value(c.pv).len()).max().unwrap_or(0).max(8);
    let rows = usize::from(area.height.saturating_sub(1)).max(1);
    // As many columns of years as are needed and fit.
    let column = 5 + 2 + wide + 2 + 12 + 4;
    for (n, choice) in years.iter().enumerate() {
        let (x, y) = (n / rows * column, n % rows + 1);
        let year = a.first_year + i64::try_from(choice.offset).unwrap_or(0);
        let mark = if choice.pv == least { "least" } else { "" };
        let line = format!(
            " {year}  {}  {} {mark}",
            text::right(&value(choice.pv), wide),
            text::left(desk.offer_name(choice.offer), 12),
        );
        let x = u16::try_from(x).unwrap_or(u16::MAX);
        if x < area.width {
            let at = Rect { x: area.x + x, width: area.width - x, ..area };
            let style = if choice.pv == least { theme.heading() } else { theme.plain() };
            put(buffer, at, u16::try_from(y).unwrap_or(u16::MAX), &line, style);
        }
    }
}
