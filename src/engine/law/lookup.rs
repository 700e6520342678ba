//! A limit from a table of ratings: the row itself, or the straight line between two rows.

use super::tables::Confidence;
use crate::engine::working::{Formula, Recorder};

/// A row: rating and limit.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Point {
    pub(super) rating: f64,
    pub(super) limit: f64,
    pub(super) confidence: Confidence,
}

/// What holds beyond the first and the last row.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Ends {
    /// The first row holds for smaller ratings too.
    pub(super) below: bool,
    /// The last row holds for larger ratings too.
    pub(super) above: bool,
    /// The line through the last two rows goes on.
    pub(super) extrapolate: bool,
}

/// A rating for which the table has no limit.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Outside {
    /// Smaller than the first row.
    Below,
    /// Larger than the last row.
    Above,
    /// The table is empty.
    Empty,
}

const ROW: Formula = Formula {
    name: "limit of the table at a rating that it lists",
    symbol: "L",
    formula: "L",
    unit: "",
    source: "the table named beside the step",
};
const LINE: Formula = Formula {
    name: "limit on the straight line through two ratings of the table",
    symbol: "L",
    formula: "L_a + (L_b − L_a)·(S − S_a)/(S_b − S_a)",
    unit: "",
    source: "linear interpolation or extrapolation as the law says; the table is named beside the step",
};

/// The limit at `rating` (unit of the rows), from rows sorted by rating. `of` says what it limits.
pub(super) fn limit<R: Recorder>(
    w: &mut R,
    points: &[Point],
    rating: f64,
    ends: Ends,
    of: &str,
) -> Result<(f64, Confidence), Outside> {
    let row = |w: &mut R, p: &Point| {
        w.step(&ROW, &[("L", p.limit)], p.limit);
        w.about(&|| of.to_owned());
        Ok((p.limit, p.confidence))
    };
    let (Some(first), Some(last)) = (points.first(), points.last()) else {
        return Err(Outside::Empty);
    };
    if let Some(exact) = points.iter().find(|p| p.rating == rating) {
        return row(w, exact);
    }
    if rating < first.rating {
        return if ends.below { row(w, first) } else { Err(Outside::Below) };
    }
    if rating > last.rating && ends.above {
        return row(w, last);
    }
    let after = points.iter().position(|p| p.rating > rating);
    let (a, b) = match (after, points) {
        (Some(n), _) => (&points[n - 1], &points[n]),
        (None, [.., a, b]) if ends.extrapolate => (a, b),
        _ => return Err(Outside::Above),
    };
    let value = a.limit + (b.limit - a.limit) * (rating - a.rating) / (b.rating - a.rating);
    let inputs =
        [("L_a", a.limit), ("L_b", b.limit), ("S", rating), ("S_a", a.rating), ("S_b", b.rating)];
    w.step(&LINE, &inputs, value);
    w.about(&|| of.to_owned());
    Ok((value, a.confidence.min(b.confidence)))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    #[test]
    fn rows_lines_and_ends() {
        let point = |rating, limit, confidence| Point { rating, limit, confidence };
        let rows = [
            point(50.0, 90.0, Confidence::TwoSources),
            point(100.0, 145.0, Confidence::Text),
            point(160.0, 210.0, Confidence::TwoSources),
        ];
        let at = |rating, ends| limit(&mut Silent, &rows, rating, ends, "").map(|(l, _)| l);
        let closed = Ends::default();
        assert_eq!(at(100.0, closed), Ok(145.0));
        assert_eq!(at(75.0, closed), Ok(117.5));
        assert_eq!(at(49.0, closed), Err(Outside::Below));
        assert_eq!(at(49.0, Ends { below: true, ..closed }), Ok(90.0));
        assert_eq!(at(161.0, closed), Err(Outside::Above));
        assert_eq!(at(161.0, Ends { above: true, ..closed }), Ok(210.0));
        assert_eq!(at(220.0, Ends { extrapolate: true, ..closed }), Ok(275.0));
        let between = limit(&mut Silent, &rows, 75.0, closed, "").expect("inside");
        assert_eq!(between.1, Confidence::Text, "no surer than the less sure of both rows");
        assert_eq!(limit(&mut Silent, &[], 1.0, closed, ""), Err(Outside::Empty));
    }
}
