//! Everything doubtful in a book: missing, estimated, implausible, contradictory. Tells; changes nothing.

mod tested;

use std::borrow::Cow;
use std::ops::ControlFlow;

use rustc_hash::FxHashMap;
use serde::Serialize;

use crate::book::{Book, BookError};
use crate::engine::columns::{Basis, Bid, Lot, Measured, Offer, Unit, VoltageModel, YesNo};
use crate::engine::decision::LeftOut;
use crate::engine::decision::place::loading_contradicts;
use crate::engine::decision::tender::bid::adders_lower_price;
use crate::engine::economics::Assumptions;
use crate::engine::economics::traps;
use crate::engine::flags::Flags;
use crate::engine::loading::{Profile, Ratios};
use crate::engine::transformer::losses::{self, quoted};
use crate::engine::transformer::plausibility::{self, looks_in_kw};
use crate::engine::transformer::vector_group;
use crate::engine::working::Silent;
use crate::study::tender::{BasisForFactors, bids_far_by_rate, looks_per_watt};
use crate::study::test_report::TestedUnit;
use crate::study::{Desk, StudyError, Watch};

/// Peak over rating above which the reading itself is doubted (per unit): common practice, no source. A load above the
/// rating alone is possible; the flag `overloaded` of a result says so.
const OVERLOAD_PU: f64 = 1.2;
/// A discount rate below this many percent was perhaps meant as a fraction.
const FRACTION_PCT: f64 = 0.5;
/// Units between two looks at whether the work is still wanted.
const LOOK: usize = 4096;

/// What kind of doubt.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Kind {
    /// Not known, and something is not computed without it.
    Missing,
    /// Not known, and made up from something else.
    Estimated,
    /// Possible, but rare.
    Implausible,
    /// Two figures that cannot both be right.
    Contradictory,
}

impl Kind {
    /// The word of a kind.
    pub const fn word(self) -> &'static str {
        match self {
            Self::Missing => "missing",
            Self::Estimated => "estimated",
            Self::Implausible => "implausible",
            Self::Contradictory => "contradictory",
        }
    }
}

/// One doubt.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Doubt {
    /// What it is about: `unit`, `offer`, `lot`, `bid`, `measured` or `basis`.
    pub subject: &'static str,
    /// Its key.
    pub key: String,
    /// The column.
    pub column: &'static str,
    /// What kind of doubt.
    pub kind: Kind,
    /// What is doubtful, in words.
    pub what: Cow<'static, str>,
}

/// Goes through a book: units, test reports, offers, lots, bids, bases, each in order of entry. `basis` names the one that the fleet is
/// held against; else the only or chosen one counts, and without one what depends on it is passed over.
///
/// # Errors
/// The book fails, does not know the named basis, or the work was stopped.
pub fn check(book: &Book, basis: Option<&str>, watch: &Watch) -> Result<Vec<Doubt>, StudyError> {
    let mut doubts = Vec::new();
    each_doubt(book, basis, watch, &mut |doubt| doubts.push(doubt))?;
    Ok(doubts)
}

/// The same, each doubt handed on as it is found: those of a large fleet are many.
///
/// # Errors
/// As [`check`].
pub fn each_doubt(
    book: &Book,
    basis: Option<&str>,
    watch: &Watch,
    each: &mut dyn FnMut(Doubt),
) -> Result<(), StudyError> {
    let sheet = match book.basis(basis) {
        Ok(sheet) => Some(sheet),
        Err(BookError::WhichBasis { .. }) => None,
        Err(error) => return Err(error.into()),
    };
    let basis = sheet.as_ref().map(|sheet| &sheet.basis);
    let counts = book.counts()?;
    watch.expect(usize::try_from(counts.units).unwrap_or(0));
    let mut doubts = Doubts(each);
    let profiles = Profiles::of(&book.profiles()?);
    let reports: FxHashMap<String, TestedUnit> = (book.tested_units()?.into_iter())
        .map(|(unit, report)| (unit.unit.clone(), TestedUnit { unit, report }))
        .collect();
    let mut seen = 0;
    book.each_unit(|unit| {
        seen += 1;
        if seen % LOOK == 0 {
            watch.advance(LOOK);
            if watch.is_stopped() {
                return ControlFlow::Break(());
            }
        }
        doubts.unit(&unit, reports.get(&unit.unit), &profiles, basis);
        ControlFlow::Continue(())
    })?;
    if watch.is_stopped() {
        return Err(StudyError::Stopped);
    }
    for offer in book.offers()? {
        doubts.offer(&offer, basis);
    }
    let named = sheet.as_ref().map(|sheet| sheet.basis.name.as_str());
    let desk = named.and_then(|name| Desk::basis_only(book, Some(name)).ok());
    // A basis that the engine refuses is a doubt of its own, below.
    let context = desk.and_then(|desk| desk.context().ok());
    let factors = context.as_ref().map(|context| BasisForFactors {
        assumptions: &context.assumptions,
        market: &context.market,
    });
    for tender in book.tenders()? {
        let sheet = book.tender(&tender.tender)?;
        for lot in &sheet.lots {
            // A lot that cannot be evaluated yet is told where it is evaluated.
            if let Ok(true) = looks_per_watt(&sheet, factors.as_ref(), &lot.lot) {
                let key = format!("{}/{}", tender.tender, lot.lot);
                let of = ("lot", key.as_str());
                doubts.flag(of, "factor_a_per_kw", Kind::Implausible, Flags::FACTOR_SCALE);
            }
            for bid in bids_far_by_rate(&sheet, &lot.lot).unwrap_or_default() {
                let key = format!("{}/{}/{bid}", tender.tender, lot.lot);
                doubts.flag(("bid", &key), "currency", Kind::Implausible, Flags::RATE_SCALE);
            }
        }
        let lot_of = |lot: &str| sheet.lots.iter().find(|of| of.lot == lot);
        for bid in &sheet.bids {
            let lot = lot_of(&bid.lot);
            doubts.bid(bid, lot);
            let measured: Vec<&Measured> = sheet
                .measured
                .iter()
                .filter(|unit| unit.lot == bid.lot && unit.bid == bid.bid)
                .collect();
            doubts.measured(bid, lot, &measured);
        }
    }
    let names = book.bases()?;
    if names.is_empty() {
        let what = "the book has no basis; import one: ironhum import basis FILE";
        doubts.add(("basis", ""), "name", Kind::Missing, what);
    }
    for name in names {
        doubts.basis(book, &name)?;
    }
    Ok(())
}

/// The figures of a nameplate that units, offers and bids share.
#[derive(Default)]
struct Plate {
    rated_kva: f64,
    loss_base_kva: Option<f64>,
    no_load_loss_w: Option<f64>,
    load_loss_w: Option<f64>,
    total_loss_w: Option<f64>,
    impedance_pct: Option<f64>,
    no_load_current_pct: Option<f64>,
}

/// The profiles of the book with their ratios.
struct Profiles(Vec<(String, Ratios)>);

impl Profiles {
    fn of(profiles: &[Profile]) -> Self {
        let known =
            profiles.iter().filter_map(|p| Some((p.profile.clone(), p.ratios(&mut Silent).ok()?)));
        Self(known.collect())
    }

    fn ratios(&self, name: &str) -> Option<&Ratios> {
        self.0.iter().find(|(known, _)| known == name).map(|(_, ratios)| ratios)
    }
}

struct Doubts<'a>(&'a mut dyn FnMut(Doubt));

impl Doubts<'_> {
    fn add(
        &mut self,
        (subject, key): (&'static str, &str),
        column: &'static str,
        kind: Kind,
        what: impl Into<Cow<'static, str>>,
    ) {
        (self.0)(Doubt { subject, key: key.to_owned(), column, kind, what: what.into() });
    }

    /// A flag of the engine, in its own words.
    fn flag(&mut self, of: (&'static str, &str), column: &'static str, kind: Kind, flag: Flags) {
        for meaning in flag.meanings() {
            self.add(of, column, kind, meaning);
        }
    }

    fn unit(
        &mut self,
        unit: &Unit,
        tested: Option<&TestedUnit>,
        profiles: &Profiles,
        basis: Option<&Basis>,
    ) {
        let of = ("unit", unit.unit.as_str());
        let share = basis.and_then(|basis| basis.stray_share_pu).unwrap_or(0.0);
        let filled = tested.and_then(|tested| tested.filled(share));
        if unit.in_service != Some(YesNo::No) {
            self.missing_of_unit(of, filled.as_ref().unwrap_or(unit), basis);
        }
        if let Some(tested) = tested {
            self.tested(of, tested, share);
        }
        self.plate(
            of,
            &Plate {
                rated_kva: unit.rated_kva,
                loss_base_kva: unit.loss_base_kva,
                no_load_loss_w: unit.no_load_loss_w,
                load_loss_w: unit.load_loss_w,
                total_loss_w: unit.total_loss_w,
                impedance_pct: unit.impedance_pct,
                no_load_current_pct: unit.no_load_current_pct,
            },
            unit.vector_group.as_deref(),
        );
        let ratios = unit.profile.as_deref().and_then(|name| profiles.ratios(name));
        if ratios.is_some_and(|r| loading_contradicts(r, unit.load_factor_pu, unit.loss_factor_pu))
        {
            self.flag(of, "profile", Kind::Contradictory, Flags::LOADING_CONTRADICTS);
        }
        if let Some(peak) = unit.peak_kva.filter(|peak| *peak > OVERLOAD_PU * unit.rated_kva) {
            let percent = 100.0 * peak / unit.rated_kva;
            let what = format!("{peak} kVA is {percent:.0} % of the rating");
            self.add(of, "peak_kva", Kind::Implausible, what);
        }
        if let (Some(um), Some(hv)) = (unit.hv_um_kv, unit.hv_kv)
            && um < hv
        {
            let what = format!("{um} kV is below the rated voltage of {hv} kV");
            self.add(of, "hv_um_kv", Kind::Contradictory, what);
        }
        let Some(basis) = basis else { return };
        let first_year = basis.first_year;
        if let Some(made) = unit.year_made.filter(|made| *made > first_year) {
            let what =
                format!("{made} is after the first year {first_year} of basis {}", basis.name);
            self.add(of, "year_made", Kind::Contradictory, what);
        }
        if let Some(year) = unit.replace_by_year.filter(|year| *year < first_year) {
            let what =
                format!("{year} is before the first year {first_year} of basis {}", basis.name);
            self.add(of, "replace_by_year", Kind::Contradictory, what);
        }
    }

    fn missing_of_unit(&mut self, of: (&'static str, &str), unit: &Unit, basis: Option<&Basis>) {
        use Kind::{Estimated, Missing};
        let (p0, pk, total) = (unit.no_load_loss_w, unit.load_loss_w, unit.total_loss_w);
        // What a basis has estimated is told as such; which units cannot be, the ranking says.
        let estimate = basis.is_some_and(|basis| basis.estimate_missing == Some(true));
        let estimated = "is blank; the basis has it estimated from known units of the fleet";
        let mut lost = |column, why: LeftOut| {
            let (kind, what) = if estimate { (Estimated, estimated) } else { (Missing, why.why()) };
            self.add(of, column, kind, what);
        };
        match (p0, pk, total) {
            (None, None, _) => lost("no_load_loss_w", LeftOut::LossesBlank),
            (None, _, None) => lost("no_load_loss_w", LeftOut::NoLoadLossBlank),
            (_, None, None) => lost("load_loss_w", LeftOut::LoadLossBlank),
            (_, None, Some(_)) => {
                self.flag(of, "load_loss_w", Estimated, Flags::LOAD_LOSS_FROM_TOTAL);
            }
            (None, Some(_), Some(_)) => {
                self.flag(of, "no_load_loss_w", Estimated, Flags::NO_LOAD_LOSS_FROM_TOTAL);
            }
            _ => {}
        }
        if unit.peak_kva.is_none() {
            self.add(of, "peak_kva", Missing, LeftOut::PeakBlank.why());
        }
        match (&unit.profile, unit.loss_factor_pu, unit.load_factor_pu) {
            (None, None, None) => self.add(of, "profile", Missing, LeftOut::ShapeBlank.why()),
            (None, None, Some(_)) => {
                self.flag(of, "loss_factor_pu", Estimated, Flags::LOSS_FACTOR_ESTIMATED);
            }
            _ => {}
        }
        for (column, voltage) in [("hv_kv", unit.hv_kv), ("lv_kv", unit.lv_kv)] {
            if voltage.is_none() {
                self.flag(of, column, Missing, Flags::VOLTAGE_BLANK);
            }
        }
        if unit.phases.is_none() {
            self.flag(of, "phases", Missing, Flags::PHASES_BLANK);
        }
        let drops = basis.is_some_and(|basis| basis.voltage_model == Some(VoltageModel::Drop));
        if unit.impedance_pct.is_none() && drops {
            self.flag(of, "impedance_pct", Missing, Flags::IMPEDANCE_UNKNOWN);
        }
        let has_failures = basis.is_some_and(|basis| basis.failure_scale_years.is_some());
        if unit.year_made.is_none() && has_failures {
            self.flag(of, "year_made", Missing, Flags::YEAR_MADE_BLANK);
        }
    }

    /// What nameplates of units, offers and bids share.
    fn plate(&mut self, of: (&'static str, &str), plate: &Plate, group: Option<&str>) {
        let zero = "is 0 W; a loss that is not known is left blank";
        for (column, loss) in
            [("no_load_loss_w", plate.no_load_loss_w), ("load_loss_w", plate.load_loss_w)]
        {
            if loss == Some(0.0) {
                self.add(of, column, Kind::Implausible, zero);
            }
        }
        let kva = plate.rated_kva;
        let losses = quoted(
            &mut Silent,
            kva,
            plate.loss_base_kva,
            plate.no_load_loss_w,
            plate.load_loss_w,
            plate.total_loss_w,
            None,
        );
        let (iron, copper) = match losses {
            Ok(losses) => (Some(losses.no_load_loss_w), Some(losses.load_loss_w)),
            Err(_) => (plate.no_load_loss_w, None),
        };
        let (z, i0) = (plate.impedance_pct, plate.no_load_current_pct);
        for odd in plausibility::nameplate(kva, z, iron, copper) {
            self.add(of, odd.quantity, Kind::Implausible, format!("{} {}", odd.value, odd.why));
        }
        for odd in plausibility::contradictions(kva, z, i0, iron, copper) {
            self.add(of, odd.quantity, Kind::Contradictory, format!("{} {}", odd.value, odd.why));
        }
        if plausibility::loss_base_is_far(kva, plate.loss_base_kva) {
            self.flag(of, "loss_base_kva", Kind::Implausible, Flags::LOSS_BASE_FAR);
        }
        let (p0, pk, total) = (plate.no_load_loss_w, plate.load_loss_w, plate.total_loss_w);
        if losses::contradict(p0, pk, total) {
            self.flag(of, "total_loss_w", Kind::Contradictory, Flags::LOSSES_CONTRADICT);
        }
        if p0.zip(pk).is_some_and(|(p0, pk)| pk < p0) {
            self.flag(of, "load_loss_w", Kind::Implausible, Flags::LOSSES_SWAPPED);
        }
        if group.is_some_and(|group| vector_group::clock(group).is_none()) {
            self.flag(of, "vector_group", Kind::Implausible, Flags::VECTOR_GROUP_UNREAD);
        }
    }

    fn offer(&mut self, offer: &Offer, basis: Option<&Basis>) {
        let of = ("offer", offer.offer.as_str());
        self.plate(
            of,
            &Plate {
                rated_kva: offer.rated_kva,
                loss_base_kva: offer.loss_base_kva,
                no_load_loss_w: Some(offer.no_load_loss_w),
                load_loss_w: Some(offer.load_loss_w),
                impedance_pct: offer.impedance_pct,
                ..Plate::default()
            },
            offer.vector_group.as_deref(),
        );
        let needs_life = basis.is_some_and(|basis| {
            basis.capital_recovery != Some(crate::engine::columns::CapitalRecovery::Full)
                && basis.life_years.is_none()
        });
        if offer.life_years.is_none() && needs_life {
            self.flag(of, "life_years", Kind::Missing, Flags::NO_LIFE);
        }
        let drops = basis.is_some_and(|basis| basis.voltage_model == Some(VoltageModel::Drop));
        if offer.impedance_pct.is_none() && drops {
            self.flag(of, "impedance_pct", Kind::Missing, Flags::OFFER_IMPEDANCE_UNKNOWN);
        }
        if offer.price.0 == 0 {
            self.add(of, "price", Kind::Implausible, "costs nothing");
        }
    }

    fn bid(&mut self, bid: &Bid, lot: Option<&Lot>) {
        let key = format!("{}/{}/{}", bid.tender, bid.lot, bid.bid);
        let of = ("bid", key.as_str());
        let Some(rated_kva) = bid.rated_kva.or(lot.map(|lot| lot.rated_kva)) else { return };
        self.plate(
            of,
            &Plate {
                rated_kva,
                loss_base_kva: bid.loss_base_kva,
                no_load_loss_w: Some(bid.no_load_loss_w),
                load_loss_w: bid.load_loss_w,
                total_loss_w: bid.total_loss_w,
                impedance_pct: bid.impedance_pct,
                no_load_current_pct: None,
            },
            bid.vector_group.as_deref(),
        );
        if bid.load_loss_w.is_none() {
            self.flag(of, "load_loss_w", Kind::Estimated, Flags::LOAD_LOSS_FROM_TOTAL);
        }
        if bid.reference_temp_c.is_none() && lot.is_some_and(|lot| lot.reference_temp_c.is_some()) {
            self.flag(of, "reference_temp_c", Kind::Missing, Flags::NO_REFERENCE_TEMP);
        }
        if adders_lower_price(bid) {
            self.flag(of, "adder_cost", Kind::Implausible, Flags::ADDERS_LOWER_PRICE);
        }
        if bid.price.0 == 0 {
            self.add(of, "price", Kind::Implausible, "costs nothing");
        }
    }

    /// The measured units of a bid.
    fn measured(&mut self, bid: &Bid, lot: Option<&Lot>, units: &[&Measured]) {
        let Some(lot) = lot else { return };
        let rated_kva = bid.rated_kva.unwrap_or(lot.rated_kva);
        for unit in units {
            let key = format!("{}/{}/{}/{}", unit.tender, unit.lot, unit.bid, unit.serial);
            if looks_in_kw(rated_kva, unit.no_load_loss_w, unit.load_loss_w) {
                let of = ("measured", key.as_str());
                self.flag(of, "no_load_loss_w", Kind::Implausible, Flags::LOSS_SCALE);
            }
        }
        let quantity = lot.quantity.unwrap_or(1);
        if i64::try_from(units.len()).is_ok_and(|units| units > quantity) {
            let key = format!("{}/{}/{}", bid.tender, bid.lot, bid.bid);
            let what = format!("{} units are measured, the lot has {quantity}", units.len());
            self.add(("measured", &key), "serial", Kind::Contradictory, what);
        }
    }

    fn basis(&mut self, book: &Book, name: &str) -> Result<(), StudyError> {
        let desk = Desk::basis_only(book, Some(name))?;
        let of = ("basis", name);
        match desk.context() {
            Ok(context) => {
                let price = context.market.constant.price_per_kwh;
                let doubts = traps::of_basis(&context.assumptions, price);
                for (flag, column) in [
                    (Flags::CAPACITY_SCALE, "demand_charge_per_kw_year"),
                    (Flags::DEMAND_UNUSED, "demand_charge_per_kw_year"),
                    (Flags::INVESTMENT_UNUSED, "investment_per_kw_year"),
                ] {
                    if doubts.has(flag) {
                        self.flag(of, column, Kind::Implausible, flag);
                    }
                }
                for refusal in context.market.profiles.iter().filter_map(|p| p.as_ref().err()) {
                    self.add(of, refusal.quantity, Kind::Contradictory, refusal.to_string());
                }
            }
            Err(StudyError::Refused { refusal, .. }) => {
                self.add(of, refusal.quantity, Kind::Contradictory, refusal.to_string());
            }
            Err(error) => return Err(error),
        }
        let rate = desk.sheet.basis.discount_rate_pct;
        if rate > 0.0 && rate < FRACTION_PCT {
            let what =
                format!("{rate} % a year is very low; rates are in percent, 6 is six percent");
            self.add(of, "discount_rate_pct", Kind::Implausible, what);
        }
        if let Ok(a) = Assumptions::resolve(&desk.sheet.basis)
            && a.demand_charge_per_kw_year > 0.0
            && a.responsibility_pu.is_none()
            && !desk.series.iter().any(|series| series.system_load.is_some())
        {
            self.flag(of, "responsibility_pu", Kind::Estimated, Flags::RESPONSIBILITY_DEFAULT);
        }
        Ok(())
    }
}
