//! A dashboard without a terminal: keys in, answers given on the spot, the drawn screen out.

use ironhum::study::{StudyError, Watch};
use ironhum::tui::clipboard::Clipboard;
use ironhum::tui::work::{Job, Worker};
use ironhum::tui::{App, Caps, Colours, Marks, Session};
use ratatui::Terminal;
use ratatui::backend::TestBackend;
use ratatui::crossterm::event::{KeyCode, KeyEvent, KeyModifiers};
use ratatui::layout::Size;
use ratatui::style::{Color, Modifier};

type Loader = Box<dyn FnOnce(&Watch) -> Result<Session, StudyError>>;

pub(crate) const COLOUR: Caps = Caps {
    colours: Colours::Many,
    ascii: false,
    marks: Marks::Braille,
    clipboard: Clipboard::Direct,
};
pub(crate) const SIXTEEN: Caps = Caps { colours: Colours::Sixteen, ..COLOUR };
pub(crate) const PLAIN: Caps = Caps { colours: Colours::None, ..COLOUR };
pub(crate) const ASCII: Caps = Caps { ascii: true, ..PLAIN };

pub(crate) struct Bench {
    pub(crate) app: App,
    worker: Worker<Loader>,
    size: (u16, u16),
}

impl Bench {
    /// The demo fleet, read and ranked.
    pub(crate) fn demo(caps: Caps, width: u16, height: u16) -> Self {
        Self::on(caps, width, height, crate::demo::session())
    }

    pub(crate) fn on(caps: Caps, width: u16, height: u16, session: Session) -> Self {
        let loader: Loader = Box::new(move |_| Ok(session));
        let app = App::new(caps, Size { width, height });
        let mut bench = Self { app, worker: Worker::new(loader), size: (width, height) };
        bench.work();
        bench
    }

    /// Answers all questions.
    pub(crate) fn work(&mut self) {
        loop {
            let jobs = self.app.take_questions();
            if jobs.is_empty() {
                return;
            }
            for job in jobs {
                self.answer(job);
            }
        }
    }

    pub(crate) fn answer(&mut self, job: Job) {
        let done = self.worker.answer(job);
        self.app.done(done);
    }

    /// Presses keys, without answering questions. Words in angle brackets name keys, all else is typed.
    pub(crate) fn press(&mut self, keys: &str) {
        let mut rest = keys;
        while let Some(c) = rest.chars().next() {
            let (event, used) = match rest.strip_prefix('<').and_then(|r| r.split_once('>')) {
                Some((name, _)) if !name.is_empty() => (named(name), name.len() + 2),
                _ => (KeyEvent::new(KeyCode::Char(c), KeyModifiers::NONE), c.len_utf8()),
            };
            rest = &rest[used..];
            self.app.key(event);
        }
    }

    /// Presses keys, each followed by the answers to what it asked.
    pub(crate) fn keys(&mut self, keys: &str) -> &mut Self {
        self.press(keys);
        self.work();
        self
    }

    pub(crate) fn resize(&mut self, width: u16, height: u16) {
        self.size = (width, height);
        self.app.resize(Size { width, height });
    }

    pub(crate) fn terminal(&self) -> Terminal<TestBackend> {
        let mut terminal = Terminal::new(TestBackend::new(self.size.0, self.size.1)).unwrap();
        terminal.draw(|frame| self.app.draw(frame)).unwrap();
        terminal
    }

    /// The screen as lines.
    pub(crate) fn lines(&self) -> Vec<String> {
        let terminal = self.terminal();
        let buffer = terminal.backend().buffer();
        (0..buffer.area.height)
            .map(|y| {
                let line: String = (0..buffer.area.width)
                    .map(|x| buffer[(x, y)].symbol().replace('\u{a0}', " "))
                    .collect();
                line.trim_end().to_owned()
            })
            .collect()
    }

    pub(crate) fn screen(&self) -> String {
        self.lines().join("\n")
    }

    /// The line under the cursor.
    pub(crate) fn cursor(&self) -> String {
        let lines = self.lines();
        lines.into_iter().find(|line| line.starts_with(['▶', '>'])).unwrap_or_default()
    }

    /// The styles that are not plain: line, columns, look.
    pub(crate) fn styles(&self) -> String {
        let terminal = self.terminal();
        let buffer = terminal.backend().buffer();
        let mut out = Vec::new();
        for y in 0..buffer.area.height {
            let mut runs: Vec<(u16, u16, String)> = Vec::new();
            for x in 0..buffer.area.width {
                let cell = &buffer[(x, y)];
                let look = look(cell.fg, cell.bg, cell.modifier);
                match runs.last_mut() {
                    Some((_, to, same)) if *same == look => *to = x,
                    _ => runs.push((x, x, look)),
                }
            }
            let runs: Vec<String> = runs
                .iter()
                .filter(|(.., look)| !look.is_empty())
                .map(|(from, to, look)| format!("{from}-{to} {look}"))
                .collect();
            if !runs.is_empty() {
                out.push(format!("{y:>2}: {}", runs.join(" | ")));
            }
        }
        out.join("\n")
    }
}

fn look(fg: Color, bg: Color, modifier: Modifier) -> String {
    let mut words = Vec::new();
    if fg != Color::Reset {
        words.push(format!("{fg}"));
    }
    if bg != Color::Reset {
        words.push(format!("on {bg}"));
    }
    for (flag, word) in
        [(Modifier::BOLD, "bold"), (Modifier::DIM, "dim"), (Modifier::REVERSED, "reverse")]
    {
        if modifier.contains(flag) {
            words.push(word.to_owned());
        }
    }
    words.join(" ")
}

fn named(name: &str) -> KeyEvent {
    let (name, modifiers) = match (name.strip_prefix("Ctrl-"), name.strip_prefix("Shift-")) {
        (Some(name), _) => (name, KeyModifiers::CONTROL),
        (_, Some(name)) => (name, KeyModifiers::SHIFT),
        _ => (name, KeyModifiers::NONE),
    };
    let code = match name {
        "Enter" => KeyCode::Enter,
        "Esc" => KeyCode::Esc,
        "Tab" => KeyCode::Tab,
        "BackTab" => KeyCode::BackTab,
        "Backspace" => KeyCode::Backspace,
        "Up" => KeyCode::Up,
        "Down" => KeyCode::Down,
        "Left" => KeyCode::Left,
        "Right" => KeyCode::Right,
        "PageUp" => KeyCode::PageUp,
        "PageDown" => KeyCode::PageDown,
        "Home" => KeyCode::Home,
        "End" => KeyCode::End,
        "Delete" => KeyCode::Delete,
        name if name.starts_with('F') && name.len() > 1 => {
            KeyCode::F(name[1..].parse().unwrap_or_else(|_| panic!("no key is named {name}")))
        }
        name if name.len() == 1 => KeyCode::Char(name.chars().next().unwrap()),
        _ => panic!("no key is named {name}"),
    };
    KeyEvent::new(code, modifiers)
}
