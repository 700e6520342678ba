//! Hostile text in a letter: whatever a bidder writes stays text when an independent reader of Markdown reads it, and
//! nothing in the plain form can steer a terminal.

use ironhum::exchange::letter::Column;
use ironhum::exchange::{Letter, visible};
use proptest::prelude::*;
use pulldown_cmark::{Event, Options, Parser, Tag, TagEnd};

/// A letter with one text in every place that takes text.
fn everywhere(text: &str) -> Letter {
    let mut letter = Letter::default();
    letter.heading(2, text);
    letter.text(text);
    letter.points(vec![text.to_owned(), text.to_owned()]);
    letter.warning(text);
    letter.table(
        vec![Column::words(text), Column::figures("price", "EUR")],
        vec![vec![text.to_owned(), "1".to_owned()], vec![text.to_owned(), text.to_owned()]],
    );
    letter.lines(vec![text.to_owned()]);
    letter
}

/// What a reader of Markdown makes of it: the texts, and the markup that a letter has no use for.
fn read(markdown: &str) -> (Vec<String>, Vec<String>) {
    let (mut texts, mut wrong) = (Vec::new(), Vec::new());
    let mut text = String::new();
    for event in Parser::new_ext(markdown, Options::all() - Options::ENABLE_SMART_PUNCTUATION) {
        match event {
            Event::Text(part) => text.push_str(&part),
            Event::End(
                TagEnd::Heading(_)
                | TagEnd::Paragraph
                | TagEnd::Item
                | TagEnd::TableCell
                | TagEnd::CodeBlock,
            ) => texts.push(std::mem::take(&mut text)),
            Event::Start(
                Tag::Heading { .. }
                | Tag::Paragraph
                | Tag::BlockQuote(None)
                | Tag::List(None)
                | Tag::Item
                | Tag::Table(_)
                | Tag::TableHead
                | Tag::TableRow
                | Tag::TableCell
                | Tag::Strong
                | Tag::CodeBlock(_),
            )
            | Event::End(_) => {}
            other => wrong.push(format!("{other:?}")),
        }
    }
    (texts, wrong)
}

fn stays_text(text: &str) {
    let markdown = everywhere(text).to_markdown();
    let (texts, wrong) = read(&markdown);
    assert!(wrong.is_empty(), "{wrong:?}\n{markdown}");
    let (seen, one) = (visible(text), |text: &str| text.trim_matches(' ').to_owned());
    let want = one(&seen);
    let code = format!("{}\n", seen.trim_end());
    let want: Vec<String> = vec![
        want.clone(),
        want.clone(),
        want.clone(),
        want.clone(),
        one(&format!("Caution: {want}")),
        want.clone(),
        "price (EUR)".to_owned(),
        want.clone(),
        "1".to_owned(),
        want.clone(),
        want,
        code,
    ];
    assert_eq!(texts, want, "{markdown}");
}

#[test]
fn what_bidders_may_write_stays_text() {
    for text in [
        "Nord | <script>alert(1)</script> & Söhne",
        "| --- | --- |",
        "[pay here](https://example.invalid) ![x](y) https://example.invalid",
        "**bold** _emphasis_ __strong__ ~~gone~~ `code` ``` ====",
        "# heading #",
        "- item",
        "+ item",
        "1. item",
        "1) item",
        "--- ",
        "=====",
        "> quote",
        "\\",
        "a\\|b\\\\|c",
        "&lt; &#124; &amp;",
        "x\u{1b}[31m\r\n\n## injected\t|",
        "[ ] task [^1] $math$ {#id .class}",
        "<!-- -->",
        "a_b_c max_sound_db",
        "```\nout of the fence",
        ":::note",
        "| a",
        "'single' \"double\" …",
        "^up^ H~2~O",
    ] {
        stays_text(text);
        let plain = everywhere(text).to_text();
        let steering = |c: char| c.is_control() && c != '\n';
        assert!(!plain.contains(steering) && !plain.contains('\u{202e}'), "{plain:?}");
    }
}

proptest! {
    #[test]
    fn any_text_stays_text(text in "\\PC*[a-z]") {
        stays_text(text.trim());
    }

    #[test]
    fn any_signs_stay_text(text in "[-+*_`|<>&\\[\\](){}#!~^$:=.1 a\\\\\"'@/\n\t\u{1b}]{0,24}x") {
        stays_text(text.trim());
    }
}
