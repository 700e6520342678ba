//! A unit made ready to compute with: its losses, its duty, its age, what its failure and removal cost.
//!
//! [`UnitFacts`] are the bare numbers of a unit, NaN where unknown, the same whether one unit was read or a
//! million columns; [`resolve`] is the one place where blanks fall to profile, basis and default.

pub mod stated;

use std::sync::Arc;

use crate::engine::columns::{Insulation, VoltageModel, WindingMetal};
use crate::engine::decision::estimate::{End, FleetEstimate};
use crate::engine::decision::fit::{Candidate, highest_peak};
use crate::engine::economics::Assumptions;
use crate::engine::flags::Flags;
use crate::engine::loading::{Duty, Market, Ratios, VoltageDrop, factors};
use crate::engine::transformer::circuit::PowerFactor;
use crate::engine::transformer::losses::{Losses, contradict, quoted};
use crate::engine::transformer::plausibility::loss_base_is_far;
use crate::engine::transformer::voltage_drop::Supply;
use crate::engine::working::Recorder;
use stated::{first_known, known_or, said};

/// The bare numbers of a unit; NaN = unknown.
#[derive(Clone, Copy, Debug, PartialEq)]
#[expect(missing_docs, reason = "named as the columns of `Unit`, whose facts say what they are")]
pub struct UnitFacts {
    pub in_service: bool,
    pub rated_kva: f64,
    pub loss_base_kva: f64,
    pub no_load_loss_w: f64,
    pub load_loss_w: f64,
    pub total_loss_w: f64,
    pub auxiliary_loss_w: f64,
    pub auxiliary_hours: f64,
    pub peak_kva: f64,
    pub load_factor_pu: f64,
    pub loss_factor_pu: f64,
    pub load_growth_pct: f64,
    pub responsibility_pu: f64,
    pub energised_hours: f64,
    pub power_factor: f64,
    pub year_made: f64,
    pub failure_cost: f64,
    pub removal_cost: f64,
    pub scrap_value: f64,
    pub customers: f64,
    pub impedance_pct: f64,
    pub phases: Option<i64>,
    pub winding_metal: Option<WindingMetal>,
    pub insulation: Option<Insulation>,
    /// Whether blanks of the nameplate are filled from a test report.
    pub from_test: bool,
    /// Index of the load profile; `u32::MAX` = none.
    pub profile: u32,
}

/// A number of a unit's facts; none where it is unknown.
pub fn known(value: f64) -> Option<f64> {
    if value.is_nan() { None } else { Some(value) }
}

/// What a basis brings to every unit: assumptions, prices, and the ratios of the profiles.
#[derive(Clone, Debug)]
pub struct Context {
    /// The assumptions.
    pub assumptions: Assumptions,
    /// The prices.
    pub market: Market,
    /// Ratios of the profiles, in the order of the profiles.
    pub ratios: Vec<Ratios>,
    /// Their load-duration histograms, where the basis asks for the drop voltage model.
    pub durations: Vec<Arc<[(f64, f64)]>>,
    /// The offers as the basis sees them (law), in catalogue order.
    pub candidates: Vec<Candidate>,
    /// The fleet's known losses, where the basis has missing ones estimated.
    pub estimate: Option<Arc<FleetEstimate>>,
    /// Flags of the basis that every unit carries.
    pub flags: Flags,
}

/// A unit ready to compute with.
#[derive(Clone, Debug, PartialEq)]
pub struct Place {
    /// Losses of the unit that stands there.
    pub losses: Losses,
    /// What the place asks.
    pub duty: Duty,
    /// Year of manufacture of the unit that stands there.
    pub year_made: Option<f64>,
    /// What its failure costs besides the replacement, F.
    pub failure_cost: f64,
    /// Removal less scrap.
    pub removal_less_scrap: f64,
    /// What is doubtful.
    pub flags: Flags,
}

/// Why a unit cannot be computed.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[repr(u8)]
pub enum LeftOut {
    /// Out of service.
    OutOfService = 1,
    /// Both losses blank.
    LossesBlank,
    /// No-load loss blank.
    NoLoadLossBlank,
    /// Load loss blank.
    LoadLossBlank,
    /// Total loss below a part of it.
    TotalBelowPart,
    /// No peak load.
    PeakBlank,
    /// Nothing says how the load runs over the year.
    ShapeBlank,
    /// Load and loss factor cannot belong together.
    ShapeImpossible,
    /// No offer fits or is open.
    NoOffer,
    /// Named profile is not in the book (only while columns are built by hand).
    ProfileUnknown,
    /// Its load would let the voltage collapse (drop voltage model).
    LoadNotCarried,
    /// A loss is blank, and too few units have it known.
    TooFewToEstimate,
    /// A loss is blank, and all units that have it known are of one rating.
    OneRatingToEstimate,
    /// A loss is blank, and the rating lies far from those of units that have it known.
    BeyondRatingsToEstimate,
    /// Its profile cannot be laid beside the price series.
    ProfileUnfit,
}

impl LeftOut {
    /// The reason in a sentence that says what to do.
    pub const fn why(self) -> &'static str {
        match self {
            Self::OutOfService => "is not in service",
            Self::LossesBlank => {
                "no_load_loss_w and load_loss_w are blank; import them (one of them where total_loss_w is known), or set estimate_missing in the basis"
            }
            Self::NoLoadLossBlank => {
                "no_load_loss_w is blank; import it, or set estimate_missing in the basis"
            }
            Self::LoadLossBlank => {
                "load_loss_w and total_loss_w are blank; import one, or set estimate_missing in the basis"
            }
            Self::TotalBelowPart => "total_loss_w is below one of its parts; correct it",
            Self::PeakBlank => "peak_kva is blank; import it",
            Self::ShapeBlank => {
                "profile, loss_factor_pu and load_factor_pu are blank; one of them is needed"
            }
            Self::ShapeImpossible => {
                "loss_factor_pu lies outside load_factor_pu² … load_factor_pu; correct one of them"
            }
            Self::NoOffer => {
                "no offer fits: phases, voltages, vector group, size window, loading limit, voltage drop, lead time or law"
            }
            Self::ProfileUnfit => {
                "its profile and the price series differ in step, length or start; bring both to one"
            }
            Self::ProfileUnknown => "its profile is not in the book; import it",
            Self::LoadNotCarried => {
                "its load cannot be carried: the voltage would collapse; check peak_kva, load growth, impedance_pct and operating_voltage_pu"
            }
            Self::TooFewToEstimate => {
                "a loss is blank and fewer than 5 units of the fleet have it known, too few to estimate it; import it"
            }
            Self::OneRatingToEstimate => {
                "a loss is blank and all units that have it known are of one rating, which tells nothing of others; import it"
            }
            Self::BeyondRatingsToEstimate => {
                "a loss is blank and its rating is below half or above twice those of the units that have it known, too far to estimate it; import it"
            }
        }
    }
}

/// Whether a load or loss factor given beside a profile differs from the profile's by more than 0.05.
pub fn loading_contradicts(
    ratios: &Ratios,
    load_factor_pu: Option<f64>,
    loss_factor_pu: Option<f64>,
) -> bool {
    let apart = |given: Option<f64>, of_profile: f64| {
        given.is_some_and(|given| (given - of_profile).abs() > 0.05)
    };
    apart(load_factor_pu, ratios.load_factor_pu) || apart(loss_factor_pu, ratios.loss_factor_pu)
}

/// Power factor at which efficiency and regulation of a unit are shown; blank: 0.9 (methods, section 0).
pub fn power_factor<R: Recorder>(w: &mut R, f: &UnitFacts) -> f64 {
    let own = [(known(f.power_factor), "the unit")];
    known_or(w, &stated::POWER_FACTOR, own, (0.9, "the default"))
}

/// Which loss a nameplate leaves blank; none where both follow from it.
fn blank_loss(f: &UnitFacts) -> Option<LeftOut> {
    match (known(f.no_load_loss_w), known(f.load_loss_w), known(f.total_loss_w)) {
        (None, None, _) => Some(LeftOut::LossesBlank),
        (None, Some(_), None) => Some(LeftOut::NoLoadLossBlank),
        (Some(_), None, None) => Some(LeftOut::LoadLossBlank),
        _ => None,
    }
}

/// The losses of a unit at its rating: its nameplate's, else estimated where the basis has that done.
///
/// # Errors
/// A blank loss that is not estimated; a total below one of its parts.
pub fn losses<R: Recorder>(
    w: &mut R,
    f: &UnitFacts,
    ctx: &Context,
    end: End,
) -> Result<Losses, LeftOut> {
    if let Some(blank) = blank_loss(f) {
        return ctx.estimate.as_ref().ok_or(blank)?.losses(w, f, end);
    }
    let (p0, pk, total) = (known(f.no_load_loss_w), known(f.load_loss_w), known(f.total_loss_w));
    let (base, auxiliary) = (known(f.loss_base_kva), known(f.auxiliary_loss_w));
    quoted(w, f.rated_kva, base, p0, pk, total, auxiliary).map_err(|_| LeftOut::TotalBelowPart)
}

/// Fills the blanks of a unit from profile, basis and default (methods, sections 0 and 3).
///
/// # Errors
/// Why the unit cannot be computed.
pub fn resolve<R: Recorder>(w: &mut R, f: &UnitFacts, ctx: &Context) -> Result<Place, LeftOut> {
    resolve_at(w, f, ctx, End::Middle)
}

/// The same, with estimated losses at an end of their intervals.
///
/// # Errors
/// Why the unit cannot be computed.
pub fn resolve_at<R: Recorder>(
    w: &mut R,
    f: &UnitFacts,
    ctx: &Context,
    end: End,
) -> Result<Place, LeftOut> {
    let a = &ctx.assumptions;
    let mut flags = ctx.flags;
    if !f.in_service {
        return Err(LeftOut::OutOfService);
    }
    let mut losses = losses(w, f, ctx, end)?;
    let (p0, pk, total) = (known(f.no_load_loss_w), known(f.load_loss_w), known(f.total_loss_w));
    let base = known(f.loss_base_kva);
    flags = flags
        .with_if(blank_loss(f).is_some(), Flags::LOSS_ESTIMATED)
        .with_if(f.from_test, Flags::FROM_TEST)
        .with_if(pk.is_none() && total.is_some(), Flags::LOAD_LOSS_FROM_TOTAL)
        .with_if(p0.is_none() && pk.is_some() && total.is_some(), Flags::NO_LOAD_LOSS_FROM_TOTAL)
        .with_if(
            base.is_some_and(|b| b != f.rated_kva) && (pk.is_some() || total.is_some()),
            Flags::LOSS_BASE_DIFFERS,
        )
        .with_if(loss_base_is_far(f.rated_kva, base), Flags::LOSS_BASE_FAR)
        .with_if(losses.load_loss_w < losses.no_load_loss_w, Flags::LOSSES_SWAPPED);
    flags = flags.with_if(contradict(p0, pk, total), Flags::LOSSES_CONTRADICT);

    said(w, &stated::RATING, f.rated_kva, "the unit");
    let peak = [(known(f.peak_kva), "the unit")];
    let Some(peak_kva) = first_known(w, &stated::PEAK, peak) else {
        return Err(LeftOut::PeakBlank);
    };
    let (lf, lsf) = (known(f.load_factor_pu), known(f.loss_factor_pu));
    if let (Some(lf), Some(lsf)) = (lf, lsf)
        && factors::check(lf, lsf).is_err()
    {
        return Err(LeftOut::ShapeImpossible);
    }
    let profile = if f.profile == u32::MAX {
        None
    } else {
        Some((
            ctx.ratios.get(f.profile as usize).ok_or(LeftOut::ProfileUnknown)?,
            match ctx.market.profiles.get(f.profile as usize) {
                Some(Ok(weights)) => weights,
                Some(Err(_)) => return Err(LeftOut::ProfileUnfit),
                None => return Err(LeftOut::ProfileUnknown),
            },
        ))
    };
    let of_profile = profile.map(|(ratios, _)| ratios);
    flags = flags.with_if(
        of_profile.is_some_and(|ratios| loading_contradicts(ratios, lf, lsf)),
        Flags::LOADING_CONTRADICTS,
    );
    let from = [(of_profile.map(|r| r.load_factor_pu), "its profile"), (lf, "the unit")];
    let load_factor_pu = first_known(w, &stated::LOAD_FACTOR, from);
    let from = [(of_profile.map(|r| r.loss_factor_pu), "its profile"), (lsf, "the unit")];
    let loss_factor_pu = match (first_known(w, &stated::LOSS_FACTOR, from), lf) {
        (Some(known), _) => known,
        (None, Some(lf)) => {
            flags = flags.with(Flags::LOSS_FACTOR_ESTIMATED);
            factors::loss_factor(w, lf, a.loss_factor_weight_pu)
        }
        (None, None) => return Err(LeftOut::ShapeBlank),
    };
    let constant = &ctx.market.constant;
    let load = profile.map_or(constant, |(_, weights)| weights);
    let from = [
        (known(f.responsibility_pu), "the unit"),
        (load.responsibility_pu, "its profile at the system peak"),
        (a.responsibility_pu, "the basis"),
    ];
    let responsibility = first_known(w, &stated::RESPONSIBILITY, from);
    let responsibility_pu = responsibility
        .unwrap_or_else(|| said(w, &stated::RESPONSIBILITY, 1.0, "nothing is known of it"));
    let own = |value| [(known(value), "the unit")];
    let energised_hours =
        known_or(w, &stated::HOURS, own(f.energised_hours), (a.energised_hours, "the basis"));
    let from = [(known(f.auxiliary_hours), "the unit"), (a.auxiliary_hours, "the basis")];
    let last = (energised_hours, "the hours under voltage");
    let auxiliary_hours = known_or(w, &stated::AUXILIARY_HOURS, from, last);
    let growth = own(f.load_growth_pct / 100.0);
    let load_growth_pu = known_or(w, &stated::GROWTH, growth, (a.load_growth, "the basis"));
    let (mean, weighed) = if ctx.market.series {
        ("mean of the price series", "price series weighed by the squared load of its profile")
    } else {
        ("the basis", "the basis")
    };
    said(w, &stated::PRICE, constant.price_per_kwh, mean);
    let origin = if profile.is_some() { weighed } else { mean };
    said(w, &stated::LOAD_PRICE, load.price_per_kwh, origin);
    said(w, &stated::CO2, constant.co2_kg_per_kwh, "price series, else the basis");
    said(w, &stated::LOAD_CO2, load.co2_kg_per_kwh, "price series, else the basis");
    let year_made = known(f.year_made);
    flags = flags
        .with_if(profile.is_none() && ctx.market.series, Flags::PRICE_NOT_WEIGHTED)
        .with_if(peak_kva > f.rated_kva, Flags::OVERLOADED)
        .with_if(year_made.is_none() && a.failure.is_some(), Flags::YEAR_MADE_BLANK)
        .with_if(
            responsibility.is_none() && a.demand_charge_per_kw_year > 0.0,
            Flags::RESPONSIBILITY_DEFAULT,
        );
    let drop = match a.voltage_model {
        VoltageModel::Rated => None,
        VoltageModel::Drop => Some(voltage_drop(w, f, ctx, &mut losses, &mut flags)),
    };
    let duty = Duty {
        peak_kva,
        load_growth_pu,
        load_factor_pu,
        loss_factor_pu,
        energised_hours,
        auxiliary_hours,
        power_factor: known(f.power_factor),
        responsibility_pu,
        no_load_price_per_kwh: constant.price_per_kwh,
        load_price_per_kwh: load.price_per_kwh,
        no_load_co2_kg_per_kwh: constant.co2_kg_per_kwh,
        load_co2_kg_per_kwh: load.co2_kg_per_kwh,
        drop,
    };
    if let Some(drop) = &duty.drop
        && !Supply::of(&losses, drop).carries(highest_peak(&duty, 0, a) / losses.rated_kva)
    {
        return Err(LeftOut::LoadNotCarried);
    }
    let own = (known(f.failure_cost), "the unit");
    let own_cost = known_or(w, &stated::FAILURE_COST, [own], (a.failure_cost, "the basis"));
    let (per_customer, customers) =
        (a.failure_cost_per_customer, known(f.customers).unwrap_or(0.0));
    let failure_cost = own_cost + per_customer * customers;
    if customers > 0.0 {
        let inputs =
            [("F_own", own_cost), ("per_customer", per_customer), ("customers", customers)];
        w.step(&stated::CUSTOMERS, &inputs, failure_cost);
    }
    let own = (known(f.removal_cost), "the unit");
    let removal_cost = known_or(w, &stated::REMOVAL_COST, [own], (a.removal_cost, "the basis"));
    let own = (known(f.scrap_value), "the unit");
    let scrap_value = known_or(w, &stated::SCRAP_VALUE, [own], (a.scrap_value, "the basis"));
    let inputs = [("removal", removal_cost), ("scrap", scrap_value)];
    let removal_less_scrap =
        w.step(&stated::REMOVAL_LESS_SCRAP, &inputs, removal_cost - scrap_value);
    Ok(Place { losses, duty, year_made, failure_cost, removal_less_scrap, flags })
}

/// What the drop voltage model asks of a unit beside its losses: its reactance goes to the losses.
fn voltage_drop<R: Recorder>(
    w: &mut R,
    f: &UnitFacts,
    ctx: &Context,
    losses: &mut Losses,
    flags: &mut Flags,
) -> VoltageDrop {
    let own = [(known(f.power_factor), "the unit")];
    let power_factor = known_or(w, &stated::POWER_FACTOR, own, (1.0, "the default"));
    let v_hv_pu = ctx.assumptions.operating_voltage_pu;
    said(w, &stated::OPERATING_VOLTAGE, v_hv_pu, "the basis");
    *losses = losses.with_impedance(w, known(f.impedance_pct));
    let duration = ctx.durations.get(f.profile as usize).cloned();
    *flags = flags
        .with_if(losses.reactance_pu.is_none(), Flags::IMPEDANCE_UNKNOWN)
        .with_if(duration.is_none(), Flags::DROP_AT_RMS);
    // The columns hold power factors between 0 and 1.
    let power_factor =
        PowerFactor::lagging(power_factor).unwrap_or(PowerFactor { cos: 1.0, sin: 0.0 });
    VoltageDrop { v_hv_pu, power_factor, duration }
}
