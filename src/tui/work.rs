//! Long work off the event loop: questions to a worker, answers back, the newest of a kind winning.
//!
//! A question carries a generation; the one who asked keeps only the answer of the newest. Nothing here draws.

use std::sync::Arc;
use std::sync::mpsc::{Receiver, TryRecvError};

use rayon::prelude::*;

use super::bar;
use super::extent::Extent;
use super::session::{AwardWriter, Awarding, BasisWriter, JournalLine, RecordReader, Session};
use super::unit::{self, More};
use crate::engine::columns::{BasisSheet, TenderSheet, Unit};
use crate::engine::decision::Context;
use crate::engine::loading::PriceSeries;
use crate::study::losses;
use crate::study::rank::{self, By, Ranking};
use crate::study::tender::risk::{self, RiskResult};
use crate::study::tender::{self, BasisForFactors, TenderResult};
use crate::study::{Desk, StudyError, Watch};

/// A fleet ranked under one basis.
#[derive(Debug)]
pub struct Ranked {
    /// What was ranked.
    pub desk: Desk,
    /// The ranking by saving.
    pub ranking: Ranking,
    /// Place of each unit in it; `u32::MAX` where it is left out.
    pub place: Vec<u32>,
    /// How wide its columns are.
    pub extent: Extent,
    /// Cost of the losses of year 1 of each unit; 0 where it is left out.
    pub year_costs: Vec<f32>,
    /// The tenders under the same basis.
    pub tenders: Vec<Evaluated>,
}

/// A tender and what its bids come to.
#[derive(Debug)]
pub struct Evaluated {
    /// The tender.
    pub sheet: Arc<TenderSheet>,
    /// Its evaluation, or why there is none.
    pub result: Result<TenderResult, String>,
}

impl Evaluated {
    fn new(context: &Context, sheet: &Arc<TenderSheet>) -> Self {
        let result = tender::evaluate(sheet, Some(&factors(context)), None);
        Self { sheet: Arc::clone(sheet), result: result.map_err(|error| error.to_string()) }
    }
}

fn factors(context: &Context) -> BasisForFactors<'_> {
    BasisForFactors { assumptions: &context.assumptions, market: &context.market }
}

/// Draws of a simulation, and their seed: the same as those of the command.
pub const DRAWS: (usize, u64) = (10_000, 1);

impl Ranked {
    fn new(desk: Desk, tenders: &[Arc<TenderSheet>], watch: &Watch) -> Result<Self, StudyError> {
        let ranking = rank::rank(&desk, By::Saving, None, watch)?;
        let tenders = tenders.iter().map(|sheet| Evaluated::new(&ranking.context, sheet)).collect();
        let mut place = vec![u32::MAX; desk.fleet.len()];
        for (at, i) in (0u32..).zip(&ranking.order) {
            place[*i as usize] = at;
        }
        let extent = Extent::of(&desk, &ranking);
        let cost = |i: usize| losses::of_unit(&desk, &ranking.context, i).map(|row| row.cost);
        #[expect(clippy::cast_possible_truncation, reason = "for the scale of bars")]
        let year_costs = (0..desk.fleet.len())
            .into_par_iter()
            .map(|i| cost(i).map_or(0.0, |cost| bar::whole(&bar::of_year(&cost)) as f32))
            .collect();
        Ok(Self { desk, ranking, place, extent, year_costs, tenders })
    }
}

/// Which units are shown, in which order.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct ViewSpec {
    /// What was typed into the filter.
    pub filter: String,
    /// The order.
    pub by: By,
}

/// The units that are shown.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct View {
    /// What was asked.
    pub spec: ViewSpec,
    /// Places in the ranking.
    pub places: Vec<u32>,
    /// Which of those left out, as numbers in [`Ranking::left_out`].
    pub left_out: Vec<u32>,
    /// What a full bar of the list stands for.
    pub scale: f64,
}

/// A question to the worker.
#[derive(Debug)]
pub enum Question {
    /// Read what is to be shown.
    Open,
    /// Rank a desk.
    Rank(Box<Desk>, ViewSpec),
    /// Filter and order a ranked fleet.
    View(Arc<Ranked>, ViewSpec),
    /// The whole record of a unit, and what else its dossier says.
    Record(Arc<Ranked>, usize),
    /// Store a basis.
    Save(Box<BasisSheet>),
    /// Store an award.
    Award(Box<Awarding>),
    /// Evaluate a tender that was changed on the screen.
    WhatIf(Arc<Ranked>, Arc<TenderSheet>, u64),
    /// How sure the winner of a lot is.
    Risk(Arc<Ranked>, Arc<TenderSheet>, String, u64),
}

/// The kinds of questions; a newer one of a kind replaces an older.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[expect(missing_docs, reason = "named as the questions")]
pub enum Kind {
    Open,
    Rank,
    View,
    Record,
    Save,
    Award,
    WhatIf,
    Risk,
}

impl Kind {
    /// Number of kinds.
    pub const COUNT: usize = 8;
}

impl Question {
    /// Its kind.
    pub fn kind(&self) -> Kind {
        match self {
            Self::Open => Kind::Open,
            Self::Rank(..) => Kind::Rank,
            Self::View(..) => Kind::View,
            Self::Record(..) => Kind::Record,
            Self::Save(_) => Kind::Save,
            Self::Award(_) => Kind::Award,
            Self::WhatIf(..) => Kind::WhatIf,
            Self::Risk(..) => Kind::Risk,
        }
    }
}

/// A question on its way.
#[derive(Debug)]
pub struct Job {
    /// Number among those of its kind.
    pub generation: u64,
    /// By which it is stopped.
    pub watch: Arc<Watch>,
    /// The question.
    pub question: Question,
}

/// What can be stored.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Writes {
    /// A changed basis.
    pub basis: bool,
    /// An award.
    pub award: bool,
}

/// An answer.
#[derive(Debug)]
pub enum Answer {
    /// What was opened, and what of it can be stored.
    Opened(Box<Session>, Writes),
    /// A ranked fleet and what is shown of it.
    Ranked(Arc<Ranked>, View),
    /// What is shown of a ranked fleet.
    View(Arc<Ranked>, View),
    /// A record, and what else the dossier says of the unit.
    Record(Arc<Ranked>, usize, Option<Box<Unit>>, Option<Box<More>>),
    /// The basis is stored; the journal as it stands now.
    Saved(Box<BasisSheet>, Vec<JournalLine>),
    /// The award is stored; the journal as it stands now.
    Awarded(Box<Awarding>, Vec<JournalLine>),
    /// What a changed tender comes to; the number is that of the question.
    WhatIf(Evaluated, u64),
    /// How sure the winner of a lot is; the number is that of the question.
    Risk(Box<RiskResult>, String, u64),
}

/// An answer with its question's number.
#[derive(Debug)]
pub struct Done {
    /// Kind of the question.
    pub kind: Kind,
    /// Number of the question.
    pub generation: u64,
    /// The answer, or why there is none.
    pub answer: Result<Answer, StudyError>,
}

/// The worker: what it needs to answer.
pub struct Worker<L> {
    loader: Option<L>,
    record: Option<RecordReader>,
    save: Option<BasisWriter>,
    award: Option<AwardWriter>,
    tenders: Vec<Arc<TenderSheet>>,
}

impl<L: FnOnce(&Watch) -> Result<Session, StudyError>> Worker<L> {
    /// A worker that opens with `loader`.
    pub fn new(loader: L) -> Self {
        Self { loader: Some(loader), record: None, save: None, award: None, tenders: Vec::new() }
    }

    /// Answers one question.
    pub fn answer(&mut self, job: Job) -> Done {
        let (kind, generation) = (job.question.kind(), job.generation);
        Done { kind, generation, answer: self.think(job.question, &job.watch) }
    }

    fn think(&mut self, question: Question, watch: &Watch) -> Result<Answer, StudyError> {
        match question {
            Question::Open => {
                let loader = self.loader.take().ok_or(StudyError::Stopped)?;
                let mut session = loader(watch)?;
                self.record = session.record.take();
                self.tenders = session.tenders.drain(..).map(Arc::new).collect();
                self.save = session.save.take();
                self.award = session.award.take();
                let writes = Writes { basis: self.save.is_some(), award: self.award.is_some() };
                Ok(Answer::Opened(Box::new(session), writes))
            }
            Question::Rank(desk, spec) => {
                let ranked = Arc::new(Ranked::new(*desk, &self.tenders, watch)?);
                let view = view(&ranked, spec, watch)?;
                Ok(Answer::Ranked(ranked, view))
            }
            Question::View(ranked, spec) => {
                let view = view(&ranked, spec, watch)?;
                Ok(Answer::View(ranked, view))
            }
            Question::Record(ranked, i) => {
                let unit = ranked.desk.fleet.unit.get(i);
                let record = self.record.as_mut().and_then(|read| read(unit)).map(Box::new);
                let known = record.as_deref().cloned();
                let known = known.unwrap_or_else(|| unit::of_columns(&ranked.desk, i));
                let more = More::of(&ranked, &known).ok().map(Box::new);
                Ok(Answer::Record(ranked, i, record, more))
            }
            Question::Award(asked) => {
                let award = self.award.as_mut().ok_or(StudyError::Stopped)?;
                let (sheet, journal) = award(&asked)?;
                let same =
                    |known: &&mut Arc<TenderSheet>| known.tender.tender == sheet.tender.tender;
                if let Some(known) = self.tenders.iter_mut().find(same) {
                    *known = Arc::new(sheet);
                }
                Ok(Answer::Awarded(asked, journal))
            }
            Question::WhatIf(ranked, sheet, number) => {
                Ok(Answer::WhatIf(Evaluated::new(&ranked.ranking.context, &sheet), number))
            }
            Question::Risk(ranked, sheet, lot, number) => {
                let question = risk::Question {
                    basis: &ranked.desk.sheet,
                    series: named_series(&ranked.desk),
                    correlations: &[],
                    seed: DRAWS.1,
                    draws: DRAWS.0,
                };
                let today = factors(&ranked.ranking.context);
                let result = risk::risk(&sheet, &today, &lot, &question)?;
                Ok(Answer::Risk(Box::new(result), lot, number))
            }
            Question::Save(sheet) => {
                let save = self.save.as_mut().ok_or(StudyError::Stopped)?;
                let journal = save(&sheet)?;
                Ok(Answer::Saved(sheet, journal))
            }
        }
    }

    /// Answers until nobody asks any more. Of waiting questions only the newest of each kind is answered.
    pub fn serve(mut self, questions: &Receiver<Job>, reply: impl Fn(Done)) {
        let mut waiting: Vec<Job> = Vec::new();
        loop {
            if waiting.is_empty() {
                match questions.recv() {
                    Ok(job) => waiting.push(job),
                    Err(_) => return,
                }
            }
            loop {
                match questions.try_recv() {
                    Ok(job) => {
                        waiting.retain(|older| older.question.kind() != job.question.kind());
                        waiting.push(job);
                    }
                    Err(TryRecvError::Empty) => break,
                    Err(TryRecvError::Disconnected) => return,
                }
            }
            let job = waiting.remove(0);
            reply(self.answer(job));
        }
    }
}

/// The price series that the basis names.
fn named_series(desk: &Desk) -> Option<&PriceSeries> {
    let name = desk.sheet.basis.price_series.as_ref()?;
    desk.series.iter().find(|series| series.name == *name)
}

/// Units whose identifier or site holds every word of the filter (whatever the case), in the order asked for.
fn view(ranked: &Ranked, spec: ViewSpec, watch: &Watch) -> Result<View, StudyError> {
    let (desk, ranking) = (&ranked.desk, &ranked.ranking);
    let fleet = &desk.fleet;
    let words: Vec<String> = spec.filter.split_whitespace().map(str::to_lowercase).collect();
    let holds = |name: &str, word: &str| {
        if name.is_ascii() {
            let (name, word) = (name.as_bytes(), word.as_bytes());
            name.len() >= word.len()
                && name.windows(word.len()).any(|part| part.eq_ignore_ascii_case(word))
        } else {
            name.to_lowercase().contains(word)
        }
    };
    let shown = |i: usize| {
        let (unit, site) = (fleet.unit.get(i), fleet.site(i).unwrap_or(""));
        words.iter().all(|word| holds(unit, word) || holds(site, word))
    };
    let mut places: Vec<u32> = match spec.by {
        By::Saving => (0..u32::try_from(ranking.order.len()).unwrap_or(u32::MAX)).collect(),
        by => ranking.places(desk, by),
    };
    let mut left_out: Vec<u32> =
        (0..u32::try_from(ranking.left_out.len()).unwrap_or(u32::MAX)).collect();
    if watch.is_stopped() {
        return Err(StudyError::Stopped);
    }
    if !words.is_empty() {
        places = places
            .into_par_iter()
            .filter(|place| shown(ranking.order[*place as usize] as usize))
            .collect();
        left_out.retain(|n| shown(ranking.left_out[*n as usize] as usize));
    }
    let cost = |place: &u32| f64::from(ranked.year_costs[ranking.order[*place as usize] as usize]);
    let mut costs: Vec<f64> = places.par_iter().map(cost).collect();
    // Nearly all bars are seen whole: a few large units do not make all others too short to read.
    let nearly_all = (costs.len() * 19 / 20).min(costs.len().saturating_sub(1));
    let scale = if costs.is_empty() {
        1.0
    } else {
        bar::round_scale(*costs.select_nth_unstable_by(nearly_all, f64::total_cmp).1)
    };
    Ok(View { spec, places, left_out, scale })
}
