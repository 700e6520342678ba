//! Bars in text: owning costs split into price, adders, iron, copper and auxiliaries on one scale, and swings.

use unicode_width::UnicodeWidthStr as _;

use super::lot::About;
use super::money;
use crate::exchange::Letter;

/// Cells of the longest bar.
const CELLS: f64 = 60.0;
/// Fills of the parts, in drawing order: they differ without colour.
const FILLS: [(&str, &str); 5] =
    [("░", "price"), ("▒", "adders"), ("█", "iron"), ("▓", "copper"), ("▚", "auxiliaries")];

/// Cells up to a value on a scale.
#[expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "between 0 and the number of cells"
)]
fn cells(value: f64, scale: f64, all: f64) -> usize {
    if scale > 0.0 { (value / scale * all).round().clamp(0.0, all) as usize } else { 0 }
}

/// One bar: each part from where the one before it ends.
fn bar(parts: &[f64], scale: f64) -> String {
    let (mut sum, mut end, mut bar) = (0.0, 0, String::new());
    for (part, (fill, _)) in parts.iter().zip(FILLS) {
        sum += part.max(0.0);
        let to = cells(sum, scale, CELLS);
        bar.push_str(&fill.repeat(to.saturating_sub(end)));
        end = end.max(to);
    }
    bar
}

/// The ranked bids as split bars on one scale.
pub(in crate::study) fn cost_bars(letter: &mut Letter, about: &About) {
    let bids: Vec<_> = about.ranked().collect();
    let parts = |bid: &crate::study::tender::BidResult| {
        [bid.price, bid.added_cost, bid.no_load_cost, bid.load_cost, bid.auxiliary_cost]
    };
    let whole = |parts: [f64; 5]| parts.iter().map(|part| part.max(0.0)).sum::<f64>();
    let scale = bids.iter().map(|bid| whole(parts(bid))).fold(0.0, f64::max);
    let width = bids.iter().map(|bid| bid.bid.width()).max().unwrap_or(0);
    let mut lines: Vec<String> = bids
        .iter()
        .map(|bid| {
            let pad = " ".repeat(width.saturating_sub(bid.bid.width()));
            let bar = bar(&parts(bid), scale);
            format!("{}{pad}  {bar} {}", bid.bid, money(bid.owning_cost))
        })
        .collect();
    if !lines.is_empty() {
        let legend = FILLS.map(|(fill, part)| format!("{fill} {part}"));
        lines.push(format!("{}  {}", " ".repeat(width), legend.join("  ")));
    }
    letter.lines(lines);
}

/// Cells of a swing chart.
const SWING: f64 = 40.0;

/// A swing from `low` to `high` inside `least` … `most`, with a mark at `base`.
pub(super) fn swing(low: f64, high: f64, base: f64, [least, most]: [f64; 2]) -> String {
    let at = |value: f64| cells(value - least, most - least, SWING);
    let (from, to, mark) = (at(low.min(high)), at(low.max(high)), at(base));
    let end = cells(1.0, 1.0, SWING);
    let cell = |n: usize| match n {
        n if n == mark => '│',
        n if (from..=to).contains(&n) => '█',
        _ => '·',
    };
    (0..=end).map(cell).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn parts_fill_their_share() {
        let drawn = bar(&[50.0, 10.0, 20.0, 15.0, 5.0], 200.0);
        assert_eq!(drawn.chars().count(), 30);
        assert_eq!(drawn.matches('░').count(), 15);
        assert_eq!(drawn.matches('█').count(), 6);
        assert_eq!(bar(&[1.0, -5.0, 0.0, 0.0, 0.0], 1.0), "░".repeat(60));
        assert_eq!(bar(&[0.0; 5], 0.0), "");
    }

    #[test]
    fn swings_are_marked_at_the_base() {
        let drawn = swing(10.0, 20.0, 12.5, [0.0, 40.0]);
        let cells: Vec<char> = drawn.chars().collect();
        assert_eq!(
            (cells.len(), cells[9], cells[10], cells[20], cells[21]),
            (41, '·', '█', '█', '·')
        );
        assert_eq!((cells[12], cells[13]), ('█', '│'));
    }
}
