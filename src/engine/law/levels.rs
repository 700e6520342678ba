//! Efficiency levels by rating and impulse-level band, as the US and Canadian laws state them: the efficiency of
//! the subject at the law's own load and reference temperature, held against the level.

use super::lookup::{Ends, Point, limit};
use super::tables::Confidence;
use super::{Bound, Finding, Limit, Subject};
use crate::engine::transformer::efficiency::at_load;
use crate::engine::transformer::losses::Losses;
use crate::engine::working::Working;

/// The levels of one impulse-level band, sorted by rating (kVA).
pub(super) struct Band {
    /// Highest impulse level of the band (kV).
    pub(super) up_to_kv: f64,
    /// Its rows.
    pub(super) points: Vec<Point>,
}

/// Sorts rows of (band in words, row) into bands, lowest first.
pub(super) fn bands<'a>(rows: impl Iterator<Item = (&'a str, Point)>) -> Vec<Band> {
    let mut bands: Vec<Band> = Vec::new();
    for (words, point) in rows {
        let up_to_kv = upper_end(words);
        match bands.iter_mut().find(|band| band.up_to_kv == up_to_kv) {
            Some(band) => band.points.push(point),
            None => bands.push(Band { up_to_kv, points: vec![point] }),
        }
    }
    for band in &mut bands {
        band.points.sort_by(|a, b| a.rating.total_cmp(&b.rating));
    }
    bands.sort_by(|a, b| a.up_to_kv.total_cmp(&b.up_to_kv));
    bands
}

/// The upper end of a band in words: 45 of `20-45 kV`; none in `≥ 96 kV` and `not applicable`.
fn upper_end(words: &str) -> f64 {
    let end = words.split_once('-').map(|(_, end)| end.trim().trim_end_matches("kV").trim());
    end.and_then(|end| end.parse().ok()).unwrap_or(f64::INFINITY)
}

/// The conditions under which a law states efficiency.
pub(super) struct Conditions {
    /// Load over rating.
    pub(super) load_pu: f64,
    /// Temperature of the load loss (°C).
    pub(super) temperature_c: f64,
    /// How far they can be trusted.
    pub(super) confidence: Confidence,
}

/// Holds a subject against the levels of the bands. Where its impulse level is blank and matters, all bands count.
pub(super) fn judge(
    w: &mut Working,
    notes: &mut Vec<String>,
    s: &Subject,
    bands: &[Band],
    conditions: &Conditions,
    source: &str,
) -> Finding {
    let load_loss_w = s.load_loss_at_c(w, notes, conditions.temperature_c);
    let losses = Losses {
        rated_kva: s.rated_kva,
        no_load_loss_w: s.no_load_loss_w,
        load_loss_w,
        auxiliary_loss_w: 0.0,
        reactance_pu: None,
    };
    let value = match at_load(w, &losses, conditions.load_pu, 1.0) {
        Ok(eta) => 100.0 * eta,
        Err(refusal) => return Finding::Open(refusal.to_string(), conditions.confidence),
    };
    let mine = s.bil_kv.map(|bil| bands.iter().position(|band| bil <= band.up_to_kv));
    let looked_at = match mine {
        Some(None) => &[],
        Some(Some(n)) => &bands[n..=n],
        None => bands,
    };
    let mut found: Vec<Limit> = Vec::new();
    for band in looked_at {
        let of = format!("efficiency, {source}");
        if let Ok((level, confidence)) = limit(w, &band.points, s.rated_kva, Ends::default(), &of) {
            found.push(Limit {
                quantity: "efficiency_pct",
                bound: Bound::Min,
                limit: level,
                value,
                source: source.to_owned(),
                confidence: confidence.min(conditions.confidence),
            });
        }
    }
    found.sort_by(|a, b| a.limit.total_cmp(&b.limit));
    let (Some(mildest), Some(strictest)) = (found.first(), found.last()) else {
        let why = format!("{source} has no level for {} kVA", s.rated_kva);
        return Finding::Free(why, Confidence::Memory);
    };
    if looked_at.len() == 1 || strictest.meets() {
        return Finding::Limits(vec![strictest.clone()]);
    }
    if found.len() == looked_at.len() && !mildest.meets() {
        return Finding::Limits(vec![mildest.clone()]);
    }
    let why = format!(
        "bil_kv is blank and the level depends on it: {} to {} %, against {value:.4} %; give the basic impulse level",
        mildest.limit, strictest.limit
    );
    Finding::Open(why, mildest.confidence)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn bands_in_words() {
        assert_eq!(upper_end("20-45 kV"), 45.0);
        assert_eq!(upper_end("> 45-95 kV"), 95.0);
        assert_eq!(upper_end("≥ 96 kV"), f64::INFINITY);
        assert_eq!(upper_end("not applicable"), f64::INFINITY);
    }
}
