//! What the Tray is drawn from.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::flags::GranuleState;
use crate::tray::Entry;
use crate::ui::app::{App, Table};
use crate::ui::panes::Pane;
use crate::ui::panes::tray::{self, TrayRow, TrayShares, TrayState, TrayView};

/// Draws the Tray.
pub fn draw(app: &App, area: Rect, buffer: &mut Buffer) {
    with_view(app, |view| tray::draw(view, &app.theme, area, buffer));
}

/// The row under a cell of the screen.
pub fn tray_row_under(app: &App, column: u16, row: u16) -> Option<usize> {
    let area = app.area_of(Pane::Tray)?;
    with_view(app, |view| tray::row_at(view, area, column, row))
}

fn with_view<R>(app: &App, use_view: impl FnOnce(&TrayView<'_>) -> R) -> R {
    let rows = tray_rows(app);
    let current = app.current_entry().unwrap_or(0);
    let focused = app.focus() == Pane::Tray;
    let cursor = if focused { app.tray_cursor } else { current };
    use_view(&TrayView { rows: &rows, current, cursor, focused })
}

/// The rows, in order.
fn tray_rows(app: &App) -> Vec<TrayRow> {
    let opening = match app.table {
        Table::Opening { entry, .. } => Some(entry),
        _ => None,
    };
    let entries = app.tray.entries().iter().enumerate();
    entries.map(|(number, entry)| row(entry, opening == Some(number))).collect()
}

fn row(entry: &Entry, opening: bool) -> TrayRow {
    let in_doubt = entry.standing.as_ref().and_then(|standing| standing.in_doubt);
    let counts = entry.standing.as_ref().and_then(|standing| standing.counts.as_ref());
    let shares = counts.filter(|counts| counts.footprints > 0).map(|counts| {
        let share = |count: usize| count as f64 / counts.footprints as f64;
        TrayShares {
            flagged: share(counts.flagged),
            no_flag: share(counts.no_flag),
            not_assessed: share(counts.not_assessed),
            in_doubt: in_doubt.map(share),
        }
    });
    TrayRow { state: state(entry, opening), name: entry.name.clone(), shares }
}

fn state(entry: &Entry, opening: bool) -> TrayState {
    if opening {
        return TrayState::Opening;
    }
    if entry.error.is_some() {
        return TrayState::Unusable;
    }
    match entry.standing.as_ref().map(|standing| standing.state) {
        None | Some(GranuleState::Untouched) => TrayState::Untouched,
        Some(GranuleState::InHand) => TrayState::InHand,
        Some(GranuleState::SignedOff) => TrayState::SignedOff,
        Some(GranuleState::SetAside) => TrayState::SetAside,
    }
}
