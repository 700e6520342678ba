//! The frame around every screen: title line, body, status line, context line; the help over it. Helpers to put
//! cleaned text into the buffer.

use ratatui::Frame;
use ratatui::buffer::Buffer;
use ratatui::layout::{Rect, Size};
use ratatui::style::{Modifier, Style};
use ratatui::text::{Line, Span};
use ratatui::widgets::{Clear, Widget as _};

use super::action::{self, Action, ActionDef, Place, Screen};
use super::app::App;
use super::entry::{Entry, Of};
use super::theme;
use super::{basis, fleet, help, journal, tender, text, unit, working};

/// The smallest terminal in which the screens are drawn.
pub(super) const LEAST: Size = Size { width: 60, height: 15 };

/// The parts of the terminal.
pub(super) struct Areas {
    pub(super) title: Rect,
    pub(super) body: Rect,
    pub(super) status: Rect,
    pub(super) context: Rect,
}

/// Cuts the terminal into its parts.
pub(super) fn areas(area: Rect) -> Areas {
    let line = |y: u16| Rect {
        y: area.y + y.min(area.height),
        height: u16::from(y < area.height),
        ..area
    };
    let height = area.height;
    Areas {
        title: line(0),
        body: Rect { y: area.y + height.min(1), height: height.saturating_sub(3), ..area },
        status: line(height.saturating_sub(2)),
        context: line(height.saturating_sub(1)),
    }
}

/// The body of the terminal. In a smaller one than is drawn in, the layout stays that of the smallest.
pub(super) fn body(app: &App) -> Rect {
    let (width, height) = (app.size.width.max(LEAST.width), app.size.height.max(LEAST.height));
    areas(Rect { x: 0, y: 0, width, height }).body
}

/// Lines of the list or text that the keys move in.
pub(super) fn list_height(app: &App) -> usize {
    let body = body(app);
    if app.help.is_some() {
        return usize::from(body.height);
    }
    if app.working.is_some() {
        return usize::from(body.height.saturating_sub(working::HEADER));
    }
    usize::from(match app.screen {
        Screen::Fleet => fleet::rows(app, body),
        Screen::Unit => {
            let columns = unit::draw::columns(unit::draw::areas(body, app.unit.table).facts);
            columns.iter().map(|column| column.height).sum()
        }
        Screen::Basis => basis::draw::areas(body).list.height.saturating_sub(1),
        Screen::Tender => tender::draw::rows(app, body),
        Screen::Journal => body.height.saturating_sub(journal::AROUND),
    })
}

/// Whether the unit under the cursor stands beside the fleet.
pub(super) fn shows_detail(app: &App) -> bool {
    fleet::areas(body(app)).detail.is_some()
}

/// Puts text at the start of line `y` of an area: cleaned, cut to its width.
pub(super) fn put(buffer: &mut Buffer, area: Rect, y: u16, shown: &str, style: Style) {
    let area = area.intersection(buffer.area);
    if y < area.height && area.width > 0 {
        let cut = text::cut(shown, usize::from(area.width));
        buffer.set_stringn(area.x, area.y + y, cut, usize::from(area.width), style);
    }
}

/// Puts text over what was drawn there: nothing of its look remains.
pub(super) fn put_over(buffer: &mut Buffer, area: Rect, y: u16, shown: &str, style: Style) {
    let line = Rect { y: area.y.saturating_add(y), height: u16::from(y < area.height), ..area };
    Clear.render(line.intersection(buffer.area), buffer);
    put(buffer, area, y, shown, style);
}

/// Puts a line at line `y` of an area; its text is clean already.
pub(super) fn put_line(buffer: &mut Buffer, area: Rect, y: u16, line: &Line) {
    let area = area.intersection(buffer.area);
    if y < area.height && area.width > 0 {
        buffer.set_line(area.x, area.y + y, line, area.width);
    }
}

/// Puts a line flush right at line `y` of an area.
pub(super) fn put_right(buffer: &mut Buffer, area: Rect, y: u16, line: &Line) {
    let wide = u16::try_from(line.width()).unwrap_or(u16::MAX).min(area.width);
    put_line(buffer, Rect { x: area.right() - wide, width: wide, ..area }, y, line);
}

impl App {
    /// Draws the state.
    pub fn draw(&self, frame: &mut Frame) {
        let area = frame.area();
        let cursor = self.draw_into(area, frame.buffer_mut());
        if let Some(cursor) = cursor {
            frame.set_cursor_position(cursor);
        }
    }

    fn draw_into(&self, area: Rect, buffer: &mut Buffer) -> Option<(u16, u16)> {
        let mut cursor = None;
        if area.width < LEAST.width || area.height < LEAST.height {
            let (w, h) = (LEAST.width, LEAST.height);
            let notice = format!("q quits; needs {w}x{h}, not {}x{}", area.width, area.height);
            put(buffer, area, 0, &notice, self.theme.plain());
        } else {
            let parts = areas(area);
            self.title(parts.title, buffer);
            if self.help.is_some() {
                help::draw(self, parts.body, buffer);
            } else if self.ranked.is_none() {
                self.first_frame(parts.body, buffer);
            } else if let Some(panel) = &self.working {
                working::draw(self, panel, parts.body, buffer);
            } else {
                match self.screen {
                    Screen::Fleet => fleet::draw(self, parts.body, buffer),
                    Screen::Unit => unit::draw::draw(self, parts.body, buffer),
                    Screen::Basis => basis::draw::draw(self, parts.body, buffer),
                    Screen::Journal => journal::draw(self, parts.body, buffer),
                    Screen::Tender => tender::draw::draw(self, parts.body, buffer),
                }
            }
            cursor = self.status(parts.status, buffer);
            self.context(parts.context, buffer);
        }
        theme::settle(self.theme.caps(), buffer);
        cursor
    }

    fn title(&self, area: Rect, buffer: &mut Buffer) {
        let mut spans = vec![Span::styled(" ironhum ", self.theme.heading())];
        for (n, (screen, title)) in (1..).zip(Screen::ALL) {
            let tab = if screen == self.screen {
                Span::styled(format!("[{n} {title}]"), self.theme.heading())
            } else {
                Span::raw(format!(" {n} {title} "))
            };
            spans.push(tab);
        }
        let tabs = Line::from(spans);
        put_line(buffer, area, 0, &tabs);
        let Some(opened) = &self.opened else { return };
        let room = usize::from(area.width).saturating_sub(tabs.width() + 1);
        let name = self.ranked.as_ref().map_or("", |r| &r.desk.sheet.basis.name);
        let (name, title) = (text::cut(name, 24), text::cut(&opened.title, 32));
        let (changed, style) = if self.basis.is_changed() {
            ("basis changed  ", self.theme.changed())
        } else {
            ("", self.theme.plain())
        };
        // The most that there is room for.
        for said in [format!("{name}  {title} "), format!("{name} "), String::new()] {
            let line = Line::from(vec![Span::styled(changed, style), Span::raw(said)]);
            if line.width() <= room {
                put_right(buffer, area, 0, &line);
                return;
            }
        }
    }

    fn first_frame(&self, area: Rect, buffer: &mut Buffer) {
        let Some(busy) = self.busy() else { return };
        put(buffer, area, 1, &format!(" {}", progress(busy.what, &busy.watch)), self.theme.plain());
    }

    fn status(&self, area: Rect, buffer: &mut Buffer) -> Option<(u16, u16)> {
        if let Some(entry) = self.typing.as_ref().filter(|_| self.help.is_none()) {
            return self.typed_line(entry, area, buffer);
        }
        if let Some(message) = &self.message {
            put(buffer, area, 0, &format!(" {message}"), self.theme.warning());
        } else if let Some(busy) = self.busy().filter(|_| self.ranked.is_some()) {
            let line = format!(" {}   Esc stops", progress(busy.what, &busy.watch));
            put(buffer, area, 0, &line, self.theme.plain());
        } else if self.ranked.is_some() {
            let (left, right) = match self.screen {
                _ if self.help.is_some() => (Line::default(), vec![self.more()]),
                _ if self.working.is_some() => (self.caution(), vec![self.more()]),
                Screen::Fleet => fleet::status(self),
                Screen::Basis => (basis::draw::status(self), Vec::new()),
                Screen::Unit => (self.caution(), vec![self.more()]),
                Screen::Tender => (self.caution(), Vec::new()),
                Screen::Journal => Default::default(),
            };
            put_line(buffer, area, 0, &left);
            let room = usize::from(area.width).saturating_sub(left.width());
            if let Some(right) = right.iter().find(|line| line.width() < room) {
                put_right(buffer, area, 0, right);
            }
        }
        None
    }

    /// The line that is typed, with its cursor; what it asks for before it, what it comes to after it.
    fn typed_line(&self, entry: &Entry, area: Rect, buffer: &mut Buffer) -> Option<(u16, u16)> {
        let (asks, said) = match &entry.of {
            Of::Filter => {
                let found = self.view.places.len() + self.view.left_out.len();
                ("filter".to_owned(), format!("{} found", text::count(found)))
            }
            Of::Value => basis::draw::asks(self),
            Of::Reason { .. } => ("why".to_owned(), String::new()),
        };
        let (asks, said) = (format!(" {asks}: "), format!("{said} "));
        let before = text::width(&asks);
        let room = usize::from(area.width).saturating_sub(before + text::width(&said) + 2);
        let scroll = entry.input.visual_scroll(room.saturating_sub(1));
        let typed: String = text::clean(entry.text()).chars().skip(scroll).collect();
        let line = format!("{asks}{}", text::cut(&typed, room));
        put(buffer, area, 0, &line, self.theme.heading());
        put_right(buffer, area, 0, &Line::styled(said, self.theme.muted()));
        let x = before + entry.input.visual_cursor().saturating_sub(scroll);
        let x = area.x.saturating_add(u16::try_from(x).unwrap_or(u16::MAX));
        (x < area.right() && area.height > 0).then_some((x, area.y))
    }

    /// What the figures are not; the help says it in full.
    fn caution(&self) -> Line<'static> {
        let said = if self.size.width < 80 {
            " screening economics, not switching instructions"
        } else {
            " screening economics; local codes and licensed practice decide"
        };
        Line::styled(said, self.theme.muted())
    }

    /// Says that a text goes on below what is seen of it.
    fn more(&self) -> Line<'static> {
        let (from, lines) = match self.help {
            Some(help) => (help.cursor, help::lines(self, usize::from(self.size.width)).len()),
            None if self.working.is_some() => {
                let panel = self.working.as_ref();
                let cells = usize::from(self.size.width);
                let lines = panel.map_or(0, |p| working::lines(self, p, cells).len());
                (panel.map_or(0, |p| p.list.cursor), lines)
            }
            None => match unit::table_len(self) {
                Some((lines, seen)) => {
                    return self.lines_below(lines - seen - self.unit.years.cursor);
                }
                None => (self.unit.facts.cursor, unit::facts_len(self)),
            },
        };
        if list_height(self) == 0 {
            return Line::default();
        }
        self.lines_below(lines.saturating_sub(from + list_height(self)))
    }

    fn lines_below(&self, below: usize) -> Line<'static> {
        if below == 0 {
            return Line::default();
        }
        let arrow = if self.theme.caps().ascii { "Down" } else { "↓" };
        Line::styled(format!("{arrow} {below} more lines "), self.theme.muted())
    }

    fn context(&self, area: Rect, buffer: &mut Buffer) {
        let ascii = self.theme.caps().ascii;
        // What is wrong with a typed line stands below it; its keys come back with the next one.
        if let (Some(message), Some(_), None) = (&self.message, &self.typing, &self.help) {
            put(buffer, area, 0, &format!(" {message}"), self.theme.warning());
            return;
        }
        let mut spans = vec![Span::raw(" ")];
        let mut room = usize::from(area.width).saturating_sub(1);
        let reachable = action::reachable(&self.places());
        let useful = |def: &ActionDef| match def.action {
            Action::Back => def.place != Place::Everywhere || self.can_go_back(),
            Action::TenderView => !tender::shows_all(self),
            _ => true,
        };
        let shown: Vec<_> = reachable.iter().filter(|(def, _)| def.shown && useful(def)).collect();
        // The last ones (help, quit) always find room.
        let wide =
            |n: &usize| shown[*n].1[0].name(ascii).chars().count() + shown[*n].0.title.len() + 3;
        let mut keep: Vec<usize> = Vec::new();
        let order =
            (shown.len().saturating_sub(2)..shown.len()).chain(0..shown.len().saturating_sub(2));
        for n in order {
            if wide(&n) <= room {
                room -= wide(&n);
                keep.push(n);
            }
        }
        keep.sort_unstable();
        for n in keep {
            let (def, keys) = shown[n];
            spans.push(Span::styled(keys[0].name(ascii), self.theme.key()));
            spans.push(Span::raw(format!(" {}  ", def.title)));
        }
        put_line(buffer, area, 0, &Line::from(spans));
    }
}

/// What runs, and how far it is.
fn progress(what: &str, watch: &crate::study::Watch) -> String {
    match watch.progress() {
        (_, 0) => format!("{what} …"),
        (done, total) => {
            format!("{what} … {} of {}", text::count(done.min(total)), text::count(total))
        }
    }
}

/// The style of a line under the cursor: what was there, reversed.
pub(super) fn select(buffer: &mut Buffer, area: Rect) {
    let area = area.intersection(buffer.area);
    buffer.set_style(area, Style::new().add_modifier(Modifier::REVERSED));
}
