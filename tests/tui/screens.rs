//! Every screen as a person sees it: text with colours, in patterns and in ASCII, and the styles beside them.

use crate::bench::{ASCII, Bench, COLOUR, PLAIN, SIXTEEN};

/// Name of the view and the keys that lead to it.
const VIEWS: [(&str, &str); 20] = [
    ("fleet", "<Down><Down>"),
    ("fleet_filter", "/zel 01"),
    ("fleet_by_waiting", "s"),
    ("fleet_left_out", "x<Down>"),
    ("unit_chart", "<Down><Down><Down><Down><Down><Enter>"),
    ("unit_table", "<Enter>t<Down>"),
    ("tender_bids", "3<Down>"),
    ("tender_second_lot", "3n<End>"),
    ("tender_map", "3m"),
    ("tender_changes", "3mm"),
    ("tender_what_if", "3<Down>v<Down><Down>>"),
    ("tender_risk", "3u"),
    ("unit_working", "<Enter>e"),
    ("bid_working", "3e"),
    ("basis", "4<Down><Down>>"),
    ("basis_typed", "4<Down><Down><Enter>6,25<Enter>"),
    ("unit_more", "<Enter><PageDown>"),
    ("tender_help", "3?"),
    ("journal", "5"),
    ("help", "4?"),
];

fn views(width: u16, height: u16) {
    for (name, keys) in VIEWS {
        let mut out = String::new();
        for (word, caps) in [("colour", COLOUR), ("patterns", PLAIN), ("ascii", ASCII)] {
            let mut bench = Bench::demo(caps, width, height);
            bench.keys(keys);
            out.push_str(&format!("== {word}\n{}\n", bench.screen()));
            if caps != ASCII {
                out.push_str(&format!("-- styles\n{}\n", bench.styles()));
            }
        }
        insta::assert_snapshot!(format!("{name}_{width}x{height}"), out);
    }
}

#[test]
fn at_80_by_24() {
    views(80, 24);
}

#[test]
fn at_160_by_50() {
    views(160, 50);
}

#[test]
fn sixteen_colours_are_those_of_the_palette() {
    for (_, keys) in VIEWS {
        let mut bench = Bench::demo(SIXTEEN, 100, 30);
        let styles = bench.keys(keys).styles();
        assert!(!styles.contains('#'), "{styles}");
        let indexed = styles.split([' ', '\n']).find(|word| word.parse::<u8>().is_ok());
        assert_eq!(indexed, None, "a colour of the 256");
    }
}

#[test]
fn first_frame_comes_before_the_data() {
    use ironhum::tui::App;
    use ratatui::{Terminal, backend::TestBackend, layout::Size};
    let app = App::new(PLAIN, Size { width: 80, height: 24 });
    let mut terminal = Terminal::new(TestBackend::new(80, 24)).unwrap();
    terminal.draw(|frame| app.draw(frame)).unwrap();
    let shown = terminal.backend().to_string();
    assert!(shown.contains("Reading the book"), "{shown}");
    assert!(shown.contains("q quit"), "{shown}");
}
