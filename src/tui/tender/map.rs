//! The winner map: which bid is the cheapest to own at each pair of factors, drawn cell by cell.

use std::collections::BTreeSet;

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::{Modifier, Style};
use ratatui::text::{Line, Span};

use super::regions::Regions;
use super::sign;
use crate::study::tender::LotResult;
use crate::study::tender::risk::RiskResult;
use crate::tui::frame::{put, put_line, put_right};
use crate::tui::text;
use crate::tui::theme::Theme;

/// Cells between two signs of a region, across and down.
pub(super) const LATTICE: [u16; 2] = [8, 3];

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
    let won = |n: &usize| !map.bids[*n].polygon.is_empty();
    let winners: Vec<usize> = (0..map.bids.len()).filter(won).collect();
    put(buffer, area, 0, " Which bid is the cheapest to own at other factors", theme.heading());
    if winners.is_empty() {
        put(buffer, area, 2, " No bid is admitted.", theme.muted());
        return;
    }
    let (top, zero) = (text::number(map.b_max, 0), "0");
    let margin = u16::try_from(text::width(&top) + 2).unwrap_or(u16::MAX);
    let Some(width) = area.width.checked_sub(margin + 1).filter(|w| *w >= 12) else { return };
    // Title and the name of B above, the axis, its labels and the legend below. The legend says which regions have
    // a cell, and the cells are as many as the legend leaves; it is longest where every region is named in it.
    let most = area.height.saturating_sub(7);
    let room = [usize::from(area.width), usize::from(most)];
    let legend_of = |regions: &Regions| legend(theme, lot, &winners, regions, room);
    let below = u16::try_from(legend_of(&Regions::all(&winners)).len()).unwrap_or(most);
    let Some(height) = area.height.checked_sub(4 + below).filter(|h| *h >= 3) else { return };
    let plot = Rect { x: area.x + margin, y: area.y + 2, width, height };

    let today = [
        at(lot.factor_a_per_kw, map.a_max, width),
        height - 1 - at(lot.factor_b_per_kw, map.b_max, height),
    ];
    let mut regions = Regions::new(lot, &winners, [width, height]);
    regions.take(today);
    let cloud = risk.map_or(&[][..], |risk| &risk.cloud);
    let cloud = drawn(cloud, [map.a_max, map.b_max], [width, height]);

    // A cell is wide: the sign may stand in that of another region, so the winner is named.
    let least = lot.least_owning_cost.as_deref().unwrap_or_default();
    let today_said = format!(
        "◆ today {} / {}: {}",
        text::number(lot.factor_a_per_kw, 0),
        text::number(lot.factor_b_per_kw, 0),
        text::cut(least, 12)
    );
    let mut said = vec![format!("B, {currency}/kW"), today_said];
    if let Some(risk) = risk {
        said.push(format!(
            "{} {} draws, seed {}",
            theme.cloud(),
            text::count(risk.draws),
            risk.seed
        ));
    }
    put(buffer, area, 1, &format!(" {}", said.join("   ")), theme.muted());
    for (y, label) in [(0, top.as_str()), (height - 1, zero)] {
        let line = format!("{} ", text::right(label, usize::from(margin) - 1));
        put(buffer, Rect { width: margin, ..plot_left(plot, margin) }, y, &line, theme.muted());
    }
    let mut set = |[x, y]: [u16; 2], shown: char, style: Style| {
        if let Some(cell) = buffer.cell_mut((plot.x + x, plot.y + y)) {
            cell.set_char(shown);
            cell.set_style(style);
        }
    };
    for (at, n) in regions.cells() {
        let look = regions.looks[n];
        set(at, theme.region_fill(look), theme.region(look));
    }
    for (x, up) in cloud {
        set([x, height - 1 - up], theme.cloud(), theme.heading());
    }
    for (at, n) in regions.signs() {
        set(at, sign(n + 1), theme.region(regions.looks[n]).add_modifier(Modifier::BOLD));
    }
    set(today, '◆', theme.selected());
    let axis = Rect { y: plot.bottom(), height: 2, ..plot };
    put(buffer, axis, 0, &"─".repeat(usize::from(width)), theme.plain());
    put(buffer, axis, 1, "0", theme.muted());
    let most =
        Line::styled(format!("A, {currency}/kW   {}", text::number(map.a_max, 0)), theme.muted());
    put_right(buffer, axis, 1, &most);
    let under = Rect { y: axis.bottom(), height: below, ..area };
    for (y, line) in (0..below).zip(&legend_of(&regions)) {
        put_line(buffer, under, y, line);
    }
}

/// The cell of a value on an axis.
fn at(value: f64, most: f64, cells: u16) -> u16 {
    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "inside the plot")]
    let cell = (value / most * f64::from(cells)).max(0.0) as u16;
    cell.min(cells - 1)
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

/// The regions with their signs and their shares of the map, then those too small for a cell, in at most so many
/// lines; what finds no room is counted.
fn legend(
    theme: Theme,
    lot: &LotResult,
    winners: &[usize],
    regions: &Regions,
    [cells, most]: [usize; 2],
) -> Vec<Line<'static>> {
    let said = |n: usize| {
        let cell = &lot.map.bids[n];
        format!("{} {}  ", text::cut(&cell.bid, 14), share(cell.share))
    };
    let (drawn, small): (Vec<usize>, Vec<usize>) =
        winners.iter().partition(|n| regions.has_cell(**n));
    let mut entries: Vec<Vec<Span>> = Vec::new();
    for n in drawn {
        let look = regions.looks[n];
        let style = theme.region(look);
        entries.push(vec![
            Span::styled(sign(n + 1).to_string(), style.add_modifier(Modifier::BOLD)),
            Span::styled(theme.region_fill(look).to_string(), style),
            Span::raw(format!(" {}", said(n))),
        ]);
    }
    for (at, n) in small.into_iter().enumerate() {
        let before = if at == 0 { "too small to draw: " } else { "" };
        entries.push(vec![Span::raw(format!("{before}{}", said(n)))]);
    }
    let all = entries.len();
    let kept = (0..=all).rev().map(|kept| {
        let mut shown = entries[..kept].to_vec();
        if kept < all {
            shown.push(vec![Span::raw(format!("and {} more, on a larger screen", all - kept))]);
        }
        in_lines(&shown, cells)
    });
    kept.into_iter().find(|lines: &Vec<Line>| lines.len() <= most).unwrap_or_default()
}

/// Entries one after the other, in lines of at most so many cells.
fn in_lines(entries: &[Vec<Span<'static>>], cells: usize) -> Vec<Line<'static>> {
    let mut lines: Vec<Line> = Vec::new();
    for entry in entries {
        let wide: usize = entry.iter().map(Span::width).sum();
        match lines.last_mut() {
            Some(line) if line.width() + wide <= cells => line.spans.extend(entry.iter().cloned()),
            _ => {
                let lead = std::iter::once(Span::raw(" "));
                lines.push(lead.chain(entry.iter().cloned()).collect());
            }
        }
    }
    lines
}

fn share(share: f64) -> String {
    let percent = text::number(share * 100.0, 0);
    if percent == "0" { "<1 %".to_owned() } else { format!("{percent} %") }
}
