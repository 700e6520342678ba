//! Load profiles: a year of equal steps at any scale, and the ratios that the economics needs of them.

use crate::engine::Refusal;
use crate::engine::loading::stepped::{self, Ratios};
use crate::engine::working::{Recorder, Silent};

/// A load profile of a year. Reverse flow loads the windings too, so absolute values count.
#[derive(Clone, Debug, PartialEq)]
pub struct Profile {
    /// Identifier.
    pub profile: String,
    /// Length of a step in minutes.
    pub step_minutes: u32,
    /// Time of the first step, ISO 8601; none where the steps are only numbered.
    pub first_timestamp: Option<String>,
    /// Load of each step, at any scale.
    pub values: Vec<f64>,
}

impl Profile {
    /// The ratios LF = mean/peak and LsF = mean(s²)/peak².
    ///
    /// # Errors
    /// An empty profile and one that is never above zero have no ratios.
    pub fn ratios<R: Recorder>(&self, w: &mut R) -> Result<Ratios, Refusal> {
        let steps = self.values.iter().map(|s| (*s, 1.0));
        stepped::ratios(w, &self.profile, steps).map_err(|_| {
            let why = "has no value above zero; a profile needs the shape of a year's load";
            Refusal::new("profile", &self.profile, why)
        })
    }

    /// The load of each step (of its magnitude) where the greatest of the year is `peak`, in the unit of that.
    ///
    /// # Errors
    /// As [`Profile::ratios`].
    pub fn loads(&self, peak: f64) -> Result<Vec<f64>, Refusal> {
        let greatest = self.ratios(&mut Silent)?.peak;
        Ok(self.values.iter().map(|s| s.abs() / greatest * peak).collect())
    }

    /// The load-duration histogram: for each of `bins` equal steps of s = |load|/peak the share of the year and
    /// the root mean square of s inside the bin, so that its mean square is the loss factor. Empty bins are left
    /// out.
    pub fn load_duration(&self, bins: usize) -> Vec<(f64, f64)> {
        let Ok(ratios) = self.ratios(&mut Silent) else { return Vec::new() };
        let mut bin = vec![(0.0_f64, 0.0_f64); bins.max(1)];
        #[expect(
            clippy::cast_precision_loss,
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "s lies between 0 and 1, bins and steps are small"
        )]
        for value in &self.values {
            let s = value.abs() / ratios.peak;
            let at = ((s * bin.len() as f64) as usize).min(bin.len() - 1);
            bin[at].0 += 1.0;
            bin[at].1 += s * s;
        }
        #[expect(clippy::cast_precision_loss, reason = "a year has at most half a million steps")]
        let steps = self.values.len() as f64;
        let used = bin.into_iter().filter(|(n, _)| *n > 0.0);
        used.map(|(n, square)| (n / steps, (square / n).sqrt())).collect()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// T2-exact-two-level: 6 h at 1, 18 h at 0.25 gives LF 0.4375 and LsF 0.296875 by definition.
    #[test]
    fn two_level_curve() {
        let values = [vec![100.0; 6], vec![-25.0; 18]].concat();
        let profile =
            Profile { profile: "two".into(), step_minutes: 60, first_timestamp: None, values };
        let ratios = profile.ratios(&mut Silent).expect("has a peak");
        assert_eq!((ratios.load_factor_pu, ratios.loss_factor_pu), (0.4375, 0.296_875));
        assert_eq!(profile.load_duration(4), vec![(0.75, 0.25), (0.25, 1.0)]);
    }

    #[test]
    fn dead_profile_is_refused() {
        let dead = |values| Profile {
            profile: "dead".into(),
            step_minutes: 60,
            first_timestamp: None,
            values,
        };
        assert!(dead(vec![0.0; 5]).ratios(&mut Silent).is_err());
        assert!(dead(vec![]).ratios(&mut Silent).is_err());
    }
}
