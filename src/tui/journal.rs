//! The journal screen: what was changed in the book, newest first.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use super::app::App;
use super::frame::{put, select};
use super::text;

/// Lines around the list: its heading above, the details below.
pub(super) const AROUND: u16 = 5;

/// Draws the screen.
pub(super) fn draw(app: &App, area: Rect, buffer: &mut Buffer) {
    let theme = app.theme;
    let lines = app.opened.as_ref().map_or(&[][..], |opened| &opened.journal);
    if lines.is_empty() {
        put(buffer, area, 1, " Nothing was written into this book yet.", theme.muted());
        return;
    }
    let when = lines.iter().map(|line| text::width(&line.at)).max().unwrap_or(0).clamp(10, 20);
    let who = lines.iter().map(|line| text::width(&line.who)).max().unwrap_or(0).clamp(3, 16);
    let row = |at: &str, by: &str, what: &str| {
        format!(" {}  {}  {}", text::left(at, when), text::left(by, who), text::clean(what))
    };
    put(buffer, area, 0, &format!(" {}", row("when (UTC)", "who", "what")), theme.heading());
    let height = area.height.saturating_sub(AROUND);
    let list = app.journal;
    for (y, (n, line)) in (0..height).zip(lines.iter().enumerate().skip(list.offset)) {
        let mark = if n == list.cursor { theme.mark() } else { ' ' };
        put(
            buffer,
            area,
            y + 1,
            &format!("{mark}{}", row(&line.at, &line.who, &line.what)),
            theme.plain(),
        );
        if n == list.cursor {
            select(buffer, Rect { y: area.y + y + 1, height: 1, ..area });
        }
    }
    let Some(line) = lines.get(list.cursor) else { return };
    let below = Rect { y: area.y + height + 2, height: 3, ..area };
    let mut said = Vec::new();
    // Why comes first: details may be longer than there is room for.
    if !line.why.is_empty() {
        said.push(format!("why: {}", line.why));
    }
    if !line.details.is_empty() {
        said.push(line.details.clone());
    }
    if !line.source.is_empty() {
        said.push(format!("from {}", line.source));
    }
    let cells = usize::from(area.width.saturating_sub(2));
    let wrapped: Vec<String> = said.iter().flat_map(|said| text::wrap(said, cells)).collect();
    let more = wrapped.len() > usize::from(below.height);
    for (y, line) in (0..below.height).zip(wrapped) {
        // What finds no room is told by an ellipsis; `ironhum journal` says it in full.
        let line = if more && y + 1 == below.height { format!("{line} …") } else { line };
        put(buffer, below, y, &format!(" {line}"), theme.plain());
    }
}
