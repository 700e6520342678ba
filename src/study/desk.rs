//! What lies ready for a question: a fleet in columns, offers, profiles, prices and a basis.

use std::sync::{Arc, OnceLock};

use rustc_hash::FxHashMap;

use crate::book::Book;
use crate::engine::Refusal;
use crate::engine::columns::{BasisSheet, CapitalRecovery, Offer, TestReport, Unit, VoltageModel};
use crate::engine::decision::estimate::FleetEstimate;
use crate::engine::decision::fleet::FleetColumns;
use crate::engine::decision::{Candidate, Context};
use crate::engine::economics::Assumptions;
use crate::engine::economics::assumptions::EnergyPrice;
use crate::engine::flags::Flags;
use crate::engine::law::{self, Subject};
use crate::engine::loading::{Market, PriceSeries, Profile, Ratios};
use crate::engine::working::Silent;
use crate::study::StudyError;
use crate::study::test_report::TestedUnit;

/// How often a book is read again that others write to meanwhile.
const TRIES: usize = 5;

/// Equal steps of load over peak in the load-duration histograms of the drop voltage model.
const DURATION_STEPS: usize = 100;

/// Everything a question needs, in memory. What is large is shared: a clone with another basis is cheap.
#[derive(Clone, Debug)]
pub struct Desk {
    /// The fleet in columns.
    pub fleet: Arc<FleetColumns>,
    /// What its known losses say of missing ones, once a basis asked for it.
    estimate: Arc<OnceLock<Arc<FleetEstimate>>>,
    /// The offers, in catalogue order.
    pub offers: Arc<Vec<Offer>>,
    /// The offers ready to compute with, in the same order.
    candidates: Vec<Candidate>,
    /// The load profiles.
    pub profiles: Arc<Vec<Profile>>,
    /// Their ratios.
    pub ratios: Vec<Ratios>,
    /// The price series of the book that the basis may name.
    pub series: Arc<Vec<PriceSeries>>,
    /// The units that have a test report, by name; blanks of the fleet are filled from them.
    tested: Arc<FxHashMap<String, TestedUnit>>,
    /// The basis.
    pub sheet: BasisSheet,
}

impl Desk {
    /// Reads everything a question needs from a book; `basis` names one, else the only or current one counts.
    ///
    /// # Errors
    /// The book fails or does not know the basis or its price series.
    pub fn read(book: &Book, basis: Option<&str>) -> Result<Self, StudyError> {
        // Several statements and connections read: once more where somebody wrote in between.
        for _ in 0..TRIES {
            let version = book.data_version()?;
            let sheet = book.basis(basis)?;
            let series = Self::series_of(book, &sheet)?;
            let (fleet, offers, profiles) = (book.fleet()?, book.offers()?, book.profiles()?);
            let tested = book.tested_units()?;
            if book.data_version()? == version {
                return Ok(Self::new(fleet, offers, profiles, series, sheet)?.with_tests(tested));
            }
        }
        Err(StudyError::Busy)
    }

    /// Reads a basis with its profiles and prices, without the fleet and the offers: enough for loss factors.
    ///
    /// # Errors
    /// As [`Desk::read`].
    pub fn basis_only(book: &Book, basis: Option<&str>) -> Result<Self, StudyError> {
        let sheet = book.basis(basis)?;
        let series = Self::series_of(book, &sheet)?;
        Self::new(FleetColumns::default(), Vec::new(), book.profiles()?, series, sheet)
    }

    fn series_of(book: &Book, sheet: &BasisSheet) -> Result<Vec<PriceSeries>, StudyError> {
        Ok(match &sheet.basis.price_series {
            Some(name) => vec![book.price_series(name)?],
            None => Vec::new(),
        })
    }

    /// Lays out what was read from a book.
    ///
    /// # Errors
    /// An offer whose losses contradict each other, a profile without a peak.
    pub fn new(
        fleet: impl Into<Arc<FleetColumns>>,
        offers: Vec<Offer>,
        profiles: Vec<Profile>,
        series: Vec<PriceSeries>,
        sheet: BasisSheet,
    ) -> Result<Self, StudyError> {
        let candidates = offers.iter().map(Candidate::of_offer).collect::<Result<_, _>>()?;
        let ratios = profiles.iter().map(|p| p.ratios(&mut Silent)).collect::<Result<_, _>>()?;
        Ok(Self {
            fleet: fleet.into(),
            estimate: Arc::default(),
            offers: offers.into(),
            candidates,
            profiles: profiles.into(),
            ratios,
            series: series.into(),
            tested: Arc::default(),
            sheet,
        })
    }

    /// The same desk with the test reports of units: blanks of their nameplates are filled from them.
    #[must_use]
    pub fn with_tests(mut self, tested: Vec<(Unit, TestReport)>) -> Self {
        let named =
            |(unit, report): (Unit, TestReport)| (unit.unit.clone(), TestedUnit { unit, report });
        self.tested = Arc::new(tested.into_iter().map(named).collect());
        self.take_tests();
        self
    }

    /// The same desk under another basis.
    #[must_use]
    pub fn with_basis(&self, sheet: BasisSheet) -> Self {
        let mut desk = Self { sheet, ..self.clone() };
        if desk.stray_share_pu() != self.stray_share_pu() {
            desk.take_tests();
        }
        desk
    }

    /// The same desk with every price series of the book, for a basis that may come to name another.
    ///
    /// # Errors
    /// The store fails.
    pub fn with_every_series(mut self, book: &Book) -> Result<Self, StudyError> {
        let names = book.price_series_names()?;
        let all: Result<Vec<_>, _> = names.iter().map(|name| book.price_series(name)).collect();
        self.series = Arc::new(all?);
        Ok(self)
    }

    /// Stray part of a load loss of which the split is not known.
    pub fn stray_share_pu(&self) -> f64 {
        self.sheet.basis.stray_share_pu.unwrap_or(0.0)
    }

    /// A unit with its test report, where it has one.
    pub fn tested(&self, unit: &str) -> Option<&TestedUnit> {
        self.tested.get(unit)
    }

    fn take_tests(&mut self) {
        let share = self.stray_share_pu();
        let filled: FxHashMap<&str, Unit> = self
            .tested
            .iter()
            .filter_map(|(name, tested)| Some((name.as_str(), tested.filled(share)?)))
            .collect();
        if filled.is_empty() {
            return;
        }
        let fleet = Arc::make_mut(&mut self.fleet);
        for i in 0..fleet.len() {
            if let Some(filled) = filled.get(fleet.unit.get(i)) {
                fleet.take_test(i, filled);
            }
        }
        self.estimate = Arc::default();
    }

    /// The basis resolved, with its prices: what the engine computes with.
    ///
    /// # Errors
    /// What the engine refuses of the basis; a price series that is not in the book.
    pub fn context(&self) -> Result<Context, StudyError> {
        let a = Assumptions::resolve(&self.sheet.basis)?;
        let (market, flags) = match &a.energy_price {
            EnergyPrice::Flat(price) => {
                (Market::flat(*price, a.carbon_kg_per_kwh, self.profiles.len()), Flags::NONE)
            }
            EnergyPrice::Series(name) => {
                let series = self.series.iter().find(|s| s.name == *name).ok_or_else(|| {
                    let known: Vec<&str> = self.series.iter().map(|s| s.name.as_str()).collect();
                    StudyError::unknown("price series", name, "the book", known)
                })?;
                let both =
                    series.co2_kg_per_kwh.is_some() && self.sheet.basis.carbon_kg_per_kwh.is_some();
                let market = Market::of_series(series, &self.profiles, a.carbon_kg_per_kwh);
                (market, Flags::NONE.with_if(both, Flags::CARBON_SERIES))
            }
        };
        self.lives(&a)?;
        let (candidates, law_flags) = self.candidates_under(&a)?;
        let ratios = self.ratios.clone();
        let drops = a.voltage_model == VoltageModel::Drop;
        let durations = if drops {
            self.profiles.iter().map(|p| p.load_duration(DURATION_STEPS).into()).collect()
        } else {
            Vec::new()
        };
        let reactance_unknown = drops && candidates.iter().any(|c| c.losses.reactance_pu.is_none());
        let estimate = a.estimate_missing.then(|| Arc::clone(self.estimate()));
        let flags =
            flags.with(law_flags).with_if(reactance_unknown, Flags::OFFER_IMPEDANCE_UNKNOWN);
        Ok(Context { assumptions: a, market, ratios, durations, candidates, estimate, flags })
    }

    /// What the known losses of the fleet say of missing ones; the fleet is gone through once, whatever the basis.
    fn estimate(&self) -> &Arc<FleetEstimate> {
        self.estimate.get_or_init(|| Arc::new(FleetEstimate::of_fleet(&self.fleet)))
    }

    /// The candidates as a basis sees them: where it names a law, whether each meets it in each year of
    /// purchase. What cannot be told passes; the flags say so.
    ///
    /// # Errors
    /// A law that is not known.
    fn candidates_under(&self, a: &Assumptions) -> Result<(Vec<Candidate>, Flags), StudyError> {
        let mut candidates = self.candidates.clone();
        let Some(law) = &a.law else { return Ok((candidates, Flags::NONE)) };
        law::named(law)?;
        let dates: Vec<_> = (a.first_year..).take(a.years).map_while(law::at_start_of).collect();
        let mut flags = Flags::NONE;
        for (offer, candidate) in self.offers.iter().zip(&mut candidates) {
            let subject = Subject::of_offer(offer, &candidate.losses, a.stray_share_pu);
            candidate.lawful.clear();
            for date in &dates {
                let verdict = law::check(law, &subject, *date)?;
                flags = flags
                    .with_if(verdict.meets.is_none(), Flags::LAW_NOT_CHECKED)
                    .with_if(verdict.verify, Flags::VERIFY_LAW);
                candidate.lawful.push(verdict.meets.unwrap_or(true));
            }
        }
        Ok((candidates, flags))
    }

    /// Holds that every offer has a life where capital is charged per year of service.
    fn lives(&self, a: &Assumptions) -> Result<(), StudyError> {
        let needed = a.capital_recovery == CapitalRecovery::Annuity && a.life_years.is_none();
        match self.offers.iter().find(|offer| needed && offer.life_years.is_none()) {
            None => Ok(()),
            Some(offer) => {
                let why = format!(
                    "offer {} has none: give it there or in the basis, or choose capital_recovery \"full\"",
                    offer.offer
                );
                Err(Refusal::new("life_years", "", why).into())
            }
        }
    }

    /// An offer by its name.
    ///
    /// # Errors
    /// It is not in the catalogue.
    pub fn offer(&self, offer: &str) -> Result<&Offer, StudyError> {
        self.offers.iter().find(|o| o.offer == offer).ok_or_else(|| {
            let known = self.offers.iter().map(|o| o.offer.as_str());
            StudyError::unknown("offer", offer, "the book", known)
        })
    }

    /// The name of an offer by its index.
    pub fn offer_name(&self, candidate: usize) -> &str {
        self.offers.get(candidate).map_or("", |offer| &offer.offer)
    }

    /// Index of a unit in the fleet by its identifier.
    pub fn find(&self, unit: &str) -> Option<usize> {
        (0..self.fleet.len()).find(|&i| self.fleet.unit.get(i) == unit)
    }
}
