//! The screen of one unit: why it ranks where it does. State here; drawing in `draw`, its facts in `facts`.

pub(super) mod draw;
mod facts;
mod more;
mod table;

pub(super) use facts::of_columns;
pub use more::More;

use std::sync::Arc;

use super::app::App;
use super::bar::{self, Parts};
use super::list::List;
use super::text;
use super::theme::Part;
use super::work::Ranked;
use crate::engine::columns::Unit;
use crate::engine::decision::Place;
use crate::engine::decision::keep_or_replace::{Decision, YearChoice};
use crate::engine::decision::parts::PolicyCost;
use crate::study::Desk;
use crate::study::offers_open::{NotYet, left_out_because, not_yet};
use crate::study::rank::RankRow;
use crate::study::unit::{ChoiceCosts, choice_costs, decision};

/// State of the screen.
#[derive(Debug, Default)]
pub(super) struct State {
    /// Which unit of the fleet.
    pub(super) index: Option<usize>,
    /// What is known of it under the basis as it stands.
    pub(super) dossier: Option<Dossier>,
    /// Its whole record, once it was read.
    pub(super) record: Option<Box<Unit>>,
    /// What else its dossier says under the basis as it stands, once it was computed.
    pub(super) more: Option<Box<More>>,
    /// The years as a table instead of a chart.
    pub(super) table: bool,
    /// First line of the facts that is shown.
    pub(super) facts: List,
    /// First line of the table of years that is shown.
    pub(super) years: List,
}

/// What is known of a unit under a basis.
#[derive(Debug)]
pub(super) struct Dossier {
    pub(super) ranked: Arc<Ranked>,
    /// Which unit of the fleet.
    pub(super) index: usize,
    /// The decision, or why there is none.
    pub(super) known: Result<Box<Known>, String>,
}

/// The decision of a unit.
#[derive(Debug)]
pub(super) struct Known {
    pub(super) place: Place,
    pub(super) decision: Decision,
    pub(super) costs: ChoiceCosts,
    /// Why there is no choice in the first year, where there is none.
    pub(super) not_yet: Option<NotYet>,
}

impl State {
    /// Decides for a unit.
    pub(super) fn open(&mut self, ranked: &Arc<Ranked>, i: usize) {
        let (desk, context) = (&ranked.desk, &ranked.ranking.context);
        let known = match decision(desk, context, i) {
            Ok(Ok((place, decision))) => {
                let not_yet = not_yet(desk, context, i, &place, &decision);
                choice_costs(context, &place, &decision)
                    .map(|costs| Box::new(Known { place, decision, costs, not_yet }))
                    .map_err(|error| error.to_string())
            }
            Ok(Err(why)) => Err(left_out_because(desk, context, i, why).to_owned()),
            Err(error) => Err(error.to_string()),
        };
        if !self.shows(ranked, i) {
            self.more = None;
        }
        self.index = Some(i);
        self.dossier = Some(Dossier { ranked: Arc::clone(ranked), index: i, known });
    }

    /// Whether it already shows this unit under this basis.
    pub(super) fn shows(&self, ranked: &Arc<Ranked>, i: usize) -> bool {
        let dossier = self.dossier.as_ref();
        dossier.is_some_and(|d| d.index == i && Arc::ptr_eq(&d.ranked, ranked))
    }

    /// Takes the record of a unit and what else is said of it, if it is still the one that is shown.
    pub(super) fn take_record(
        &mut self,
        ranked: &Arc<Ranked>,
        i: usize,
        record: Option<Box<Unit>>,
        more: Option<Box<More>>,
    ) {
        if self.shows(ranked, i) {
            (self.record, self.more) = (record, more);
        }
    }
}

/// One of the choices that stand against each other.
pub(super) struct Choice {
    pub(super) word: String,
    pub(super) offer: String,
    /// Its present value; none where no offer is open.
    pub(super) pv: Option<f64>,
    pub(super) cost: Option<Parts>,
}

/// What the fills of the bars of choices mean.
pub(super) const LEGEND: [(Part, &str); 4] = [
    (Part::Price, "price"),
    (Part::Iron, "iron"),
    (Part::Copper, "copper"),
    (Part::Other, "other"),
];

/// Keeping, replacing now, and the best of all.
pub(super) fn choices(desk: &Desk, known: &Known, first_year: i64) -> [Choice; 3] {
    let split = |cost: PolicyCost| {
        let other = cost.auxiliary + cost.upkeep + cost.failures;
        bar::parts(cost.capital, cost.no_load, cost.load, other)
    };
    let offer = |choice: Option<YearChoice>| {
        choice.map_or("", |choice| desk.offer_name(choice.offer)).to_owned()
    };
    let (decision, costs) = (&known.decision, &known.costs);
    let when = match decision.best {
        Some(choice) => format!("best in {}", year(first_year, &choice)),
        None => "best never".to_owned(),
    };
    [
        Choice {
            word: "keep".to_owned(),
            offer: String::new(),
            pv: Some(decision.keep_pv),
            cost: Some(split(costs.keep)),
        },
        Choice {
            word: "now".to_owned(),
            offer: offer(decision.now),
            pv: decision.now.map(|choice| choice.pv),
            cost: costs.now.map(split),
        },
        Choice {
            word: when,
            offer: offer(decision.best),
            pv: Some(decision.best_pv),
            cost: Some(split(costs.best.unwrap_or(costs.keep))),
        },
    ]
}

/// Between which places a unit stands whose losses are estimated, in words; none where they are not.
pub(super) fn span(row: &RankRow<'_>) -> Option<String> {
    let (low, high) = match (row.rank_low, row.rank_high) {
        (None, None) => return None,
        (Some(low), Some(high)) => (row.rank.min(low).min(high), row.rank.max(low).max(high)),
        (Some(end), None) | (None, Some(end)) => (row.rank.min(end), row.rank.max(end)),
    };
    Some(format!("{}-{}", text::count(low), text::count(high)))
}

/// Why nothing can be bought in the first year, in words.
pub(super) fn not_yet_words(not_yet: Option<&NotYet>) -> String {
    not_yet.map_or("none open".to_owned(), |not_yet| {
        format!("none open before {}: {}", not_yet.open_in, not_yet.because.join(", "))
    })
}

/// Lines of the years as a table, where it is taller than its place.
pub(super) fn table_len(app: &App) -> Option<(usize, usize)> {
    let known = app.unit.dossier.as_ref().filter(|_| app.unit.table)?.known.as_ref().ok()?;
    let area = draw::areas(super::frame::body(app), true).years;
    let (lines, seen) = table::lines(app, known, area);
    (lines > seen).then_some((lines, seen))
}

/// The scale that choices share.
pub(super) fn scale(choices: &[Choice]) -> f64 {
    choices.iter().filter_map(|c| c.cost).map(|cost| bar::whole(&cost)).fold(0.0, f64::max)
}

/// The calendar year of a choice.
fn year(first_year: i64, choice: &YearChoice) -> i64 {
    first_year + i64::try_from(choice.offset).unwrap_or(0)
}

/// The record of a unit: as it was read, else what the columns of the fleet hold of it.
pub(super) fn record(app: &App, desk: &Desk, i: usize) -> Unit {
    let read = app.unit.record.as_deref().filter(|_| app.unit.index == Some(i));
    read.cloned().unwrap_or_else(|| facts::of_columns(desk, i))
}

/// Lines of the facts.
pub(super) fn facts_len(app: &App) -> usize {
    let facts = draw::areas(super::frame::body(app), app.unit.table).facts;
    let wide = draw::columns(facts).first().map_or(0, |column| usize::from(column.width));
    facts::lines(app, wide).len()
}
