//! A letter as plain text: headings underlined, sentences wrapped, tables in columns.

use unicode_width::UnicodeWidthStr as _;

use super::{Block, Table};
use crate::exchange::visible;

/// Width to which sentences are wrapped, in columns of a terminal.
const WIDTH: usize = 100;

pub(super) fn write(blocks: &[Block]) -> String {
    let mut out = String::new();
    let mut last: Option<&Block> = None;
    for block in blocks {
        let apart = match (last, block) {
            (None, _) => false,
            (Some(Block::Heading(1 | 2, _) | Block::Table(_) | Block::Lines(_)), _)
            | (_, Block::Heading(..) | Block::Lines(_)) => true,
            _ => false,
        };
        if apart {
            out.push('\n');
        }
        one(&mut out, block);
        last = Some(block);
    }
    out
}

fn one(out: &mut String, block: &Block) {
    match block {
        Block::Heading(level, text) => {
            let text = visible(text);
            line(out, &text);
            match level {
                1 => line(out, &"=".repeat(text.width())),
                2 => line(out, &"-".repeat(text.width())),
                _ => {}
            }
        }
        Block::Text(text) => wrapped(out, "", text),
        Block::Points(points) => points.iter().for_each(|point| wrapped(out, "- ", point)),
        Block::Warning(text) => wrapped(out, "! ", text),
        Block::Table(table) => columns(out, table),
        Block::Lines(lines) => lines.iter().for_each(|text| line(out, &visible(text))),
    }
}

fn line(out: &mut String, text: &str) {
    out.push_str(text.trim_end());
    out.push('\n');
}

/// Words, a number with spaces between its thousands being one.
fn words(text: &str) -> Vec<String> {
    let digit = |c: Option<char>| c.is_some_and(|c| c.is_ascii_digit());
    let mut words: Vec<String> = Vec::new();
    for word in text.split(' ') {
        match words.last_mut() {
            Some(last) if digit(last.chars().last()) && digit(word.chars().next()) => {
                last.push(' ');
                last.push_str(word);
            }
            _ => words.push(word.to_owned()),
        }
    }
    words
}

/// Words on lines of [`WIDTH`]; `lead` stands before the first, spaces before the others.
fn wrapped(out: &mut String, lead: &str, text: &str) {
    let mut now = lead.to_owned();
    let mut empty = true;
    for word in words(&visible(text)) {
        if !empty && now.width() + 1 + word.width() > WIDTH {
            line(out, &now);
            now = " ".repeat(lead.width());
            empty = true;
        }
        if !empty {
            now.push(' ');
        }
        now.push_str(&word);
        empty = false;
    }
    line(out, &now);
}

fn columns(out: &mut String, table: &Table) {
    let heads = [
        table
            .columns
            .iter()
            .map(|column| visible(&column.heading).into_owned())
            .collect::<Vec<_>>(),
        table.columns.iter().map(|column| visible(&column.unit).into_owned()).collect(),
    ];
    let rows =
        table.rows.iter().map(|row| row.iter().map(|cell| visible(cell).into_owned()).collect());
    let lines: Vec<Vec<String>> = heads.into_iter().chain(rows).collect();
    let cell = |line: &Vec<String>, at: usize| line.get(at).map_or(0, |cell| cell.width());
    let widths: Vec<usize> = (0..table.columns.len())
        .map(|at| lines.iter().map(|line| cell(line, at)).max().unwrap_or(0))
        .collect();
    for cells in lines.iter().filter(|cells| cells.iter().any(|cell| !cell.is_empty())) {
        let mut text = String::new();
        for (at, column) in table.columns.iter().enumerate() {
            let cell = cells.get(at).map_or("", String::as_str);
            let pad = " ".repeat(widths[at].saturating_sub(cell.width()));
            if at > 0 {
                text.push_str("  ");
            }
            let (before, after) = if column.figures { (&pad[..], "") } else { ("", &pad[..]) };
            text.extend([before, cell, after]);
        }
        line(out, &text);
    }
}

#[cfg(test)]
mod tests {
    use super::super::{Column, Letter};

    #[test]
    fn a_letter_as_text() {
        let mut letter = Letter::default();
        letter.heading(1, "Tender Nö");
        letter.text("One.");
        letter.text("word ".repeat(30).trim_end());
        letter.table(
            vec![Column::words("bid"), Column::figures("price", "EUR")],
            vec![vec!["A".into(), "1 000".into()], vec!["Lå\u{1b}".into(), "9".into()]],
        );
        letter.warning("careful");
        letter.lines(vec!["    kept".into()]);
        let words = |n: usize| "word ".repeat(n).trim_end().to_owned();
        let want = format!(
            "Tender Nö\n=========\n\nOne.\n{}\n{}\nbid  price\n       EUR\nA    1 000\nLå␛      9\n\n! careful\n\n    kept\n",
            words(20),
            words(10)
        );
        assert_eq!(letter.to_text(), want);
    }
}
