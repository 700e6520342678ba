//! The winner map: which bid is the cheapest to own at each pair of factors, drawn cell by cell.

use std::collections::BTreeSet;

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::text::{Line, Span};

use super::sign;
use crate::study::tender::LotResult;
use crate::study::tender::risk::RiskResult;
use crate::tui::frame::{put, put_line, put_over, put_right};
use crate::tui::text;
use crate::tui::theme::Theme;

/// Draws the map of a lot with its legend,
/// with the factors that were drawn.
pub(super) fn draw(
    theme: Theme,
    lot: &LotResult,
    risk: Option<&RiskResult>,
    currency: &str,
    area: Rect,
    buffer: &mut Buffer,
) {
    let map = &lot.map;
    let winners: Vec<usize> =
        (0..map.bids.len()).filter(|n| !map.bids[*n].polygon.is_empty()).collect();
    put(buffer, area, 0, " Which bid is the cheapest to own at other factors", theme.heading());
    if winners.is_empty() {
        put(buffer, area, 2, " No bid is admitted.", theme.muted());
        return;
    }
    let (top, zero) = (text::number(map.b_max, 0), "0");
    let margin = u16::try_from(text::width(&top) + 2).unwrap_or(u16::MAX);
    let legend = legend(theme, lot, &winners, usize::from(area.width));
    let below = u16::try_from(legend.len()).unwrap_or(0).min(6);
    // Title and the name of B above, the axis, its labels and the legend below.
    let Some(height) = area.height.checked_sub(4 + below).filter(|h| *h >= 3) else { return };
    let Some(width) = area.width.checked_sub(margin + 1).filter(|w| *w >= 12) else { return };
    put(buffer, area, 1, &format!(" B, {currency}/kW"), theme.muted());
    if let Some(risk) = risk {
        let said =
            format!("{} {} draws, seed {} ", theme.cloud(), text::count(risk.draws), risk.seed);
        put_right(buffer, area, 1, &Line::styled(said, theme.muted()));
    }
    let plot = Rect { x: area.x + margin, y: area.y + 2, width, height };
    for (y, label) in [(0, top.as_str()), (height - 1, zero)] {
        let line = format!("{} ", text::right(label, usize::from(margin) - 1));
        put(buffer, Rect { width: margin, ..plot_left(plot, margin) }, y, &line, theme.muted());
    }
    for y in 0..height {
        for x in 0..width {
            let a = map.a_max * (f64::from(x) + 0.5) / f64::from(width);
            let b = map.b_max * (f64::from(height - 1 - y) + 0.5) / f64::from(height);
            let winner = winners.iter().copied().find(|n| holds(&map.bids[*n].polygon, [a, b]));
            let Some(n) = winner else { continue };
            let Some(cell) = buffer.cell_mut((plot.x + x, plot.y + y)) else { continue };
            // A sign on a lattice, the fill of the region between.
            let on_lattice = x % 8 == 4 && y % 3 == 1;
            cell.set_char(if on_lattice { sign(n + 1) } else { theme.region_fill(n) });
            cell.set_style(if on_lattice { theme.heading() } else { theme.region(n) });
        }
    }
    let cloud = risk.map_or(&[][..], |risk| &risk.cloud);
    for (x, y) in drawn(cloud, [map.a_max, map.b_max], [width, height]) {
        if let Some(cell) = buffer.cell_mut((plot.x + x, plot.y + height - 1 - y)) {
            cell.set_char(theme.cloud());
            cell.set_style(theme.heading());
        }
    }
    let today = format!(
        "◆ today {} / {}",
        text::number(lot.factor_a_per_kw, 0),
        text::number(lot.factor_b_per_kw, 0)
    );
    let at = |value: f64, most: f64, cells: u16| {
        #[expect(
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "inside the plot"
        )]
        let cell = (value / most * f64::from(cells)).max(0.0) as u16;
        cell.min(cells - 1)
    };
    let x = at(lot.factor_a_per_kw, map.a_max, width);
    let y = height - 1 - at(lot.factor_b_per_kw, map.b_max, height);
    let wide = u16::try_from(text::width(&today)).unwrap_or(u16::MAX);
    let from = x.min(width.saturating_sub(wide));
    let mark = if from == x { today } else { "◆".to_owned() };
    put_over(
        buffer,
        Rect {
            x: plot.x + from.max(if from == x { 0 } else { x }),
            width: u16::try_from(text::width(&mark)).unwrap_or(1).min(width),
            ..plot
        },
        y,
        &mark,
        theme.heading(),
    );
    let axis = Rect { y: plot.bottom(), height: 2, ..plot };
    put(buffer, axis, 0, &"─".repeat(usize::from(width)), theme.plain());
    put(buffer, axis, 1, "0", theme.muted());
    let most =
        Line::styled(format!("A, {currency}/kW   {}", text::number(map.a_max, 0)), theme.muted());
    put_right(buffer, axis, 1, &most);
    let under = Rect { y: axis.bottom(), height: below, ..area };
    for (y, line) in (0..below).zip(&legend) {
        put_line(buffer, under, y, line);
    }
}

/// The cells of a plot in which points lie, from its lower left.
fn drawn(cloud: &[[f64; 2]], most: [f64; 2], cells: [u16; 2]) -> BTreeSet<(u16, u16)> {
    let cell = |value: f64, most: f64, cells: u16| {
        #[expect(
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "inside the plot"
        )]
        let at = (value / most * f64::from(cells)) as u16;
        (value >= 0.0 && at < cells).then_some(at)
    };
    cloud
        .iter()
        .filter_map(|[a, b]| Some((cell(*a, most[0], cells[0])?, cell(*b, most[1], cells[1])?)))
        .collect()
}

fn plot_left(plot: Rect, margin: u16) -> Rect {
    Rect { x: plot.x - margin, ..plot }
}

/// Whether a convex polygon with its corners counter-clockwise holds a point.
fn holds(polygon: &[[f64; 2]], [a, b]: [f64; 2]) -> bool {
    polygon.iter().zip(polygon.iter().cycle().skip(1)).all(|(from, to)| {
        (to[0] - from[0]) * (b - from[1]) - (to[1] - from[1]) * (a - from[0]) >= 0.0
    })
}

/// The regions with their signs and their shares of the map, in as many lines as are needed.
fn legend(theme: Theme, lot: &LotResult, winners: &[usize], cells: usize) -> Vec<Line<'static>> {
    let mut lines = vec![Vec::new()];
    let mut used = 1;
    for n in winners {
        let cell = &lot.map.bids[*n];
        let said = format!(" {} {}  ", text::cut(&cell.bid, 14), share(cell.share));
        let wide = text::width(&said) + 2;
        if used + wide > cells && used > 1 {
            lines.push(Vec::new());
            used = 1;
        }
        used += wide;
        if let Some(line) = lines.last_mut() {
            line.push(Span::styled(format!("{}", sign(n + 1)), theme.heading()));
            line.push(Span::styled(theme.region_fill(*n).to_string(), theme.region(*n)));
            line.push(Span::raw(said));
        }
    }
    let lead = |line: Vec<Span<'static>>| {
        Line::from(std::iter::once(Span::raw(" ")).chain(line).collect::<Vec<_>>())
    };
    lines.into_iter().map(lead).collect()
}

fn share(share: f64) -> String {
    let percent = text::number(share * 100.0, 0);
    if percent == "0" { "<1 %".to_owned() } else { format!("{percent} %") }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn polygon_holds_what_lies_in_it() {
        let triangle = [[0.0, 0.0], [2.0, 0.0], [0.0, 2.0]];
        assert!(holds(&triangle, [0.5, 0.5]));
        assert!(holds(&triangle, [1.0, 1.0]), "its edge belongs to it");
        assert!(!holds(&triangle, [1.5, 1.0]));
    }
}
