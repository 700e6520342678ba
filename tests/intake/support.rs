//! A book in a directory of its own, files put in from text, and everything it holds as one text.

use std::fmt::Write as _;
use std::io::Cursor;
use std::path::{Path, PathBuf};

use ironhum::book::{Access, Actor, Book};
use ironhum::exchange::Source;
use ironhum::study::Watch;
use ironhum::study::intake::{IntakeError, Options, Report, What, import};
use rusqlite::types::Value;
use tempfile::TempDir;

pub(crate) fn actor() -> Actor {
    Actor { who: "ana".into(), at: "2026-03-01T08:00:00Z".into(), why: None }
}

pub(crate) struct Desk {
    pub(crate) book: Book,
    pub(crate) path: PathBuf,
    pub(crate) dir: TempDir,
}

impl Desk {
    pub(crate) fn empty() -> Self {
        let dir = tempfile::tempdir().expect("directory");
        let path = dir.path().join("fleet.book");
        Self { book: Book::open(&path, Access::Create).expect("book"), path, dir }
    }

    /// The demo fleet, taken in from its files.
    pub(crate) fn demo() -> Self {
        let mut desk = Self::empty();
        for (what, file) in [
            (What::Profiles, "profiles.csv"),
            (What::Prices, "prices.csv"),
            (What::Units, "units.csv"),
            (What::Offers, "offers.csv"),
            (What::Basis, "basis.toml"),
            (What::Tender, "tender.toml"),
            (What::Bids, "bids.csv"),
            (What::Measured, "measured.csv"),
        ] {
            let report = desk.demo_file(what, file);
            assert!(report.stored && report.problems.is_empty(), "{file}: {}", report.problems);
            assert_eq!(report.tally.new, report.rows, "{file}");
        }
        desk
    }

    pub(crate) fn demo_file(&mut self, what: What, file: &str) -> Report {
        let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("demo-fleet").join(file);
        let name = (what == What::Prices).then(|| "ossemar-zone".to_owned());
        self.file(what, &path, Options { name, ..Options::default() }).expect("readable")
    }

    pub(crate) fn file(
        &mut self,
        what: What,
        path: &Path,
        options: Options<'_>,
    ) -> Result<Report, IntakeError> {
        import(&mut self.book, what, Source::open(path)?, options, &actor(), &Watch::default())
    }

    /// Takes bytes in as if they were a file of that name.
    pub(crate) fn bytes(
        &mut self,
        what: What,
        name: &str,
        bytes: &[u8],
        options: Options<'_>,
    ) -> Report {
        let source = Source::read(name, Cursor::new(bytes.to_vec())).expect("readable");
        import(&mut self.book, what, source, options, &actor(), &Watch::default()).expect("judged")
    }

    pub(crate) fn text(&mut self, what: What, name: &str, text: &str) -> Report {
        self.bytes(what, name, text.as_bytes(), Options::default())
    }

    /// Every row of every table.
    pub(crate) fn dump(&self) -> String {
        let store = rusqlite::Connection::open(&self.path).expect("open");
        let mut names = store
            .prepare("SELECT name FROM sqlite_schema WHERE type = 'table' ORDER BY name")
            .expect("schema");
        let names: Vec<String> = names
            .query_map([], |row| row.get(0))
            .expect("names")
            .collect::<Result<_, _>>()
            .expect("names");
        let mut out = String::new();
        for name in names {
            let mut rows = store.prepare(&format!("SELECT * FROM {name}")).expect("table");
            let width = rows.column_count();
            let mut rows = rows.query([]).expect("rows");
            while let Some(row) = rows.next().expect("row") {
                let cells: Vec<Value> = (0..width).map(|at| row.get(at).expect("cell")).collect();
                writeln!(out, "{name} {cells:?}").expect("text");
            }
        }
        out
    }
}

/// The problems of a report, one a line.
pub(crate) fn problems(report: &Report) -> String {
    report.problems.to_string()
}
