//! Reading ahead: one thread splits and reads the rows, the other puts them into the book. Batches go round
//! between the two, so that their room is used again and a file never lies in memory as a whole.

use std::sync::mpsc::{Receiver, Sender, channel};

use super::IntakeError;
use super::records::Twice;
use crate::engine::columns::Value;
use crate::exchange::{Fault, Layout, ReadError, Row, Rows};

/// Rows of a batch.
const ROWS: usize = 512;
/// Most rows of a file: several times the largest fleet; without a bound a source without end would fill memory.
const MOST_ROWS: u64 = 5_000_000;
/// Batches on their way round.
const BATCHES: usize = 4;

/// One row, read.
#[derive(Default)]
pub(super) struct Read {
    pub(super) row: Row,
    /// A value for each column of the record.
    pub(super) values: Vec<Value>,
    /// What does not fit in the row by itself.
    pub(super) faults: Vec<Fault>,
}

/// Some rows, and where the reader stands behind them.
#[derive(Default)]
pub(super) struct Batch {
    rows: Vec<Read>,
    filled: usize,
    /// Bytes read so far.
    pub(super) bytes: u64,
    /// Whether the file ends here, and how.
    pub(super) end: Option<Result<(), ReadError>>,
}

impl Batch {
    /// The rows.
    pub(super) fn rows(&mut self) -> &mut [Read] {
        &mut self.rows[..self.filled]
    }

    fn fill(&mut self, rows: &mut Rows, layout: &Layout, twice: &mut Twice, left: &mut u64) {
        self.filled = 0;
        while self.filled < ROWS && self.end.is_none() {
            if self.filled == self.rows.len() {
                self.rows.push(Read::default());
            }
            let Read { row, values, faults } = &mut self.rows[self.filled];
            match rows.next(row) {
                Ok(true) if *left == 0 => {
                    let why = format!("has more than {MOST_ROWS} rows; split it");
                    self.end = Some(Err(ReadError::Unfit { line: row.line, why }));
                }
                Ok(true) => {
                    *left -= 1;
                    faults.clear();
                    layout.values(row, rows.decimals(), values, faults);
                    twice.check(layout, row, faults);
                    self.filled += 1;
                }
                Ok(false) => self.end = Some(Ok(())),
                Err(error) => self.end = Some(Err(error)),
            }
        }
        self.bytes = rows.bytes().unwrap_or(0);
    }
}

/// Reads a file to its end on a thread of its own; `take` puts what was read, batch by batch, on this one. An
/// error of `take` stops the reading.
pub(super) fn read_ahead(
    rows: &mut Rows,
    layout: &Layout,
    mut twice: Twice,
    mut take: impl FnMut(&mut Batch) -> Result<(), IntakeError>,
) -> Result<(), IntakeError> {
    let (empty, to_fill): (Sender<Batch>, Receiver<Batch>) = channel();
    let (full, to_take) = channel();
    // The channels are moved in and fall with the closure: either side ends when the other one does.
    std::thread::scope(move |scope| {
        let reader = std::thread::Builder::new().spawn_scoped(scope, move || {
            let mut left = MOST_ROWS;
            for mut batch in to_fill {
                batch.fill(rows, layout, &mut twice, &mut left);
                if full.send(batch).is_err() {
                    return;
                }
            }
        });
        reader.map_err(IntakeError::Thread)?;
        let send = |batch| empty.send(batch).is_ok();
        for _ in 0..BATCHES {
            send(Batch::default());
        }
        for mut batch in to_take {
            let is_last = batch.end.is_some();
            take(&mut batch)?;
            if is_last || !send(batch) {
                break;
            }
        }
        Ok(())
    })
}
