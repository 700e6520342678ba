//! Files of series: load profiles, one column each, and a price series.

use super::{Intake, IntakeError, Report};
use crate::book::{Book, Tally};
use crate::engine::columns::{Column, PRICES};
use crate::engine::loading::{PriceSeries, Profile};
use crate::engine::working::Silent;
use crate::exchange::series::{Names, Series, SeriesColumn, holds_numbers};
use crate::exchange::{Rows, Source};

impl Intake<'_> {
    pub(super) fn profiles(
        mut self,
        book: &mut Book,
        source: Source,
    ) -> Result<Report, IntakeError> {
        let Some(series) = self.series(source, Names::Any)? else {
            return Ok(self.report(Tally::default()));
        };
        let (step_minutes, first_timestamp) = (series.step_minutes, series.first_timestamp);
        let change = book.change(self.actor, Some(&self.file))?;
        for SeriesColumn { name, values } in series.columns {
            self.rows += 1;
            let Some(values) = values else {
                self.bad += 1;
                continue;
            };
            let first_timestamp = first_timestamp.clone();
            let profile = Profile { profile: name, step_minutes, first_timestamp, values };
            if let Err(refusal) = profile.ratios(&mut Silent) {
                self.bad += 1;
                self.problems.add(1, &profile.profile, "", refusal.why);
                continue;
            }
            change.put_profile(&profile)?;
        }
        let tally = change.tally();
        if self.stays() {
            change.commit()?;
        }
        Ok(self.report(tally))
    }

    pub(super) fn prices(mut self, book: &mut Book, source: Source) -> Result<Report, IntakeError> {
        let name = self.options.name.clone().or_else(|| source.stem().map(ToOwned::to_owned));
        let name = name.ok_or(IntakeError::NoName)?;
        let ignore_unknown = self.options.ignore_unknown;
        let Some(series) = self.series(source, Names::Of { known: PRICES, ignore_unknown })? else {
            return Ok(self.report(Tally::default()));
        };
        self.rows = 1;
        if let Err(why) = Column::id().required().read(&name) {
            self.problems.add(1, "name", &name, why);
        }
        let mut columns: [Option<Vec<f64>>; 3] = [None, None, None];
        for SeriesColumn { name, values } in series.columns {
            if let Some(place) = PRICES.iter().position(|column| column.name == name) {
                columns[place] = values;
            }
        }
        if !self.problems.is_empty() {
            (self.bad, self.is_unfit) = (1, true);
            return Ok(self.report(Tally::default()));
        }
        let [price, co2, load] = columns;
        let prices = PriceSeries {
            name,
            step_minutes: series.step_minutes,
            first_timestamp: series.first_timestamp,
            price_per_kwh: price.unwrap_or_default(),
            co2_kg_per_kwh: co2,
            system_load: load,
        };
        let change = book.change(self.actor, Some(&self.file))?;
        change.put_price_series(&prices)?;
        let tally = change.tally();
        if self.stays() {
            change.commit()?;
        }
        Ok(self.report(tally))
    }

    /// Reads the file; none where it cannot be taken, which is noted.
    fn series(&mut self, source: Source, names: Names<'_>) -> Result<Option<Series>, IntakeError> {
        let mut rows = match Rows::open(source, self.options.hints, &holds_numbers) {
            Ok(rows) => rows,
            Err(error) => {
                self.unfit(error)?;
                return Ok(None);
            }
        };
        let series = Series::read(&mut rows, names, &self.options.map, &mut self.problems);
        self.recognised = Some(rows.recognised());
        match series {
            Ok(series) => {
                self.is_unfit = series.is_none();
                Ok(series)
            }
            Err(error) => {
                self.unfit(error)?;
                Ok(None)
            }
        }
    }
}
