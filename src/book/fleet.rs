//! The fleet in columns, read in one pass; a large book is read by every core at once, each a range of rows.

use std::ops::RangeInclusive;

use rusqlite::types::ValueRef;
use rusqlite::{Connection, Row};
use rustc_hash::FxHashMap;

use super::open::reader;
use super::{Book, Result};
use crate::engine::columns::{Column, Insulation, Kind, Unit, WindingMetal};
use crate::engine::decision::UnitFacts;
use crate::engine::decision::fit::Terminals;
use crate::engine::decision::fleet::{FleetColumns, NUMBERS};
use crate::engine::transformer::vector_group;

/// Rows below which one connection reads everything.
const SMALL: i64 = 50_000;

/// The numbers of the terminals, read behind those of [`NUMBERS`]; then the texts.
const TERMINALS: [&str; 3] = ["phases", "hv_kv", "lv_kv"];
const TEXTS: &[&str] =
    &["unit", "profile", "site", "vector_group", "in_service", "winding_metal", "insulation"];

/// The numbers of the profiles by the bytes of their names.
type Profiles = FxHashMap<Vec<u8>, u32>;

/// The names of all columns of numbers that are read, in this order.
fn numbers() -> impl Iterator<Item = &'static str> {
    NUMBERS.into_iter().chain(TERMINALS)
}

fn column(name: &str) -> Option<&'static Column> {
    Unit::COLUMNS.iter().find(|column| column.name == name)
}

impl Book {
    /// The fleet in columns, in order of entry. Profiles are numbered as [`Book::profiles`] gives them.
    ///
    /// # Errors
    /// The store fails.
    pub fn fleet(&self) -> Result<FleetColumns> {
        let profiles: Profiles = (0_u32..)
            .zip(self.profile_names()?)
            .map(|(number, name)| (name.into_bytes(), number))
            .collect();
        let ends = "SELECT ifnull(min(id), 0), ifnull(max(id), -1) FROM units";
        let (first, last): (i64, i64) =
            self.connection.query_row(ends, [], |row| Ok((row.get(0)?, row.get(1)?)))?;
        let (Some(path), true) = (&self.path, last - first > SMALL) else {
            return read(&self.connection, &profiles, first..=last, 0);
        };
        let parts = std::thread::available_parallelism().map_or(1, usize::from).min(8);
        let step = (last - first) / i64::try_from(parts).unwrap_or(1) + 1;
        let ranges = (0_i64..).take(parts).map(|n| {
            let from = first + n * step;
            from..=(from + step - 1).min(last)
        });
        let all = usize::try_from(last - first + 1).unwrap_or(0);
        let (profiles, frozen) = (&profiles, self.frozen);
        let mut fleet: Option<FleetColumns> = None;
        std::thread::scope(|scope| {
            let readers: Vec<_> = ranges
                .map(|range| {
                    // The first part takes the others in: room for all is made there.
                    let room = if *range.start() == first { all } else { 0 };
                    scope.spawn(move || {
                        let connection = reader(path, frozen)?;
                        connection.pragma_update(None, "mmap_size", 1_i64 << 36)?;
                        read(&connection, profiles, range, room)
                    })
                })
                .collect();
            for reader in readers {
                let part = reader.join().unwrap_or_else(|lost| std::panic::resume_unwind(lost))?;
                match &mut fleet {
                    None => fleet = Some(part),
                    Some(fleet) => fleet.append(part),
                }
            }
            Ok(())
        })
        .map(|()| fleet.unwrap_or_default())
    }
}

fn read(
    connection: &Connection,
    profiles: &Profiles,
    range: RangeInclusive<i64>,
    room: usize,
) -> Result<FleetColumns> {
    let names: Vec<String> = numbers()
        .chain(TEXTS.iter().copied())
        .filter_map(|name| column(name).map(Column::sql_name))
        .collect();
    let sql = format!(
        "SELECT {}, id FROM units WHERE id BETWEEN ?1 AND ?2 ORDER BY id",
        names.join(", ")
    );
    let scale: Vec<f64> = numbers()
        .map(|name| match column(name).map(|c| c.kind) {
            Some(Kind::Money(..)) => 1000.0,
            _ => 1.0,
        })
        .collect();
    let mut statement = connection.prepare(&sql)?;
    let mut rows = statement.query([range.start(), range.end()])?;
    let mut fleet = FleetColumns::default();
    let size = usize::try_from(range.end() - range.start() + 1).unwrap_or(0);
    fleet.reserve(room.max(size));
    let number = |row: &Row, i: usize| -> Result<f64> {
        Ok(match row.get_ref(i)? {
            ValueRef::Real(value) => value,
            #[expect(clippy::cast_precision_loss, reason = "whole columns are below 2^53")]
            ValueRef::Integer(value) => value as f64 / scale[i],
            _ => f64::NAN,
        })
    };
    while let Some(row) = rows.next()? {
        let mut numbers = [f64::NAN; NUMBERS.len()];
        for (i, value) in numbers.iter_mut().enumerate() {
            *value = number(row, i)?;
        }
        let known = |i: usize| {
            number(row, NUMBERS.len() + i).map(|value| (!value.is_nan()).then_some(value))
        };
        let bytes = |i: usize| match row.get_ref(NUMBERS.len() + TERMINALS.len() + i) {
            Ok(ValueRef::Text(text)) => Some(text),
            _ => None,
        };
        let text = |i: usize| bytes(i).and_then(|text| std::str::from_utf8(text).ok());
        let profile = bytes(1).and_then(|name| profiles.get(name).copied()).unwrap_or(u32::MAX);
        let facts = UnitFacts::of_numbers(numbers);
        let terminals = Terminals {
            #[expect(clippy::cast_possible_truncation, reason = "1 or 3")]
            phases: known(0)?.map(|n| n as i64),
            hv_kv: known(1)?,
            lv_kv: known(2)?,
            clock: text(3).and_then(vector_group::clock),
            rated_kva: facts.rated_kva,
        };
        let facts = UnitFacts {
            in_service: bytes(4) != Some(b"no"),
            phases: terminals.phases,
            winding_metal: text(5).and_then(WindingMetal::from_word),
            insulation: text(6).and_then(Insulation::from_word),
            profile,
            ..facts
        };
        fleet.push(text(0).unwrap_or(""), text(2), row.get(names.len())?, terminals, &facts);
    }
    Ok(fleet)
}
