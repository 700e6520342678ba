//! The house has five layers and an arrow may only point down. This test reads the `use` lines (and every
//! other path that starts at the crate) of each file and fails on one that points up or sideways.

use std::fs;
use std::path::{Path, PathBuf};

/// Layers from the ground up; those on one level may not see each other.
const LEVELS: &[&[&str]] = &[&["engine"], &["book", "exchange"], &["study"], &["cli", "tui"]];
/// The faces share a level, and the command line opens the screens.
const SIDEWAYS: &[(&str, &str)] = &[("cli", "tui")];

fn level(layer: &str) -> Option<usize> {
    LEVELS.iter().position(|level| level.contains(&layer))
}

fn files(folder: &Path, into: &mut Vec<PathBuf>) {
    for entry in fs::read_dir(folder).expect("src is readable") {
        let path = entry.expect("entry is readable").path();
        if path.is_dir() {
            files(&path, into);
        } else if path.extension().is_some_and(|e| e == "rs") {
            into.push(path);
        }
    }
}

/// Layers that a file names: `crate::LAYER`, also inside `use crate::{a::x, b::y}`.
fn named(text: &str) -> Vec<String> {
    let mut found = Vec::new();
    for (at, _) in text.match_indices("crate::") {
        let rest = &text[at + "crate::".len()..];
        let word = |s: &str| -> String {
            s.chars().take_while(|c| c.is_alphanumeric() || *c == '_').collect()
        };
        if let Some(list) = rest.strip_prefix('{') {
            let mut depth = 1;
            let mut start = true;
            for (i, c) in list.char_indices() {
                match c {
                    '{' => depth += 1,
                    '}' => depth -= 1,
                    ',' if depth == 1 => start = true,
                    c if start && c.is_alphabetic() => {
                        found.push(word(&list[i..]));
                        start = false;
                    }
                    _ => {}
                }
                if depth == 0 {
                    break;
                }
            }
        } else {
            found.push(word(rest));
        }
    }
    found
}

/// Arrows of a file that may not be: (from, to).
fn wrong(layer: &str, text: &str) -> Vec<String> {
    let Some(own) = level(layer) else { return Vec::new() };
    named(text)
        .into_iter()
        .filter(|to| to != layer)
        .filter(|to| level(to).is_some_and(|to| to >= own))
        .filter(|to| !SIDEWAYS.contains(&(layer, to)))
        .collect()
}

#[test]
fn arrows_point_down() {
    let src = Path::new(env!("CARGO_MANIFEST_DIR")).join("src");
    let mut all = Vec::new();
    files(&src, &mut all);
    assert!(all.len() > 30, "the sources were found");
    let mut faults = Vec::new();
    for path in all {
        let inner = path.strip_prefix(&src).expect("below src");
        let first = inner.components().next().expect("has a name").as_os_str();
        let layer = first.to_string_lossy().trim_end_matches(".rs").to_owned();
        let text = fs::read_to_string(&path).expect("is text");
        for to in wrong(&layer, &text) {
            faults.push(format!("{} ({layer}) names {to}", inner.display()));
        }
    }
    assert!(faults.is_empty(), "arrows that point up:\n{}", faults.join("\n"));
}

/// The engine computes: no file, clock, environment or terminal; the screens touch no store and no file.
#[test]
fn engine_and_screens_do_no_input_or_output() {
    let src = Path::new(env!("CARGO_MANIFEST_DIR")).join("src");
    let banned: &[(&str, &[&str])] = &[
        (
            "engine",
            &[
                "std::fs",
                "std::env",
                "std::io",
                "std::time",
                "Utc::now",
                "Local::now",
                "rusqlite",
                "ratatui",
            ],
        ),
        ("tui", &["rusqlite", "std::fs", "calamine", "csv::"]),
    ];
    let mut faults = Vec::new();
    for (layer, words) in banned {
        let mut all = Vec::new();
        if src.join(layer).is_dir() {
            files(&src.join(layer), &mut all);
        }
        for path in all {
            let text = fs::read_to_string(&path).expect("is text");
            for word in words.iter().filter(|word| text.contains(**word)) {
                faults.push(format!("{} uses {word}", path.display()));
            }
        }
    }
    assert!(faults.is_empty(), "{}", faults.join("\n"));
}

#[test]
fn the_reader_of_arrows_sees_them() {
    assert_eq!(wrong("engine", "use crate::book::Book;"), ["book"]);
    assert_eq!(wrong("engine", "use crate::{\n engine::x::{a, b},\n study::Desk};"), ["study"]);
    assert_eq!(wrong("book", "fn f() -> crate::exchange::X {}"), ["exchange"]);
    assert_eq!(wrong("study", "use crate::tui::run;"), ["tui"]);
    assert!(wrong("cli", "use crate::tui; use crate::study::Desk;").is_empty());
    assert_eq!(wrong("tui", "use crate::cli::args;"), ["cli"]);
}
