//! Text from outside made safe to show, on a terminal, on the screens and in a letter: what moves the cursor, hides
//! or turns the reading direction becomes a mark of one cell. JSON and CSV keep the text as it is.

use std::borrow::Cow;

/// The mark shown instead of a character that changes how text is shown instead of showing itself.
const fn mark(c: char) -> Option<char> {
    Some(match c {
        // Unicode has a picture of each control character of ASCII.
        '\0'..='\u{1f}' => match char::from_u32(0x2400 + c as u32) {
            Some(picture) => picture,
            None => '␦',
        },
        '\u{7f}' => '␡',
        '\u{2028}' | '\u{2029}' => '␤',
        // The other control characters, the soft hyphen, marks of direction, and what has no width.
        '\u{80}'..='\u{9f}'
        | '\u{ad}'
        | '\u{61c}'
        | '\u{180e}'
        | '\u{200b}'..='\u{200f}'
        | '\u{202a}'..='\u{202e}'
        | '\u{2060}'..='\u{206f}'
        | '\u{feff}'
        | '\u{fff9}'..='\u{fffb}'
        | '\u{e0000}'..='\u{e007f}' => '␦',
        _ => return None,
    })
}

/// The text with marks for what would not be seen.
pub fn visible(text: &str) -> Cow<'_, str> {
    // Nearly all text is of this kind, and there is much of it.
    if text.bytes().all(|byte| matches!(byte, b' '..=b'~')) {
        return Cow::Borrowed(text);
    }
    if text.chars().any(|c| mark(c).is_some()) {
        Cow::Owned(text.chars().map(|c| mark(c).unwrap_or(c)).collect())
    } else {
        Cow::Borrowed(text)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_is_not_seen_is_made_visible() {
        assert_eq!(visible("a\u{1b}[31m\tb\nc\u{7f}\u{9b}"), "a␛[31m␉b␊c␡␦");
        assert_eq!(visible("Süd \u{202e}dnob\u{200b}\u{2066}\u{feff}"), "Süd ␦dnob␦␦␦");
        assert!(matches!(visible("Łódź 東 ±5 % …"), Cow::Borrowed(_)));
    }
}
