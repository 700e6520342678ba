//! Text in every delimiter, decimal sign and encoding, and workbooks: the same fleet from each.

use std::fmt::Write as _;

use ironhum::engine::columns::Unit;
use ironhum::exchange::{Decimal, Delimiter, Encoding, Hints};
use ironhum::study::intake::{Options, What};
use proptest::prelude::*;
use rust_xlsxwriter::{ExcelDateTime, Format, Workbook};

use crate::support::{Desk, problems};

fn expected() -> Vec<Unit> {
    let unit = |name: &str, rated_kva, site: &str, growth| Unit {
        unit: name.into(),
        rated_kva,
        site: Some(site.into()),
        load_growth_pct: Some(growth),
        ..Unit::blank()
    };
    vec![unit("001", 400.0, "Zürich, Süd", 1.25), unit("B", 1234.567, "Łódź 東", -0.5)]
}

const POINT: &str =
    "unit,rated_kva,site,load_growth_pct\n001,400,\"Zürich, Süd\",1.25\nB,1234.567,Łódź 東,-0.5\n";
const COMMA: &str = "unit;rated_kva;site;load_growth_pct\r\n001;400;Zürich, Süd;1,25\r\nB;1234,567;Łódź 東;-5E-1\r\n";

fn units_of(bytes: &[u8]) -> (Vec<Unit>, String) {
    let mut desk = Desk::empty();
    let report = desk.bytes(What::Units, "u.csv", bytes, Options::default());
    assert!(report.stored, "{}", problems(&report));
    let recognised = report.recognised.expect("recognised").to_string();
    (desk.book.units().expect("units"), recognised)
}

fn utf16(text: &str, is_big: bool) -> Vec<u8> {
    let units = std::iter::once(0xFEFF).chain(text.encode_utf16());
    units.flat_map(|unit| if is_big { unit.to_be_bytes() } else { unit.to_le_bytes() }).collect()
}

#[test]
fn delimiters_decimals_and_encodings_are_recognised_and_said() {
    let marked = [b"\xEF\xBB\xBF", POINT.as_bytes()].concat();
    let tabs = "unit\trated_kva\tsite\tload_growth_pct\n001\t400\tZürich, Süd\t1.25\nB\t1234.567\tŁódź 東\t-0.5";
    for (bytes, said) in [
        (POINT.as_bytes().to_vec(), "text, delimiter comma, decimal point, UTF-8"),
        (marked, "text, delimiter comma, decimal point, UTF-8"),
        (COMMA.as_bytes().to_vec(), "text, delimiter semicolon, decimal comma, UTF-8"),
        (tabs.as_bytes().to_vec(), "text, delimiter tab, decimal point, UTF-8"),
        (utf16(COMMA, false), "text, delimiter semicolon, decimal comma, UTF-16LE"),
        (utf16(POINT, true), "text, delimiter comma, decimal point, UTF-16BE"),
    ] {
        assert_eq!(units_of(&bytes), (expected(), said.to_owned()), "{said}");
    }
}

#[test]
fn windows_1252_is_told_by_its_first_letter_beyond_ascii() {
    let mut bytes = b"unit;rated_kva;site;load_growth_pct\nA;1,5;plain;\n".to_vec();
    bytes.extend(b"B;400;Z\xFCrich \x80;0,5\n");
    let (units, said) = units_of(&bytes);
    assert_eq!(units[1].site.as_deref(), Some("Zürich €"));
    assert_eq!(said, "text, delimiter semicolon, decimal comma, Windows-1252");

    let mut mixed = "unit,rated_kva,site\nA,1,Zürich\n".as_bytes().to_vec();
    mixed.extend(b"B,1,Z\xFCrich\n");
    let mut desk = Desk::empty();
    let report = desk.bytes(What::Units, "u.csv", &mixed, Options::default());
    assert!(
        problems(&report).starts_with("u.csv:3: site: Z\u{FFFD}rich: is not UTF-8"),
        "{report:?}"
    );
}

#[test]
fn long_text_is_decoded_across_buffers() {
    let mut text = String::from("unit,rated_kva,note\n");
    let note = "東京€ä".repeat(40);
    for row in 0..5000 {
        writeln!(text, "U{row},{}.5,{note}", row + 1).expect("text");
    }
    let (units, _) = units_of(&utf16(&text, false));
    assert_eq!(units.len(), 5000);
    assert!(units.iter().all(|unit| unit.note.as_deref() == Some(&note)));
    assert_eq!(units[4999].rated_kva, 5000.5);
}

#[test]
fn doubtful_thousands_are_refused_until_it_is_said_what_they_mean() {
    let mut desk = Desk::empty();
    let text = "unit;rated_kva\na;1.250\nb;630\n";
    let report = desk.text(What::Units, "u.csv", text);
    assert_eq!(
        problems(&report),
        "u.csv:2: rated_kva: 1.250: could mean thousands or decimals, and no other number of the file tells; \
         say which with --decimal point or --decimal comma\n"
    );
    let hints = Hints { decimal: Some(Decimal::Point), ..Hints::default() };
    let options = Options { hints, ..Options::default() };
    assert!(desk.bytes(What::Units, "u.csv", text.as_bytes(), options).stored);
    assert_eq!(desk.book.unit("a").expect("unit").rated_kva, 1.25);
    for (text, why) in [
        ("unit,rated_kva\na,\"1,234\"\nb,2.5\n", "may group thousands"),
        ("unit;rated_kva\na;1.234,5\nb;2,5\n", "may group thousands"),
        ("unit;rated_kva\na;1.5\nb;2,5\nc;3,5\n", "the decimal sign of this file is the comma"),
        ("unit,rated_kva\na,\"1,5\"\nb,2.5\n", "the decimal sign of this file is the point"),
    ] {
        let report = desk.text(What::Units, "u.csv", text);
        let told = problems(&report);
        assert!(told.starts_with("u.csv:2: rated_kva:") && told.contains(why), "{told}");
    }
}

#[test]
fn hints_go_before_what_would_be_recognised() {
    let hints = Hints {
        delimiter: Some(Delimiter::Tab),
        decimal: Some(Decimal::Comma),
        encoding: Some(Encoding::Windows1252),
    };
    let mut desk = Desk::empty();
    let bytes = b"unit\trated_kva\tsite\na\t1,250\t\xC3\xBC\n";
    let report = desk.bytes(What::Units, "u", bytes, Options { hints, ..Options::default() });
    assert!(report.stored, "{}", problems(&report));
    let unit = desk.book.unit("a").expect("unit");
    assert_eq!((unit.rated_kva, unit.site.as_deref()), (1.25, Some("Ã¼")));
}

#[test]
fn numbers_of_a_workbook_stay_numbers() {
    let mut workbook = Workbook::new();
    let sheet = workbook.add_worksheet();
    let date = Format::new().set_num_format("yyyy-mm-dd");
    let header = ["unit", "rated_kva", "site", "load_growth_pct", "note", "year_made"];
    for (column, name) in (0_u16..).zip(header) {
        sheet.write(1, column, name).expect("write");
    }
    sheet.write(2, 0, "001").expect("write");
    sheet.write(2, 1, 400).expect("write");
    sheet.write(2, 2, "Zürich, Süd").expect("write");
    sheet.write(2, 3, 1.25).expect("write");
    sheet.write(4, 0, 4711).expect("write");
    sheet.write(4, 1, 0.1 + 0.2).expect("write");
    let day = ExcelDateTime::from_ymd(2027, 3, 31).expect("date");
    sheet.write_with_format(4, 4, &day, &date).expect("write");
    sheet.write(4, 5, 1987).expect("write");
    let bytes = workbook.save_to_buffer().expect("workbook");

    let (units, said) = units_of(&bytes);
    assert_eq!(said, "workbook, sheet Sheet1");
    assert_eq!(units[0], expected()[0]);
    assert_eq!((units[1].unit.as_str(), units[1].rated_kva), ("4711", 0.1 + 0.2));
    assert_eq!((units[1].note.as_deref(), units[1].year_made), (Some("2027-03-31"), Some(1987)));
}

#[test]
fn a_workbook_tells_its_rows_and_its_errors() {
    let mut workbook = Workbook::new();
    let sheet = workbook.add_worksheet();
    sheet.write(0, 0, "unit").expect("write");
    sheet.write(0, 1, "rated_kva").expect("write");
    sheet.write(2, 0, "a").expect("write");
    let error = rust_xlsxwriter::Formula::new("=NA()").set_result("#N/A");
    sheet.write(2, 1, error).expect("write");
    sheet.write(3, 0, "b").expect("write");
    sheet.write(3, 1, "1,5").expect("write");
    sheet.write(4, 0, "c").expect("write");
    sheet.write(4, 1, 5).expect("write");
    sheet.write(4, 2, "beyond").expect("write");
    let bytes = workbook.save_to_buffer().expect("workbook");
    let mut desk = Desk::empty();
    let report = desk.bytes(What::Units, "u.xlsx", &bytes, Options::default());
    let told = problems(&report);
    assert!(
        told.contains("u.xlsx:3: rated_kva: #N/A: is a spreadsheet error; mend the formula"),
        "{told}"
    );
    assert!(told.contains("u.xlsx:4: rated_kva: 1,5: is not a number"), "{told}");
    assert!(told.contains("u.xlsx:5: (row): 3 cells: the header has 2"), "{told}");
    assert_eq!(report.problems.count(), 3);
}

#[test]
fn what_is_no_table_is_refused_in_words() {
    let mut desk = Desk::empty();
    let before = desk.dump();
    let wide = vec!["c"; 501].join(",");
    let endless = format!("unit,rated_kva\na,1\nb,\"{}", "x\n".repeat(1 << 20));
    for (bytes, told) in [
        (&b""[..], "f:1: (file): (blank): is empty"),
        (b" \n\n  \n", "f:1: (file): (blank): holds no header"),
        (b"unit,rated_kva\n\0\x01", "f:1: (file): (blank): is a binary file"),
        (b"\xD0\xCF\x11\xE0\xA1\xB1\x1A\xE1", "f:1: (file): (blank): is an old workbook"),
        (b"PK\x03\x04 and no more", "f:1: (file): (blank): is not a workbook that can be read"),
        (wide.as_bytes(), "f:1: (file): (blank): has 501 columns; at most 500 are read"),
        (b"\xFF\xFEu\0n\0\0\xD8", "f:1: (file): (blank): is not valid UTF-16"),
        (endless.as_bytes(), "a row is longer than 1 MiB; is a quote left open?"),
    ] {
        let options = Options { skip_bad: true, ..Options::default() };
        let report = desk.bytes(What::Units, "f", bytes, options);
        assert!(problems(&report).contains(told), "{told}: {}", problems(&report));
        assert!(report.rejected && !report.stored, "{told}");
    }
    let dir = desk.dir.path().to_owned();
    let refused = |desk: &mut Desk, path: &std::path::Path| {
        desk.file(What::Units, path, Options::default()).expect_err("refused").to_string()
    };
    assert!(refused(&mut desk, &dir).ends_with("is a directory; name a file in it"));
    assert!(refused(&mut desk, &dir.join("none.csv")).starts_with("there is no file"));
    assert_eq!(desk.dump(), before);
}

/// Text that looks like a file of ours, with odd bytes in it.
fn oddly_written() -> impl Strategy<Value = Vec<u8>> {
    let piece = prop_oneof![
        proptest::sample::select(vec![
            "unit",
            "rated_kva",
            "interval",
            "timestamp",
            "price",
            "lot",
            ",",
            ";",
            "\t",
            "\n",
            "\r\n",
            "\"",
            "1,5",
            "1.5",
            "-1e9",
            "NaN",
            "[[lot]]",
            "[budget]",
            "[range.",
            "]",
            "=",
            "'",
            "a",
            "2027-03-31",
            "\u{feff}",
            "\u{202e}",
            "é",
            "{",
            "}",
        ])
        .prop_map(|text| text.as_bytes().to_vec()),
        proptest::collection::vec(any::<u8>(), 1..4),
    ];
    proptest::collection::vec(piece, 0..60).prop_map(|pieces| pieces.concat())
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(64))]
    #[test]
    fn any_bytes_are_judged(bytes in oddly_written(), marked in 0..4_u8) {
        let mark: &[u8] = match marked {
            0 => b"\xFF\xFE",
            1 => b"PK\x03\x04",
            2 => b"\xEF\xBB\xBF",
            _ => b"",
        };
        let bytes = [mark, &bytes].concat();
        let mut desk = Desk::empty();
        for (_, what) in What::WORDS {
            let before = desk.dump();
            let options = Options { name: Some("n".into()), ..Options::default() };
            let report = desk.bytes(what, "odd", &bytes, options);
            prop_assert_eq!(report.rejected, !report.problems.is_empty());
            for line in problems(&report).lines() {
                prop_assert!(line.starts_with("odd:"), "{}", line);
                prop_assert!(!line.contains('\u{1b}') && !line.contains('\u{202e}'), "{}", line);
            }
            if report.stored {
                prop_assert!(report.bad == 0);
            } else {
                prop_assert_eq!(&desk.dump(), &before);
            }
        }
    }
}
