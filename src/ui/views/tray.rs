//! What the Tray is drawn from.

use crate::flags::GranuleState;
use crate::tray::Entry;
use crate::ui::app::{App, Table};
use crate::ui::panes::tray::{TrayRow, TrayShares, TrayState};

/// The rows, in order.
pub fn tray_rows(app: &App) -> Vec<TrayRow> {
    let opening = match app.table {
        Table::Opening { entry, .. } => Some(entry),
        _ => None,
    };
    let entries = app.tray.entries().iter().enumerate();
    entries.map(|(number, entry)| row(entry, opening == Some(number))).collect()
}

fn row(entry: &Entry, opening: bool) -> TrayRow {
    let counts = entry.standing.as_ref().and_then(|standing| standing.counts.as_ref());
    let shares = counts.filter(|counts| counts.footprints > 0).map(|counts| {
        let share = |count: usize| count as f64 / counts.footprints as f64;
        TrayShares {
            flagged: share(counts.flagged),
            no_flag: share(counts.no_flag),
            not_assessed: share(counts.not_assessed),
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
