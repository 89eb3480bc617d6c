//! What is under the mouse, in words, pane by pane.

use super::under_cursor::footprint_words;
use super::{field, spread, strip, trace, tray, with_unit};
use crate::ui::app::App;
use crate::ui::panes::Pane;

/// What is under a cell of the screen; nothing where no words belong to it.
pub fn under_mouse(app: &App, column: u16, row: u16) -> Option<String> {
    let pane = app.layout.as_ref()?.pane_at(column, row)?;
    if pane == Pane::Tray {
        return granule(app, tray::tray_row_under(app, column, row)?);
    }
    let bench = app.bench()?;
    match pane {
        Pane::Field => {
            let footprint = field::footprint_under(app, column, row)?;
            let value = bench.layer.value(footprint);
            let value = value.map(|value| with_unit(value, &bench.layer.unit));
            Some(footprint_words(app, bench, footprint, value))
        }
        Pane::Trace => trace::words_at(app, trace::wavenumber_under(app, column, row)?),
        Pane::Spread => spread::words_under(app, column, row),
        Pane::Strip => strip::words_under(app, column, row),
        Pane::Tray | Pane::Evidence | Pane::Ledger => None,
    }
    .filter(|_| !bench.is_blind())
}

/// The whole name, which its row may have had to shorten, and how far it has come.
fn granule(app: &App, entry: usize) -> Option<String> {
    let row = app.tray.entry(entry)?;
    let why = row.error.as_ref().map(|why| format!(": {why}"));
    let state = row.standing.as_ref().map(|standing| format!(": {}", standing.state.name()));
    Some(format!("{}{}", row.name, why.or(state).unwrap_or_default()))
}
