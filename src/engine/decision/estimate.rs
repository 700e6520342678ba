//! Losses that a unit's nameplate leaves blank, from the fleet's own units of which they are known. The statistics
//! are those of [`crate::engine::transformer::estimate`]; here is which units teach, and how parts and total combine.

use super::fleet::FleetColumns;
use super::place::{LeftOut, UnitFacts, known};
use crate::engine::transformer::estimate::{Build, Estimated, Impossible, LossModel};
use crate::engine::transformer::losses::{Losses, quoted};
use crate::engine::working::{Recorder, Silent};

/// How losses go with the build of a unit in a fleet.
#[derive(Clone, Debug, PartialEq)]
pub struct FleetEstimate {
    no_load: LossModel,
    load: LossModel,
}

/// Which figure of an estimate counts: itself or an end of its interval.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum End {
    /// The estimate.
    #[default]
    Middle,
    /// The lower ends: as little loss as is likely.
    Low,
    /// The upper ends.
    High,
}

/// What was estimated of a unit; none of a loss that its nameplate states or that follows from its total.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct EstimatedLosses<'a> {
    /// No-load loss.
    pub no_load: Option<Estimated<'a>>,
    /// Load loss at the rating.
    pub load: Option<Estimated<'a>>,
}

impl UnitFacts {
    /// What the losses of the unit go with.
    fn build(&self) -> Build {
        Build {
            rated_kva: self.rated_kva,
            year_made: known(self.year_made),
            winding_metal: self.winding_metal,
            insulation: self.insulation,
            phases: self.phases,
        }
    }

    /// The no-load loss where it is stated or follows from a total (W).
    fn known_no_load_loss(&self) -> Option<f64> {
        if let Some(p0) = known(self.no_load_loss_w) {
            return Some(p0);
        }
        let (pk, total) = (known(self.load_loss_w)?, known(self.total_loss_w)?);
        let losses = quoted(&mut Silent, self.rated_kva, None, None, Some(pk), Some(total), None);
        losses.ok().map(|losses| losses.no_load_loss_w)
    }

    /// The load loss at the rating where it is stated or follows from a total (W).
    fn known_load_loss(&self) -> Option<f64> {
        let (p0, pk) = (known(self.no_load_loss_w), known(self.load_loss_w));
        let total = known(self.total_loss_w).filter(|_| p0.is_some());
        pk.or(total)?;
        let (p0, base) = (p0.unwrap_or(0.0), known(self.loss_base_kva));
        let losses = quoted(&mut Silent, self.rated_kva, base, Some(p0), pk, total, None);
        losses.ok().map(|losses| losses.load_loss_w)
    }
}

impl FleetEstimate {
    /// Learns from every unit of a fleet, in service or not.
    pub fn of_fleet(fleet: &FleetColumns) -> Self {
        let units = (0..fleet.len()).map(|i| fleet.facts(i));
        let no_load = units.clone().filter_map(|f| Some((f.build(), f.known_no_load_loss()?)));
        let load = units.filter_map(|f| Some((f.build(), f.known_load_loss()?)));
        Self {
            no_load: LossModel::learn("no-load loss", &no_load),
            load: LossModel::learn("load loss", &load),
        }
    }

    /// Estimates what the nameplate of a unit leaves blank.
    ///
    /// # Errors
    /// Why it cannot be estimated.
    pub fn missing<R: Recorder>(
        &self,
        w: &mut R,
        f: &UnitFacts,
    ) -> Result<EstimatedLosses<'_>, LeftOut> {
        let why = |impossible| match impossible {
            Impossible::TooFew => LeftOut::TooFewToEstimate,
            Impossible::OneRating => LeftOut::OneRatingToEstimate,
            Impossible::BeyondRatings => LeftOut::BeyondRatingsToEstimate,
        };
        let build = f.build();
        let (p0, pk, total) =
            (known(f.no_load_loss_w), known(f.load_loss_w), known(f.total_loss_w));
        let no_load = if p0.is_none() && (pk.is_none() || total.is_none()) {
            Some(self.no_load.estimate(w, &build).map_err(why)?)
        } else {
            None
        };
        let load = if pk.is_none() && total.is_none() {
            Some(self.load.estimate(w, &build).map_err(why)?)
        } else {
            None
        };
        Ok(EstimatedLosses { no_load, load })
    }

    /// The losses of a unit at its rating, what its nameplate leaves blank estimated.
    ///
    /// # Errors
    /// Why they cannot be estimated; a total loss below one of its parts.
    pub fn losses<R: Recorder>(
        &self,
        w: &mut R,
        f: &UnitFacts,
        end: End,
    ) -> Result<Losses, LeftOut> {
        let missing = self.missing(w, f)?;
        let at = |estimated: Estimated<'_>| match end {
            End::Middle => estimated.loss_w,
            End::Low => estimated.low_w,
            End::High => estimated.high_w,
        };
        let total = known(f.total_loss_w);
        let p0 = match missing.no_load.map(at) {
            // A likely iron loss can reach beyond the total; the estimate itself cannot.
            Some(p0) if end == End::High => Some(total.map_or(p0, |total| p0.min(total))),
            Some(p0) => Some(p0),
            None => known(f.no_load_loss_w),
        };
        // An estimated load loss stands at the rating already.
        let (pk, base) = match missing.load.map(at) {
            Some(pk) => (Some(pk), None),
            None => (known(f.load_loss_w), known(f.loss_base_kva)),
        };
        quoted(w, f.rated_kva, base, p0, pk, total, known(f.auxiliary_loss_w))
            .map_err(|_| LeftOut::TotalBelowPart)
    }
}
