//! What the Ledger is drawn from.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::flags::{Act, Decision};
use crate::review::Record;
use crate::system::clean_text;
use crate::ui::app::App;
use crate::ui::deciding;
use crate::ui::ledger::{Row, rows_on_show};
use crate::ui::panes::Pane;
use crate::ui::panes::ledger::{self, LedgerRow, LedgerView};
use crate::ui::widgets::first_shown;

/// Draws the Ledger.
pub fn draw(app: &App, area: Rect, buffer: &mut Buffer) {
    let places = rows_on_show(app);
    let cursor = app.ledger.cursor.min(places.len().saturating_sub(1));
    let room = ledger::room(area);
    let first = first_shown(cursor, places.len(), room);
    let record = app.bench().and_then(|bench| bench.record.open());
    let shown = places.iter().skip(first).take(room);
    let rows: Vec<LedgerRow> =
        record.map_or_else(Vec::new, |record| shown.map(|one| row(app, record, *one)).collect());
    let title = title(app, places.len());
    let view = LedgerView {
        title: &title,
        rows: &rows,
        cursor: (!rows.is_empty()).then_some(cursor - first),
        empty: if record.is_some() { "nothing was decided" } else { "the ledgers are being read" },
        focused: app.focus() == Pane::Ledger,
    };
    ledger::draw(&view, &app.theme, area, buffer);
}

fn title(app: &App, count: usize) -> String {
    let Some(bench) = app.bench() else { return String::new() };
    let about = match app.ledger.whole {
        true => "granule".to_owned(),
        false => bench.position_words(bench.cursor),
    };
    format!("{about} {count}")
}

fn row(app: &App, record: &Record, row: Row) -> LedgerRow {
    let place = match row {
        Row::Decision(place) => place,
        Row::Change(place) => return change_row(app, place),
    };
    let decision = &record.decisions()[place];
    LedgerRow {
        stands: record.standing().get(place).copied().unwrap_or(true),
        time: decision.at.strftime("%Y-%m-%d %H:%M").to_string(),
        who: decision.speaker(),
        what: what(record, decision),
    }
}

/// A threshold of the rulebook that was changed: from what to what, and why. It stands as long as it is
/// the last change of that threshold, or a later one was made on top of it.
fn change_row(app: &App, place: usize) -> LedgerRow {
    let change = &app.rulebook_changes[place];
    let way = if change.way == 0 { String::new() } else { format!(" ({}. way)", change.way + 1) };
    let why = change.why.as_ref().map_or(String::new(), |why| format!(" ({})", clean_text(why)));
    let (test, old, new) =
        (clean_text(&change.test), clean_text(&change.old), clean_text(&change.new));
    let later = app.rulebook_changes.iter().skip(place + 1);
    let mut later = later.filter(|one| one.test == change.test && one.way == change.way);
    LedgerRow {
        stands: !later.any(|one| one.new == change.old),
        time: change.at.strftime("%Y-%m-%d %H:%M").to_string(),
        who: clean_text(&change.person),
        what: format!("rulebook: {test}{way} {old} to {new}{why}"),
    }
}

/// What was decided, and why; of an undo, what it takes back.
fn what(record: &Record, decision: &Decision) -> String {
    match &decision.act {
        Act::Comment { .. } => clean_text(decision.why.as_deref().unwrap_or_default()),
        Act::SignOff { summary, .. } => format!("sign-off: {}", clean_text(summary)),
        Act::Revoke { decision: target } => {
            let named = record.decisions().iter().rev().find(|one| one.id == *target);
            let verb = match named.map(|one| &one.act) {
                Some(Act::Revoke { .. }) => "put back",
                _ => "took back",
            };
            let meant = record.meant_by(decision).map(deciding::words);
            format!("{verb} {}", meant.unwrap_or_else(|| "what is not here".to_owned()))
        }
        _ => deciding::words(decision),
    }
}
