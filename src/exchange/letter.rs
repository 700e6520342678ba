//! A letter: headings, sentences, tables and workings, written as plain text or as Markdown.
//!
//! One content, two hands: [`Letter::to_text`] for a terminal or a mail, [`Letter::to_markdown`] for a report.
//! What stands in it may come from anyone: control characters are made visible, Markdown signs are escaped.

mod markdown;
mod text;

/// A letter, block by block.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Letter {
    blocks: Vec<Block>,
}

#[derive(Clone, Debug, PartialEq)]
enum Block {
    Heading(usize, String),
    Text(String),
    Points(Vec<String>),
    Warning(String),
    Table(Table),
    Lines(Vec<String>),
}

/// A table of cells that are written already.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Table {
    /// Its columns.
    pub columns: Vec<Column>,
    /// Its rows, a cell for each column.
    pub rows: Vec<Vec<String>>,
}

/// A column of a table.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Column {
    /// What stands above it.
    pub heading: String,
    /// The unit of its figures, "" for none.
    pub unit: String,
    /// Whether it holds figures.
    pub figures: bool,
}

impl Column {
    /// A column of words.
    pub fn words(heading: impl Into<String>) -> Self {
        Self { heading: heading.into(), ..Self::default() }
    }

    /// A column of figures.
    pub fn figures(heading: impl Into<String>, unit: impl Into<String>) -> Self {
        Self { heading: heading.into(), unit: unit.into(), figures: true }
    }
}

impl Letter {
    /// A heading; 1 is the title.
    pub fn heading(&mut self, level: usize, text: impl Into<String>) {
        self.blocks.push(Block::Heading(level.clamp(1, 6), text.into()));
    }

    /// A sentence or a few, on a line of their own.
    pub fn text(&mut self, text: impl Into<String>) {
        self.blocks.push(Block::Text(text.into()));
    }

    /// A list; nothing where it is empty.
    pub fn points(&mut self, points: Vec<String>) {
        if !points.is_empty() {
            self.blocks.push(Block::Points(points));
        }
    }

    /// Something to be careful about.
    pub fn warning(&mut self, text: impl Into<String>) {
        self.blocks.push(Block::Warning(text.into()));
    }

    /// A table; nothing where it has no rows.
    pub fn table(&mut self, columns: Vec<Column>, rows: Vec<Vec<String>>) {
        if !rows.is_empty() {
            self.blocks.push(Block::Table(Table { columns, rows }));
        }
    }

    /// Lines that keep their spaces: a working, bars.
    pub fn lines(&mut self, lines: Vec<String>) {
        if !lines.is_empty() {
            self.blocks.push(Block::Lines(lines));
        }
    }

    /// The letter as plain text.
    pub fn to_text(&self) -> String {
        text::write(&self.blocks)
    }

    /// The letter as Markdown (CommonMark with tables).
    pub fn to_markdown(&self) -> String {
        markdown::write(&self.blocks)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn empty_tables_and_lists_are_left_out() {
        let mut letter = Letter::default();
        letter.table(vec![Column::words("bid")], Vec::new());
        letter.points(Vec::new());
        letter.lines(Vec::new());
        assert_eq!((letter.to_text(), letter.to_markdown()), (String::new(), String::new()));
    }
}
