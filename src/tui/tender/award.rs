//! Awarding a lot on the tender screen: what is asked, what is said before it is stored, and when it is refused.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use super::{draw, lot, under_cursor};
use crate::study::tender::shortfall::shortfall;
use crate::tui::app::App;
use crate::tui::entry::Of;
use crate::tui::frame::put;
use crate::tui::text;

/// What is typed to award the lot to the bid under the cursor.
///
/// # Errors
/// Why it cannot be awarded here and now.
pub(in crate::tui) fn award(app: &App) -> Result<Of, String> {
    let Some(((_, result), (sheet, lot, bid))) = lot(app).zip(under_cursor(app)) else {
        return Err("No bid stands under the cursor.".to_owned());
    };
    let tender = &sheet.tender.tender;
    if !app.opened.as_ref().is_some_and(|opened| opened.writes.award) {
        return Err("The book is open for reading only; nothing can be stored.".to_owned());
    }
    if let Some(award) = &result.award {
        return Err(format!(
            "It is awarded to {}; to take that back: ironhum award {} --lot {} --withdraw",
            text::cut(&award.bid, 16),
            text::cut(tender, 16),
            text::cut(lot, 12)
        ));
    }
    if app.tender.what_if.draft.as_ref().is_some_and(|(n, _)| *n == app.tender.tender) {
        return Err("It shows a what if; put it back (v, then R) and award then.".to_owned());
    }
    if app.basis.is_changed() || !app.basis.is_in_effect() {
        return Err("The basis is changed and not stored; store it or put it back (4).".to_owned());
    }
    Ok(Of::Reason { lot: lot.to_owned(), bid: bid.to_owned() })
}

/// Holds that there is a reason where the lot that is shown goes to another bid than the recommended one.
///
/// # Errors
/// That one is needed.
pub(in crate::tui) fn reasoned(app: &App, bid: &str, why: &str) -> Result<(), String> {
    let shown = lot(app).map(|(_, result)| result);
    let out = shown.and_then(|result| result.bids.iter().find(|of| of.bid == bid));
    if let Some(out) = out.filter(|of| !of.misses.is_empty() && !means_it(why)) {
        let misses = draw::misses(out);
        return Err(format!("It misses {misses}; to award it begin the reason with: despite"));
    }
    let recommended = shown.and_then(|result| result.recommended.as_deref());
    if recommended == Some(bid) || !why.is_empty() {
        return Ok(());
    }
    Err(match recommended {
        Some(other) => {
            format!("{} is recommended; to award another bid, say why.", text::cut(other, 20))
        }
        None => "It is not ranked; to award it, say why.".to_owned(),
    })
}

/// Whether a reason says that a bid which misses a limit is meant: "despite", and more.
fn means_it(why: &str) -> bool {
    let mut words = why.split_whitespace();
    let first = words.next().unwrap_or_default().trim_end_matches([',', ':']);
    first.eq_ignore_ascii_case("despite") && words.next().is_some()
}

/// What would be awarded to whom, and what speaks against it, while the reason is typed.
pub(super) fn draw(
    app: &App,
    [lot, bid]: [&str; 2],
    currency: &str,
    area: Rect,
    buffer: &mut Buffer,
) {
    let (theme, cells) = (app.theme, usize::from(area.width.saturating_sub(2)));
    let Some((asked, result)) = super::lot(app).filter(|(asked, _)| asked.lot == lot) else {
        return;
    };
    let Some(bid) = result.bids.iter().find(|of| of.bid == bid) else { return };
    let money = |value: f64| text::number(value, 0);
    let bidder = bid.bidder.as_deref().map_or(String::new(), |b| format!(", {}", text::cut(b, 30)));
    let name = text::cut(&bid.bid, 20);
    let mut lines = vec![
        (
            format!(
                "Award lot {}, {} x {} kVA, to {name}{bidder}?",
                text::cut(lot, 12),
                result.quantity,
                text::plain(asked.rated_kva, 1)
            ),
            theme.heading(),
        ),
        (
            format!(
                "owning cost {} {currency} a unit, {} {currency} the whole lot",
                money(bid.owning_cost),
                money(bid.lot_cost)
            ),
            theme.plain(),
        ),
    ];
    let mut against = Vec::new();
    if !bid.misses.is_empty() {
        let misses = draw::misses(bid);
        against.push(format!(
            "It is out, not ranked: misses {misses}. If it is meant, begin the reason with: despite"
        ));
    }
    if let Some(lacked) = shortfall(result, bid) {
        let least = text::cut(&lacked.least, 20);
        against.push(format!("{least} costs {} {currency} a unit less to own.", money(lacked.gap)));
    }
    match result.recommended.as_deref() {
        Some(recommended) if recommended == bid.bid => {}
        Some(other) => {
            let other = text::cut(other, 20);
            against.push(format!("{other} is recommended, not {name}: a reason is needed."));
        }
        None => against.push("No bid is recommended: a reason is needed.".to_owned()),
    }
    lines.extend(against.into_iter().map(|said| (format!("! {said}"), theme.warning())));
    let say = "Type why below. Enter stores it with who, when and why, and keeps these factors for the \
               settlement; Esc stores nothing.";
    lines.push((say.to_owned(), theme.plain()));
    let wrapped = lines.into_iter().flat_map(|(said, style)| {
        text::wrap(&theme.spell(&said), cells).into_iter().map(move |line| (line, style))
    });
    // Where it is tight, nothing is left free above.
    let from = u16::from(area.height > 8);
    for (y, (line, style)) in (from..area.height).zip(wrapped) {
        put(buffer, area, y, &format!(" {line}"), style);
    }
}
