//! Text at the drawing border: cleaned of what garbles a terminal, measured in cells, cut by grapheme; numbers
//! grouped for reading. Owns no style.

use unicode_segmentation::UnicodeSegmentation as _;
use unicode_width::UnicodeWidthStr as _;

pub use crate::exchange::visible as clean;
use crate::study::figures::group;

/// Width in cells.
pub fn width(text: &str) -> usize {
    text.width()
}

/// The text cut to `cells`, with an ellipsis where something was cut; cleaned.
pub fn cut(text: &str, cells: usize) -> String {
    let text = clean(text);
    if text.width() <= cells {
        return text.into_owned();
    }
    if cells == 0 {
        return String::new();
    }
    let mut out = String::new();
    let mut used = 0;
    for grapheme in text.graphemes(true) {
        used += grapheme.width();
        if used > cells - 1 {
            break;
        }
        out.push_str(grapheme);
    }
    out.push('…');
    out
}

/// The text cut and filled with spaces to exactly `cells`, flush left.
pub fn left(text: &str, cells: usize) -> String {
    let mut out = cut(text, cells);
    let used = out.width();
    out.extend(std::iter::repeat_n(' ', cells.saturating_sub(used)));
    out
}

/// The text cut and filled with spaces to exactly `cells`, flush right.
pub fn right(text: &str, cells: usize) -> String {
    let cut = cut(text, cells);
    let used = cut.width();
    let mut out = " ".repeat(cells.saturating_sub(used));
    out.push_str(&cut);
    out
}

/// The text in lines of at most `cells`, broken at spaces where it can be; cleaned.
pub fn wrap(text: &str, cells: usize) -> Vec<String> {
    let text = clean(text);
    let (mut lines, mut line, mut used) = (Vec::new(), String::new(), 0);
    if cells == 0 {
        return lines;
    }
    for word in text.split(' ').filter(|word| !word.is_empty()) {
        let wide = word.width();
        if used > 0 && used + 1 + wide > cells {
            lines.push(std::mem::take(&mut line));
            used = 0;
        }
        if used > 0 {
            line.push(' ');
            used += 1;
        }
        for grapheme in word.graphemes(true) {
            let wide = grapheme.width();
            if used + wide > cells && used > 0 {
                lines.push(std::mem::take(&mut line));
                used = 0;
            }
            line.push_str(grapheme);
            used += wide;
        }
    }
    if !line.is_empty() {
        lines.push(line);
    }
    lines
}

/// Stands between groups of digits: a space at which no line is broken.
const GROUP: &str = "\u{a0}";

/// A number as [`group`] writes it, on one line: `1 234 567.8`.
pub fn number(value: f64, places: usize) -> String {
    group(value, places).replace(' ', GROUP)
}

/// A number with as many decimals as it needs, at most `places`.
pub fn plain(value: f64, places: usize) -> String {
    let text = number(value, places);
    if text.contains('.') {
        text.trim_end_matches('0').trim_end_matches('.').to_owned()
    } else {
        text
    }
}

/// A count, grouped.
pub fn count(n: usize) -> String {
    #[expect(clippy::cast_precision_loss, reason = "counts of rows")]
    number(n as f64, 0)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_stand_in_groups() {
        let spaced = |text: String| text.replace(GROUP, " ");
        assert_eq!(spaced(number(1234567.89, 1)), "1 234 567.9");
        assert_eq!(spaced(number(1234.0, 0)), "1 234");
        assert_eq!(number(999.4, 0), "999");
        assert_eq!(number(-0.2, 0), "0");
        assert_eq!(spaced(number(-123456.0, 0)), "−123 456");
        assert_eq!(plain(1.50, 3), "1.5");
        assert_eq!(plain(100.0, 2), "100");
        assert_eq!(wrap(&format!("a {}", number(1234.0, 0)), 5), ["a", "1\u{a0}234"]);
    }

    #[test]
    fn text_is_cut_between_graphemes() {
        assert_eq!(cut("Ossemar", 7), "Ossemar");
        assert_eq!(cut("Ossemar", 4), "Oss…");
        assert_eq!(cut("変圧器台帳", 6), "変圧…");
        assert_eq!(cut("e\u{301}e\u{301}e\u{301}", 2), "e\u{301}…");
        assert_eq!(left("変圧器", 5), "変圧…");
        assert_eq!(right("ab", 4), "  ab");
        assert_eq!(cut("x", 0), "");
    }

    #[test]
    fn nothing_from_outside_steers_the_terminal() {
        assert_eq!(clean("T\u{1b}[2J1\u{202e}x\u{9b}"), "T␛[2J1␦x␦");
        assert_eq!(wrap("one two three", 7), ["one two", "three"]);
        assert_eq!(wrap("one\ntwo", 9), ["one␊two"]);
        assert_eq!(wrap("abcdefgh", 3), ["abc", "def", "gh"]);
        assert!(wrap("a", 0).is_empty());
    }
}
