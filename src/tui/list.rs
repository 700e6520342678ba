//! A cursor in a list of which only a window is seen.

/// Cursor and first visible line.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct List {
    /// The line of the cursor.
    pub cursor: usize,
    /// The first visible line.
    pub offset: usize,
}

/// A movement of the cursor.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Step {
    /// By lines, down positive.
    Lines(isize),
    /// By pages, down positive.
    Pages(isize),
    /// To the first line.
    First,
    /// To the last line.
    Last,
}

impl List {
    /// Moves the cursor in a list of `len` lines of which `height` are seen.
    pub fn step(&mut self, step: Step, len: usize, height: usize) {
        let page = isize::try_from(height.max(2) - 1).unwrap_or(isize::MAX);
        self.cursor = match step {
            Step::Lines(by) => self.cursor.saturating_add_signed(by),
            Step::Pages(by) => self.cursor.saturating_add_signed(by.saturating_mul(page)),
            Step::First => 0,
            Step::Last => usize::MAX,
        };
        self.settle(len, height);
    }

    /// Moves in a text of `lines` lines of which `height` are seen; the cursor is the first that is seen.
    pub fn scroll(&mut self, step: Step, lines: usize, height: usize) {
        let step = match step {
            Step::Pages(by) => {
                let page = isize::try_from(height.max(2) - 1).unwrap_or(isize::MAX);
                Step::Lines(by.saturating_mul(page))
            }
            other => other,
        };
        self.step(step, lines.saturating_sub(height) + 1, 1);
    }

    /// Brings the cursor into the list and the window to the cursor.
    pub fn settle(&mut self, len: usize, height: usize) {
        self.cursor = self.cursor.min(len.saturating_sub(1));
        let least = (self.cursor + 1).saturating_sub(height.max(1));
        self.offset =
            self.offset.clamp(least, self.cursor).min(len.saturating_sub(height).max(least));
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn cursor_stays_in_the_window() {
        let mut list = List::default();
        list.step(Step::Lines(-1), 100, 10);
        assert_eq!((list.cursor, list.offset), (0, 0));
        list.step(Step::Pages(1), 100, 10);
        list.step(Step::Lines(1), 100, 10);
        assert_eq!((list.cursor, list.offset), (10, 1));
        list.step(Step::Last, 100, 10);
        assert_eq!((list.cursor, list.offset), (99, 90));
        list.step(Step::Lines(-1), 100, 10);
        assert_eq!((list.cursor, list.offset), (98, 90));
        list.settle(5, 10);
        assert_eq!((list.cursor, list.offset), (4, 0));
        list.settle(0, 0);
        assert_eq!((list.cursor, list.offset), (0, 0));
        list.step(Step::Last, 3, 0);
        assert_eq!((list.cursor, list.offset), (2, 2));
    }
}
