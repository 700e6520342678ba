//! `ironhum tender T`: the bids of a tender by what they cost to own.

use serde::Serialize;
use serde_json::{Map, Value};

use super::args::{Args, Drawn, Format, Tender};
use super::book::{self, Opened};
use super::exit::{Exit, Failure};
use super::factors::working as write_working;
use super::print::Printer;
use crate::engine::decision::uncertainty::RankCorrelation;
use crate::engine::flags::Flags;
use crate::study::StudyError;
use crate::study::explain::StepRow;
use crate::study::losses::flag_meaning;
use crate::study::tender::{BidResult, Case, Draws, LotResult, TenderResult, letter, working};

const KEYS: &[&str] = &[
    "lot",
    "rank",
    "bid",
    "bidder",
    "price",
    "no_load_cost",
    "load_cost",
    "auxiliary_cost",
    "added_cost",
    "owning_cost",
    "owning_cost_at_tolerance",
    "lot_cost",
    "law",
    "near_tie",
    "excluded",
];
/// What a simulation adds to the line of a bid.
const RISK_KEYS: &[&str] = &[
    "probability_pu",
    "mean_regret",
    "owning_cost_p5",
    "owning_cost_p50",
    "owning_cost_p95",
    "draws",
    "seed",
];

/// A bid with its lot: a line of the CSV file.
#[derive(Serialize)]
struct Line<'a> {
    lot: &'a str,
    #[serde(flatten)]
    bid: &'a BidResult,
    #[serde(flatten)]
    risk: Map<String, Value>,
}

impl<'a> Line<'a> {
    fn new(lot: &'a LotResult, bid: &'a BidResult) -> Result<Self, Failure> {
        let mut line = Self { lot: &lot.lot, bid, risk: Map::new() };
        if let Some(risk) = &lot.risk
            && let Some(of_bid) = risk.bids.iter().find(|of| of.bid == bid.bid)
            && let Value::Object(figures) = serde_json::to_value(of_bid)?
        {
            line.risk = figures.into_iter().filter(|(key, _)| key != "bid").collect();
            line.risk.insert("draws".to_owned(), risk.draws.into());
            line.risk.insert("seed".to_owned(), risk.seed.into());
        }
        Ok(line)
    }
}

pub(super) fn tender(
    args: &Args,
    options: &Tender,
    printer: &mut Printer,
) -> Result<Exit, Failure> {
    let Opened { book, .. } = book::open_to_read(args)?;
    let case = Case::read(&book, &options.tender, args.basis.as_deref())?;
    let case = if options.from_basis { case.from_basis() } else { case };
    let mut result = case.evaluate(options.lot.as_deref())?;
    if let Some(only) = &options.bid {
        let mut bids = result.lots.iter().flat_map(|lot| &lot.bids).map(|bid| bid.bid.as_str());
        if !bids.clone().any(|bid| bid == only) {
            let place = format!("tender {}", result.tender);
            return Err(StudyError::unknown("bid", only, place, &mut bids).into());
        }
    }
    let asked = draws(&options.drawn)?;
    let risk = options.risk || asked != Draws::default();
    if risk {
        case.add_risk(&mut result, &asked)?;
    }
    match printer.format {
        Format::Json => printer.json(&result)?,
        Format::Csv => {
            let keys = if risk { [KEYS, RISK_KEYS].concat() } else { KEYS.to_vec() };
            let bids =
                result.lots.iter().flat_map(|lot| lot.bids.iter().map(move |bid| (lot, bid)));
            let lines =
                bids.map(|(lot, bid)| Line::new(lot, bid)).collect::<Result<Vec<_>, _>>()?;
            printer.csv(&keys, lines.into_iter())?;
        }
        Format::Text => {
            match &options.bid {
                Some(bid) => printer.letter(&letter::answer(&case, &result, bid)?)?,
                None => printer.letter(&letter::result(&case, &result))?,
            }
            if options.working {
                write_workings(printer, &case, &result, options.bid.as_deref())?;
            }
        }
    }
    Ok(said(printer, &result))
}

/// Warns that factors look like money per W, or losses like kW, where the result itself is no text for people.
pub(super) fn warn_of_scale(printer: &Printer, lot: &str, flags: &[&str]) {
    if printer.format == Format::Text {
        return;
    }
    for key in
        Flags::FACTOR_SCALE.with(Flags::LOSS_SCALE).keys().iter().filter(|key| flags.contains(key))
    {
        let meaning = flag_meaning(key).unwrap_or_default();
        printer.complain(&format!("lot {lot}: {key}: {meaning}"));
    }
}

/// Names the lots in which no bid can be ranked; without any winner there is no solution.
pub(super) fn said(printer: &Printer, result: &TenderResult) -> Exit {
    let mut won = false;
    for lot in &result.lots {
        warn_of_scale(printer, &lot.lot, &lot.flags);
        for bid in &lot.bids {
            warn_of_scale(printer, &format!("{}, bid {}", lot.lot, bid.bid), &bid.flags);
        }
        won |= lot.least_owning_cost.is_some();
        let why = match (&lot.least_owning_cost, lot.bids.is_empty()) {
            (Some(_), _) => continue,
            (None, true) => "has no bid; import them: ironhum import bids FILE",
            (None, false) => "has no bid that keeps its limits",
        };
        printer.complain(&format!("tender {}: lot {} {why}", result.tender, lot.lot));
    }
    if won { Exit::Done } else { Exit::Infeasible }
}

fn write_workings(
    printer: &mut Printer,
    case: &Case,
    result: &TenderResult,
    only: Option<&str>,
) -> Result<(), Failure> {
    let basis = case.basis();
    let wanted = |bid: &&BidResult| only.is_none_or(|only| only == bid.bid);
    for lot in &result.lots {
        for bid in lot.bids.iter().filter(wanted) {
            let w = match only {
                Some(bid) => case.answering(&lot.lot, bid)?,
                None => working(&case.sheet, basis.as_ref(), &lot.lot, &bid.bid)?,
            };
            printer.line("")?;
            printer.line(format!("Lot {}, bid {}", lot.lot, bid.bid))?;
            let figures = [&w.owning_cost, &w.owning_cost_at_tolerance, &w.lot_cost];
            for steps in [&w.factors, &w.on_terms].into_iter().chain(figures) {
                write_working(printer, &StepRow::tree(steps), 0, case.money())?;
            }
        }
    }
    Ok(())
}

/// How the draws were asked for.
pub(super) fn draws(options: &Drawn) -> Result<Draws, Failure> {
    let correlations = options.correlate.iter().map(|text| correlation(text));
    let usual = Draws::default();
    Ok(Draws {
        draws: options.draws.unwrap_or(usual.draws),
        seed: options.seed.unwrap_or(usual.seed),
        correlations: correlations.collect::<Result<_, _>>()?,
    })
}

fn correlation(text: &str) -> Result<RankCorrelation, Failure> {
    let parts: Vec<&str> = text.split(',').map(str::trim).collect();
    if let [a, b, rho] = parts[..]
        && let Ok(rank_correlation) = rho.parse()
    {
        return Ok(RankCorrelation { quantities: [a.to_owned(), b.to_owned()], rank_correlation });
    }
    let why = format!(
        "--correlate {text}: write two inputs and their rank correlation, like energy_price_per_kwh,load_growth_pct,0.4"
    );
    Err(Failure::new(Exit::Usage, why))
}
