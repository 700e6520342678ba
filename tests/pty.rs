//! The dashboard in a pseudo-terminal: it starts, and gives the terminal back on every way out.
#![cfg(unix)]

use std::io::{Read as _, Write as _};
use std::num::NonZeroU16;
use std::sync::{Arc, Mutex};
use std::time::{Duration, Instant};

use portable_pty::{Child, CommandBuilder, MasterPty, PtySize, native_pty_system};

const PATIENCE: Duration = Duration::from_secs(60);

/// What came out of the program.
#[derive(Default)]
struct Output {
    bytes: Vec<u8>,
    screen: vt100::Parser,
}

fn cells(n: u16) -> NonZeroU16 {
    NonZeroU16::new(n).expect("a size")
}

struct Pty {
    child: Box<dyn Child + Send + Sync>,
    master: Box<dyn MasterPty + Send>,
    keyboard: Box<dyn std::io::Write + Send>,
    output: Arc<Mutex<Output>>,
    home: tempfile::TempDir,
}

impl Pty {
    /// `ironhum demo` with some variables in its environment.
    fn demo(variables: &[(&str, &str)]) -> Self {
        let mut command = CommandBuilder::new(env!("CARGO_BIN_EXE_ironhum"));
        command.arg("demo");
        Self::start(command, variables, 80, 24)
    }

    fn start(
        mut command: CommandBuilder,
        variables: &[(&str, &str)],
        cols: u16,
        rows: u16,
    ) -> Self {
        let home = tempfile::tempdir().expect("a folder");
        command.env_clear();
        command.env("HOME", home.path());
        command.env("XDG_DATA_HOME", home.path());
        command.env("TERM", "xterm-256color");
        command.env("LANG", "C.UTF-8");
        for (name, value) in variables {
            command.env(name, value);
        }
        let size = PtySize { rows, cols, pixel_width: 0, pixel_height: 0 };
        let pair = native_pty_system().openpty(size).expect("a pseudo-terminal");
        let child = pair.slave.spawn_command(command).expect("starts");
        drop(pair.slave);
        let mut reader = pair.master.try_clone_reader().expect("a reader");
        let output = Arc::new(Mutex::new(Output {
            bytes: Vec::new(),
            screen: vt100::Parser::new(cells(rows), cells(cols), 0),
        }));
        let into = Arc::clone(&output);
        std::thread::spawn(move || {
            let mut bytes = [0; 4096];
            while let Ok(n) = reader.read(&mut bytes) {
                if n == 0 {
                    return;
                }
                let mut output = into.lock().expect("not poisoned");
                output.bytes.extend_from_slice(&bytes[..n]);
                output.screen.process(&bytes[..n]);
            }
        });
        let keyboard = pair.master.take_writer().expect("a keyboard");
        Self { child, master: pair.master, keyboard, output, home }
    }

    fn screen(&self) -> String {
        self.output.lock().expect("not poisoned").screen.screen().contents()
    }

    fn bytes(&self) -> Vec<u8> {
        self.output.lock().expect("not poisoned").bytes.clone()
    }

    fn until(&self, what: &str, condition: impl Fn(&Self) -> bool) {
        let start = Instant::now();
        while !condition(self) {
            assert!(
                start.elapsed() < PATIENCE,
                "waited for {what}; the screen is\n{}",
                self.screen()
            );
            std::thread::sleep(Duration::from_millis(10));
        }
    }

    fn until_shown(&self, text: &str) {
        self.until(text, |pty| pty.screen().contains(text));
    }

    fn type_in(&mut self, keys: &str) {
        self.keyboard.write_all(keys.as_bytes()).expect("takes keys");
        self.keyboard.flush().expect("takes keys");
    }

    fn signal(&self, name: &str) {
        let pid = self.child.process_id().expect("runs").to_string();
        let sent = std::process::Command::new("kill").args(["-s", name, &pid]).status();
        assert!(sent.expect("kill is there").success());
    }

    fn wait(&mut self) -> u32 {
        let start = Instant::now();
        loop {
            if let Some(status) = self.child.try_wait().expect("can be waited for") {
                // What it wrote last may still be on its way.
                std::thread::sleep(Duration::from_millis(100));
                return status.exit_code();
            }
            assert!(
                start.elapsed() < PATIENCE,
                "it does not end; the screen is\n{}",
                self.screen()
            );
            std::thread::sleep(Duration::from_millis(10));
        }
    }

    /// Whether lines are edited and echoed, as a shell expects it.
    fn is_cooked(&self) -> bool {
        let modes = self.master.get_termios().expect("a terminal").local_flags;
        let modes = format!("{modes:?}");
        modes.contains("ICANON") && modes.contains("ECHO ")
            || modes.contains("ICANON") && modes.contains("ECHO")
    }

    fn is_given_back(&self) {
        let output = self.output.lock().expect("not poisoned");
        let screen = output.screen.screen();
        assert!(!screen.alternate_screen(), "the alternate screen is left");
        assert!(!screen.hide_cursor(), "the cursor is shown");
        assert!(!screen.bracketed_paste(), "paste is plain again");
        drop(output);
        assert!(self.is_cooked(), "raw mode is off");
    }

    fn is_taken(&self) -> bool {
        self.output.lock().expect("not poisoned").screen.screen().alternate_screen()
    }

    fn state(&self) -> String {
        let pid = self.child.process_id().expect("runs").to_string();
        let ps = std::process::Command::new("ps").args(["-o", "stat=", "-p", &pid]).output();
        String::from_utf8_lossy(&ps.expect("ps is there").stdout).trim().to_owned()
    }
}

impl Drop for Pty {
    fn drop(&mut self) {
        let _ = self.child.kill();
    }
}

const READY: &str = "229 ranked, 17 left out";

#[test]
fn q_leaves_with_0() {
    let mut pty = Pty::demo(&[]);
    pty.until_shown(READY);
    assert!(pty.is_taken() && !pty.is_cooked());
    pty.type_in("2");
    pty.until_shown("Present value over");
    pty.type_in("3");
    pty.until_shown("lot L1");
    pty.type_in("q");
    assert_eq!(pty.wait(), 0);
    pty.is_given_back();
}

#[test]
fn ctrl_c_leaves_with_130() {
    let mut pty = Pty::demo(&[]);
    pty.until_shown(READY);
    pty.type_in("\u{3}");
    assert_eq!(pty.wait(), 130);
    pty.is_given_back();
}

#[test]
fn signals_leave_with_128_and_their_number() {
    for (name, code) in [("TERM", 143), ("HUP", 129), ("INT", 130)] {
        let mut pty = Pty::demo(&[]);
        pty.until_shown(READY);
        pty.signal(name);
        assert_eq!(pty.wait(), code, "{name}");
        pty.is_given_back();
    }
}

#[test]
fn a_signal_while_reading_leaves_too() {
    let mut pty = Pty::demo(&[]);
    pty.until("the first frame", Pty::is_taken);
    pty.signal("TERM");
    assert_eq!(pty.wait(), 143);
    pty.is_given_back();
}

#[test]
fn a_terminal_that_is_gone_ends_it() {
    let home = tempfile::tempdir().expect("a folder");
    let mut command = CommandBuilder::new(env!("CARGO_BIN_EXE_ironhum"));
    command.arg("demo");
    command.env_clear();
    command.env("HOME", home.path());
    command.env("TERM", "xterm");
    let pair = native_pty_system().openpty(PtySize::default()).expect("a pseudo-terminal");
    let mut child = pair.slave.spawn_command(command).expect("starts");
    drop(pair.slave);
    // Read here and not in a thread, so that the last handle of the terminal can be dropped.
    let mut reader = pair.master.try_clone_reader().expect("a reader");
    let mut screen = vt100::Parser::new(cells(24), cells(80), 0);
    while !screen.screen().contents().contains(READY) {
        let mut bytes = [0; 1024];
        let n = reader.read(&mut bytes).expect("runs");
        screen.process(&bytes[..n]);
    }
    drop(reader);
    drop(pair.master);
    let start = Instant::now();
    while child.try_wait().expect("can be waited for").is_none() {
        assert!(start.elapsed() < PATIENCE, "it does not end");
        std::thread::sleep(Duration::from_millis(10));
    }
}

#[test]
fn suspended_and_continued() {
    for by_key in [true, false] {
        let mut pty = Pty::demo(&[]);
        pty.until_shown(READY);
        if by_key {
            pty.type_in("\u{1a}");
        } else {
            pty.signal("TSTP");
        }
        pty.until("it stops", |pty| pty.state().starts_with('T'));
        pty.until("the terminal", |pty| !pty.is_taken());
        pty.is_given_back();
        pty.signal("CONT");
        pty.until("it takes the terminal again", Pty::is_taken);
        pty.until_shown(READY);
        assert!(!pty.is_cooked());
        pty.type_in("4");
        pty.until_shown("discount_rate_pct");
        pty.type_in("q");
        assert_eq!(pty.wait(), 0);
        pty.is_given_back();
    }
}

#[test]
fn any_size_of_the_terminal() {
    let mut command = CommandBuilder::new(env!("CARGO_BIN_EXE_ironhum"));
    command.arg("demo");
    let mut pty = Pty::start(command, &[], 1, 1);
    pty.until("the first frame", Pty::is_taken);
    for (rows, cols) in [(50, 160), (1, 1), (24, 80), (2, 300), (100, 3), (24, 80)] {
        let size = PtySize { rows, cols, pixel_width: 0, pixel_height: 0 };
        pty.master.resize(size).expect("resizes");
        pty.output
            .lock()
            .expect("not poisoned")
            .screen
            .screen_mut()
            .set_size(cells(rows), cells(cols));
    }
    pty.until_shown(READY);
    pty.type_in("q");
    assert_eq!(pty.wait(), 0);
    pty.is_given_back();
}

#[test]
fn a_changed_basis_is_stored_with_its_old_value_in_the_journal() {
    let mut pty = Pty::demo(&[]);
    pty.until_shown(READY);
    pty.type_in("4\u{1b}[B\u{1b}[B>");
    pty.until_shown("basis changed");
    pty.type_in("w");
    pty.until_shown("w again stores");
    pty.type_in("w");
    pty.until_shown("Stored.");
    pty.type_in("5");
    pty.until_shown("changed basis plan-2027");
    pty.type_in("q");
    assert_eq!(pty.wait(), 0);
    let book = pty.home.path().join("ironhum").join("demo.sqlite");
    let journal = std::process::Command::new(env!("CARGO_BIN_EXE_ironhum"))
        .args(["journal", "--format", "json", "--book"])
        .arg(book)
        .output()
        .expect("runs");
    let journal = String::from_utf8_lossy(&journal.stdout).into_owned();
    assert!(journal.contains("discount_rate_pct") && journal.contains("dashboard"), "{journal}");
}

#[test]
fn an_award_is_stored_with_its_reason_in_the_journal() {
    let mut pty = Pty::demo(&[]);
    pty.until_shown(READY);
    pty.type_in("3w");
    pty.until_shown("Award lot L1");
    pty.type_in("\u{1b}");
    pty.until_shown("what if");
    pty.type_in("w");
    pty.until_shown("a reason is needed");
    pty.type_in("least over its life\r");
    pty.until_shown("is awarded to O1-ALT");
    pty.type_in("5");
    pty.until_shown("chosen award ol-2027-1/L1");
    pty.type_in("q");
    assert_eq!(pty.wait(), 0);
    let book = pty.home.path().join("ironhum").join("demo.sqlite");
    let tender = std::process::Command::new(env!("CARGO_BIN_EXE_ironhum"))
        .args(["tender", "ol-2027-1", "--format", "json", "--book"])
        .arg(book)
        .output()
        .expect("runs");
    let tender = String::from_utf8_lossy(&tender.stdout).into_owned();
    assert!(tender.contains("least over its life"), "{tender}");
    assert_eq!(tender.matches("awarded_by").count(), 1, "{tender}");
}

#[test]
fn a_working_is_handed_to_the_terminal() {
    for (variables, start) in [
        (&[][..], "\u{1b}]52;c;b2wtMjAyNy0x"),
        (&[("TMUX", "/tmp/x,1,0")][..], "\u{1b}Ptmux;\u{1b}\u{1b}]52;c;b2wtMjAyNy0x"),
    ] {
        let mut pty = Pty::demo(variables);
        pty.until_shown(READY);
        pty.type_in("3e");
        pty.until_shown("How it comes about");
        pty.type_in("y");
        pty.until_shown("Handed to t");
        assert!(String::from_utf8_lossy(&pty.bytes()).contains(start));
        pty.type_in("qq");
        assert_eq!(pty.wait(), 0);
    }
}

/// The parameters of all sequences that set how text looks.
fn looks(bytes: &[u8]) -> Vec<u16> {
    let text = String::from_utf8_lossy(bytes);
    let mut found = Vec::new();
    for part in text.split("\u{1b}[").skip(1) {
        let end = part.find(|c: char| c.is_ascii_alphabetic());
        if let Some(end) = end.filter(|end| part[*end..].starts_with('m')) {
            found.extend(part[..end].split(';').map(|n| n.parse::<u16>().unwrap_or(0)));
        }
    }
    found
}

fn tour(variables: &[(&str, &str)]) -> Vec<u8> {
    let mut pty = Pty::demo(variables);
    pty.until_shown(READY);
    for (keys, shown) in [
        ("2", "Present value over"),
        ("3", "owning cost"),
        ("m", "Which bid"),
        ("4", "discount_rate_pct"),
        ("\u{1b}[B\u{1b}[B>", "basis changed"),
        ("5", "journal"),
        ("?", "Everywhere"),
    ] {
        pty.type_in(keys);
        if shown != "journal" {
            pty.until_shown(shown);
        }
    }
    pty.type_in("qq");
    assert_eq!(pty.wait(), 0);
    pty.bytes()
}

#[test]
fn no_color_means_not_one_colour_code() {
    let plain = tour(&[("NO_COLOR", "1")]);
    let looks_plain = looks(&plain);
    assert!(looks_plain.contains(&7) && looks_plain.contains(&1), "reverse and bold are there");
    let coloured = looks_plain.iter().find(|code| **code >= 10);
    assert_eq!(coloured, None, "a colour code");
    assert!(looks(&tour(&[])).contains(&38), "and with colours there are some");
}

#[test]
fn sixteen_colours_are_written_as_such() {
    let codes = looks(&tour(&[("TERM", "xterm")]));
    assert!(!codes.contains(&38) && !codes.contains(&48));
    assert!(codes.contains(&34) && codes.contains(&33));
}

#[test]
fn ascii_where_the_locale_is_not_utf8() {
    let bytes = tour(&[("LANG", "C")]);
    assert!(bytes.is_ascii());
}

/// Says that this process is the child of the test below.
const CHILD: &str = "IRONHUM_TEST_CHILD_THAT_PANICS";

/// The dashboard with a reader that panics: the test below runs it in a pseudo-terminal.
#[test]
#[expect(clippy::exit, reason = "the exit status is what the parent looks at")]
fn child_that_panics() {
    if std::env::var_os(CHILD).is_none() {
        return;
    }
    let loader = |_: &ironhum::study::Watch| -> Result<_, _> {
        std::thread::sleep(Duration::from_millis(300));
        panic!("the loader broke")
    };
    let result = ironhum::tui::run(loader, ironhum::tui::Caps::default());
    let code = if matches!(result, Err(ironhum::tui::TuiError::Worker)) { 70 } else { 71 };
    std::process::exit(code);
}

#[test]
fn a_panic_gives_the_terminal_back_before_its_message() {
    let mut command = CommandBuilder::new(std::env::current_exe().expect("is known"));
    command.args(["--exact", "child_that_panics", "--nocapture"]);
    let mut pty = Pty::start(command, &[(CHILD, "1")], 80, 24);
    assert_eq!(pty.wait(), 70);
    pty.is_given_back();
    let text = String::from_utf8_lossy(&pty.bytes()).into_owned();
    let left = text.rfind("\u{1b}[?1049l").expect("the alternate screen is left");
    let said = text.find("the loader broke").expect("the message is printed");
    assert!(left < said, "first the terminal, then the message");
}
