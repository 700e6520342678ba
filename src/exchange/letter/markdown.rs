//! A letter as Markdown. Text never becomes markup: signs that Markdown knows are escaped, HTML is written as
//! entities, and lines that keep their spaces stand in a fence longer than any run of backticks in them.

use super::{Block, Table};
use crate::exchange::visible;

pub(super) fn write(blocks: &[Block]) -> String {
    let mut out = String::new();
    for block in blocks {
        if !out.is_empty() {
            out.push('\n');
        }
        match block {
            Block::Heading(level, text) => {
                out.extend(["#".repeat(*level).as_str(), " ", &escaped(text), "\n"]);
            }
            Block::Text(text) => out.extend([start(text).as_str(), "\n"]),
            Block::Points(points) => {
                for point in points {
                    out.extend([
                        "- ",
                        &start(point),
                        "
",
                    ]);
                }
            }
            Block::Warning(text) => out.extend(["> **Caution:** ", &escaped(text), "\n"]),
            Block::Table(table) => rows(&mut out, table),
            Block::Lines(lines) => fence(&mut out, lines),
        }
    }
    out
}

/// Text inside a line.
fn escaped(text: &str) -> String {
    let text = visible(text);
    let mut out = String::with_capacity(text.len() + 8);
    let mut before = None;
    let mut rest = text.chars().peekable();
    while let Some(c) = rest.next() {
        // A low line inside a word opens no emphasis: names of columns stay readable.
        let inside = |c: Option<char>| c.is_some_and(|c| c.is_ascii_alphanumeric());
        match c {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            // As an entity: readers of tables do not agree on what stands before an escaped one.
            '|' => out.push_str("&#124;"),
            '_' if inside(before) && inside(rest.peek().copied()) => out.push('_'),
            '\\' | '`' | '*' | '_' | '[' | ']' | '{' | '}' | '#' | '~' | '!' | '$' | '^' | '"'
            | '\'' => {
                out.push('\\');
                out.push(c);
            }
            // Nothing becomes a link by looking like one.
            ':' if rest.peek() == Some(&'/') => out.push_str("\\:"),
            '@' => out.push_str("\\@"),
            c => out.push(c),
        }
        before = Some(c);
    }
    out
}

/// Text at the start of a line: nothing that opens a list, a rule or an indented block.
fn start(text: &str) -> String {
    let text = escaped(text.trim_matches(' '));
    let digits = text.chars().take_while(char::is_ascii_digit).count();
    let (number, rest) = text.split_at(digits);
    match rest.chars().next() {
        Some('-' | '+' | '=') if digits == 0 => format!("\\{text}"),
        Some('.' | ')') if digits > 0 => format!("{number}\\{rest}"),
        _ => text,
    }
}

fn rows(out: &mut String, table: &Table) {
    let mut row = |cells: &mut dyn Iterator<Item = String>| {
        out.push('|');
        cells.for_each(|cell| out.extend([" ", &cell, " |"]));
        out.push('\n');
    };
    row(&mut table.columns.iter().map(|column| match column.unit.as_str() {
        "" => escaped(&column.heading),
        unit => escaped(&format!("{} ({unit})", column.heading)),
    }));
    row(&mut table.columns.iter().map(|c| (if c.figures { "---:" } else { "---" }).to_owned()));
    for cells in &table.rows {
        row(&mut (0..table.columns.len())
            .map(|at| escaped(cells.get(at).map_or("", |c| c.trim_matches(' ')))));
    }
}

fn fence(out: &mut String, lines: &[String]) {
    let runs = lines.iter().flat_map(|line| line.split(|c| c != '`')).map(str::len);
    let fence = "`".repeat(runs.max().unwrap_or(0).max(2) + 1);
    out.extend([fence.as_str(), "text\n"]);
    for line in lines {
        out.extend([visible(line).trim_end(), "\n"]);
    }
    out.extend([fence.as_str(), "\n"]);
}

#[cfg(test)]
mod tests {
    use super::super::{Column, Letter};

    #[test]
    fn a_letter_as_markdown() {
        let mut letter = Letter::default();
        letter.heading(2, "Lot #1");
        letter.text("- no list <b>");
        letter.text("2027. no list, max_sound_db is kept, _this_ not");
        letter.table(
            vec![Column::words("bid"), Column::figures("price", "EUR")],
            vec![vec!["a|b\n".into(), "1".into()]],
        );
        letter.points(vec!["1) x".into(), "+ y".into()]);
        letter.lines(vec!["  ``` out".into()]);
        let want = "## Lot \\#1\n\n\\- no list &lt;b&gt;\n\n\
             2027\\. no list, max_sound_db is kept, \\_this\\_ not\n\n\
             | bid | price (EUR) |\n| --- | ---: |\n| a&#124;b␊ | 1 |\n\n- 1\\) x\n- \\+ y\n\n\
             ````text\n  ``` out\n````\n";
        assert_eq!(letter.to_markdown(), want);
    }
}
