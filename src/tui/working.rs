//! The panel that opens how a figure comes about: its steps with formula, numbers put in, value, unit and source.
//! State and drawing; the steps come from the studies.

use std::sync::Arc;

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::text::{Line, Span};

use super::action::Screen;
use super::app::App;
use super::frame::{put, put_line};
use super::list::List;
use super::text;
use super::work::Ranked;
use super::{tender, unit};
use crate::engine::columns::Unit;
use crate::study::StudyError;
use crate::study::explain::{Explained as _, MONEY, StepRow};
use crate::study::figures::figure;
use crate::study::tender::BasisForFactors;
use crate::study::unit::Question;

/// Lines above the steps: whose figures, which of them.
pub(super) const HEADER: u16 = 3;

/// A figure that can be opened.
#[derive(Debug)]
struct Figure {
    title: String,
    lines: Vec<String>,
}

/// The panel.
#[derive(Debug)]
pub(super) struct Panel {
    /// Whose figures.
    of: String,
    figures: Vec<Figure>,
    /// Which of them is shown.
    at: usize,
    pub(super) list: List,
    /// The unit whose figures are opened as they are turned to: some are long.
    unit: Option<(Arc<Ranked>, Box<Unit>)>,
}

impl Panel {
    /// Shows another figure; `by` goes round.
    ///
    /// # Errors
    /// What the engine refuses.
    pub(super) fn turn(&mut self, by: usize) -> Result<(), StudyError> {
        self.at = (self.at + by) % self.figures.len().max(1);
        self.list = List::default();
        self.fill()
    }

    /// Shows the first figure of the next part, or of the one before; goes round.
    ///
    /// # Errors
    /// What the engine refuses.
    pub(super) fn part(&mut self, next: bool) -> Result<(), StudyError> {
        let part = |figure: &Figure| figure.title.split('.').next().unwrap_or("").to_owned();
        let parts: Vec<_> = self.figures.iter().map(part).collect();
        let begins = |n: &usize| *n == 0 || parts[*n] != parts[*n - 1];
        let firsts: Vec<usize> = (0..parts.len()).filter(begins).collect();
        let own = firsts.partition_point(|first| *first <= self.at).saturating_sub(1);
        let by = if next { 1 } else { firsts.len().saturating_sub(1) };
        self.at = firsts.get((own + by) % firsts.len().max(1)).copied().unwrap_or(0);
        self.list = List::default();
        self.fill()
    }

    fn fill(&mut self) -> Result<(), StudyError> {
        let Some(figure) = self.figures.get_mut(self.at) else { return Ok(()) };
        if let (Some((ranked, unit)), true) = (&self.unit, figure.lines.is_empty()) {
            let question = Question::new(&ranked.desk, &ranked.ranking.context, unit)?;
            let currency = text::cut(&ranked.desk.sheet.basis.currency, 8);
            figure.lines = StepRow::lines(&question.working(&figure.title)?, 0, &currency);
        }
        Ok(())
    }

    /// Number of figures.
    pub(super) fn len(&self) -> usize {
        self.figures.len()
    }

    /// What is shown, as text.
    pub(super) fn text(&self) -> String {
        let Some(figure) = self.figures.get(self.at) else { return String::new() };
        let lines = figure.lines.iter().map(|line| text::clean(line).trim_end().to_owned());
        let head = format!("{}: {}", text::clean(&self.of), figure.title);
        std::iter::once(head).chain(lines).collect::<Vec<_>>().join("\n") + "\n"
    }
}

fn heading(key: &str) -> &'static str {
    figure(key).map_or("", |figure| figure.heading)
}

/// Opens what the cursor of the screen stands on; none where there is nothing.
pub(super) fn open(app: &App) -> Option<Result<Panel, StudyError>> {
    let ranked = app.ranked.as_ref()?;
    match app.screen {
        Screen::Tender => of_bid(app, ranked),
        Screen::Unit => app.unit.index.map(|i| of_unit(app, ranked, i)),
        Screen::Fleet => app.under_cursor().map(|i| of_unit(app, ranked, i)),
        Screen::Basis | Screen::Journal => None,
    }
}

fn of_unit(app: &App, ranked: &Arc<Ranked>, i: usize) -> Result<Panel, StudyError> {
    let record = unit::record(app, &ranked.desk, i);
    let question = Question::new(&ranked.desk, &ranked.ranking.context, &record)?;
    // The decision first, then what it rests on; of the years those that the decision names.
    let mut names: Vec<String> = question.figures()?.into_iter().map(|(name, _)| name).collect();
    names.retain(|name| !name.starts_with("keep_or_replace.years"));
    let part = |name: &String| {
        ["keep_or_replace", "losses", "loading"].iter().position(|part| name.starts_with(part))
    };
    names.sort_by_key(|name| part(name).unwrap_or(3));
    let of = format!("unit {}", record.unit);
    let figures = names.into_iter().map(|title| Figure { title, lines: Vec::new() }).collect();
    let unit = Some((Arc::clone(ranked), Box::new(record)));
    let mut panel = Panel { of, figures, at: 0, list: List::default(), unit };
    panel.at = panel.figures.iter().position(|f| f.title.ends_with(".saving_pv")).unwrap_or(0);
    panel.fill()?;
    Ok(panel)
}

fn of_bid(app: &App, ranked: &Arc<Ranked>) -> Option<Result<Panel, StudyError>> {
    let (sheet, lot, bid) = tender::under_cursor(app)?;
    let context = &ranked.ranking.context;
    let basis = BasisForFactors { assumptions: &context.assumptions, market: &context.market };
    let working = crate::study::tender::working(sheet, Some(&basis), lot, bid);
    Some(working.map(|working| {
        let opened = |title: &str, steps: &[_]| {
            // Where the basis is in another currency a step is in either.
            let same = sheet.tender.currency == context.assumptions.currency;
            let currency = if same { &sheet.tender.currency } else { MONEY };
            let lines = StepRow::lines(&StepRow::tree(steps), 0, &text::cut(currency, 8));
            Figure { title: title.to_owned(), lines }
        };
        let figures = vec![
            opened(heading("owning_cost"), &working.owning_cost),
            opened(heading("owning_cost_at_tolerance"), &working.owning_cost_at_tolerance),
            opened(heading("lot_cost"), &working.lot_cost),
            opened("on the lot's terms", &working.on_terms),
            opened("factors A, B, A aux", &working.factors),
        ];
        let of = format!("{}, lot {lot}, bid {bid}", sheet.tender.tender);
        Panel { of, figures, at: 0, list: List::default(), unit: None }
    }))
}

/// The steps in lines of at most `cells`; what is broken goes on deeper.
pub(super) fn lines(app: &App, panel: &Panel, cells: usize) -> Vec<String> {
    let Some(figure) = panel.figures.get(panel.at) else { return Vec::new() };
    let mut out = Vec::new();
    for line in &figure.lines {
        let depth = line.len() - line.trim_start().len();
        let indent = depth.min(cells / 3);
        let spelt = app.theme.spell(line.trim_start());
        for (n, part) in
            text::wrap(&spelt, cells.saturating_sub(indent + 5)).into_iter().enumerate()
        {
            let deeper = if n == 0 { 1 } else { 5 };
            out.push(format!("{}{part}", " ".repeat(indent + deeper)));
        }
    }
    out
}

/// Draws the panel.
pub(super) fn draw(app: &App, panel: &Panel, area: Rect, buffer: &mut Buffer) {
    let theme = app.theme;
    let head = format!(" How it comes about: {}", text::cut(&panel.of, 60));
    put(buffer, area, 0, &head, theme.heading());
    // The one that is shown, then those that follow, as many as there is room for.
    let mut spans = vec![Span::raw(format!(" {} of {} ", panel.at + 1, panel.len()))];
    for (n, figure) in panel.figures.iter().enumerate().skip(panel.at) {
        let title = figure.title.rsplit('.').next().unwrap_or("");
        if n == panel.at {
            spans.push(Span::styled(format!(" [{}] ", figure.title), theme.heading()));
        } else {
            spans.push(Span::styled(format!(" {title} "), theme.muted()));
        }
    }
    put_line(buffer, area, 1, &Line::from(spans));
    let lines = lines(app, panel, usize::from(area.width));
    for (y, line) in (HEADER..area.height).zip(lines.iter().skip(panel.list.cursor)) {
        // A step's name has no sign of equality; it heads what follows.
        let name = !line.contains(" = ") && !line.trim_start().starts_with('=');
        let style = if name { theme.heading() } else { theme.plain() };
        put(buffer, area, y, line, style);
    }
}
