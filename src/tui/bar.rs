//! The cost bar: one cost split into price, iron and copper, drawn to a scale that a whole list shares.
//!
//! Owns the arithmetic of cells only; what a cost is made of comes from a study.

use ratatui::style::{Color, Style};
use ratatui::text::Span;

use super::theme::{Part, Theme};
use crate::engine::economics::running_cost::YearCost;

/// A cost in its parts, in drawing order.
pub type Parts = [(Part, f64); 4];

/// The parts of a cost.
pub fn parts(price: f64, iron: f64, copper: f64, other: f64) -> Parts {
    [(Part::Price, price), (Part::Iron, iron), (Part::Copper, copper), (Part::Other, other)]
}

/// Running cost of the losses of a year.
pub fn of_year(cost: &YearCost) -> Parts {
    parts(0.0, cost.no_load, cost.load, cost.auxiliary)
}

/// The whole of a cost, as it is drawn.
pub fn whole(parts: &Parts) -> f64 {
    parts.iter().map(|(_, value)| value.max(0.0)).sum()
}

/// The smallest round number that is not below `value`: a scale that stays put while figures move.
pub fn round_scale(value: f64) -> f64 {
    if !value.is_finite() || value <= 0.0 {
        return 1.0;
    }
    let decade = 10f64.powf(value.log10().floor());
    [1.0, 1.2, 1.5, 2.0, 2.5, 3.0, 4.0, 5.0, 6.0, 8.0, 10.0]
        .into_iter()
        .map(|step| step * decade)
        .find(|scale| *scale >= value * (1.0 - 1e-12))
        .unwrap_or(value)
}

const EIGHTHS: [char; 8] = ['█', '▏', '▎', '▍', '▌', '▋', '▊', '▉'];

/// The bar in `cells` cells, `scale` filling all of them; a longer one ends in a mark. Exactly `cells` wide.
pub fn bar(theme: Theme, parts: &Parts, scale: f64, cells: u16) -> Vec<Span<'static>> {
    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "clamped to the cells"
    )]
    let eighth = |value: f64| {
        (value / scale * f64::from(cells) * 8.0).round().clamp(0.0, f64::from(cells) * 8.0) as usize
    };
    // Where each part ends, in eighths of a cell.
    let mut ends = [0; 4];
    let mut sum = 0.0;
    for (end, (_, value)) in ends.iter_mut().zip(parts) {
        sum += value.max(0.0);
        *end = eighth(sum);
    }
    let beyond = sum > scale * (1.0 + 1e-9);
    let at = |eighth: usize| ends.iter().position(|end| eighth < *end).map(|n| parts[n].0);
    let fine = theme.coloured() && !theme.caps().ascii;
    let mut spans: Vec<Span<'static>> = Vec::new();
    for cell in 0..usize::from(cells) {
        if beyond && cell + 1 == usize::from(cells) {
            spans.push(Span::styled(theme.goes_on().to_string(), theme.heading()));
            break;
        }
        let (from, to) = (cell * 8, cell * 8 + 7);
        let (shown, style) = match (at(from), at(to)) {
            (Some(first), last) if fine && last != Some(first) => {
                let n = (from..=to).take_while(|e| at(*e) == Some(first)).count();
                let style = theme.part(first);
                let style = match last {
                    Some(last) => style.bg(theme.part(last).fg.unwrap_or(Color::Reset)),
                    None => style,
                };
                (EIGHTHS[n % 8], style)
            }
            _ => match at(from + 3) {
                Some(part) => (theme.fill(part), theme.part(part)),
                None => (' ', Style::new()),
            },
        };
        match spans.last_mut() {
            Some(last) if last.style == style => last.content.to_mut().push(shown),
            _ => spans.push(Span::styled(shown.to_string(), style)),
        }
    }
    spans
}

/// What the fills of a bar mean, in one line.
pub fn legend(theme: Theme, shown: &[(Part, &'static str)]) -> Vec<Span<'static>> {
    shown
        .iter()
        .flat_map(|(part, word)| {
            [
                Span::styled(theme.fill(*part).to_string(), theme.part(*part)),
                Span::raw(format!(" {word}  ")),
            ]
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::tui::caps::{Caps, Colours};

    fn drawn(caps: Caps, parts: &Parts, cells: u16) -> String {
        bar(Theme::new(caps), parts, 100.0, cells).iter().map(|s| s.content.as_ref()).collect()
    }

    #[test]
    fn parts_fill_their_share() {
        let plain = Caps { colours: Colours::None, ..Caps::default() };
        let ascii = Caps { ascii: true, ..plain };
        let cost = parts(50.0, 20.0, 10.0, 10.0);
        assert_eq!(drawn(plain, &cost, 10), "░░░░░██▒▚ ");
        assert_eq!(drawn(ascii, &cost, 10), ".....##=+ ");
        assert_eq!(drawn(Caps::default(), &cost, 10), "█████████ ");
        assert_eq!(drawn(Caps::default(), &parts(0.0, 12.5, 0.0, 0.0), 4), "▌   ");
        assert_eq!(drawn(ascii, &parts(900.0, 0.0, 0.0, 0.0), 3), "..>");
        assert_eq!(drawn(ascii, &cost, 0), "");
    }

    #[test]
    fn scale_is_round() {
        assert_eq!(round_scale(1.0), 1.0);
        assert_eq!(round_scale(1_700.0), 2_000.0);
        assert_eq!(round_scale(51.0), 60.0);
        assert_eq!(round_scale(0.0), 1.0);
        assert_eq!(round_scale(f64::NAN), 1.0);
    }
}
