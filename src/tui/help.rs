//! The help: every key of the place that it was called from, made from the table of actions; what bars mean.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::text::{Line, Span};

use super::action::{self, Place};
use super::app::App;
use super::frame::put_line;
use super::text;
use super::theme::Part;

/// The help in lines of at most `cells`.
pub(super) fn lines(app: &App, cells: usize) -> Vec<Line<'static>> {
    let theme = app.theme;
    let ascii = theme.caps().ascii;
    let here = if app.working.is_some() {
        Place::Working
    } else if app.moves_inputs() {
        Place::WhatIf
    } else {
        Place::On(app.screen)
    };
    let places = [here, Place::Filter, Place::List, Place::Everywhere];
    let reachable = action::reachable(&[here, Place::List, Place::Everywhere]);
    let mut lines = Vec::new();
    for place in places {
        let here: Vec<_> = if place == Place::Filter {
            if here != Place::On(action::Screen::Fleet) {
                continue;
            }
            action::reachable(&[Place::Filter])
        } else {
            reachable.iter().filter(|(def, _)| def.place == place).cloned().collect()
        };
        if here.is_empty() {
            continue;
        }
        if !lines.is_empty() {
            lines.push(Line::default());
        }
        lines.push(Line::styled(format!(" {}", place.title()), theme.heading()));
        for (def, keys) in here {
            let keys: Vec<String> = keys.iter().map(|key| key.name(ascii)).collect();
            let keys = text::left(&keys.join("  "), 20);
            let said = text::wrap(def.help, cells.saturating_sub(24));
            for (n, said) in said.into_iter().enumerate() {
                let keys = if n == 0 { keys.clone() } else { " ".repeat(20) };
                lines.push(Line::from(vec![
                    Span::raw("  "),
                    Span::styled(keys, theme.key()),
                    Span::raw(format!(" {said}")),
                ]));
            }
        }
    }
    lines.push(Line::default());
    lines.push(Line::styled(" Bars", theme.heading()));
    for (part, said) in [
        (
            Part::Price,
            "price, installation and adders; in present values the capital charged, removal less scrap",
        ),
        (Part::Iron, "iron: the no-load loss, paid for as long as the unit is energised"),
        (Part::Copper, "copper: the load loss, rising with the square of the load"),
        (Part::Other, "what is neither: fans and pumps, upkeep, failures"),
    ] {
        let fill = theme.fill(part).to_string().repeat(3);
        for (n, said) in text::wrap(said, cells.saturating_sub(8)).into_iter().enumerate() {
            let fill = if n == 0 {
                Span::styled(fill.clone(), theme.part(part))
            } else {
                Span::raw("   ")
            };
            lines.push(Line::from(vec![Span::raw("  "), fill, Span::raw(format!("  {said}"))]));
        }
    }
    let mark = theme.goes_on();
    let said = format!(
        "All bars of a list are drawn to one scale, which stands above them; a longer one ends in {mark}."
    );
    lines.extend(
        text::wrap(&said, cells.saturating_sub(3)).into_iter().map(|l| Line::raw(format!("  {l}"))),
    );
    let said = "Screening economics, not switching or loading instructions. A verdict on a law is a screening aid: \
                local law and licensed practice decide. Work on energised or oil-filled plant, PCB handling, loading \
                beyond nameplate and protection settings follow local codes, manufacturer instructions and \
                licensed engineers.";
    lines.push(Line::default());
    lines.extend(
        text::wrap(said, cells.saturating_sub(3)).into_iter().map(|l| Line::raw(format!("  {l}"))),
    );
    lines
}

/// Draws the help.
pub(super) fn draw(app: &App, area: Rect, buffer: &mut Buffer) {
    let lines = lines(app, usize::from(area.width));
    let from = app.help.map_or(0, |list| list.cursor);
    for (y, line) in (0..area.height).zip(lines.iter().skip(from)) {
        put_line(buffer, area, y, line);
    }
}
