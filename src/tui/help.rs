//! The help: every key of the place that it was called from, made from the table of actions; what bars mean.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::text::{Line, Span};

use super::action::{self, Place, Screen};
use super::app::App;
use super::frame::put_line;
use super::keys::Key;
use super::text;
use super::theme::Part;

/// The help in lines of at most `cells`.
pub(super) fn lines(app: &App, cells: usize) -> Vec<Line<'static>> {
    let theme = app.theme;
    let ascii = theme.caps().ascii;
    // Of a line that is typed the keys are its own, and those everywhere that type nothing.
    let typed = app.typing.is_some();
    let mut here = app.places_below_help();
    if typed {
        here.push(Place::Everywhere);
    }
    let reachable = action::reachable(&here);
    // Below the keys of a screen those of the lines that are typed on it.
    let lines_of = |place: &Place| match place {
        Place::On(Screen::Fleet) => Some(Place::Filter),
        Place::On(Screen::Tender) => Some(Place::Reason),
        Place::On(Screen::Basis) => Some(Place::Value),
        _ => None,
    };
    let places = here.iter().flat_map(|place| [Some(*place), lines_of(place)]).flatten();
    let mut lines = Vec::new();
    for place in places {
        let here: Vec<_> = if here.contains(&place) {
            let types = |key: &Key| typed && place == Place::Everywhere && key.typed().is_some();
            let of = reachable.iter().filter(|(def, _)| def.place == place).cloned();
            of.map(|(def, keys)| (def, keys.into_iter().filter(|key| !types(key)).collect()))
                .filter(|(_, keys): &(_, Vec<Key>)| !keys.is_empty())
                .collect()
        } else {
            action::reachable(&[place])
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
