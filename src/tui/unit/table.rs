//! The years of a unit as a table, in as many columns as fit. The money is never cut: the offers give way.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use super::{Dossier, Known, year};
use crate::tui::app::App;
use crate::tui::frame::put;
use crate::tui::text;

/// Widest name of an offer that is not cut.
const OFFER: usize = 14;

/// How the years stand in an area.
struct Layout {
    /// Cells of the money, and of the offer (0 = not shown).
    money: usize,
    offer: usize,
    /// Years in a row of the table.
    columns: usize,
    /// Lines that are seen.
    seen: usize,
}

impl Layout {
    /// Cells of a year: mark, year, money, offer.
    fn cells(money: usize, offer: usize) -> usize {
        let offer = if offer > 0 { offer + 2 } else { 0 };
        2 + 4 + 2 + money + offer + 2
    }

    fn new(app: &App, known: &Known, area: Rect) -> Self {
        let Some(dossier) = &app.unit.dossier else {
            return Self { money: 0, offer: 0, columns: 1, seen: 0 };
        };
        let (desk, years) = (&dossier.ranked.desk, &known.decision.years);
        let widest = |cells: &mut dyn Iterator<Item = usize>| cells.max().unwrap_or(0);
        let money = widest(&mut years.iter().map(|c| text::width(&text::number(c.pv, 0))));
        let offer =
            widest(&mut years.iter().map(|c| text::width(desk.offer_name(c.offer)))).min(OFFER);
        let seen = usize::from(area.height.saturating_sub(1));
        let fit = |offer| (usize::from(area.width) / Self::cells(money, offer)).max(1);
        let (with, without) = (fit(offer), fit(0));
        let all = |columns: usize| years.len() <= columns * seen;
        let room = usize::from(area.width) >= Self::cells(money, offer);
        let offer = if room && (all(with) || !all(without)) { offer } else { 0 };
        let most = fit(offer);
        // No more columns than are needed.
        let columns = years.len().div_ceil(seen.max(1)).clamp(1, most);
        Self { money, offer, columns, seen }
    }
}

/// Lines of the table, and how many of them are seen.
pub(super) fn lines(app: &App, known: &Known, area: Rect) -> (usize, usize) {
    let layout = Layout::new(app, known, area);
    (known.decision.years.len().div_ceil(layout.columns), layout.seen)
}

/// Draws the table.
pub(super) fn draw(app: &App, dossier: &Dossier, known: &Known, area: Rect, buffer: &mut Buffer) {
    let theme = app.theme;
    let (desk, a) = (&dossier.ranked.desk, &dossier.ranked.ranking.context.assumptions);
    let best = match known.decision.best {
        Some(_) => "◆ best",
        None => "best never: keep",
    };
    let title =
        format!(" Replacing in each year, {} present value   {best}", text::cut(&a.currency, 8));
    put(buffer, area, 0, &title, theme.heading());
    let layout = Layout::new(app, known, area);
    let years = &known.decision.years;
    let lines = years.len().div_ceil(layout.columns);
    let from = app.unit.years.cursor.min(lines.saturating_sub(layout.seen));
    for (n, choice) in years.iter().enumerate() {
        let (column, line) = (n / lines.max(1), n % lines.max(1));
        let Some(y) = line.checked_sub(from).filter(|y| *y < layout.seen) else { continue };
        let is_best = known.decision.best.is_some_and(|best| best.offset == choice.offset);
        let mark = if is_best { '◆' } else { ' ' };
        let said = format!(
            "{mark} {}  {}  {}",
            year(a.first_year, choice),
            text::right(&text::number(choice.pv, 0), layout.money),
            text::left(desk.offer_name(choice.offer), layout.offer),
        );
        let x =
            u16::try_from(column * Layout::cells(layout.money, layout.offer)).unwrap_or(u16::MAX);
        if x < area.width {
            let at = Rect { x: area.x + x, width: area.width - x, ..area };
            let style = if is_best { theme.heading() } else { theme.plain() };
            put(buffer, at, u16::try_from(y + 1).unwrap_or(u16::MAX), &said, style);
        }
    }
}
