//! The screen of one unit: why it ranks where it does. State here; drawing in `draw`, its facts in `facts`.

pub(super) mod draw;
mod facts;

use std::sync::Arc;

use super::app::App;
use super::list::List;
use super::work::Ranked;
use crate::engine::columns::Unit;
use crate::engine::decision::Place;
use crate::engine::decision::keep_or_replace::Decision;
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
    /// The years as a table instead of a chart.
    pub(super) table: bool,
    /// First line of the facts that is shown.
    pub(super) facts: List,
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
}

impl State {
    /// Decides for a unit.
    pub(super) fn open(&mut self, ranked: &Arc<Ranked>, i: usize) {
        let (desk, context) = (&ranked.desk, &ranked.ranking.context);
        let known = match decision(desk, context, i) {
            Ok(Ok((place, decision))) => choice_costs(desk, context, &place, &decision)
                .map(|costs| Box::new(Known { place, decision, costs }))
                .map_err(|error| error.to_string()),
            Ok(Err(why)) => Err(why.why().to_owned()),
            Err(error) => Err(error.to_string()),
        };
        self.index = Some(i);
        self.dossier = Some(Dossier { ranked: Arc::clone(ranked), index: i, known });
    }

    /// Takes the record of a unit, if it is still the one that is shown.
    pub(super) fn take_record(&mut self, unit: &str, record: Option<Box<Unit>>) {
        if let (Some(dossier), Some(i)) = (&self.dossier, self.index)
            && dossier.ranked.desk.fleet.unit.get(i) == unit
        {
            self.record = record;
        }
    }
}

/// Lines of the facts.
pub(super) fn facts_len(app: &App) -> usize {
    let size = draw::areas(super::frame::areas(app.size.into()).body).facts;
    facts::lines(app, usize::from(size.width)).len()
}
