//! What the Tray is drawn from.

use std::collections::BTreeMap;

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::flags::GranuleState;
use crate::tray::Entry;
use crate::ui::app::{App, Table};
use crate::ui::panes::Pane;
use crate::ui::panes::tray::{self, TrayRow, TrayShares, TrayState, TrayView};
use crate::ui::selecting::Shape;
use crate::ui::spreading::Reach;

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
    let alike = alike(app);
    entries
        .map(|(number, entry)| {
            let note = alike.get(&number).map(|count| format!("{count} alike"));
            row(entry, opening == Some(number), note.unwrap_or_default())
        })
        .collect()
}

/// While spectra are sought in the whole Tray: how many there are in each granule.
fn alike(app: &App) -> BTreeMap<usize, usize> {
    let Some(bench) = app.bench() else { return BTreeMap::new() };
    let Some(alike) = bench.spread_alike() else { return BTreeMap::new() };
    if bench.spread.reach != Reach::Tray || bench.selecting.shape != Some(Shape::Threshold) {
        return BTreeMap::new();
    }
    let selection = bench.selection();
    let count = |entry: &usize| selection.elsewhere.get(entry).map_or(0, |set| set.len());
    let elsewhere = alike.elsewhere.keys().map(|entry| (*entry, count(entry)));
    elsewhere.chain([(bench.entry, selection.footprints.len())]).collect()
}

fn row(entry: &Entry, opening: bool, note: String) -> TrayRow {
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
    TrayRow { state: state(entry, opening), name: entry.name.clone(), shares, note }
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
