//! Drawing of the tender screen.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::text::{Line, Span};

use super::{View, lot, map, risk, shown, sign};
use crate::engine::columns::{Basis, Bid, Lot};
use crate::study::figures::figure;
use crate::study::losses::flag_meaning;
use crate::study::tender::{BidResult, ChangeResult, LotResult, Miss, MoveResult, letter};
use crate::tui::app::App;
use crate::tui::bar::{self, Parts};
use crate::tui::entry::Of;
use crate::tui::frame::{put, put_line, put_right, select};
use crate::tui::text;
use crate::tui::theme::{Part, Theme};
use crate::tui::words::{currency_in, unit_of};

/// Lines above the bids: headings, units.
const HEADER: u16 = 2;
/// Lines below the bids: the one under the cursor, the near-tied ones. At least so many, and at most.
const DETAILS: [u16; 2] = [9, 16];

/// Least body in which something stands beside the bids, and in which all of it does.
const WIDE: u16 = 120;
const HIGH: u16 = 32;

/// Where the parts of the screen stand.
pub(in crate::tui) struct Areas {
    head: Rect,
    list: Rect,
    details: Rect,
    /// Beside the bids, where there is room.
    map: Option<Rect>,
    changes: Option<Rect>,
}

/// Whether the body has room for bids, map and changes at once.
pub(super) fn shows_all(body: Rect) -> bool {
    body.width >= WIDE && body.height >= HIGH
}

/// Lays the screen out.
fn areas(body: Rect, view: View, bids: usize) -> Areas {
    let head = Rect { height: body.height.min(2), ..body };
    let rest = Rect { y: body.y + head.height, height: body.height - head.height, ..body };
    if rest.width >= WIDE {
        let left = Rect { width: rest.width - rest.width * 9 / 20 - 2, ..rest };
        let right = Rect { x: left.right() + 2, width: rest.width - left.width - 2, ..rest };
        let (map, changes) = match (body.height >= HIGH, view) {
            (true, _) => {
                let map = Rect { height: rest.height - 13, ..right };
                (Some(map), Some(Rect { y: map.bottom(), height: 13, ..right }))
            }
            (false, View::Changes) => (None, Some(right)),
            (false, _) => (Some(right), None),
        };
        let (list, details) = split(left, bids);
        return Areas { head, list, details, map, changes };
    }
    let none = Rect { height: 0, ..rest };
    match view {
        View::Bids => {
            let (list, details) = split(rest, bids);
            Areas { head, list, details, map: None, changes: None }
        }
        View::Map => Areas { head, list: none, details: none, map: Some(rest), changes: None },
        View::Changes => Areas { head, list: none, details: none, map: None, changes: Some(rest) },
    }
}

/// The bids, and right below them the details; where it is tight the bids get the larger half.
fn split(area: Rect, bids: usize) -> (Rect, Rect) {
    let wanted = u16::try_from(bids).unwrap_or(u16::MAX).saturating_add(HEADER);
    let most = area.height.saturating_sub(DETAILS[0]).max(area.height / 2 + 1).min(area.height);
    let list = Rect { height: wanted.min(most), ..area };
    (list, Rect { y: list.bottom(), height: DETAILS[1].min(area.height - list.height), ..area })
}

/// Lines of the list of bids.
pub(in crate::tui) fn rows(app: &App, body: Rect) -> u16 {
    areas(body, app.tender.view, super::len(app)).list.height.saturating_sub(HEADER)
}

/// Draws the screen.
pub(in crate::tui) fn draw(app: &App, area: Rect, buffer: &mut Buffer) {
    let theme = app.theme;
    let Some(tender) = shown(app) else {
        let said = " No tender is in this book. `ironhum import tender FILE` brings one in, `ironhum import bids \
                    FILE` its bids.";
        for (y, line) in (1..).zip(text::wrap(said, usize::from(area.width.saturating_sub(2)))) {
            put(buffer, area, y, &format!(" {line}"), theme.muted());
        }
        return;
    };
    if let Err(why) = &tender.result {
        let said = format!("Tender {} cannot be evaluated: {why}", tender.sheet.tender.tender);
        for (y, line) in (1..).zip(text::wrap(&said, usize::from(area.width.saturating_sub(2)))) {
            put(buffer, area, y, &format!(" {line}"), theme.warning());
        }
        return;
    }
    let areas = areas(area, app.tender.view, super::len(app));
    let Some((asked, result)) = lot(app) else {
        put(buffer, area, 1, " This tender has no lot.", theme.muted());
        return;
    };
    let currency = text::cut(&tender.sheet.tender.currency, 8);
    head(app, asked, result, &currency, areas.head, buffer);
    bids(app, result, &currency, areas.list, buffer);
    if let Some(Of::Reason { lot, bid }) = app.typing.as_ref().map(|entry| &entry.of) {
        super::award::draw(app, [lot, bid], &currency, areas.details, buffer);
    } else if app.tender.what_if.open {
        inputs(app, areas.details, buffer);
    } else {
        details(app, result, &currency, areas.details, buffer);
    }
    if let Some(area) = areas.map {
        map::draw(theme, result, risk(app), &currency, area, buffer);
    }
    if let Some(area) = areas.changes {
        changes(theme, result, &currency, area, buffer);
    }
}

fn head(app: &App, asked: &Lot, lot: &LotResult, currency: &str, area: Rect, buffer: &mut Buffer) {
    let theme = app.theme;
    let Some(tender) = shown(app) else { return };
    let lots = tender.sheet.lots.len();
    let place = format!("lot {} ({} of {lots})", text::cut(&lot.lot, 12), app.tender.lot + 1);
    let line = Line::from(vec![
        Span::styled(
            format!(" {}  {place}", text::cut(&tender.sheet.tender.tender, 20)),
            theme.heading(),
        ),
        Span::raw(format!("  {} x {} kVA", lot.quantity, text::plain(asked.rated_kva, 1))),
    ]);
    put_line(buffer, area, 0, &line);
    if app.tender.what_if.of(app.tender.tender).is_some() {
        let said = Line::styled("what if: changed, not stored ", theme.changed());
        if line.width() + said.width() < usize::from(area.width) {
            put_right(buffer, area, 0, &said);
        }
    }
    if let Some(award) = &lot.award {
        let said = format!("awarded to {} ", text::cut(&award.bid, 20));
        let said = Line::styled(said, theme.heading());
        if line.width() + said.width() < usize::from(area.width) {
            put_right(buffer, area, 0, &said);
        }
    }
    let from = |computed: bool| if computed { "the basis" } else { "the tender" };
    let factors = [
        ("A", lot.factor_a_per_kw, lot.computed.a),
        ("B", lot.factor_b_per_kw, lot.computed.b),
        ("A aux", lot.factor_aux_per_kw, lot.computed.aux),
    ];
    let alike = factors.iter().all(|factor| factor.2 == lot.computed.a);
    let said = factors.map(|(word, value, computed)| {
        let value = format!("{word} {}", text::number(value, 2));
        let short = if computed { "basis" } else { "tender" };
        if alike { value } else { format!("{value} ({short})") }
    });
    let all = if alike { format!(", from {}", from(lot.computed.a)) } else { String::new() };
    let head = if alike { format!("a kW of loss in {currency}") } else { format!("{currency}/kW") };
    let said = format!(" {head}: {}{all}", said.join("  "));
    put(buffer, area, 1, &said, theme.plain());
}

fn cost(bid: &BidResult) -> Parts {
    bar::parts(bid.price + bid.added_cost, bid.no_load_cost, bid.load_cost, bid.auxiliary_cost)
}

fn bids(app: &App, lot: &LotResult, currency: &str, area: Rect, buffer: &mut Buffer) {
    let (theme, list) = (app.theme, app.tender.list);
    if area.height <= HEADER {
        return;
    }
    if lot.bids.is_empty() {
        put(buffer, area, 1, " No bid came in for this lot.", theme.muted());
        return;
    }
    let money = |value: f64| text::number(value, 0);
    let risk = risk(app);
    let sure = |bid: &BidResult| risk?.bids.iter().find(|r| r.bid == bid.bid);
    let row = |bid: &BidResult| {
        let place = match (bid.rank, bid.near_tie) {
            (Some(rank), true) if lot.near_tie_order.len() > 1 => format!("={}", sign(rank)),
            (Some(rank), _) => sign(rank).to_string(),
            (None, _) => "out".to_owned(),
        };
        [
            place,
            bid.bid.clone(),
            bid.bidder.clone().unwrap_or_default(),
            money(bid.price),
            money(bid.owning_cost),
            money(bid.owning_cost_at_tolerance),
            sure(bid).map_or(String::new(), |sure| text::number(sure.probability_pu, 3)),
        ]
    };
    let keys = [
        "rank",
        "bid",
        "bidder",
        "price",
        "owning_cost",
        "owning_cost_at_tolerance",
        "probability_pu",
    ];
    let headings = keys.map(|key| figure(key).map_or("", |figure| figure.heading));
    let units = keys.map(|key| currency_in(figure(key).map_or("", |figure| figure.unit), currency));
    let rows: Vec<_> = lot.bids.iter().map(|bid| (bid, row(bid))).collect();
    let widths: Vec<usize> = (0..keys.len())
        .map(|n| {
            let content = rows.iter().map(|(_, cells)| text::width(&cells[n])).max().unwrap_or(0);
            content.min(16).max(text::width(headings[n])).max(text::width(&units[n]))
        })
        .collect();
    // The worst within the tolerance gives way first, then the bidder.
    let room = usize::from(area.width).saturating_sub(2);
    let mut kept: Vec<usize> = (0..keys.len() - usize::from(risk.is_none())).collect();
    let used = |kept: &[usize]| kept.iter().map(|n| widths[*n] + 2).sum::<usize>();
    let bidder = if risk.is_some() { 26 } else { 16 };
    for (gives_way, bar) in [(5, 28), (2, bidder)] {
        if used(&kept) + bar > room {
            kept.retain(|n| *n != gives_way);
        }
    }
    let join = |cells: &dyn Fn(usize) -> String| {
        kept.iter().fold("  ".to_owned(), |line, &n| {
            let number = n == 0 || n >= 3;
            let cell = if number { text::right } else { text::left }(&cells(n), widths[n]);
            format!("{line}{cell}  ")
        })
    };
    let cells = u16::try_from(room.saturating_sub(used(&kept)).min(44)).unwrap_or(0);
    let most = lot.bids.iter().filter(|bid| bid.rank.is_some()).map(|bid| bar::whole(&cost(bid)));
    let scale = bar::round_scale(most.fold(0.0, f64::max));
    let mut above = vec![Span::styled(join(&|n| headings[n].to_owned()), theme.heading())];
    let mut words = vec![(Part::Price, "price"), (Part::Iron, "iron"), (Part::Copper, "copper")];
    if lot.bids.iter().any(|bid| bid.auxiliary_cost > 0.0) && cells > 34 {
        words.push((Part::Other, "aux"));
    }
    above.extend(bar::legend(theme, &words));
    put_line(buffer, area, 0, &Line::from(above));
    let scale_said = text::right(&format!("full {} {currency}", money(scale)), usize::from(cells));
    let line = format!("{}{scale_said}", join(&|n| units[n].clone()));
    put(buffer, area, 1, &line, theme.muted());
    for (y, (n, (bid, texts))) in
        (HEADER..area.height).zip(rows.iter().enumerate().skip(list.offset))
    {
        let mark = if n == list.cursor { theme.mark() } else { ' ' };
        let line = join(&|n| texts[n].clone());
        let line = format!("{mark}{}", line.get(1..).unwrap_or(""));
        let wide = u16::try_from(text::width(&line)).unwrap_or(u16::MAX).min(area.width);
        let style = if bid.rank.is_some() { theme.plain() } else { theme.muted() };
        put(buffer, area, y, &line, style);
        if n == list.cursor {
            let width = wide.saturating_sub(1);
            select(buffer, Rect { y: area.y + y, height: 1, width, ..area });
        }
        let at = Rect { x: area.x + wide, width: area.width - wide, ..area };
        if bid.rank.is_some() {
            put_line(buffer, at, y, &Line::from(bar::bar(theme, &cost(bid), scale, cells)));
        } else {
            let misses: Vec<String> = bid.misses.iter().map(Miss::in_short).collect();
            put(buffer, at, y, &theme.spell(&misses.join("; ")), theme.warning());
        }
    }
}

/// The inputs that can be moved, as they are stored and as they stand.
fn inputs(app: &App, area: Rect, buffer: &mut Buffer) {
    let theme = app.theme;
    let bid = super::under_cursor(app).map_or("", |(_, _, bid)| bid);
    let row = |name: &str, stored: &str, now: &str, unit: &str| {
        format!(
            "  {} {} {} {}",
            text::left(name, 18),
            text::right(stored, 13),
            text::right(now, 13),
            text::left(unit, 12)
        )
    };
    let title = format!(" What if, for bid {} and its lot; nothing is stored", text::cut(bid, 20));
    put(buffer, area, 1, &title, theme.heading());
    put(buffer, area, 2, &row("", "stored", "now", ""), theme.heading());
    for (y, (n, line)) in (3..).zip(super::inputs(app).iter().enumerate()) {
        let currency = text::cut(&line.currency, 8);
        let unit = currency_in(unit_of(line.column), &currency);
        let (stored, now) = (text::plain(line.stored, 3), text::plain(line.now, 3));
        let changed = stored != now;
        let mut said = row(line.column.name, &stored, &now, &unit);
        if changed {
            said.push_str(" changed");
        }
        let at_cursor = n == app.tender.what_if.list.cursor;
        if at_cursor {
            said.replace_range(0..1, &theme.mark().to_string());
        }
        put(buffer, area, y, &said, if changed { theme.changed() } else { theme.plain() });
        if at_cursor {
            let wide = u16::try_from(text::width(&said)).unwrap_or(u16::MAX).min(area.width);
            let line = Rect { y: area.y + y, height: 1, width: wide, ..area };
            select(buffer, line.intersection(area));
        }
    }
}

/// The limits that a bid misses, each with what is offered and what is asked.
pub(super) fn misses(bid: &BidResult) -> String {
    bid.misses.iter().map(Miss::in_full).collect::<Vec<_>>().join("; ")
}

fn details(app: &App, lot: &LotResult, currency: &str, area: Rect, buffer: &mut Buffer) {
    let theme = app.theme;
    let cells = usize::from(area.width.saturating_sub(2));
    let mut lines: Vec<(String, ratatui::style::Style)> = Vec::new();
    let money = |value: f64| text::number(value, 0);
    if let Some(bid) = lot.bids.get(app.tender.list.cursor) {
        let bidder =
            bid.bidder.as_deref().map_or(String::new(), |b| format!(", {}", text::cut(b, 30)));
        lines.push((format!("{}{bidder}", text::cut(&bid.bid, 20)), theme.heading()));
        let mut parts = vec![format!("price {}", money(bid.price))];
        for (word, value) in [
            ("adders", bid.added_cost),
            ("iron", bid.no_load_cost),
            ("copper", bid.load_cost),
            ("aux", bid.auxiliary_cost),
        ] {
            if value != 0.0 {
                parts.push(format!("{word} {}", money(value)));
            }
        }
        let sum = format!("{} = {} {currency} a unit", parts.join(" + "), money(bid.owning_cost));
        lines.extend(text::wrap(&sum, cells).into_iter().map(|l| (l, theme.plain())));
        let said = format!(
            "at tolerance {}; whole lot {} {currency}; losses {} W iron, {} W copper",
            money(bid.owning_cost_at_tolerance),
            money(bid.lot_cost),
            text::plain(bid.losses.no_load_loss_w, 1),
            text::plain(bid.losses.load_loss_w, 1),
        );
        lines.extend(text::wrap(&said, cells).into_iter().map(|l| (l, theme.plain())));
        if let Some(risk) = risk(app)
            && let Some(sure) = risk.bids.iter().find(|r| r.bid == bid.bid)
        {
            let said = format!(
                "cheapest in {} of {} draws (seed {}); mean regret {}; 90 % of its owning costs {} to {} {currency}",
                share(sure.probability_pu),
                text::count(risk.draws),
                risk.seed,
                money(sure.mean_regret),
                money(sure.owning_cost_p5),
                money(sure.owning_cost_p95),
            );
            lines.extend(text::wrap(&said, cells).into_iter().map(|l| (l, theme.plain())));
        }
        if !bid.excluded.is_empty() {
            let said = format!("Out, not ranked: misses {}.", misses(bid));
            let said = theme.spell(&said);
            lines.extend(text::wrap(&said, cells).into_iter().map(|l| (l, theme.warning())));
        }
        let doubts = bid.flags.iter().filter_map(|key| flag_meaning(key));
        for said in doubts.flat_map(|meaning| text::wrap(&format!("! {meaning}"), cells)) {
            lines.push((said, theme.plain()));
        }
    }
    let mut verdict = Vec::new();
    if let Some(least) = &lot.least_owning_cost {
        let margin = lot.margin_pct.map_or(String::new(), |margin| {
            format!(", the second {} % above", text::number(margin, 2))
        });
        verdict.push(format!("Least to own: {}{margin}.", text::cut(least, 20)));
    }
    if lot.near_tie_order.len() > 1 {
        let by_cost: Vec<&str> =
            lot.bids.iter().filter(|bid| bid.near_tie).map(|bid| bid.bid.as_str()).collect();
        verdict.push(format!(
            "Near-tied (=), by owning cost: {}; by price with adders: {}.",
            by_cost.join(", "),
            lot.near_tie_order.join(", ")
        ));
    }
    if let Some(leads) = &lot.recommended {
        verdict.push(format!("{} is recommended.", text::cut(leads, 20)));
    }
    let mut verdict = text::wrap(&verdict.join(" "), cells);
    if let Some(award) = &lot.award {
        verdict.extend(text::wrap(&format!("Awarded to {}", letter::sentence(award)), cells));
    }
    if let Some(changed) = letter::changed_since(lot, currency) {
        verdict.extend(text::wrap(&format!("! {changed}"), cells));
    }
    // The verdict always has its place at the bottom.
    let foot = u16::try_from(verdict.len()).unwrap_or(0).min(area.height);
    let upper = area.height - foot;
    for (y, (line, style)) in (1..upper).zip(lines) {
        put(buffer, area, y, &format!(" {line}"), style);
    }
    for (y, line) in (upper..area.height).zip(verdict) {
        put(buffer, area, y, &format!(" {line}"), theme.heading());
    }
}

/// A probability in words.
fn share(pu: f64) -> String {
    format!("{} %", text::number(100.0 * pu, 1))
}

/// The unit of an input that may move.
fn unit(quantity: &str, currency: &str) -> String {
    if let Some(figure) = figure(quantity).filter(|figure| !figure.unit.is_empty()) {
        return currency_in(figure.unit, currency);
    }
    let known = [Bid::COLUMNS, Lot::COLUMNS, Basis::COLUMNS];
    let column = known.into_iter().flatten().find(|column| column.name == quantity);
    column.map_or(String::new(), |column| currency_in(unit_of(column), currency))
}

fn changes(theme: Theme, lot: &LotResult, currency: &str, area: Rect, buffer: &mut Buffer) {
    put(buffer, area, 0, " What must move, alone, before another bid wins", theme.heading());
    let value = |x: f64| {
        let size = x.abs();
        let places = if size >= 100.0 {
            0
        } else if size >= 1.0 {
            2
        } else {
            4
        };
        text::number(x, places)
    };
    let side = |side: &Option<MoveResult>| match side {
        Some(side) => format!("{} {}", value(side.to), text::cut(&side.bid, 8)),
        None => "never".to_owned(),
    };
    let units = if area.width < 66 { 0 } else { 9 };
    let wide = (usize::from(area.width).saturating_sub(34 + units) / 2).clamp(9, 22);
    let row = |name: &str, unit: &str, now: &str, down: &str, up: &str| {
        format!(
            " {} {}{} {} {}",
            text::left(name, 20),
            text::left(unit, units),
            text::right(now, 9),
            text::right(down, wide),
            text::right(up, wide)
        )
    };
    put(buffer, area, 1, &row("input", "", "now", "down to", "up to"), theme.heading());
    let line = |change: &ChangeResult| {
        let (down, up) = (side(&change.down), side(&change.up));
        row(change.quantity, &unit(change.quantity, currency), &value(change.base), &down, &up)
    };
    let mut y = 2;
    for change in &lot.changes.0 {
        put(buffer, area, y, &line(change), theme.plain());
        y += 1;
    }
    if let Some(nearest) = &lot.nearest_border {
        let [a, b] = nearest.at;
        let said = format!(
            " nearest other pair of factors: A {}, B {}, where {} is as cheap",
            value(a),
            value(b),
            text::cut(&nearest.bid, 14)
        );
        put(buffer, area, y, &said, theme.plain());
    }
}
