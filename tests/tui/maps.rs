//! The winner map in every mode: neighbouring regions differ in what is drawn, not in colour alone; every region is
//! named. Its cells are read back from the screen and held against the polygons.

use std::collections::{BTreeMap, BTreeSet};

use ironhum::engine::columns::{Money, TenderSheet};
use ironhum::study::tender::{BasisForFactors, LotResult, evaluate};

use crate::bench::{ASCII, Bench, COLOUR, PLAIN, SIXTEEN};

const SIGNS: &str = "123456789abcdefghijklmnopqrstuvwxyz";

/// Who wins at a point of the box, by rank; the same polygons as the screen draws, filled anew.
fn wins(lot: &LotResult, [a, b]: [f64; 2]) -> Option<usize> {
    lot.map.bids.iter().position(|cell| {
        let corners = &cell.polygon;
        let next = corners.iter().cycle().skip(1);
        !corners.is_empty()
            && corners.iter().zip(next).all(|(from, to)| {
                (to[0] - from[0]) * (b - from[1]) - (to[1] - from[1]) * (a - from[0]) >= 0.0
            })
    })
}

/// Holds the map that is on the screen against the lot.
fn check(bench: &Bench, lot: &LotResult, what: &str) {
    let lines: Vec<Vec<char>> = bench.lines().iter().map(|line| line.chars().collect()).collect();
    let screen = bench.screen();
    let text = |line: &[char]| line.iter().collect::<String>();
    let top = lines.iter().position(|line| text(line).contains(" B, EUR/kW")).unwrap() + 1;
    // Below the map its axis, below that the labels: 0 at its left end, the name of A flush right.
    let labels = lines.iter().position(|line| text(line).contains("A, EUR/kW   ")).unwrap();
    let bottom = labels - 1;
    let end = lines[labels].len() - 1;
    let name = lines[labels].iter().rposition(|c| *c == 'A').unwrap();
    let begin = lines[labels][..name].iter().rposition(|c| *c == '0').unwrap();
    let (width, height) = (end + 1 - begin, bottom - top);
    let cell = |x: usize, y: usize| lines[top + y].get(begin + x).copied().unwrap_or(' ');
    #[expect(clippy::cast_precision_loss, reason = "cells")]
    let winner = |x: usize, y: usize| {
        let middle = |at: usize, of: usize, most: f64| most * (at as f64 + 0.5) / of as f64;
        let (a, b) =
            (middle(x, width, lot.map.a_max), middle(height - 1 - y, height, lot.map.b_max));
        wins(lot, [a, b])
    };
    let sign = |n: usize| SIGNS.chars().nth(n).unwrap();
    let is_sign = |c: char| SIGNS.contains(c);
    let is_today = |c: char| matches!(c, '◆' | '@');

    let (mut with_cells, mut signed) = (BTreeSet::new(), BTreeSet::new());
    let mut fills: BTreeMap<usize, BTreeSet<char>> = BTreeMap::new();
    for y in 0..height {
        for x in 0..width {
            let (shown, Some(n)) = (cell(x, y), winner(x, y)) else { continue };
            if is_today(shown) {
                continue;
            }
            with_cells.insert(n);
            if is_sign(shown) {
                assert_eq!(shown, sign(n), "{what}: ({x}, {y})\n{screen}");
                signed.insert(n);
                continue;
            }
            fills.entry(n).or_default().insert(shown);
            for (x, y) in [(x + 1, y), (x, y + 1)] {
                if x >= width || y >= height {
                    continue;
                }
                let (beside, m) = (cell(x, y), winner(x, y));
                if m.is_some_and(|m| m != n) && !is_sign(beside) && !is_today(beside) {
                    assert_ne!(shown, beside, "{what}: bids {n} and {m:?} at ({x}, {y})\n{screen}");
                }
            }
        }
    }
    assert_eq!(with_cells, signed, "{what}: each region has its sign\n{screen}");
    assert!(fills.values().all(|fill| fill.len() == 1), "{what}: {fills:?}\n{screen}");
    if screen.contains(" more, on a larger screen") {
        assert!(lot.map.bids.len() > 12 && lines.len() < 24, "{what}\n{screen}");
        return;
    }
    let below: String = lines[bottom..].iter().map(|line| text(line) + "\n").collect();
    for (n, region) in lot.map.bids.iter().enumerate().filter(|(_, of)| !of.polygon.is_empty()) {
        if with_cells.contains(&n) {
            let fill = fills.get(&n).and_then(|fill| fill.first());
            let named = match fill {
                Some(fill) => format!("{}{fill} {} ", sign(n), region.bid),
                None => format!(" {} ", region.bid),
            };
            assert!(below.contains(&named), "{what}: {named:?}\n{screen}");
        } else {
            let words = below.split("too small to draw: ").nth(1).unwrap_or_default();
            assert!(words.contains(&region.bid), "{what}: {}\n{screen}", region.bid);
        }
    }
}

/// The demo with another first lot of so many bids, each the cheapest somewhere: prices lie on a surface that
/// falls ever less as the losses rise. `seed` draws the losses.
fn many(seed: u64, bids: usize) -> TenderSheet {
    let mut sheet = crate::demo::session().tenders.remove(0);
    let like = sheet.bids.iter().find(|bid| bid.bid == "O1").unwrap().clone();
    sheet.bids.retain(|bid| bid.lot != "L1");
    let mut state = seed;
    let mut draw = |from: f64, to: f64| {
        state =
            state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        #[expect(clippy::cast_precision_loss, reason = "a draw")]
        let part = (state >> 11) as f64 / (1u64 << 53) as f64;
        from + (to - from) * part
    };
    for n in 0..bids {
        let (iron, copper) = (draw(0.19, 0.387), draw(2.2, 3.25));
        let price = 9000.0 + 78_000.0 * (0.40 - iron).powi(2) + 2700.0 * (3.3 - copper).powi(2);
        let mut bid = like.clone();
        bid.bid = format!("R{}", n + 1);
        bid.price = Money::parse(&format!("{price:.2}")).unwrap();
        (bid.no_load_loss_w, bid.load_loss_w) = (1000.0 * iron, Some(1000.0 * copper));
        sheet.bids.push(bid);
    }
    sheet
}

fn lots(sheet: &TenderSheet) -> Vec<LotResult> {
    let context = crate::demo::session().desk.context().unwrap();
    let basis = BasisForFactors { assumptions: &context.assumptions, market: &context.market };
    evaluate(sheet, Some(&basis), None).unwrap().lots
}

#[test]
fn regions_are_told_apart_in_every_mode() {
    let demo = crate::demo::session().tenders.remove(0);
    let mut most = 0;
    let sheets =
        std::iter::once(demo).chain((1..=6).map(|seed| many(seed, if seed < 4 { 12 } else { 22 })));
    for (case, sheet) in sheets.enumerate() {
        let lots = lots(&sheet);
        let regions = lots[0].map.bids.iter().filter(|of| !of.polygon.is_empty()).count();
        most = most.max(regions);
        assert!(case == 0 || regions >= 8, "case {case} has {regions} regions");
        for (word, caps) in
            [("colour", COLOUR), ("sixteen", SIXTEEN), ("patterns", PLAIN), ("ascii", ASCII)]
        {
            for (width, height) in [(80, 24), (160, 50), (60, 15), (100, 30)] {
                let mut session = crate::demo::session();
                session.tenders = vec![sheet.clone()];
                let mut bench = Bench::on(caps, width, height, session);
                bench.keys(if width < 120 { "3m" } else { "3" });
                check(&bench, &lots[0], &format!("case {case}, {word}, {width}x{height}"));
                if case == 0 {
                    bench.keys("n");
                    check(&bench, &lots[1], &format!("second lot, {word}, {width}x{height}"));
                }
            }
        }
    }
    assert!(most >= 12, "{most}");
}

#[test]
fn many_regions_as_they_look() {
    for (width, height) in [(80, 24), (160, 50)] {
        let mut out = String::new();
        for (word, caps) in [("colour", COLOUR), ("patterns", PLAIN), ("ascii", ASCII)] {
            let mut session = crate::demo::session();
            session.tenders = vec![many(3, 16)];
            let mut bench = Bench::on(caps, width, height, session);
            bench.keys(if width < 120 { "3m" } else { "3" });
            out.push_str(&format!("== {word}\n{}\n", bench.screen()));
        }
        insta::assert_snapshot!(format!("map_of_many_{width}x{height}"), out);
    }
}
