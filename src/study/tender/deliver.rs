//! Delivered units into the fleet: the measured units of awarded bids, with their measured losses at the lot's
//! reference temperature. Done twice it changes nothing; what a planner added to a unit since stays.

use serde::Serialize;

use super::{Case, find_bid, find_lot};
use crate::book::tables::{DELIVERIES, UNITS};
use crate::book::{Actor, Book, Change, Outcome, Upsert};
use crate::engine::Refusal;
use crate::engine::columns::{Bid, Column, Delivery, Lot, Unit, Value};
use crate::engine::flags::Flags;
use crate::engine::transformer::vector_group;
use crate::study::StudyError;
use crate::study::settle::{LotSettlement, UnitSettlement};

/// What is wanted of a delivery.
#[derive(Clone, Copy, Debug, Default)]
pub struct Wanted<'a> {
    /// Only this lot.
    pub lot: Option<&'a str>,
    /// Serial numbers that are left out.
    pub except: &'a [String],
    /// Serial numbers that are taken although they are beyond tolerance; others of that kind are left out, so that a
    /// rejected unit does not come in with a later delivery.
    pub also: &'a [String],
    /// What stands before the serial number in the identifier of the unit.
    pub prefix: &'a str,
}

/// What taking delivered units into the fleet came to.
#[derive(Clone, Debug, Default, PartialEq, Serialize)]
pub struct DeliverResult {
    /// The tender.
    pub tender: String,
    /// The units, by lot in order of entry.
    pub units: Vec<DeliveredUnit>,
    /// Lots and units that were left out.
    pub left_out: Vec<NotDelivered>,
    /// Lots of which more units of the awarded bid are measured than they have.
    pub lots_measured_beyond: Vec<String>,
}

/// A unit that came of a tender.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct DeliveredUnit {
    /// Its identifier in the fleet.
    pub unit: String,
    /// Serial number.
    pub serial: String,
    /// The lot.
    pub lot: String,
    /// The bid.
    pub bid: String,
    /// Rated power.
    pub rated_kva: f64,
    /// Measured no-load loss.
    pub no_load_loss_w: f64,
    /// Measured load loss at the reference temperature.
    pub load_loss_w: f64,
    /// Reference temperature of the load loss.
    pub reference_temp_c: Option<f64>,
    /// `new`, `changed` or `same`.
    pub outcome: &'static str,
    /// Whether it is beyond tolerance and may be rejected.
    pub rejectable: bool,
}

/// What was left out, and why.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct NotDelivered {
    /// The lot.
    pub lot: String,
    /// Serial number, where it is about one unit.
    pub serial: Option<String>,
    /// Why.
    pub why: &'static str,
}

/// Takes the measured units of the awarded bids into the fleet.
///
/// # Errors
/// As [`crate::study::settle::settle`]; an unknown serial number among those that are named, a unit of that identifier that
/// came from elsewhere, nothing that could be taken; a book that others changed since the case was read.
pub fn deliver(
    book: &mut Book,
    case: &Case,
    wanted: &Wanted,
    actor: &Actor,
) -> Result<DeliverResult, StudyError> {
    let sheet = &case.sheet;
    let settled = case.settle(wanted.lot)?;
    known_serials(case, wanted)?;
    let tender = &sheet.tender.tender;
    let earlier = book.deliveries(tender)?;
    let change = book.change(actor, Some(&format!("tender {tender}")))?;
    case.still_stands(&change)?;
    let mut fleet = Fleet::new(&change, wanted.prefix, &earlier)?;
    let mut result = DeliverResult { tender: tender.clone(), ..DeliverResult::default() };
    for lot in sheet.lots.iter().filter(|lot| wanted.lot.is_none_or(|name| lot.lot == name)) {
        let leave = |serial: Option<&String>, why| NotDelivered {
            lot: lot.lot.clone(),
            serial: serial.cloned(),
            why,
        };
        let Some(award) = sheet.awards.iter().find(|award| award.lot == lot.lot) else {
            result.left_out.push(leave(None, "is not awarded"));
            continue;
        };
        let of_bid = settled.lots.iter().find(|s| s.lot == lot.lot && s.bid == award.bid);
        let Some(of_bid) = of_bid else {
            result.left_out.push(leave(None, "has no measured unit of the awarded bid"));
            continue;
        };
        if Flags::MEASURED_BEYOND.keys().iter().any(|key| of_bid.flags.contains(key)) {
            result.lots_measured_beyond.push(lot.lot.clone());
        }
        for unit in &of_bid.units {
            if wanted.except.contains(&unit.serial) {
                result.left_out.push(leave(Some(&unit.serial), "is excepted"));
                continue;
            }
            let is_it =
                |d: &&Delivery| d.lot == lot.lot && d.bid == of_bid.bid && d.serial == unit.serial;
            let taken = wanted.also.contains(&unit.serial) || earlier.iter().any(|d| is_it(&d));
            if unit.beyond_tolerance && !taken {
                result.left_out.push(leave(Some(&unit.serial), BEYOND));
                continue;
            }
            result.units.push(fleet.take(case, of_bid, unit)?);
        }
    }
    drop(fleet);
    if result.units.is_empty() {
        return Err(nothing(&result));
    }
    change.commit()?;
    Ok(result)
}

/// Why a unit beyond tolerance is left out.
const BEYOND: &str = "is beyond tolerance; if it is accepted all the same, name it: --also SERIAL";

fn known_serials(case: &Case, wanted: &Wanted) -> Result<(), StudyError> {
    let serials = || case.sheet.measured.iter().map(|unit| unit.serial.as_str());
    let mut named = wanted.except.iter().chain(wanted.also);
    match named.find(|serial| !serials().any(|known| known == **serial)) {
        None => Ok(()),
        Some(serial) => {
            let place = format!("tender {}", case.sheet.tender.tender);
            Err(StudyError::unknown("serial", serial, place, serials()))
        }
    }
}

/// Why nothing could be taken, and what to do.
fn nothing(result: &DeliverResult) -> StudyError {
    let reasons: Vec<String> = result
        .left_out
        .iter()
        .map(|out| match &out.serial {
            Some(serial) => format!("unit {serial} {}", out.why),
            None => format!("lot {} {}", out.lot, out.why),
        })
        .collect();
    let why = format!(
        "has no unit to take into the fleet: {}. Award with: ironhum award {} --lot LOT --bid BID; measured losses with: ironhum import measured FILE",
        reasons.join(", "),
        result.tender
    );
    Refusal::new("tender", &result.tender, why).into()
}

/// Columns that the measurement settles: brought up to date when it changes.
const LOSSES: &[&str] =
    &["unit", "no_load_loss_w", "load_loss_w", "reference_temp_c", "auxiliary_loss_w"];

/// The fleet while units enter it.
struct Fleet<'c> {
    change: &'c Change<'c>,
    prefix: &'c str,
    earlier: &'c [Delivery],
    new: Upsert<'c>,
    again: Upsert<'c>,
}

impl<'c> Fleet<'c> {
    fn new(
        change: &'c Change<'c>,
        prefix: &'c str,
        earlier: &'c [Delivery],
    ) -> Result<Self, StudyError> {
        let all: Vec<usize> = (0..UNITS.columns.len()).collect();
        let losses: Vec<usize> = LOSSES.iter().filter_map(|name| UNITS.position(name)).collect();
        Ok(Self {
            change,
            prefix,
            earlier,
            new: change.upsert(&UNITS, None, &all, false)?,
            again: change.upsert(&UNITS, None, &losses, false)?,
        })
    }

    /// Takes one unit in.
    fn take(
        &mut self,
        case: &Case,
        of_bid: &LotSettlement,
        measured: &UnitSettlement,
    ) -> Result<DeliveredUnit, StudyError> {
        let sheet = &case.sheet;
        let lot = find_lot(sheet, &of_bid.lot)?;
        let bid = find_bid(sheet, &of_bid.lot, &of_bid.bid)?;
        let is_it =
            |d: &&Delivery| d.lot == lot.lot && d.bid == bid.bid && d.serial == measured.serial;
        let before = self.earlier.iter().find(is_it);
        let name = before
            .map_or_else(|| format!("{}{}", self.prefix, measured.serial), |d| d.unit.clone());
        if let Err(fault) = Column::id().required().read(&name) {
            return Err(Refusal::new("unit", &name, fault).into());
        }
        let unit = unit(&name, lot, bid, of_bid, measured);
        let mut values = unit.values();
        let outcome = if before.is_some() {
            for (column, value) in UNITS.columns.iter().zip(&mut values) {
                if !LOSSES.contains(&column.name) {
                    *value = Value::Blank;
                }
            }
            let known = self.again.look_up(&mut values)?;
            self.again.put(known, &values)?
        } else {
            if self.change.has(&UNITS, &[&name])? {
                let why = format!(
                    "is in the fleet already and did not come of tender {}, lot {}; name the new ones apart with --prefix TEXT",
                    bid.tender, lot.lot
                );
                return Err(Refusal::new("unit", &name, why).into());
            }
            self.new.put(None, &values)?
        };
        let delivery = Delivery {
            tender: bid.tender.clone(),
            lot: lot.lot.clone(),
            bid: bid.bid.clone(),
            serial: measured.serial.clone(),
            unit: name.clone(),
        };
        self.change.put(&DELIVERIES, None, &delivery.values())?;
        Ok(DeliveredUnit {
            unit: name,
            serial: measured.serial.clone(),
            lot: lot.lot.clone(),
            bid: bid.bid.clone(),
            rated_kva: unit.rated_kva,
            no_load_loss_w: measured.no_load_loss_w,
            load_loss_w: measured.load_loss_w,
            reference_temp_c: unit.reference_temp_c,
            outcome: match outcome {
                Outcome::New => "new",
                Outcome::Changed => "changed",
                Outcome::Same => "same",
            },
            rejectable: measured.rejectable,
        })
    }
}

/// The record of a delivered unit: what lot and bid say of it, with its measured losses.
fn unit(
    name: &str,
    lot: &Lot,
    bid: &Bid,
    of_bid: &LotSettlement,
    measured: &UnitSettlement,
) -> Unit {
    let vector_group = bid.vector_group.clone().or_else(|| lot.vector_group.clone());
    let year = |day: &String| day.get(..4).and_then(|year| year.parse().ok());
    Unit {
        unit: name.to_owned(),
        phases: vector_group.as_deref().and_then(vector_group::phases),
        rated_kva: of_bid.guaranteed.rated_kva,
        hv_kv: lot.hv_kv,
        lv_kv: lot.lv_kv,
        vector_group,
        insulation: bid.insulation,
        winding_metal: bid.winding_metal,
        impedance_pct: bid.impedance_pct.or(lot.impedance_pct),
        no_load_loss_w: Some(measured.no_load_loss_w),
        load_loss_w: Some(measured.load_loss_w),
        // Without a reference temperature the loss stands as the test read it.
        reference_temp_c: lot.reference_temp_c.or(measured.test_temp_c),
        auxiliary_loss_w: measured.auxiliary_loss_w.or(bid.auxiliary_loss_w),
        year_made: measured.tested_on.as_ref().and_then(year),
        note: Some(format!("tender {}, lot {}, bid {}", bid.tender, lot.lot, bid.bid)),
        ..Unit::blank()
    }
}
