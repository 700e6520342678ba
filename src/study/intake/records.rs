//! Files of records: units, test reports, offers, bids, measured units. Row by row, never the whole file.

use std::collections::{BTreeSet, HashMap, HashSet};

use super::ahead::{Batch, Read, read_ahead};
use super::{Intake, IntakeError, Report, What};
use crate::book::tables::{BIDS, LOTS, MEASURED, OFFERS, TENDERS, TEST_REPORTS, UNITS};
use crate::book::{Book, Change, Known, Table, Tally};
use crate::engine::columns::{Value, nearest};
use crate::exchange::rejects::Rejects;
use crate::exchange::rules::{self, Rule, Rules};
use crate::exchange::{Fault, Layout, Row, Rows, Source, holds_numbers};

impl Intake<'_> {
    pub(super) fn records(
        mut self,
        book: &mut Book,
        source: Source,
    ) -> Result<Report, IntakeError> {
        let (table, rules) = shape(self.what);
        let size = source.size();
        let numeric = holds_numbers(table.columns, &self.options.map);
        let opened = Rows::open(source, self.options.hints, &numeric);
        drop(numeric);
        let mut rows = match opened {
            Ok(rows) => rows,
            Err(error) => {
                self.unfit(error)?;
                return Ok(self.report(Tally::default()));
            }
        };
        self.recognised = Some(rows.recognised());
        let (map, ignore_unknown) = (&self.options.map, self.options.ignore_unknown);
        let layout =
            Layout::fit(rows.header(), table.columns, map, ignore_unknown, &mut self.problems);
        if !self.problems.is_empty() {
            self.is_unfit = true;
            return Ok(self.report(Tally::default()));
        }
        let mut rejects = match self.options.rejects.take() {
            Some(to) => Some(Rejects::begin(to, layout.names()).map_err(IntakeError::Rejects)?),
            None => None,
        };
        self.watch.expect(size.and_then(|size| usize::try_from(size).ok()).unwrap_or(0));

        let change = book.change(self.actor, Some(&self.file))?;
        let mut upsert = change.upsert(table, None, &layout.present(), self.options.clear_blank)?;
        let rules = Rules::of(rules, table.columns);
        let is_reasoned = self.actor.why.as_ref().is_some_and(|why| !why.trim().is_empty());
        let mut ties = Ties::of(self.what, table, &change, is_reasoned)?;
        let put = |batch: &mut Batch| -> Result<(), IntakeError> {
            self.look(batch.bytes)?;
            for Read { row, values, faults } in batch.rows() {
                self.rows += 1;
                if faults.is_empty() {
                    let known = upsert.look_up(values)?;
                    let fault = |place: usize, why: String| {
                        let cell = layout.cell(row, place);
                        let value =
                            if cell.is_empty() { shown(&values[place]) } else { cell.to_owned() };
                        Fault { column: table.columns[place].name, value, why }
                    };
                    rules.judge(values, |place, why| faults.push(fault(place, why)));
                    ties.judge(values, |place, why| faults.push(fault(place, why)))?;
                    if let Some(known) = &known {
                        ties.same_bidder(known, values, |place, why| {
                            faults.push(fault(place, why));
                        });
                        ties.keeps_evidence(known, values, |place, why| {
                            faults.push(fault(place, why));
                        })?;
                    } else {
                        ties.not_late(values, |place, why| faults.push(fault(place, why)))?;
                    }
                    if faults.is_empty() {
                        ties.note_lot(values);
                        upsert.put(known, values)?;
                        continue;
                    }
                }
                self.bad += 1;
                for fault in faults.iter() {
                    self.problems.add(row.line, fault.column, &fault.value, fault.why.as_str());
                }
                if let Some(rejects) = &mut rejects {
                    rejects
                        .add(row.cells(), row.line, &reasons(faults))
                        .map_err(IntakeError::Rejects)?;
                }
            }
            match batch.end.take() {
                Some(Err(error)) => self.unfit(error),
                Some(Ok(())) | None => Ok(()),
            }
        };
        read_ahead(&mut rows, &layout, Twice::of(table), put)?;
        self.recognised = Some(rows.recognised());
        if let Some(rejects) = rejects {
            rejects.finish().map_err(IntakeError::Rejects)?;
        }
        drop(upsert);
        self.warnings = ties.too_many()?;
        drop(ties);
        let tally = change.tally();
        if self.stays() {
            change.commit()?;
        }
        Ok(self.report(tally))
    }

    /// Says how far it is, and stops where that is asked for.
    fn look(&self, bytes: u64) -> Result<(), IntakeError> {
        if self.watch.is_stopped() {
            return Err(IntakeError::Stopped);
        }
        let (done, _) = self.watch.progress();
        self.watch.advance(usize::try_from(bytes).unwrap_or(0).saturating_sub(done));
        Ok(())
    }
}

fn shape(what: What) -> (&'static Table, &'static [Rule]) {
    match what {
        What::Tests => (&TEST_REPORTS, rules::NONE),
        What::Offers => (&OFFERS, rules::OFFERS),
        What::Bids => (&BIDS, rules::BIDS),
        What::Measured => (&MEASURED, rules::NONE),
        _ => (&UNITS, rules::UNITS),
    }
}

fn reasons(faults: &[Fault]) -> String {
    let one = |fault: &Fault| format!("{} {}: {}", fault.column, fault.value, fault.why);
    faults.iter().map(one).collect::<Vec<_>>().join("; ")
}

fn shown(value: &Value) -> String {
    match value {
        Value::Blank => String::new(),
        Value::Text(text) => text.clone(),
        Value::Integer(number) => number.to_string(),
        Value::Real(number) => number.to_string(),
        Value::Money(money) => money.to_string(),
    }
}

/// Notices a key that stands twice in one file.
pub(super) struct Twice {
    key: Vec<usize>,
    column: &'static str,
    lines: HashMap<String, u64>,
}

impl Twice {
    fn of(table: &Table) -> Self {
        let key = table.key.iter().filter_map(|name| table.position(name)).collect();
        Self { key, column: table.key[table.key.len() - 1], lines: HashMap::new() }
    }

    pub(super) fn check(&mut self, layout: &Layout, row: &Row, faults: &mut Vec<Fault>) {
        let mut cells = self.key.iter().map(|place| layout.cell(row, *place));
        let mut key = cells.next().unwrap_or_default().to_owned();
        for cell in cells {
            key.push('\u{1f}');
            key.push_str(cell);
        }
        if key.is_empty() {
            return;
        }
        match self.lines.entry(key) {
            std::collections::hash_map::Entry::Vacant(free) => {
                free.insert(row.line);
            }
            std::collections::hash_map::Entry::Occupied(taken) => faults.push(Fault {
                column: self.column,
                value: taken.key().replace('\u{1f}', "/"),
                why: format!("stands on line {} already", taken.get()),
            }),
        }
    }
}

/// What a record names and the book must know.
struct Ties<'c> {
    change: &'c Change<'c>,
    what: What,
    profiles: HashSet<String>,
    /// Places of the naming columns.
    places: Vec<usize>,
    /// Whether the change gives a reason.
    reasoned: bool,
    /// Tender and lot of measured units of the file.
    measured: BTreeSet<(String, String)>,
}

impl<'c> Ties<'c> {
    fn of(
        what: What,
        table: &Table,
        change: &'c Change<'c>,
        reasoned: bool,
    ) -> Result<Self, IntakeError> {
        let columns: &[&str] = match what {
            What::Units => &["profile"],
            What::Tests => &["unit"],
            What::Bids => &["tender", "lot", "currency"],
            What::Measured => &["tender", "lot", "bid", "serial"],
            _ => &[],
        };
        let profiles = match what {
            What::Units => change.profile_names()?.into_iter().collect(),
            _ => HashSet::new(),
        };
        let places = columns.iter().filter_map(|name| table.position(name)).collect();
        Ok(Self { change, what, profiles, places, reasoned, measured: BTreeSet::new() })
    }

    fn judge(
        &mut self,
        values: &[Value],
        mut broken: impl FnMut(usize, String),
    ) -> Result<(), IntakeError> {
        let text = |at: usize| match self.places.get(at).map(|place| &values[*place]) {
            Some(Value::Text(text)) => Some(text.as_str()),
            _ => None,
        };
        match self.what {
            What::Units => {
                if let Some(profile) = text(0).filter(|name| !self.profiles.contains(*name)) {
                    let known = self.profiles.iter().map(String::as_str).collect();
                    broken(self.places[0], unknown("profile", profile, known));
                }
            }
            What::Tests => {
                let unit = text(0).unwrap_or_default();
                if !self.change.has(&UNITS, &[unit])? {
                    broken(self.places[0], unknown("unit", unit, Vec::new()));
                }
            }
            What::Bids | What::Measured => {
                let (tender, lot) = (text(0).unwrap_or_default(), text(1).unwrap_or_default());
                if !self.change.has(&TENDERS, &[tender])? {
                    let known = self.change.names(&TENDERS)?;
                    let known = known.iter().map(String::as_str).collect();
                    broken(self.places[0], unknown("tender", tender, known));
                } else if !self.change.has(&LOTS, &[tender, lot])? {
                    let known = self.change.lots_of(tender)?.join(", ");
                    let why =
                        format!("is no lot of tender {tender} in the book; its lots: {known}");
                    broken(self.places[1], why);
                } else if self.what == What::Bids {
                    if let Some(currency) = text(2)
                        && !self.change.knows_currency(tender, currency)?
                    {
                        let why = format!(
                            "has no rate in tender {tender}; add it below [rates] and import the tender again"
                        );
                        broken(self.places[2], why);
                    }
                } else {
                    let (bid, serial) = (text(2).unwrap_or_default(), text(3).unwrap_or_default());
                    if !self.change.has(&BIDS, &[tender, lot, bid])? {
                        broken(self.places[2], format!("is no bid for {tender}/{lot} in the book"));
                    } else if let Some(award) = self.change.awarded(tender, lot)?
                        && award.bid != bid
                    {
                        let why =
                            format!("is another bid: {tender}/{lot} is awarded to {}", award.bid);
                        broken(self.places[2], why);
                    } else if let Some(other) =
                        self.change.measured_under(tender, lot, bid, serial)?
                    {
                        let why =
                            format!("is measured as a unit of bid {other} already, not of {bid}");
                        broken(self.places[3], why);
                    }
                }
            }
            _ => {}
        }
        Ok(())
    }

    /// Holds that a bid stays that of its bidder: two bidders may have called theirs alike.
    fn same_bidder(&self, known: &Known, values: &[Value], mut broken: impl FnMut(usize, String)) {
        let Some(place) = BIDS.position("bidder").filter(|_| self.what == What::Bids) else {
            return;
        };
        if let (Value::Text(own), Value::Text(new)) = (known.old(place), &values[place])
            && own != new
        {
            let bid = BIDS.position("bid").map_or(&Value::Blank, |at| &values[at]);
            let why = format!(
                "has a bid {} of {own} in the book: two bids of one name; give this one another. If {own} was \
                 written wrong, import it once with a blank bidder and --clear-blank",
                shown(bid)
            );
            broken(place, why);
        }
    }

    /// Holds that what a dispute may rest on stays: the bids of an awarded lot, a remark apart, and without a reason
    /// the measured losses of a unit that is in the fleet.
    fn keeps_evidence(
        &self,
        known: &Known,
        values: &[Value],
        mut broken: impl FnMut(usize, String),
    ) -> Result<(), IntakeError> {
        let table = match self.what {
            What::Bids => &BIDS,
            What::Measured => &MEASURED,
            _ => return Ok(()),
        };
        let remark = |place: &usize| table.columns[*place].name == "note";
        let changed: Vec<usize> = known.differs(values).filter(|place| !remark(place)).collect();
        if changed.is_empty() {
            return Ok(());
        }
        let named = |name: &str| match table.position(name).map(|place| &values[place]) {
            Some(Value::Text(text)) => text.as_str(),
            _ => "",
        };
        let [tender, lot, bid] = ["tender", "lot", "bid"].map(named);
        let why = if self.what == What::Bids {
            if self.change.awarded(tender, lot)?.is_none() {
                return Ok(());
            }
            format!(
                "would change bid {bid}: {tender}/{lot} is awarded, and what was offered for it stays; withdraw the \
                 award first: ironhum award {tender} --lot {lot} --withdraw --why TEXT"
            )
        } else {
            let serial = named("serial");
            match self.change.delivered(tender, lot, bid, serial)? {
                Some(unit) if !self.reasoned => format!(
                    "would change what {serial} measured: it is in the fleet as {unit}, and what was settled stays; to \
                     correct it import it alone and say why: --why TEXT"
                ),
                _ => return Ok(()),
            }
        };
        for place in changed {
            broken(place, why.clone());
        }
        Ok(())
    }

    /// Holds that no bid comes in for a lot once it is awarded: it would stand among those that were compared.
    fn not_late(
        &self,
        values: &[Value],
        mut broken: impl FnMut(usize, String),
    ) -> Result<(), IntakeError> {
        let place = BIDS.position("bid").filter(|_| self.what == What::Bids);
        let ([Value::Text(tender), Value::Text(lot)], Some(place)) =
            ([0, 1].map(|at| &values[self.places.get(at).copied().unwrap_or(0)]), place)
        else {
            return Ok(());
        };
        if self.change.awarded(tender, lot)?.is_some() {
            let why = format!(
                "is new, but {tender}/{lot} is awarded and takes no further bid; withdraw the award first: \
                 ironhum award {tender} --lot {lot} --withdraw --why TEXT"
            );
            broken(place, why);
        }
        Ok(())
    }

    /// Notes the lot of a measured unit.
    fn note_lot(&mut self, values: &[Value]) {
        if self.what != What::Measured {
            return;
        }
        let text = |at: usize| shown(&values[self.places[at]]);
        self.measured.insert((text(0), text(1)));
    }

    /// Lots of the file of which more units are measured now than they have.
    fn too_many(&self) -> Result<Vec<String>, IntakeError> {
        let mut said = Vec::new();
        for (tender, lot) in &self.measured {
            for (bid, measured, quantity) in self.change.measured_beyond(tender, lot)? {
                said.push(format!(
                    "{measured} units of bid {bid} are measured, but lot {lot} of tender {tender} has {quantity}: is a \
                     serial number written in two ways, or does the unit belong to another lot?"
                ));
            }
        }
        Ok(said)
    }
}

fn unknown(kind: &str, name: &str, known: Vec<&str>) -> String {
    match nearest(name, known) {
        Some(near) => format!("is no {kind} of the book; did you mean {near}?"),
        None => format!("is no {kind} of the book; import it first"),
    }
}
