//! What is asked of a fit: an offer or a bid as the record of a unit, the unit beside it, the network behind it.

use crate::engine::Refusal;
use crate::engine::columns::{Offer, TenderSheet, Unit};
use crate::engine::transformer::losses::{Losses, quoted};
use crate::engine::transformer::vector_group::{phases, two_windings};
use crate::engine::working::Silent;
use crate::study::tender::{find_bid, find_lot};
use crate::study::{Desk, StudyError};

/// What is to be fitted, and beside what.
#[derive(Clone, Debug, PartialEq)]
pub struct FitAsked {
    /// The offer or bid, as the record of a unit.
    pub(super) proposed: Unit,
    /// Its losses at its rating.
    pub(super) losses: Losses,
    /// The unit that it would run beside, in parallel.
    pub beside: Option<Unit>,
    /// Fault level of the network at the primary (MVA); none = infinite.
    pub network_mva: Option<f64>,
    /// Highest fault level that the switchgear at the secondary bears (MVA).
    pub fault_limit_mva: Option<f64>,
}

impl FitAsked {
    /// An offer of the catalogue.
    ///
    /// # Errors
    /// Losses that contradict each other; a transformer of another kind than two windings.
    pub fn of_offer(offer: &Offer) -> Result<Self, Refusal> {
        Self::of(Unit {
            unit: offer.offer.clone(),
            rated_kva: offer.rated_kva,
            loss_base_kva: offer.loss_base_kva,
            phases: offer.phases,
            hv_kv: offer.hv_kv,
            lv_kv: offer.lv_kv,
            vector_group: offer.vector_group.clone(),
            cooling: offer.cooling.clone(),
            insulation: offer.insulation,
            winding_metal: offer.winding_metal,
            impedance_pct: offer.impedance_pct,
            no_load_loss_w: Some(offer.no_load_loss_w),
            load_loss_w: Some(offer.load_loss_w),
            reference_temp_c: offer.reference_temp_c,
            auxiliary_loss_w: offer.auxiliary_loss_w,
            ..Unit::blank()
        })
    }

    /// A bid of a tender; voltages are the lot's, and so is what the bid leaves blank.
    ///
    /// # Errors
    /// As [`FitAsked::of_offer`]; an unknown lot or bid.
    pub fn of_bid(sheet: &TenderSheet, lot: &str, bid: &str) -> Result<Self, StudyError> {
        let (lot, bid) = (find_lot(sheet, lot)?, find_bid(sheet, lot, bid)?);
        let group = bid.vector_group.clone().or_else(|| lot.vector_group.clone());
        Ok(Self::of(Unit {
            unit: format!("{} {} {}", bid.tender, bid.lot, bid.bid),
            rated_kva: bid.rated_kva.unwrap_or(lot.rated_kva),
            loss_base_kva: bid.loss_base_kva,
            phases: group.as_deref().and_then(phases),
            hv_kv: lot.hv_kv,
            lv_kv: lot.lv_kv,
            vector_group: group,
            insulation: bid.insulation,
            winding_metal: bid.winding_metal,
            impedance_pct: bid.impedance_pct.or(lot.impedance_pct),
            no_load_loss_w: Some(bid.no_load_loss_w),
            load_loss_w: bid.load_loss_w,
            total_loss_w: bid.total_loss_w,
            reference_temp_c: bid.reference_temp_c.or(lot.reference_temp_c),
            auxiliary_loss_w: bid.auxiliary_loss_w,
            ..Unit::blank()
        })?)
    }

    /// The same beside another unit of the fleet, its blanks filled from its test report.
    ///
    /// # Errors
    /// The unit that stands there itself.
    pub fn beside(mut self, desk: &Desk, unit: Unit, there: &str) -> Result<Self, Refusal> {
        if unit.unit == there {
            let why = "stands there itself; name the unit that stays in service next to it";
            return Err(Refusal::new("beside", there, why));
        }
        let filled = desk.tested(&unit.unit).and_then(|it| it.filled(desk.stray_share_pu()));
        self.beside = Some(filled.unwrap_or(unit));
        Ok(self)
    }

    fn of(proposed: Unit) -> Result<Self, Refusal> {
        if let Some(group) = &proposed.vector_group {
            two_windings(group)?;
        }
        let (p0, pk, total) =
            (proposed.no_load_loss_w, proposed.load_loss_w, proposed.total_loss_w);
        let (base, auxiliary) = (proposed.loss_base_kva, proposed.auxiliary_loss_w);
        let losses = quoted(&mut Silent, proposed.rated_kva, base, p0, pk, total, auxiliary)?
            .with_impedance(&mut Silent, proposed.impedance_pct);
        Ok(Self { proposed, losses, beside: None, network_mva: None, fault_limit_mva: None })
    }
}
