//! Moving the cursor: over footprints, over the rows of the Tray, by key and by mouse.

use super::app::App;
use super::colour::Tone;
use super::event::{Button, Mouse};
use super::jobs::Job;
use super::keys::Action;
use super::ledger;
use super::looking;
use super::panes::Pane;
use super::picking;
use super::spreading;
use super::views;

/// Rows that a page moves where the Field is not on the screen.
const PAGE: usize = 10;

/// One step of the cursor.
pub fn step(app: &mut App, action: Action) -> Vec<Job> {
    if app.focus() == Pane::Tray && in_tray(app, action) {
        return Vec::new();
    }
    if app.focus() == Pane::Ledger && ledger::step(app, action) {
        return Vec::new();
    }
    if app.focus() == Pane::Evidence && in_evidence(app, action) {
        return Vec::new();
    }
    if app.focus() == Pane::Spread && spreading::step(app, action) {
        return Vec::new();
    }
    let page = page(app);
    let Some(bench) = app.bench_mut() else { return Vec::new() };
    let (from, map) = (bench.cursor, &bench.placement);
    let far = isize::MAX / 2;
    let to = match action {
        Action::Up => map.moved(from, 0, -1),
        Action::Down => map.moved(from, 0, 1),
        Action::Left => map.moved(from, -1, 0),
        Action::Right => map.moved(from, 1, 0),
        Action::PageUp => map.moved(from, 0, -page),
        Action::PageDown => map.moved(from, 0, page),
        Action::RowStart => map.moved(from, -far, 0),
        Action::RowEnd => map.moved(from, far, 0),
        Action::First => 0,
        Action::Last => map.footprints().saturating_sub(1),
        _ => from,
    };
    go(app, to)
}

/// Puts the cursor on a footprint and asks for its spectrum.
pub fn go(app: &mut App, footprint: usize) -> Vec<Job> {
    let moved = app.bench_mut().is_some_and(|bench| bench.move_to(footprint));
    if !moved {
        return Vec::new();
    }
    app.rested = !app.low_bandwidth;
    // What was said about another footprint makes room for what is under the cursor now.
    if app.message.1 != Tone::Bad {
        app.say("");
    }
    looking::spectrum(app)
}

/// Moves the Tray's own cursor; false for keys that mean nothing there.
fn in_tray(app: &mut App, action: Action) -> bool {
    let last = app.tray.len().saturating_sub(1);
    let to = match action {
        Action::Up => app.tray_cursor.saturating_sub(1),
        Action::Down => app.tray_cursor + 1,
        Action::PageUp => app.tray_cursor.saturating_sub(PAGE),
        Action::PageDown => app.tray_cursor + PAGE,
        Action::First | Action::RowStart => 0,
        Action::Last | Action::RowEnd => last,
        _ => return false,
    };
    app.tray_cursor = to.min(last);
    true
}

/// Pages scroll the Evidence; the arrows move the footprint that it is about.
fn in_evidence(app: &mut App, action: Action) -> bool {
    app.evidence_scroll = match action {
        Action::PageUp => app.evidence_scroll.saturating_sub(PAGE / 2),
        Action::PageDown => app.evidence_scroll + PAGE / 2,
        _ => return false,
    };
    // A page beyond the end would have to be taken back unseen.
    app.evidence_scroll = app.evidence_scroll.min(views::last_evidence_scroll(app));
    true
}

/// The rows of the map that the Field shows at once, less one to keep one's bearings.
fn page(app: &App) -> isize {
    let area = app.area_of(Pane::Field);
    let rows = match (area, app.bench()) {
        (Some(area), Some(bench)) => {
            let height = usize::from(area.height).saturating_sub(2) * 2;
            let shown = bench.placement.rows() >> bench.field_zoom.min(16);
            // A map that is shown whole moves by the third, one that is not by what is shown.
            if bench.field_zoom == 0 { shown / 3 } else { height.min(shown).saturating_sub(1) }
        }
        _ => PAGE,
    };
    isize::try_from(rows.max(1)).unwrap_or(1)
}

/// A click puts the cursor there and gives the pane the keys; the wheel zooms the spectrum.
pub fn click(app: &mut App, mouse: Mouse) -> Vec<Job> {
    // Wherever the button comes up, what was drawn with it ends.
    if mouse.button == Button::Release {
        return picking::mouse_up(app);
    }
    let layout = app.layout.as_ref();
    let Some(pane) = layout.and_then(|layout| layout.pane_at(mouse.column, mouse.row)) else {
        return Vec::new();
    };
    match (mouse.button, pane) {
        (Button::WheelUp, Pane::Trace) => looking::trace(app, Action::ZoomIn),
        (Button::WheelDown, Pane::Trace) => looking::trace(app, Action::ZoomOut),
        (Button::WheelUp, Pane::Field) => looking::field(app, Action::FieldIn),
        (Button::WheelDown, Pane::Field) => looking::field(app, Action::FieldOut),
        (Button::Press | Button::Drag, Pane::Field) => {
            app.panes.focus_on(Pane::Field);
            let Some(footprint) = views::footprint_under(app, mouse.column, mouse.row) else {
                return Vec::new();
            };
            picking::draw_with_mouse(app, mouse.button, footprint);
            go(app, footprint)
        }
        (Button::Press | Button::Drag, Pane::Spread) => {
            app.panes.focus_on(Pane::Spread);
            match views::spread_place_under(app, mouse.column, mouse.row) {
                Some(place) => spreading::click(app, mouse.button, place),
                None => Vec::new(),
            }
        }
        (Button::Press, Pane::Tray) => click_in_tray(app, mouse),
        (Button::Press | Button::Drag, Pane::Trace) => {
            app.panes.focus_on(Pane::Trace);
            match views::wavenumber_under(app, mouse.column, mouse.row) {
                Some(wavenumber) => looking::go_to_channel(app, wavenumber),
                None => Vec::new(),
            }
        }
        (Button::WheelUp | Button::WheelDown, Pane::Tray) => {
            let action = if mouse.button == Button::WheelUp { Action::Up } else { Action::Down };
            app.panes.focus_on(Pane::Tray);
            in_tray(app, action);
            Vec::new()
        }
        (Button::WheelUp | Button::WheelDown, Pane::Evidence) => {
            let action =
                if mouse.button == Button::WheelUp { Action::PageUp } else { Action::PageDown };
            in_evidence(app, action);
            Vec::new()
        }
        (Button::Press | Button::Drag, Pane::Strip) => {
            app.panes.focus_on(Pane::Strip);
            if let Some(entry) = views::strip_entry_under(app, mouse.column, mouse.row) {
                app.tray_cursor = entry;
            }
            let footprint = views::strip_footprint_under(app, mouse.column, mouse.row);
            footprint.map_or_else(Vec::new, |footprint| go(app, footprint))
        }
        (Button::Press, pane) => {
            app.panes.focus_on(pane);
            Vec::new()
        }
        _ => Vec::new(),
    }
}

/// The first click on a granule chooses it, the second opens it.
fn click_in_tray(app: &mut App, mouse: Mouse) -> Vec<Job> {
    let Some(row) = views::tray_row_under(app, mouse.column, mouse.row) else { return Vec::new() };
    let chosen = app.focus() == Pane::Tray && app.tray_cursor == row;
    app.panes.focus_on(Pane::Tray);
    app.tray_cursor = row;
    if chosen { super::turning::turn(app, Action::Open) } else { Vec::new() }
}
