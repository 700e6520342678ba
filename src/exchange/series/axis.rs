//! The time axis of a series file: equal steps over one full year, by time or by running number.

use crate::exchange::counted;
use chrono::{DateTime, NaiveDateTime};

/// Minutes of an ordinary and of a leap year.
const YEARS: [u64; 2] = [365 * 1440, 366 * 1440];
/// Steps that are taken (minutes): they part an hour evenly.
const STEPS: [u32; 12] = [1, 2, 3, 4, 5, 6, 10, 12, 15, 20, 30, 60];

/// How a time was written: with an offset, or as local time.
type Moment = (i64, bool);

/// The axis as it is read.
pub(super) struct Axis {
    is_timed: bool,
    first: Option<String>,
    /// The step before, with its line.
    last: Option<(Moment, u64)>,
    /// Seconds between the first two times; 1 for running numbers.
    step: Option<i64>,
    count: u32,
    is_spoilt: bool,
}

impl Axis {
    pub(super) fn new(is_timed: bool) -> Self {
        let step = (!is_timed).then_some(1);
        Self { is_timed, first: None, last: None, step, count: 0, is_spoilt: false }
    }

    /// A row could not be read, so that the axis has a hole.
    pub(super) fn spoil(&mut self) {
        self.is_spoilt = true;
    }

    /// Takes the next step.
    pub(super) fn step(&mut self, cell: &str, line: u64) -> Result<(), String> {
        let taken = self.take(cell.trim(), line);
        self.is_spoilt |= taken.is_err();
        taken
    }

    fn take(&mut self, cell: &str, line: u64) -> Result<(), String> {
        self.count += 1;
        let now = if self.is_timed { time(cell)? } else { running(cell)? };
        let last = self.last.replace((now, line));
        let Some(((before, had_offset), line_before)) = last else {
            self.first = self.is_timed.then(|| cell.to_owned());
            if !self.is_timed && !(0..=1).contains(&now.0) {
                return Err("the running number begins with 0 or 1".to_owned());
            }
            return Ok(());
        };
        if had_offset != now.1 {
            return Err("write all times with an offset, or none".to_owned());
        }
        let passed = now.0 - before;
        let what = if self.is_timed { "time" } else { "number" };
        if passed == 0 {
            return Err(format!(
                "is the {what} of line {line_before} again{}",
                self.clock_hint(now)
            ));
        }
        if passed < 0 {
            return Err(format!("goes back behind line {line_before}{}", self.clock_hint(now)));
        }
        match self.step {
            None => {
                let minutes = u32::try_from(passed / 60).unwrap_or(u32::MAX);
                if passed % 60 != 0 || !STEPS.contains(&minutes) {
                    let why = format!("a step of {passed} s; steps part an hour evenly");
                    return Err(why);
                }
                self.step = Some(passed);
                Ok(())
            }
            Some(step) if passed != step => {
                let unit = if self.is_timed { " s" } else { "" };
                Err(format!(
                    "comes {passed}{unit} after line {line_before}, steps are {step}{unit}: there is a gap{}",
                    self.clock_hint(now)
                ))
            }
            Some(_) => Ok(()),
        }
    }

    /// Local times jump where clocks change; say how to write them.
    fn clock_hint(&self, now: Moment) -> &'static str {
        if self.is_timed && !now.1 {
            " (where clocks change, write times with an offset, like 2026-03-29T03:00+02:00)"
        } else {
            ""
        }
    }

    /// The step in minutes and the first time; none where the axis is spoilt, which was said already.
    #[expect(clippy::type_complexity, reason = "read once, where the file ends")]
    pub(super) fn finish(self) -> Result<Option<(u32, Option<String>)>, (String, String)> {
        if self.is_spoilt {
            return Ok(None);
        }
        let found = counted(usize::try_from(self.count).unwrap_or(usize::MAX), "row");
        let whole = |step: u32| YEARS.contains(&(u64::from(step) * u64::from(self.count)));
        let step = if self.is_timed {
            self.step.and_then(|seconds| u32::try_from(seconds / 60).ok()).filter(|s| whole(*s))
        } else {
            STEPS.into_iter().find(|s| whole(*s))
        };
        let wanted = match self.step.and_then(|seconds| u32::try_from(seconds / 60).ok()) {
            Some(step) if self.is_timed && step > 0 => {
                format!(
                    "{} or {} steps of {step} min",
                    YEARS[0] / u64::from(step),
                    YEARS[1] / u64::from(step)
                )
            }
            _ => "8760 or 8784 hours, 17520 or 17568 half-hours, 35040 or 35136 quarter-hours"
                .to_owned(),
        };
        step.map(|step| Some((step, self.first)))
            .ok_or_else(|| (found, format!("are no full year; it has {wanted}")))
    }
}

/// A running number.
fn running(cell: &str) -> Result<Moment, String> {
    let number: f64 = cell.parse().map_err(|_| "is not a whole number".to_owned())?;
    if number.fract() != 0.0 || number.abs() > 1e9 {
        return Err("is not a whole number".to_owned());
    }
    #[expect(clippy::cast_possible_truncation, reason = "whole and below 1e9")]
    Ok((number as i64, false))
}

/// A time in seconds, and whether it was written with an offset.
fn time(cell: &str) -> Result<Moment, String> {
    const OFFSET: [&str; 4] =
        ["%Y-%m-%dT%H:%M:%S%#z", "%Y-%m-%dT%H:%M%#z", "%Y-%m-%d %H:%M:%S%#z", "%Y-%m-%d %H:%M%#z"];
    const LOCAL: [&str; 4] =
        ["%Y-%m-%dT%H:%M:%S", "%Y-%m-%dT%H:%M", "%Y-%m-%d %H:%M:%S", "%Y-%m-%d %H:%M"];
    let utc = cell.strip_suffix(['Z', 'z']).map(|cell| format!("{cell}+00:00"));
    let text = utc.as_deref().unwrap_or(cell);
    let offset = OFFSET.iter().find_map(|f| DateTime::parse_from_str(text, f).ok());
    let local = || LOCAL.iter().find_map(|f| NaiveDateTime::parse_from_str(text, f).ok());
    // A workbook gives midnight as a bare date.
    let midnight = || NaiveDateTime::parse_from_str(&format!("{text}T00:00"), LOCAL[1]).ok();
    offset
        .map(|time| (time.timestamp(), true))
        .or_else(|| local().or_else(midnight).map(|time| (time.and_utc().timestamp(), false)))
        .ok_or_else(|| "is not a time like 2026-01-01T00:15 or 2026-01-01T00:15+01:00".to_owned())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn times_are_read_with_and_without_offset() {
        let noon = time("2026-07-01T12:00+02:00").expect("offset");
        assert_eq!(time("2026-07-01 10:00:00Z"), Ok(noon));
        assert_eq!(time("2026-07-01T12:00:00+0200"), Ok(noon));
        assert_eq!(time("2026-07-01T10:00"), Ok((noon.0, false)));
        assert_eq!(time("2026-07-01"), time("2026-07-01 00:00"));
        assert!(time("1.7.2026 10:00").is_err() && time("").is_err());
    }

    #[test]
    fn full_years_of_every_step() {
        for (count, step) in [
            (8760, 60),
            (8784, 60),
            (17520, 30),
            (17568, 30),
            (35040, 15),
            (35136, 15),
            (105_120, 5),
        ] {
            let mut axis = Axis::new(false);
            for number in 1..=count {
                axis.step(&number.to_string(), number + 1).expect("running");
            }
            assert_eq!(axis.finish(), Ok(Some((step, None))), "{count}");
        }
        let mut short = Axis::new(false);
        for number in 0..8759 {
            short.step(&number.to_string(), number + 2).expect("running");
        }
        let (found, why) = short.finish().expect_err("short");
        assert!(found == "8759 rows" && why.contains("8760"), "{found} {why}");
    }

    #[test]
    fn gaps_and_repeats_are_told_by_line() {
        let mut axis = Axis::new(true);
        assert_eq!(axis.step("2026-01-01T00:00", 2), Ok(()));
        assert_eq!(axis.step("2026-01-01T00:15", 3), Ok(()));
        assert!(axis.step("2026-01-01T00:15", 4).expect_err("again").contains("of line 3 again"));
        assert!(axis.step("2026-01-01T01:00", 5).expect_err("gap").contains("2700 s after line 4"));
        assert!(axis.step("2026-01-01T00:30", 6).expect_err("back").contains("back behind line 5"));
        assert!(axis.step("soon", 7).is_err());
        assert_eq!(axis.finish(), Ok(None), "said already");
    }
}
