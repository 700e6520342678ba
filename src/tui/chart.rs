//! A line chart over years with the best marked and a line to compare with.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::symbols::Marker;
use ratatui::text::Line;
use ratatui::widgets::Widget as _;
use ratatui::widgets::canvas::{Canvas, Line as Stroke, Points};

use super::caps::Marks;
use super::frame::{put, put_line, put_over};
use super::text;
use super::theme::{Part, Theme};

/// A value to compare with.
#[derive(Clone, Copy, Debug)]
pub(super) struct Reference {
    pub(super) word: &'static str,
    pub(super) value: f64,
}

/// The smallest of 1, 2, 5, 10, 20 … that is not below `value`: steps that are easy to read off.
fn round_step(value: f64) -> f64 {
    let decade = 10f64.powf(value.log10().floor());
    let steps = [1.0, 2.0, 5.0, 10.0].map(|step| step * decade);
    steps.into_iter().find(|step| *step >= value).unwrap_or(value)
}

fn best_words(best: Option<(i64, f64)>, mark: &str) -> String {
    best.map_or("best never: keep".to_owned(), |(year, value)| {
        format!("{mark}best in {year}: {}", text::number(value, 0))
    })
}

/// Draws points over years, the best of them marked. The reference is drawn where it does not crush the line.
#[expect(clippy::cast_precision_loss, reason = "calendar years")]
pub(super) fn draw(
    theme: Theme,
    points: &[(i64, f64)],
    best: Option<(i64, f64)>,
    reference: &Reference,
    area: Rect,
    buffer: &mut Buffer,
) {
    let (Some(first), Some(last)) = (points.first(), points.last()) else { return };
    let least = points.iter().map(|p| p.1).fold(f64::INFINITY, f64::min);
    let most = points.iter().map(|p| p.1).fold(f64::NEG_INFINITY, f64::max);
    let spread = (most - least).max(1e-9 * most.abs()).max(1e-9);
    let near = reference.value < most + 2.0 * spread && reference.value > least - 2.0 * spread;
    let (mut low, mut high) = (least, most);
    if near {
        (low, high) = (low.min(reference.value), high.max(reference.value));
    }
    // Whole steps of a round size, at least one and at most four of them.
    let step = round_step((high - low).max(spread) / 4.0);
    (low, high) = ((low / step).floor() * step, (high / step).ceil() * step);
    if high <= low {
        high = low + step;
    }
    let labels = [low, high].map(|y| text::width(&text::number(y, 0)));
    let margin = u16::try_from(labels[0].max(labels[1]) + 2).unwrap_or(u16::MAX);
    if area.height < 4 || area.width < margin + 12 {
        let line = best_words(best, " ");
        put(buffer, area, 0, &line, theme.plain());
        return;
    }
    let plot = Rect {
        x: area.x + margin + 1,
        width: area.width - margin - 2,
        height: area.height - 2,
        ..area
    };
    let marker = match (theme.caps().ascii, theme.caps().marks) {
        (false, Marks::Braille) => Marker::Braille,
        _ => Marker::Dot,
    };
    // The line of cells in which the canvas sets a dot of this height.
    let dots = if marker == Marker::Braille { 4 } else { 1 };
    let row = |y: f64| {
        let share = (high - y) / (high - low);
        #[expect(
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "inside the plot"
        )]
        let dot = (share * f64::from(plot.height * dots - 1)).round().max(0.0) as u16;
        (dot / dots).min(plot.height - 1)
    };
    let mut tick = low;
    while tick <= high + step / 2.0 {
        let label = text::right(&text::number(tick, 0), usize::from(margin) - 1);
        put(buffer, area, row(tick), &format!("{label} ┤"), theme.muted());
        tick += step;
    }
    for y in 0..plot.height {
        if let Some(cell) = buffer.cell_mut((plot.x - 1, plot.y + y))
            && cell.symbol() == " "
        {
            cell.set_char('│');
        }
    }
    let (x0, x1) =
        (first.0 as f64, if last.0 > first.0 { last.0 as f64 } else { first.0 as f64 + 1.0 });
    let style = theme.part(Part::Iron);
    let colour = style.fg.unwrap_or_default();
    let dotted: Vec<(f64, f64)> = (0..plot.width)
        .filter(|x| x % 3 != 2)
        .map(|x| {
            (x0 + (x1 - x0) * f64::from(x) / f64::from(plot.width.max(2) - 1), reference.value)
        })
        .collect();
    Canvas::default()
        .marker(marker)
        .x_bounds([x0, x1])
        .y_bounds([low, high])
        .paint(|ctx| {
            if near {
                ctx.draw(&Points::new(&dotted, theme.part(Part::Price).fg.unwrap_or_default()));
                ctx.layer();
            }
            for pair in points.windows(2) {
                ctx.draw(&Stroke::new(
                    pair[0].0 as f64,
                    pair[0].1,
                    pair[1].0 as f64,
                    pair[1].1,
                    colour,
                ));
            }
        })
        .render(plot, buffer);
    if let Some((year, value)) = best {
        let (dots, share) = (if dots == 4 { 2 } else { 1 }, (year as f64 - x0) / (x1 - x0));
        #[expect(
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "inside the plot"
        )]
        let dot = (share * f64::from(plot.width * dots - 1)).round().max(0.0) as u16;
        let column = (dot / dots).min(plot.width - 1);
        let at = Rect { x: plot.x + column, width: 1, ..plot };
        put_over(buffer, at, row(value), "◆", theme.heading());
    }
    let word = if near {
        let above = row(reference.value);
        let word = format!(" {} {} ", reference.word, text::number(reference.value, 0));
        let wide = u16::try_from(text::width(&word)).unwrap_or(0);
        if plot.width > wide {
            let at = Rect { x: plot.right() - wide, width: wide, ..plot };
            put_over(buffer, at, above, &word, theme.muted());
        }
        String::new()
    } else {
        let side = if reference.value > high { "above" } else { "below" };
        format!("{} {} is {side} the chart", reference.word, text::number(reference.value, 0))
    };
    let axis = format!("└{}", "─".repeat(usize::from(plot.width)));
    put(
        buffer,
        Rect { x: plot.x - 1, width: plot.width + 1, ..area },
        plot.height,
        &axis,
        theme.plain(),
    );
    let ends = format!("{}", first.0);
    put(
        buffer,
        Rect { x: plot.x, width: plot.width, ..area },
        plot.height + 1,
        &ends,
        theme.muted(),
    );
    let ends = format!("{}", last.0);
    let end = Rect { x: plot.right().saturating_sub(4), width: plot.width.min(4), ..area };
    put(buffer, end, plot.height + 1, &ends, theme.muted());
    let said = format!("{}   {word}", best_words(best, "◆ "));
    let said = said.trim_end().to_owned();
    let wide = u16::try_from(text::width(&said)).unwrap_or(0);
    if plot.width >= wide + 10 {
        let at = Rect { x: plot.x + (plot.width - wide) / 2, width: wide, ..area };
        put_line(buffer, at, plot.height + 1, &Line::styled(said, theme.heading()));
    }
}
