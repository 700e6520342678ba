//! What else the dossier of a unit says: other measures of the replacement, estimates, tests, heat, law. Kept as it was computed,
//! written as lines of the facts.

use ratatui::text::{Line, Span};

use super::facts::fact;
use crate::engine::columns::Unit;
use crate::study::StudyError;
use crate::study::estimate::EstimatedRow;
use crate::study::figures::figure;
use crate::study::law::VerdictRow;
use crate::study::test_report::TestRow;
use crate::study::unit::thermal::{HeatRow, HeatYear, ThermalRow};
use crate::study::unit::{KeepOrReplace, Question};
use crate::tui::text;
use crate::tui::theme::Theme;
use crate::tui::words::with_unit;
use crate::tui::work::Ranked;

/// A figure of a transformer under its load, and of its year.
type OfHeat = fn(&HeatRow) -> f64;
type OfYear = fn(&HeatYear) -> f64;

/// What else is said of a unit.
#[derive(Clone, Debug, PartialEq)]
pub struct More {
    /// Measures of the choice by their keys, as far as there is a figure.
    measures: Vec<(&'static str, f64)>,
    estimated: Option<EstimatedRow>,
    tests: Option<TestRow>,
    thermal: ThermalRow,
    law: Option<VerdictRow>,
}

/// Keys of the other measures with their values.
fn measures(k: &KeepOrReplace<'_>) -> [(&'static str, Option<f64>); 6] {
    [
        ("discounted_payback_years", k.discounted_payback_years),
        ("now_irr_pct", k.now_irr_pct),
        ("co2_avoided_t", k.co2_avoided_t),
        ("cost_per_t_co2", k.cost_per_t_co2),
        ("keep_euac", Some(k.keep_euac)),
        ("best_euac", Some(k.best_euac)),
    ]
}

impl More {
    /// What is said of a unit under the basis of a ranking.
    ///
    /// # Errors
    /// What the engine refuses of the basis.
    pub fn of(ranked: &Ranked, record: &Unit) -> Result<Self, StudyError> {
        let question = Question::new(&ranked.desk, &ranked.ranking.context, record)?;
        let dossier = question.dossier()?;
        let measures = dossier.keep_or_replace.as_ref().map(measures).into_iter().flatten();
        Ok(Self {
            measures: measures.filter_map(|(key, value)| Some((key, value?))).collect(),
            estimated: dossier.estimated,
            tests: dossier.tests,
            thermal: dossier.thermal,
            law: dossier.law,
        })
    }

    /// Other measures of the replacement.
    pub(super) fn indicators(
        &self,
        currency: &str,
        cells: usize,
        theme: Theme,
        lines: &mut Vec<Line<'static>>,
    ) {
        if !self.measures.is_empty() {
            lines.push(Line::styled("Measured otherwise", theme.heading()));
        }
        for (key, value) in &self.measures {
            let Some(figure) = figure(key) else { continue };
            let value = text::number(*value, figure.places);
            lines.push(fact(figure.heading, &with_unit(&value, figure.unit, currency), cells));
        }
    }

    /// What is known of losses beside the nameplate: estimates with how far they may be off, the test report.
    pub(super) fn losses(&self, cells: usize, theme: Theme, lines: &mut Vec<Line<'static>>) {
        let watt = |value: f64| text::number(value, 0);
        if let Some(estimated) = &self.estimated {
            lines.push(Line::styled("Estimated, and with 95 % between", theme.heading()));
            for (name, loss) in estimated.losses() {
                let (low, high) = (watt(loss.low_w), watt(loss.high_w));
                let said = format!("{} ({low}-{high}) W", watt(loss.estimate_w));
                let name = if name == "no_load_loss_w" { "iron" } else { "copper" };
                lines.push(fact(name, &said, cells));
            }
        }
        let Some(tests) = &self.tests else { return };
        let on = tests.tested_on.as_deref().map_or(String::new(), |on| format!(" of {on}"));
        lines.push(Line::styled(format!("Test report{}", text::clean(&on)), theme.heading()));
        let mut said = Vec::new();
        if let Some(why) = &tests.why {
            said.push(format!("not used: {why}"));
        } else {
            for (name, value, places, unit) in [
                ("no-load loss", tests.no_load_loss_w, 1, "W"),
                ("no-load current", tests.no_load_current_pct, 3, "%"),
                ("load loss", tests.load_loss_w, 1, "W"),
                ("its I²R part", tests.resistive_loss_w, 1, "W"),
                ("its stray part", tests.stray_loss_w, 1, "W"),
                ("impedance", tests.impedance_pct, 3, "%"),
            ] {
                if let Some(value) = value {
                    let value = format!("{} {unit}", text::number(value, places));
                    lines.push(fact(&theme.spell(name), &value, cells));
                }
            }
            let at = text::number(tests.reference_temp_c, 0);
            said.push(format!("load loss at {at} °C"));
        }
        if !tests.fills.is_empty() {
            said.push(format!("fills blanks: {}", tests.fills.join(", ")));
        }
        for said in said {
            let said = theme.spell(&said).into_owned();
            lines.extend(text::wrap(&said, cells).into_iter().map(Line::raw));
        }
    }

    /// How hot the unit and the best offer get.
    pub(super) fn heat(&self, cells: usize, theme: Theme, lines: &mut Vec<Line<'static>>) {
        let t = &self.thermal;
        let said = |lines: &mut Vec<Line<'static>>, said: &str, style| {
            let said = theme.spell(said).into_owned();
            lines
                .extend(text::wrap(&said, cells).into_iter().map(|line| Line::styled(line, style)));
        };
        let title = format!("Heat, {}, {} paper", t.ambient, t.paper);
        said(lines, &title, theme.heading());
        if let Some(own) = &t.own {
            self.columns(own, cells, theme, lines);
        }
        if let Some(why) = &t.why {
            said(lines, why, theme.muted());
        }
        if t.own.is_some() {
            for caution in &t.cautions {
                said(lines, &format!("! {caution}"), theme.plain());
            }
        }
    }

    /// The unit and the best offer side by side.
    fn columns(&self, own: &HeatRow, cells: usize, theme: Theme, lines: &mut Vec<Line<'static>>) {
        let t = &self.thermal;
        let offer = t.replacement.as_ref();
        let whole = |value: f64| text::number(value, 0);
        let mut rows: Vec<(String, [String; 2])> = Vec::new();
        let mut row = |what: &str, own: String, offer: Option<String>| {
            rows.push((theme.spell(what).into_owned(), [own, offer.unwrap_or_default()]));
        };
        row("", "unit".to_owned(), offer.map(|_| "best".to_owned()));
        let held: [(&str, OfHeat); 2] = [
            ("oil at peak °C", |heat| heat.steady_top_oil_c),
            ("hot spot °C", |heat| heat.steady_hot_spot_c),
        ];
        for (what, of) in held {
            row(what, whole(of(own)), offer.map(|heat| whole(of(heat))));
        }
        if own.year.is_some() {
            let hour = |heat: &HeatRow| heat.year.map(|y| text::count(y.hottest_hour));
            row("hottest in hour", hour(own).unwrap_or_default(), offer.and_then(hour));
            let above = format!("h above {} °C", whole(t.hot_spot_limit_c));
            let oil = format!("h oil above {} °C", whole(t.top_oil_limit_c));
            let of_year: [(&str, OfYear); 5] = [
                ("hot spot then °C", |y| y.hottest_hot_spot_c),
                ("oil at most °C", |y| y.hottest_top_oil_c),
                (&above, |y| y.hours_above_hot_spot),
                (&oil, |y| y.hours_above_top_oil),
                ("life used h", |y| y.life_used_hours),
            ];
            for (what, of) in of_year {
                let year = |heat: &HeatRow| heat.year.as_ref().map(|y| whole(of(y)));
                row(what, year(own).unwrap_or_default(), offer.and_then(year));
            }
        }
        // Figures are never cut: the names give way.
        let wide = rows.iter().flat_map(|(_, cells)| cells).map(|cell| text::width(cell)).max();
        let wide = wide.unwrap_or(0);
        let name = cells.saturating_sub(2 * (wide + 2));
        for (what, [own, offer]) in rows {
            let (own, offer) = (text::right(&own, wide), text::right(&offer, wide));
            lines.push(Line::raw(format!("{}  {own}  {offer}", text::left(&what, name))));
        }
    }

    /// What the law says, were the unit bought now.
    pub(super) fn law(&self, cells: usize, theme: Theme, lines: &mut Vec<Line<'static>>) {
        let Some(law) = &self.law else { return };
        let title = format!("Law {}, were it bought on {}", law.law, law.on);
        lines.extend(
            text::wrap(&title, cells).into_iter().map(|l| Line::styled(l, theme.heading())),
        );
        let verdict = match law.meets {
            Some(true) => "met",
            Some(false) => "not met",
            None => "cannot be told",
        };
        let mut said = vec![match law.why.as_str() {
            "" => verdict.to_owned(),
            why => format!("{verdict}: {why}"),
        }];
        for limit in &law.limits {
            let kept = if limit.meets { "kept" } else { "missed" };
            let (value, bound) = (text::plain(limit.value, 3), text::plain(limit.limit, 3));
            said.push(format!("{} {value}, {} {bound}: {kept}", limit.quantity, limit.bound));
        }
        said.extend(law.notes.iter().map(|note| format!("({note})")));
        if law.verify {
            said.push("! stated from memory; look it up in the official text".to_owned());
        }
        for said in said {
            let said = theme.spell(&said).into_owned();
            lines.extend(text::wrap(&said, cells).into_iter().map(Line::raw));
        }
    }

    /// What was assumed.
    pub(super) fn notes(&self, cells: usize, theme: Theme, lines: &mut Vec<Line<'static>>) {
        if self.thermal.own.is_none() || self.thermal.notes.is_empty() {
            return;
        }
        lines.push(Line::styled("Assumed for the heat", theme.heading()));
        for note in &self.thermal.notes {
            let note = theme.spell(note).into_owned();
            for (n, said) in text::wrap(&note, cells.saturating_sub(2)).into_iter().enumerate() {
                let mark = if n == 0 { "- " } else { "  " };
                lines.push(Line::from(vec![Span::raw(mark), Span::styled(said, theme.muted())]));
            }
        }
    }
}
