//! The program run as a person runs it, in an empty home, and the data files of the tests.
#![allow(dead_code, unreachable_pub, reason = "each test file uses a part of it")]

use std::path::{Path, PathBuf};
use std::process::{Command, Output, Stdio};

use serde_json::Value;

/// A file below `tests/`.
pub fn data(name: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests").join(name)
}

/// A file of the demo.
pub fn demo_fleet(name: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("demo-fleet").join(name)
}

/// The rows of a CSV file, its header first.
pub fn csv_rows(path: &Path) -> Vec<Vec<String>> {
    let mut reader =
        csv::ReaderBuilder::new().has_headers(false).from_path(path).expect("is readable");
    let row = |row: csv::StringRecord| row.iter().map(str::to_owned).collect();
    reader.records().map(|r| row(r.expect("a row"))).collect()
}

/// The program with a book and a home of its own.
pub struct Program {
    home: tempfile::TempDir,
}

impl Program {
    /// A program in an empty home.
    pub fn new() -> Self {
        Self { home: tempfile::tempdir().expect("a folder") }
    }

    /// Where its book is.
    pub fn book(&self) -> PathBuf {
        self.home.path().join("book.sqlite")
    }

    /// Its home.
    pub fn home(&self) -> &Path {
        self.home.path()
    }

    /// A file in its home.
    pub fn write(&self, name: &str, text: impl AsRef<[u8]>) -> PathBuf {
        let path = self.home.path().join(name);
        std::fs::write(&path, text).expect("can be written");
        path
    }

    /// The command with its arguments, environment cleared, no terminal.
    pub fn command(&self, arguments: &[&str]) -> Command {
        let mut command = Command::new(env!("CARGO_BIN_EXE_ironhum"));
        command
            .args(arguments)
            .env_clear()
            .env("HOME", self.home.path())
            .env("USER", "tester")
            .env("IRONHUM_BOOK", self.book())
            .stdin(Stdio::null());
        command
    }

    /// Runs a command, whatever it comes to.
    pub fn run(&self, arguments: &[&str]) -> Output {
        self.command(arguments).output().expect("the program starts")
    }

    /// Runs a command that has to succeed; what it wrote to standard output.
    pub fn done(&self, arguments: &[&str]) -> String {
        let output = self.run(arguments);
        let errors = String::from_utf8_lossy(&output.stderr);
        assert!(output.status.success(), "{arguments:?}: {errors}");
        String::from_utf8(output.stdout).expect("is UTF-8")
    }

    /// Runs a command that has to succeed and answers in JSON.
    pub fn json(&self, arguments: &[&str]) -> Value {
        serde_json::from_str(&self.done(arguments)).expect("is JSON")
    }

    /// Imports a file that has to be taken.
    pub fn import(&self, what: &str, file: &Path, more: &[&str]) {
        let file = file.to_string_lossy();
        let arguments = [&["import", what, &*file], more].concat();
        self.done(&arguments);
    }

    /// Imports all files of the demo.
    pub fn import_demo(&self) {
        self.import("profiles", &demo_fleet("profiles.csv"), &[]);
        self.import("prices", &demo_fleet("prices.csv"), &["--name", "ossemar-zone"]);
        self.import("units", &demo_fleet("units.csv"), &[]);
        self.import("offers", &demo_fleet("offers.csv"), &[]);
        self.import("basis", &demo_fleet("basis.toml"), &[]);
        self.import("tender", &demo_fleet("tender.toml"), &[]);
        self.import("bids", &demo_fleet("bids.csv"), &[]);
        self.import("measured", &demo_fleet("measured.csv"), &[]);
    }
}
