//! Evaluating a tender: which bid of each lot is the cheapest to own, by how much, and what would change it.
//!
//! [`evaluate`] answers for a whole tender or one lot; [`working`] opens the figures of one bid. Amounts are
//! per unit in the tender currency, factors per kW. The structs serialise with the names of the contract.
//! [`mod@risk`] says how sure the winner is, [`mod@award`] what one bidder for all lots costs.

pub mod award;
mod case;
pub mod decide;
pub mod deliver;
mod factors;
pub mod letter;
mod misses;
mod results;
pub mod risk;
pub mod shortfall;
mod workings;

use super::StudyError;
use crate::engine::columns::{Award, Bid, Lot, TenderSheet};
use crate::engine::decision::tender::bid::{Comparable, comparable};
use crate::engine::decision::tender::changes::{self, Change, Field};
use crate::engine::decision::tender::factors::{Computed, of_lot};
use crate::engine::decision::tender::limits::{self, Findings};
use crate::engine::decision::tender::map::WinnerMap;
use crate::engine::decision::tender::ranking::{self, Ranking, Standing, rank};
use crate::engine::decision::tender::rates::price_is_far;
use crate::engine::decision::tender::{Plane, Rates, Terms, legal};
use crate::engine::economics::loss_factors::LossFactors;
use crate::engine::economics::owning_cost::OwningCost;
use crate::engine::flags::Flags;
use crate::engine::law::Verdict;
use crate::engine::working::{Recorder, Silent, Step, Working};

pub use crate::engine::decision::tender::BasisForFactors;
pub use case::{Case, Draws};
pub use factors::{InCurrency, LegalLimit, LotFactors, LotQuestion, lot_factors};
pub use misses::Miss;
pub use results::*;

/// Evaluates the bids of a tender: of one lot, or of all.
///
/// # Errors
/// An unknown lot, a currency without a rate, a loss that is missing, a factor that is absent without a basis.
pub fn evaluate(
    sheet: &TenderSheet,
    basis: Option<&BasisForFactors>,
    lot: Option<&str>,
) -> Result<TenderResult, StudyError> {
    let lots = match lot {
        Some(lot) => vec![find_lot(sheet, lot)?],
        None => sheet.lots.iter().collect(),
    };
    for bid in &sheet.bids {
        find_lot(sheet, &bid.lot)?;
    }
    let lots = lots.into_iter().map(|lot| evaluate_lot(sheet, basis, lot));
    let lots: Vec<LotResult> = lots.collect::<Result<_, _>>()?;
    Ok(TenderResult {
        tender: sheet.tender.tender.clone(),
        currency: sheet.tender.currency.clone(),
        awards: award::awards(&lots),
        lots,
    })
}

/// The loss factors of a lot in the tender currency, with their working (the last three steps are A, B, A_aux).
///
/// # Errors
/// As [`evaluate`].
pub fn factors(
    sheet: &TenderSheet,
    basis: Option<&BasisForFactors>,
    lot: &str,
) -> Result<(LossFactors, Vec<Step>), StudyError> {
    let mut working = Working::default();
    let (terms, _) = terms(&mut working, sheet, basis, find_lot(sheet, lot)?)?;
    Ok((terms.factors, working.into_steps()))
}

/// How far the second bid of a lot lies above the first, with its working; none with one bid.
///
/// # Errors
/// As [`evaluate`].
pub fn margin(
    sheet: &TenderSheet,
    basis: Option<&BasisForFactors>,
    lot: &str,
) -> Result<Option<(f64, Vec<Step>)>, StudyError> {
    let judged = Judged::new(sheet, basis, find_lot(sheet, lot)?)?;
    let [first, second, ..] = judged.ranking.order[..] else { return Ok(None) };
    let mut working = Working::default();
    let cost = |w: &mut Working, i: usize| judged.bids[i].on_terms.owning_cost(w).total();
    let (first, second) = (cost(&mut working, first), cost(&mut working, second));
    let margin = ranking::margin(&mut working, first, second);
    Ok(margin.map(|margin| (margin, working.into_steps())))
}

/// The working of one bid; the last step of each is the figure.
#[derive(Clone, Debug, PartialEq)]
pub struct BidWorking {
    /// The lot's factors (the last three steps: A, B, A_aux).
    pub factors: Vec<Step>,
    /// How the bid comes to the lot's terms: losses and money.
    pub on_terms: Vec<Step>,
    /// Owning cost.
    pub owning_cost: Vec<Step>,
    /// Worst owning cost within the tolerance.
    pub owning_cost_at_tolerance: Vec<Step>,
    /// Owning cost of the lot.
    pub lot_cost: Vec<Step>,
}

/// Opens the figures of one bid.
///
/// # Errors
/// As [`evaluate`], and an unknown bid.
pub fn working(
    sheet: &TenderSheet,
    basis: Option<&BasisForFactors>,
    lot: &str,
    bid: &str,
) -> Result<BidWorking, StudyError> {
    let lot = find_lot(sheet, lot)?;
    let bid = find_bid(sheet, &lot.lot, bid)?;
    let mut factors = Working::default();
    let (terms, _) = terms(&mut factors, sheet, basis, lot)?;
    opened(&terms, factors, bid)
}

/// The same under the terms of the lot's award, whose factors are kept with it; none where it is not awarded.
///
/// # Errors
/// As [`working`].
pub fn working_as_awarded(
    sheet: &TenderSheet,
    basis: Option<&BasisForFactors>,
    lot: &str,
    bid: &str,
) -> Result<Option<BidWorking>, StudyError> {
    let Some(award) = award_of(sheet, lot) else { return Ok(None) };
    let bid = find_bid(sheet, lot, bid)?;
    let (terms, _) = terms_at_award(sheet, basis, find_lot(sheet, lot)?, award)?;
    opened(&terms, Working::default(), bid).map(Some)
}

fn opened(terms: &Terms, factors: Working, bid: &Bid) -> Result<BidWorking, StudyError> {
    let mut on_terms = Working::default();
    let comparable = bring(&mut on_terms, terms, bid)?;
    let open = |figure: &dyn Fn(&mut Working)| {
        let mut working = Working::default();
        figure(&mut working);
        working.into_steps()
    };
    Ok(BidWorking {
        factors: factors.into_steps(),
        on_terms: on_terms.into_steps(),
        owning_cost: open(&|w| {
            comparable.owning_cost(w);
        }),
        owning_cost_at_tolerance: open(&|w| {
            comparable.at_tolerance(w, terms);
        }),
        lot_cost: open(&|w| {
            comparable.lot_cost(w, terms);
        }),
    })
}

/// What the law that the lot names says of a bid, with its working; none where none is named or the day of
/// purchase is not known.
///
/// # Errors
/// As [`working`], and a law that is not known.
pub fn verdict(
    sheet: &TenderSheet,
    basis: Option<&BasisForFactors>,
    lot: &str,
    bid: &str,
) -> Result<Option<Verdict>, StudyError> {
    let (lot, bid) = (find_lot(sheet, lot)?, find_bid(sheet, lot, bid)?);
    let (terms, _) = terms(&mut Silent, sheet, basis, lot)?;
    before_the_law(&terms, bid, &bring(&mut Silent, &terms, bid)?)
}

pub(super) fn find_lot<'a>(sheet: &'a TenderSheet, lot: &str) -> Result<&'a Lot, StudyError> {
    sheet.lots.iter().find(|l| l.lot == lot).ok_or_else(|| {
        let known = sheet.lots.iter().map(|l| l.lot.as_str());
        StudyError::unknown("lot", lot, format!("tender {}", sheet.tender.tender), known)
    })
}

pub(super) fn bids_of<'a>(sheet: &'a TenderSheet, lot: &str) -> impl Iterator<Item = &'a Bid> {
    sheet.bids.iter().filter(move |bid| bid.lot == lot)
}

pub(super) fn find_bid<'a>(
    sheet: &'a TenderSheet,
    lot: &str,
    bid: &str,
) -> Result<&'a Bid, StudyError> {
    bids_of(sheet, lot).find(|b| b.bid == bid).ok_or_else(|| {
        let place = format!("tender {}, lot {lot}", sheet.tender.tender);
        StudyError::unknown("bid", bid, place, bids_of(sheet, lot).map(|b| b.bid.as_str()))
    })
}

/// The terms of a lot, every blank filled in, with what is doubtful about its factors.
pub(super) fn terms<'a, R: Recorder>(
    w: &mut R,
    sheet: &'a TenderSheet,
    basis: Option<&BasisForFactors>,
    lot: &'a Lot,
) -> Result<(Terms<'a>, Flags), StudyError> {
    let tender = format!("tender {}", sheet.tender.tender);
    let rates = Rates::new(&sheet.tender, &sheet.rates).map_err(StudyError::refused(tender))?;
    let (factors, flags) =
        of_lot(w, lot, &rates, basis).map_err(StudyError::refused(format!("lot {}", lot.lot)))?;
    let assumptions = basis.map(|basis| basis.assumptions);
    let terms = Terms {
        lot,
        rates,
        factors,
        stray_share_pu: assumptions.map_or(0.0, |a| a.stray_share_pu),
        near_tie_pct: lot.near_tie_pct.or(assumptions.map(|a| a.near_tie_pct)).unwrap_or(0.0),
        purchase: legal::purchase(&sheet.tender, assumptions.map(|a| a.first_year)),
    };
    Ok((terms, flags))
}

/// The award of a lot, where the book has one.
pub(super) fn award_of<'a>(sheet: &'a TenderSheet, lot: &str) -> Option<&'a Award> {
    sheet.awards.iter().find(|award| award.lot == lot)
}

/// The terms of a lot as they were when it was awarded.
pub(super) fn terms_at_award<'a>(
    sheet: &'a TenderSheet,
    basis: Option<&BasisForFactors>,
    lot: &'a Lot,
    award: &Award,
) -> Result<(Terms<'a>, Flags), StudyError> {
    let factors = LossFactors {
        factor_a_per_kw: award.factor_a_per_kw,
        factor_b_per_kw: award.factor_b_per_kw,
        factor_aux_per_kw: award.factor_aux_per_kw,
    };
    let tender = format!("tender {}", sheet.tender.tender);
    let rates = Rates::new(&sheet.tender, &sheet.rates).map_err(StudyError::refused(tender))?;
    let assumptions = basis.map(|basis| basis.assumptions);
    let terms = Terms {
        lot,
        rates,
        factors,
        stray_share_pu: award.stray_share_pu,
        near_tie_pct: lot.near_tie_pct.or(assumptions.map(|a| a.near_tie_pct)).unwrap_or(0.0),
        purchase: legal::purchase(&sheet.tender, assumptions.map(|a| a.first_year)),
    };
    Ok((terms, Flags::NONE))
}

/// A bid on the lot's terms.
pub(super) fn bring<R: Recorder>(
    w: &mut R,
    terms: &Terms,
    bid: &Bid,
) -> Result<Comparable, StudyError> {
    let at = || format!("lot {}, bid {}", bid.lot, bid.bid);
    comparable(w, terms, bid).map_err(|refusal| StudyError::Refused { at: at(), refusal })
}

fn before_the_law(
    terms: &Terms,
    bid: &Bid,
    on_terms: &Comparable,
) -> Result<Option<Verdict>, StudyError> {
    legal::verdict(terms, bid, on_terms)
        .map_err(StudyError::refused(format!("lot {}", terms.lot.lot)))
}

/// A bid with all that is known of it.
struct Assessed<'a> {
    bid: &'a Bid,
    on_terms: Comparable,
    cost: OwningCost,
    found: Findings,
    misses: Vec<Miss>,
}

impl<'a> Assessed<'a> {
    fn new(terms: &Terms, bid: &'a Bid) -> Result<Self, StudyError> {
        let on_terms = bring(&mut Silent, terms, bid)?;
        let cost = on_terms.owning_cost(&mut Silent);
        let verdict = before_the_law(terms, bid, &on_terms)?;
        let meets = verdict.as_ref().and_then(|verdict| verdict.meets);
        let mut found = limits::against(terms.lot, bid, &on_terms, meets);
        let miss =
            |key: &&'static str| Miss::of(key, terms.lot, bid, &on_terms.losses, verdict.as_ref());
        let misses = found.misses.iter().map(miss).collect();
        found.flags =
            found.flags.with_if(verdict.is_some_and(|verdict| verdict.verify), Flags::VERIFY_LAW);
        Ok(Self { bid, on_terms, cost, found, misses })
    }

    fn standing(&self) -> Standing {
        Standing {
            owning_cost: self.cost.total(),
            price_with_adders: self.on_terms.price_with_adders(),
            admitted: self.found.misses.is_empty(),
        }
    }

    fn result(&self, terms: &Terms, rank: Option<usize>, near_tie: bool) -> BidResult {
        BidResult {
            rank,
            bid: self.bid.bid.clone(),
            bidder: self.bid.bidder.clone(),
            price: self.cost.price,
            no_load_cost: self.cost.no_load_cost,
            load_cost: self.cost.load_cost,
            auxiliary_cost: self.cost.auxiliary_cost,
            added_cost: self.cost.added_cost,
            owning_cost: self.cost.total(),
            owning_cost_at_tolerance: self.on_terms.at_tolerance(&mut Silent, terms),
            lot_cost: self.on_terms.lot_cost(&mut Silent, terms),
            law: self.found.law,
            near_tie,
            excluded: self.found.misses.clone(),
            flags: self.on_terms.flags.with(self.found.flags).keys(),
            limits_unknown: self.found.unknown.clone(),
            losses: self.on_terms.losses,
            misses: self.misses.clone(),
        }
    }
}

/// A lot with its bids assessed and ranked.
struct Judged<'a> {
    terms: Terms<'a>,
    flags: Flags,
    bids: Vec<Assessed<'a>>,
    ranking: Ranking,
    contest: Contest,
}

impl<'a> Judged<'a> {
    fn new(
        sheet: &'a TenderSheet,
        basis: Option<&BasisForFactors>,
        lot: &'a Lot,
    ) -> Result<Self, StudyError> {
        let (terms, flags) = terms(&mut Silent, sheet, basis, lot)?;
        Self::under(sheet, terms, flags)
    }

    /// The bids of a lot under some terms.
    fn under(sheet: &'a TenderSheet, terms: Terms<'a>, flags: Flags) -> Result<Self, StudyError> {
        let lot = terms.lot;
        let bids = bids_of(sheet, &lot.lot).map(|bid| Assessed::new(&terms, bid));
        let mut bids: Vec<Assessed> = bids.collect::<Result<_, _>>()?;
        let far = far_by_rate(sheet, &lot.lot, &terms.rates)?;
        for of in &mut bids {
            let is_far = far.contains(&of.bid.bid.as_str());
            of.found.flags = of.found.flags.with_if(is_far, Flags::RATE_SCALE);
        }
        let standings: Vec<Standing> = bids.iter().map(Assessed::standing).collect();
        let ranking = rank(&standings, terms.near_tie_pct);
        let flags = flags
            .with_if(factors_look_per_watt(bids.iter().map(|bid| &bid.cost)), Flags::FACTOR_SCALE);
        let contest = Contest::new(&bids, &ranking, &terms);
        Ok(Self { terms, flags, bids, ranking, contest })
    }

    fn name(&self, bid: usize) -> String {
        self.bids[bid].bid.bid.clone()
    }

    /// The name of the contest's bid `j`.
    fn contestant(&self, j: usize) -> String {
        self.name(self.contest.bids[j])
    }
}

fn evaluate_lot(
    sheet: &TenderSheet,
    basis: Option<&BasisForFactors>,
    lot: &Lot,
) -> Result<LotResult, StudyError> {
    result_of(sheet, basis, &Judged::new(sheet, basis, lot)?)
}

/// The evaluation of a lot under the terms of its award, with the bid that was recommended then; none where it is not
/// awarded.
///
/// # Errors
/// As [`evaluate`].
pub fn as_awarded(
    sheet: &TenderSheet,
    basis: Option<&BasisForFactors>,
    lot: &str,
) -> Result<Option<LotResult>, StudyError> {
    let Some(award) = award_of(sheet, lot) else { return Ok(None) };
    let (terms, flags) = terms_at_award(sheet, basis, find_lot(sheet, lot)?, award)?;
    // The factors are kept: nothing of the basis moves them.
    let result = result_of(sheet, None, &Judged::under(sheet, terms, flags)?)?;
    let recommended = award.recommended.clone();
    Ok(Some(LotResult { recommended, as_awarded: true, ..result }))
}

fn result_of(
    sheet: &TenderSheet,
    basis: Option<&BasisForFactors>,
    judged: &Judged,
) -> Result<LotResult, StudyError> {
    let Judged { terms, ranking, contest, .. } = judged;
    let lot = terms.lot;
    let contestant = |j| judged.contestant(j);
    let map = WinnerMap::new(&contest.planes, &terms.factors);
    let borders = contest.borders(&map, contestant);
    let map = contest.map(&map, ranking, contestant);
    let nearest_border = contest.nearest_border(&mut Silent, contestant);
    let changes = contest.changes(&mut Silent, &judged.bids, terms, basis, contestant)?;
    let result = |i: usize, rank| judged.bids[i].result(terms, rank, ranking.band.contains(&i));
    let ranked = ranking.order.iter().enumerate().map(|(place, &i)| result(i, Some(place + 1)));
    let excluded = (0..judged.bids.len()).filter(|i| !judged.bids[*i].found.misses.is_empty());
    let bids: Vec<BidResult> = ranked.chain(excluded.map(|i| result(i, None))).collect();
    let award = award_of(sheet, &lot.lot)
        .and_then(|award| Some(Awarded::of(award, bids.iter().find(|bid| bid.bid == award.bid)?)));
    Ok(LotResult {
        lot: lot.lot.clone(),
        quantity: terms.quantity(),
        factor_a_per_kw: terms.factors.factor_a_per_kw,
        factor_b_per_kw: terms.factors.factor_b_per_kw,
        factor_aux_per_kw: terms.factors.factor_aux_per_kw,
        bids,
        least_owning_cost: ranking.order.first().map(|&i| judged.name(i)),
        recommended: ranking.band.first().map(|&i| judged.name(i)),
        margin_pct: ranking.margin_pct,
        map,
        changes,
        flags: judged.flags.keys(),
        near_tie_order: ranking.band.iter().map(|&i| judged.name(i)).collect(),
        borders,
        nearest_border,
        near_tie_pct: terms.near_tie_pct,
        computed: Computed::by(lot),
        stray_share_pu: terms.stray_share_pu,
        award,
        as_awarded: false,
        risk: None,
    })
}

/// Whether the no-load and the load loss of every bid are capitalised at under 1 % of its price. Auxiliaries and adders
/// are left out: a right factor of theirs would hide wrong ones.
fn factors_look_per_watt<'a>(costs: impl IntoIterator<Item = &'a OwningCost>) -> bool {
    let mut costs = costs.into_iter().peekable();
    costs.peek().is_some() && costs.all(|c| c.no_load_cost + c.load_cost < 0.01 * c.price)
}

/// Whether the factors of a lot look like money per W instead of per kW: no-load and load loss of every bid are
/// capitalised at under 1 % of its price.
///
/// # Errors
/// As [`evaluate`].
pub fn looks_per_watt(
    sheet: &TenderSheet,
    basis: Option<&BasisForFactors>,
    lot: &str,
) -> Result<bool, StudyError> {
    let (terms, _) = terms(&mut Silent, sheet, basis, find_lot(sheet, lot)?)?;
    factor_scale(sheet, &terms)
}

/// Bids of a lot in another currency whose price the rate brings to ten times or a tenth of that of the others.
///
/// # Errors
/// A currency without a rate.
fn far_by_rate<'a>(
    sheet: &'a TenderSheet,
    lot: &str,
    rates: &Rates,
) -> Result<Vec<&'a str>, StudyError> {
    let price = |bid: &'a Bid| {
        let rate = rates.of(bid.currency.as_deref()).map_err(|refusal| StudyError::Refused {
            at: format!("lot {lot}, bid {}", bid.bid),
            refusal,
        })?;
        Ok((bid, Rates::convert(&mut Silent, bid.price.amount(), rate, "price")))
    };
    let prices: Vec<(&Bid, f64)> =
        bids_of(sheet, lot).map(price).collect::<Result<_, StudyError>>()?;
    let is_foreign =
        |bid: &Bid| bid.currency.as_deref().is_some_and(|code| code != sheet.tender.currency);
    let is_far = |(n, (bid, own)): (usize, &(&'a Bid, f64))| {
        let others = prices.iter().enumerate().filter(|(m, _)| *m != n);
        let far = is_foreign(bid) && price_is_far(*own, others.map(|(_, (_, price))| *price));
        far.then_some(bid.bid.as_str())
    };
    Ok(prices.iter().enumerate().filter_map(is_far).collect())
}

/// The same for a lot of a sheet, for what is doubtful of the book.
///
/// # Errors
/// As [`evaluate`].
pub fn bids_far_by_rate<'a>(sheet: &'a TenderSheet, lot: &str) -> Result<Vec<&'a str>, StudyError> {
    let at = format!("tender {}", sheet.tender.tender);
    let rates = Rates::new(&sheet.tender, &sheet.rates).map_err(StudyError::refused(at))?;
    far_by_rate(sheet, lot, &rates)
}

/// Whether the factors of a lot look like money per W: where they do, it is said wherever the tender is shown.
///
/// # Errors
/// A bid that cannot be brought to the lot's terms.
pub(super) fn factor_scale(sheet: &TenderSheet, terms: &Terms) -> Result<bool, StudyError> {
    let cost = |bid| Ok(bring(&mut Silent, terms, bid)?.owning_cost(&mut Silent));
    let costs: Vec<OwningCost> =
        bids_of(sheet, &terms.lot.lot).map(cost).collect::<Result<_, StudyError>>()?;
    Ok(factors_look_per_watt(&costs))
}

/// The admitted bids as planes over the factors, in order of entry.
struct Contest {
    /// Indices into the lot's bids.
    bids: Vec<usize>,
    planes: Vec<Plane>,
    /// Index of the winner into `planes`.
    winner: Option<usize>,
    factors: LossFactors,
}

impl Contest {
    fn new(assessed: &[Assessed], ranking: &Ranking, terms: &Terms) -> Self {
        let admitted = |i: &usize| assessed[*i].found.misses.is_empty();
        let bids: Vec<usize> = (0..assessed.len()).filter(admitted).collect();
        let planes: Vec<Plane> = bids.iter().map(|&i| assessed[i].on_terms.plane()).collect();
        let winner = ranking.order.first().and_then(|first| bids.iter().position(|i| i == first));
        Self { bids, planes, winner, factors: terms.factors }
    }

    fn map(&self, map: &WinnerMap, ranking: &Ranking, name: impl Fn(usize) -> String) -> MapResult {
        let cell = |i: &usize| {
            let j = self.bids.iter().position(|bid| bid == i)?;
            let cell = &map.cells[j];
            Some(CellResult { bid: name(j), share: cell.share, polygon: cell.polygon.clone() })
        };
        MapResult {
            a_max: map.a_max,
            b_max: map.b_max,
            bids: ranking.order.iter().filter_map(cell).collect(),
        }
    }

    fn borders(&self, map: &WinnerMap, name: impl Fn(usize) -> String) -> Vec<BorderResult> {
        let borders = map.borders(&self.planes, &self.factors);
        let named = borders.into_iter().map(|border| BorderResult {
            bids: border.bids.map(&name),
            from: border.from,
            to: border.to,
        });
        named.collect()
    }

    fn field(&self) -> Option<Field<'_>> {
        let winner = self.winner?;
        Some(Field { planes: &self.planes, winner, factors: self.factors })
    }

    fn nearest_border<R: Recorder>(
        &self,
        w: &mut R,
        name: impl Fn(usize) -> String,
    ) -> Option<NearestBorderResult> {
        let border = changes::nearest_border(w, &self.field()?)?;
        Some(NearestBorderResult {
            at: border.at,
            distance_per_kw: border.distance_per_kw,
            bid: name(border.bid),
        })
    }

    fn changes<R: Recorder>(
        &self,
        w: &mut R,
        assessed: &[Assessed],
        terms: &Terms,
        basis: Option<&BasisForFactors>,
        name: impl Fn(usize) -> String,
    ) -> Result<Changes, StudyError> {
        let Some(field) = self.field() else { return Ok(Changes::default()) };
        let winner = &assessed[self.bids[field.winner]].on_terms;
        let losses = &winner.losses;
        let mut found: Vec<Change> = field.of_factors(w).to_vec();
        found.extend(field.of_winner(
            w,
            winner.price,
            losses.no_load_loss_w,
            losses.load_loss_w,
            &winner.factors,
            [terms.lot.max_no_load_loss_w, terms.lot.max_load_loss_w],
        ));
        found.extend(field.of_stray_share(w, terms.stray_share_pu));
        if let Some(basis) = basis.filter(|_| Computed::by(terms.lot).any()) {
            let at = format!("lot {}", terms.lot.lot);
            let of_basis = field.of_basis(w, terms.lot, &terms.rates, basis);
            found.extend(of_basis.map_err(StudyError::refused(at))?);
        }
        let side = |side: Option<changes::Move>| {
            side.map(|side| MoveResult { by: side.by, to: side.to, bid: name(side.bid) })
        };
        let named = found.into_iter().map(|change| ChangeResult {
            quantity: change.quantity,
            base: change.base,
            down: side(change.down),
            up: side(change.up),
        });
        Ok(Changes(named.collect()))
    }
}
