//! Any size, any keys, any text: nothing panics, nothing from outside steers the terminal.

use ironhum::tui::{Caps, Session};
use proptest::prelude::*;
use ratatui::style::Color;

use crate::bench::{ASCII, Bench, COLOUR, PLAIN};

const KEYS: [&str; 35] = [
    "1",
    "2",
    "3",
    "4",
    "5",
    "<Tab>",
    "<BackTab>",
    "<Up>",
    "<Down>",
    "<PageUp>",
    "<PageDown>",
    "<Home>",
    "<End>",
    "<Enter>",
    "<Esc>",
    "/",
    "a",
    "0",
    "s",
    "x",
    "t",
    "m",
    "n",
    "p",
    "?",
    "<Left>",
    "<Right>",
    "<",
    "r",
    "e",
    "v",
    "u",
    "y",
    "R",
    "w",
];

/// A small session with names that a program should survive.
fn hostile() -> Session {
    let mut session = crate::demo::session();
    let fleet = std::sync::Arc::make_mut(&mut session.desk.fleet);
    let names = [
        "\u{1b}[2J\u{1b}[31mX",
        "変圧器台帳番号一二三",
        "e\u{301}\u{301}\u{301}a",
        "\u{202e}abc",
        "مرحبا",
        "👩‍👩‍👧‍👦 T",
        "\u{9b}31m",
        "a\tb\nc\rd",
        "\u{0}",
        "",
        "x",
        "\u{200b}\u{200b}",
    ];
    let mut other = ironhum::engine::decision::fleet::FleetColumns::default();
    for i in 0..40 {
        let name = format!("{}{i}", names[i % names.len()]);
        let terminals = fleet.terminals[fleet.kind[i] as usize];
        let site = names[(i + 5) % names.len()].repeat(4);
        other.push(&name, Some(&site), fleet.row[i], terminals, &fleet.facts(i));
    }
    *fleet = other;
    let bad = names.join("|");
    session.title.clone_from(&bad);
    session.basis_source.clone_from(&bad);
    session.desk.sheet.basis.name.clone_from(&bad);
    session.desk.sheet.basis.currency.clone_from(&bad);
    for offer in std::sync::Arc::make_mut(&mut session.desk.offers) {
        offer.offer = format!("{bad}{}", offer.offer);
    }
    for tender in &mut session.tenders {
        for bid in &mut tender.bids {
            bid.bid = format!("{bad}{}", bid.bid);
            bid.bidder = Some(bad.clone());
        }
    }
    for line in &mut session.journal {
        line.who.clone_from(&bad);
        line.what.clone_from(&bad);
        line.details.clone_from(&bad);
    }
    session.record = None;
    session
}

fn check(bench: &Bench, caps: Caps) {
    let terminal = bench.terminal();
    for cell in &terminal.backend().buffer().content {
        let symbol = cell.symbol();
        assert!(!symbol.chars().any(char::is_control), "{symbol:?}");
        assert!(!symbol.contains(['\u{202e}', '\u{2066}', '\u{200f}']), "{symbol:?}");
        assert!(!caps.ascii || symbol.is_ascii(), "{symbol:?}");
        // Whatever the terminal's own colours are, light or dark: only accents are painted.
        for painted in [cell.fg, cell.bg] {
            let accent =
                !matches!(painted, Color::Black | Color::White | Color::Gray | Color::Rgb(..));
            assert!(accent, "{painted} {symbol:?}");
        }
        if caps.colours == ironhum::tui::Colours::None {
            assert_eq!((cell.fg, cell.bg), (Color::Reset, Color::Reset));
        }
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 48, ..ProptestConfig::default() })]

    #[test]
    fn any_size_and_any_keys(
        steps in prop::collection::vec((0..KEYS.len(), 0u16..200, 0u16..60, 0..6u8), 1..25),
        caps in prop::sample::select(vec![COLOUR, PLAIN, ASCII]),
        bad_names in any::<bool>(),
    ) {
        let session = if bad_names { hostile() } else { crate::demo::session() };
        let mut bench = Bench::on(caps, 80, 24, session);
        for (key, width, height, resize) in steps {
            if resize == 0 {
                bench.resize(width, height);
            }
            bench.keys(KEYS[key]);
            check(&bench, caps);
        }
    }
}

#[test]
fn every_screen_at_every_small_size() {
    for caps in [COLOUR, ASCII] {
        let mut bench = Bench::on(caps, 80, 24, hostile());
        for keys in [
            "1", "x", "<Enter>", "t", "e", "<Esc>", "3", "e", "<Esc>", "u", "m", "m", "v", ">",
            "4", "5", "?",
        ] {
            bench.keys(keys);
            for (width, height) in [
                (0, 0),
                (1, 1),
                (0, 24),
                (80, 0),
                (2, 3),
                (59, 15),
                (60, 14),
                (60, 15),
                (61, 17),
                (119, 16),
                (120, 16),
                (110, 16),
                (65535 / 64, 16),
            ] {
                bench.resize(width, height);
                check(&bench, caps);
            }
        }
    }
}

#[test]
fn too_small_says_so_and_keeps_the_state() {
    let mut bench = Bench::demo(PLAIN, 80, 24);
    bench.keys("<Down><Down>");
    let before = bench.screen();
    bench.resize(40, 10);
    assert_eq!(bench.screen().trim_end(), "q quits; needs 60x15, not 40x10");
    bench.resize(80, 24);
    assert_eq!(bench.screen(), before);
}
