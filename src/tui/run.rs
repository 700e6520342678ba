//! The loop: keys, signals and answers come in on one channel, the state changes, the changed screen is drawn.
//! Draws on change only, and at most thirty times a second.

use std::io::{self, Write as _};
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::mpsc::{self, Receiver, RecvTimeoutError, Sender};
use std::thread;
use std::time::{Duration, Instant};

use ratatui::crossterm::event::{self, KeyEvent};
use ratatui::crossterm::terminal;
use ratatui::layout::Size;
use signal_hook::consts::{SIGCONT, SIGHUP, SIGINT, SIGQUIT, SIGTERM, SIGTSTP};
use signal_hook::iterator::Signals;

use super::app::{App, ExitReason, Wish};
use super::caps::Caps;
use super::session::Session;
use super::terminal::{Held, is_gone, is_held};
use super::work::{Done, Job, Worker};
use crate::study::{StudyError, Watch};

/// Shortest time between two drawings.
const FRAME: Duration = Duration::from_millis(33);
/// Time between two looks at the progress of what runs.
const PROGRESS: Duration = Duration::from_millis(250);

/// Why the dashboard could not go on.
#[derive(Debug, thiserror::Error)]
#[non_exhaustive]
pub enum TuiError {
    /// The terminal failed.
    #[error("the terminal cannot be used: {0}")]
    Terminal(#[from] io::Error),
    /// What was to be shown could not be read or computed.
    #[error(transparent)]
    Study(#[from] StudyError),
    /// The worker ended by a panic; its message was printed.
    #[error("the computation ended unexpectedly")]
    Worker,
}

/// What comes in.
enum Event {
    Key(KeyEvent),
    Paste(String),
    Resize,
    Signal(i32),
    InputLost,
    Done(Done),
    WorkerDied,
}

/// Opens the dashboard. `desk_loader` reads what is to be shown, off the event loop; standard input and output
/// must be terminals.
///
/// # Errors
/// The terminal fails; what was to be shown cannot be read or computed.
pub fn run(
    desk_loader: impl FnOnce(&Watch) -> Result<Session, StudyError> + Send + 'static,
    caps: Caps,
) -> Result<ExitReason, TuiError> {
    let (events, incoming) = mpsc::channel();
    let (questions, asked) = mpsc::channel();
    // Signals first: one that comes while the terminal is taken is kept.
    let mut signals = Signals::new([SIGTERM, SIGHUP, SIGINT, SIGQUIT, SIGTSTP, SIGCONT])?;
    let signal_handle = signals.handle();
    let mut held = Held::take()?;
    let over = Arc::new(AtomicBool::new(false));

    let to = events.clone();
    beside(move || {
        for signal in signals.forever() {
            if to.send(Event::Signal(signal)).is_err() {
                return;
            }
        }
    })?;
    let (to, ends) = (events.clone(), Arc::clone(&over));
    beside(move || read_input(&to, &ends))?;
    beside(move || work(desk_loader, &asked, events))?;

    let result = match event_loop(caps, &mut held, &incoming, &questions) {
        // What cannot be written any more is no fault of the program: its user has gone.
        Err(TuiError::Terminal(_)) if is_gone() => Ok(ExitReason::Signal(SIGHUP)),
        result => result,
    };
    over.store(true, Ordering::Relaxed);
    signal_handle.close();
    drop(held);
    result
}

/// Does something on a thread of its own; without one there is an error, not a panic.
fn beside(work: impl FnOnce() + Send + 'static) -> io::Result<()> {
    thread::Builder::new().spawn(work).map(drop)
}

/// Sends what is typed until the dashboard is over. A terminal that goes away without a signal says nothing: it is
/// looked for while nobody types.
fn read_input(to: &Sender<Event>, over: &AtomicBool) {
    while !over.load(Ordering::Relaxed) {
        let event = match event::poll(PROGRESS) {
            Ok(false) if is_gone() => Event::InputLost,
            Ok(false) => continue,
            Ok(true) => match event::read() {
                Ok(event::Event::Key(key)) => Event::Key(key),
                Ok(event::Event::Paste(text)) => Event::Paste(text),
                Ok(event::Event::Resize(..)) => Event::Resize,
                Ok(_) => continue,
                Err(_) => Event::InputLost,
            },
            Err(_) => Event::InputLost,
        };
        let lost = matches!(event, Event::InputLost);
        if to.send(event).is_err() || lost {
            return;
        }
    }
}

/// Says that the worker died, unless it ended in peace.
struct Obituary(Sender<Event>);

impl Drop for Obituary {
    fn drop(&mut self) {
        if thread::panicking() {
            let _ = self.0.send(Event::WorkerDied);
        }
    }
}

fn work(
    loader: impl FnOnce(&Watch) -> Result<Session, StudyError>,
    asked: &Receiver<Job>,
    to: Sender<Event>,
) {
    let obituary = Obituary(to);
    Worker::new(loader).serve(asked, |done| {
        let _ = obituary.0.send(Event::Done(done));
    });
}

fn size_now() -> Size {
    let (width, height) = terminal::size().unwrap_or((80, 24));
    Size { width, height }
}

fn event_loop(
    caps: Caps,
    held: &mut Held,
    incoming: &Receiver<Event>,
    questions: &Sender<Job>,
) -> Result<ExitReason, TuiError> {
    let mut app = App::new(caps, size_now());
    let mut drawn: Option<Instant> = None;
    let mut changed = true;
    loop {
        for job in app.take_questions() {
            questions.send(job).map_err(|_| TuiError::Worker)?;
        }
        let since = drawn.map_or(FRAME, |at| at.elapsed());
        let wait = if changed && since >= FRAME {
            if is_held() {
                held.terminal.draw(|frame| app.draw(frame))?;
            }
            (drawn, changed) = (Some(Instant::now()), false);
            continue;
        } else if changed {
            Some(FRAME.saturating_sub(since))
        } else if app.is_busy() {
            Some(PROGRESS)
        } else {
            None
        };
        let event = match wait {
            None => incoming.recv().map_err(|_| RecvTimeoutError::Disconnected),
            Some(wait) => incoming.recv_timeout(wait),
        };
        match event {
            Err(RecvTimeoutError::Timeout) => {
                changed |= app.is_busy();
                continue;
            }
            Err(RecvTimeoutError::Disconnected) | Ok(Event::WorkerDied) => {
                return Err(TuiError::Worker);
            }
            Ok(Event::Signal(SIGTSTP)) => {
                held.suspend()?;
                app.resize(size_now());
            }
            // Continued from outside: the shell may have drawn over it.
            Ok(Event::Signal(SIGCONT)) => held.resume()?,
            Ok(Event::Signal(signal)) => return Ok(ExitReason::Signal(signal)),
            Ok(Event::InputLost) => return Ok(ExitReason::Signal(SIGHUP)),
            Ok(Event::Key(key)) => app.key(key),
            Ok(Event::Paste(text)) => app.paste(&text),
            Ok(Event::Resize) => app.resize(size_now()),
            Ok(Event::Done(done)) => app.done(done),
        }
        changed = true;
        match app.take_wish() {
            // The signal comes back as an event, and stops who started this program too (cargo, a script).
            Some(Wish::Suspend) => {
                rustix::process::kill_current_process_group(rustix::process::Signal::TSTP)
                    .map_err(io::Error::from)?;
            }
            Some(Wish::Redraw) => held.terminal.clear()?,
            Some(Wish::Write(sequence)) => {
                let mut out = io::stdout();
                out.write_all(sequence.as_bytes())?;
                out.flush()?;
            }
            None => {}
        }
        if let Some(exit) = app.take_exit() {
            return Ok(exit?);
        }
    }
}
