//! A year of ambient temperatures from a file: `timestamp` or `interval`, then `ambient_c`.

use super::thermal::Ambient;
use crate::engine::Refusal;
use crate::engine::columns::Column;
use crate::exchange::series::{Names, Series, holds_numbers};
use crate::exchange::{Hints, Problems, Rows, Source, SourceError};

/// The column of the file, in °C.
const AMBIENT: [Column; 1] = [Column { name: "ambient_c", ..Column::real(-80.0, 80.0) }];

/// One ambient temperature all year (°C).
///
/// # Errors
/// A temperature that no place has.
pub fn constant(ambient_c: f64) -> Result<Ambient<'static>, Refusal> {
    let read = AMBIENT[0].read(&ambient_c.to_string());
    read.map_err(|why| Refusal::new("ambient_c", ambient_c, why))?;
    Ok(Ambient::Constant(ambient_c))
}

/// A year of ambient temperatures.
#[derive(Clone, Debug, PartialEq)]
pub struct AmbientYear {
    name: String,
    step_minutes: u32,
    values: Vec<f64>,
}

impl AmbientYear {
    /// Reads a file; what is wrong in it is the inner error.
    ///
    /// # Errors
    /// The file cannot be read.
    pub fn read(source: Source) -> Result<Result<Self, Problems>, SourceError> {
        let name = source.name().to_owned();
        let mut problems = Problems::new(&name);
        let names = Names::Of { known: &AMBIENT, ignore_unknown: false };
        let series = Rows::open(source, Hints::default(), &holds_numbers)
            .and_then(|mut rows| Series::read(&mut rows, names, &[], &mut problems));
        let series = match series {
            Ok(series) => series,
            Err(error) => {
                error.into_problem(&mut problems)?;
                None
            }
        };
        let step = series.as_ref().map(|series| series.step_minutes);
        let values = series.and_then(|series| series.columns.into_iter().next()?.values);
        Ok(match (step, values) {
            (Some(step_minutes), Some(values)) if problems.is_empty() => {
                Ok(Self { name, step_minutes, values })
            }
            _ => Err(problems),
        })
    }

    /// As the air around a unit.
    pub fn ambient(&self) -> Ambient<'_> {
        Ambient::Series { name: &self.name, step_minutes: self.step_minutes, values: &self.values }
    }
}
