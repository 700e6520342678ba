//! The terminal: taken and given back on every way out, and written to in what it can show.
//!
//! [`Held`] takes it (raw mode, alternate screen, hidden cursor) and gives it back when dropped; a panic gives it
//! back before its message is printed. [`Pen`] is the backend that writes no colour where none is wanted.

use std::io::{self, IsTerminal as _, Stdout, Write};
use std::panic;
use std::sync::Once;
use std::sync::atomic::{AtomicBool, Ordering};

use ratatui::Terminal;
use ratatui::backend::{Backend, ClearType, CrosstermBackend, WindowSize};
use ratatui::buffer::Cell;
use ratatui::crossterm::event::{DisableBracketedPaste, EnableBracketedPaste};
use ratatui::crossterm::style::Print;
use ratatui::crossterm::terminal::{
    BeginSynchronizedUpdate, EndSynchronizedUpdate, EnterAlternateScreen, LeaveAlternateScreen,
    disable_raw_mode, enable_raw_mode,
};
use ratatui::crossterm::{cursor, execute, queue};
use ratatui::layout::{Position, Size};
use ratatui::style::{Color, Modifier};

/// Whether the terminal is held now. One for the process, as the terminal is.
static HELD: AtomicBool = AtomicBool::new(false);

/// The terminal while the dashboard has it.
pub(super) struct Held {
    pub(super) terminal: Terminal<Pen<Stdout>>,
}

impl Held {
    /// Takes the terminal.
    pub(super) fn take() -> io::Result<Self> {
        static HOOK: Once = Once::new();
        HOOK.call_once(|| {
            let before = panic::take_hook();
            panic::set_hook(Box::new(move |info| {
                give_back();
                before(info);
            }));
        });
        let terminal = Terminal::new(Pen::new(io::stdout()))?;
        seize()?;
        Ok(Self { terminal })
    }

    /// Gives the terminal to the shell, stops this process, and takes the terminal again when continued.
    pub(super) fn suspend(&mut self) -> io::Result<()> {
        give_back();
        // Stops here until SIGCONT.
        signal_hook::low_level::emulate_default_handler(signal_hook::consts::SIGTSTP)?;
        self.resume()
    }

    /// Takes the terminal again and forgets what was drawn.
    pub(super) fn resume(&mut self) -> io::Result<()> {
        seize()?;
        self.terminal.clear()
    }
}

/// Whether the terminal is held: a panic of any thread gives it back.
pub(super) fn is_held() -> bool {
    HELD.load(Ordering::SeqCst)
}

/// Whether the terminal has gone away: its other end is closed.
pub(super) fn is_gone() -> bool {
    !io::stdin().is_terminal() || !io::stdout().is_terminal()
}

impl Drop for Held {
    fn drop(&mut self) {
        give_back();
    }
}

fn seize() -> io::Result<()> {
    HELD.store(true, Ordering::SeqCst);
    enable_raw_mode()?;
    keep_signals()?;
    execute!(io::stdout(), EnterAlternateScreen, EnableBracketedPaste, cursor::Hide)
}

/// Lets Ctrl-C, Ctrl-\\ and Ctrl-Z still be signals, as the kernel makes them: they work whatever is being read, a
/// paste without end for instance.
#[cfg(unix)]
fn keep_signals() -> io::Result<()> {
    use rustix::termios::{LocalModes, OptionalActions, tcgetattr, tcsetattr};
    let input = io::stdin();
    let mut modes = tcgetattr(&input)?;
    modes.local_modes |= LocalModes::ISIG;
    Ok(tcsetattr(&input, OptionalActions::Now, &modes)?)
}

/// Gives the terminal back; a second time does nothing. What fails here (a terminal that is gone) cannot be
/// helped.
fn give_back() {
    if HELD.swap(false, Ordering::SeqCst) {
        let _ = execute!(
            io::stdout(),
            EndSynchronizedUpdate,
            DisableBracketedPaste,
            LeaveAlternateScreen,
            cursor::Show
        );
        let _ = disable_raw_mode();
    }
}

/// The backend: what crossterm does, but a cell is written with the attributes that it has and nothing else.
/// Without colours not one colour code is written, not even a reset of one.
pub(super) struct Pen<W: Write> {
    inner: CrosstermBackend<W>,
}

impl<W: Write> Pen<W> {
    fn new(writer: W) -> Self {
        Self { inner: CrosstermBackend::new(writer) }
    }
}

/// The parameters of a colour in a select-graphic-rendition sequence; none for the terminal's own.
fn colour(colour: Color, base: u8) -> Option<String> {
    let palette = |n: u8| Some((base + if n < 8 { n } else { 60 + n - 8 }).to_string());
    match colour {
        Color::Black => palette(0),
        Color::Red => palette(1),
        Color::Green => palette(2),
        Color::Yellow => palette(3),
        Color::Blue => palette(4),
        Color::Magenta => palette(5),
        Color::Cyan => palette(6),
        Color::Gray => palette(7),
        Color::DarkGray => palette(8),
        Color::LightRed => palette(9),
        Color::LightGreen => palette(10),
        Color::LightYellow => palette(11),
        Color::LightBlue => palette(12),
        Color::LightMagenta => palette(13),
        Color::LightCyan => palette(14),
        Color::White => palette(15),
        Color::Indexed(n) => Some(format!("{};5;{n}", base + 8)),
        Color::Rgb(r, g, b) => Some(format!("{};2;{r};{g};{b}", base + 8)),
        Color::Reset => None,
    }
}

/// The sequence that sets the look of a cell, from nothing.
fn look(cell: &Cell) -> String {
    let mut codes = vec!["0".to_owned()];
    for (modifier, code) in [
        (Modifier::BOLD, "1"),
        (Modifier::DIM, "2"),
        (Modifier::ITALIC, "3"),
        (Modifier::UNDERLINED, "4"),
        (Modifier::REVERSED, "7"),
    ] {
        if cell.modifier.contains(modifier) {
            codes.push(code.to_owned());
        }
    }
    codes.extend(colour(cell.fg, 30));
    codes.extend(colour(cell.bg, 40));
    format!("\u{1b}[{}m", codes.join(";"))
}

impl<W: Write> Backend for Pen<W> {
    type Error = io::Error;

    fn draw<'a, I>(&mut self, content: I) -> io::Result<()>
    where
        I: Iterator<Item = (u16, u16, &'a Cell)>,
    {
        queue!(self.inner, BeginSynchronizedUpdate)?;
        let mut last: Option<Position> = None;
        let mut set = String::from("\u{1b}[0m");
        queue!(self.inner, Print(&set))?;
        for (x, y, cell) in content {
            if !matches!(last, Some(p) if x == p.x + 1 && y == p.y) {
                queue!(self.inner, cursor::MoveTo(x, y))?;
            }
            last = Some(Position { x, y });
            let wanted = look(cell);
            if wanted != set {
                queue!(self.inner, Print(&wanted))?;
                set = wanted;
            }
            queue!(self.inner, Print(cell.symbol()))?;
        }
        queue!(self.inner, Print("\u{1b}[0m"), EndSynchronizedUpdate)
    }

    fn hide_cursor(&mut self) -> io::Result<()> {
        self.inner.hide_cursor()
    }
    fn show_cursor(&mut self) -> io::Result<()> {
        // Where the terminal is gone there is nobody to tell, and nowhere to write it.
        drop(self.inner.show_cursor());
        Ok(())
    }
    fn get_cursor_position(&mut self) -> io::Result<Position> {
        // Nobody here needs it, and the terminal's answer would come in between the keys.
        Ok(Position::ORIGIN)
    }
    fn set_cursor_position<P: Into<Position>>(&mut self, position: P) -> io::Result<()> {
        self.inner.set_cursor_position(position)
    }
    fn clear(&mut self) -> io::Result<()> {
        self.inner.clear()
    }
    fn clear_region(&mut self, clear_type: ClearType) -> io::Result<()> {
        self.inner.clear_region(clear_type)
    }
    fn size(&self) -> io::Result<Size> {
        self.inner.size()
    }
    fn window_size(&mut self) -> io::Result<WindowSize> {
        self.inner.window_size()
    }
    fn flush(&mut self) -> io::Result<()> {
        Backend::flush(&mut self.inner)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use ratatui::style::Style;

    fn written(style: Style) -> String {
        let mut bytes = Vec::new();
        let mut cell = Cell::new("x");
        cell.set_style(style);
        Pen::new(&mut bytes).draw([(0, 0, &cell)].into_iter()).unwrap();
        String::from_utf8(bytes).unwrap()
    }

    #[test]
    fn a_cell_is_written_with_what_it_has_and_no_more() {
        let plain = written(Style::new().add_modifier(Modifier::REVERSED));
        assert_eq!(plain, "\u{1b}[?2026h\u{1b}[0m\u{1b}[1;1H\u{1b}[0;7mx\u{1b}[0m\u{1b}[?2026l");
        assert!(written(Style::new().fg(Color::Blue)).contains("\u{1b}[0;34mx"));
        assert!(written(Style::new().fg(Color::DarkGray)).contains("\u{1b}[0;90mx"));
        let both = written(Style::new().fg(Color::Indexed(32)).bg(Color::Yellow));
        assert!(both.contains("\u{1b}[0;38;5;32;43mx"));
    }
}
