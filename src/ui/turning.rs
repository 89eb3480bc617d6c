//! From granule to granule, and out of the program.

use super::across;
use super::app::{App, Direction, Table};
use super::bench::RecordState;
use super::colour::Tone;
use super::exporting;
use super::jobs::Job;
use super::keys::Action;
use super::overlay::Overlay;
use super::panes::Pane;
use super::place::Place;
use crate::tray::Standing;

/// The first jobs: look what the ledgers say about all granules, and open the first that is not
/// signed off. Granules that no ledger goes by the name of are taken for untouched without looking.
pub fn start(app: &mut App) -> Vec<Job> {
    let outside = std::sync::Arc::clone(&app.outside);
    app.tray.take_for_untouched(&outside.campaign);
    let entries = app.tray.entries().iter().enumerate();
    let mut jobs: Vec<Job> = entries
        .filter(|(_, entry)| entry.standing.is_none())
        .map(|(number, entry)| Job::Standing { entry: number, path: entry.path.clone() })
        .collect();
    jobs.extend(open_first(app));
    jobs
}

/// Opens the first granule that is known not to be signed off, once no granule before it may be
/// one; waits otherwise.
pub fn open_first(app: &mut App) -> Vec<Job> {
    let mut first = None;
    app.searching = false;
    for (number, entry) in app.tray.entries().iter().enumerate() {
        if entry.error.is_some() || entry.is_signed_off() {
            continue;
        }
        if entry.standing.is_none() {
            app.searching = true;
            app.say("looking for the first granule that is not signed off…");
            return Vec::new();
        }
        first = Some(number);
        break;
    }
    match first.or_else(|| app.tray.next(None)) {
        Some(entry) => open(app, entry, Direction::ForwardUnsigned),
        None => none_is_left(app),
    }
}

fn none_is_left(app: &mut App) -> Vec<Job> {
    let why = app.keymap.hint(Action::Problems);
    app.message = (format!("none of the files can be used; {why} says why"), Tone::Bad);
    app.panes.focus_on(Pane::Tray);
    Vec::new()
}

/// Next, previous, next not signed off, or the one under the Tray's cursor.
pub fn turn(app: &mut App, action: Action) -> Vec<Job> {
    // With nothing on the table, the Tray's own cursor tells where one is.
    let on_table = app.current_entry();
    let here = on_table.or_else(|| (!app.tray.is_empty()).then_some(app.tray_cursor));
    let (found, direction) = match action {
        Action::NextGranule => (app.tray.next(here), Direction::Forward),
        Action::PreviousGranule => {
            (here.and_then(|here| app.tray.previous(here)), Direction::Backward)
        }
        Action::NextUnsigned => (app.tray.next_unsigned(here), Direction::ForwardUnsigned),
        _ if app.focus() != Pane::Tray => return Vec::new(),
        _ => (Some(app.tray_cursor), Direction::Forward),
    };
    match found {
        Some(entry) if Some(entry) != on_table => open(app, entry, direction),
        Some(_) => Vec::new(),
        None => {
            app.say(match action {
                Action::NextGranule => "this is the last granule",
                Action::PreviousGranule => "this is the first granule",
                _ => "no other granule is left to sign off",
            });
            Vec::new()
        }
    }
}

/// Puts the granule on the table away and opens another.
pub fn open(app: &mut App, entry: usize, direction: Direction) -> Vec<Job> {
    let Some((path, name)) =
        app.tray.entry(entry).map(|entry| (entry.path.clone(), entry.name.clone()))
    else {
        return Vec::new();
    };
    app.searching = false;
    app.then = None;
    app.seek_case = None;
    app.seek_footprint = None;
    let mut jobs = keep_place(app);
    put_away(app);
    let request = app.request();
    app.table = Table::Opening { entry, request, direction };
    app.tray_cursor = entry;
    app.say(format!("opening {name}…"));
    jobs.push(Job::Open { request, path });
    jobs
}

/// Waits no longer for a granule to be opened; its answer will be dropped.
pub fn give_up_opening(app: &mut App) {
    app.table = Table::Empty;
    app.panes.focus_on(Pane::Tray);
    app.say("opening given up; Enter opens what is chosen in the Tray");
}

/// A file that could not be opened is named in its row; the next one in the same direction is
/// tried. A file that was opened by hand leaves the table empty instead.
pub fn could_not_open(app: &mut App, entry: usize, direction: Direction, why: String) -> Vec<Job> {
    app.tray.set_error(entry, Some(why));
    let row = app.tray.entry(entry);
    let name = row.map(|entry| entry.name.clone()).unwrap_or_default();
    let why = row.and_then(|entry| entry.error.clone()).unwrap_or_default();
    app.table = Table::Empty;
    let next = match direction {
        Direction::Forward => app.tray.next(Some(entry)),
        Direction::Backward => app.tray.previous(entry),
        Direction::ForwardUnsigned => app.tray.next_unsigned(Some(entry)),
    };
    // With nothing left that way, the other way.
    let next = next.or_else(|| match direction {
        Direction::Backward => app.tray.next(Some(entry)),
        _ => app.tray.previous(entry),
    });
    let Some(next) = next else {
        if app.tray.len() > 1 {
            none_is_left(app);
        } else {
            app.message = (format!("{name}: {why}"), Tone::Bad);
        }
        return Vec::new();
    };
    let jobs = open(app, next, direction);
    let bad = app.tray.entries().iter().filter(|entry| entry.error.is_some()).count();
    let why = match bad {
        1 => format!("{name}: {why}"),
        _ => format!(
            "{bad} files cannot be used ({} says why), {name}: {why}",
            app.keymap.hint(Action::Problems)
        ),
    };
    app.message = (why, Tone::Bad);
    jobs
}

/// Ends the reading of the granule on the table; its record stays until all of it is on the disk.
fn put_away(app: &mut App) {
    let Table::Bench(bench) = std::mem::replace(&mut app.table, Table::Empty) else { return };
    bench.filling.cancel.cancel();
    bench.tests.cancel.cancel();
    bench.overtaken.end_all();
    bench.selecting.seeking.cancel();
    // Comparing is about a footprint of it; what is being decided goes on.
    across::end_looking(app);
    let own = bench.record.open().map(|record| Standing {
        own: record.own_times(),
        steps: record.own_steps(),
        ..bench.standing(record)
    });
    if let Some(standing) = own {
        app.tray.set_standing(bench.entry, standing);
    }
    if let RecordState::Open(record) = bench.record
        && record.pending() > 0
    {
        app.left.push(*record);
    }
}

/// The job that keeps the place in the granule on the table.
pub fn keep_place(app: &App) -> Vec<Job> {
    let Some(bench) = app.bench() else { return Vec::new() };
    let Some(record) = bench.record.open() else { return Vec::new() };
    let identity = record.identity().clone();
    let place = Place { strip_along: app.strip.number(), ..bench.place(&app.panes) };
    vec![Job::Keep { identity, place }]
}

/// Leaves, once everything is written. Asked once more, it asks whether to wait no longer for what
/// may hang on a disk.
pub fn leave(app: &mut App) -> Vec<Job> {
    let again = std::mem::replace(&mut app.leaving, true);
    leave_if_done(app);
    if again && app.ended.is_none() {
        app.overlay = Overlay::LeaveAnyway;
    }
    if app.ended.is_none() && !matches!(app.overlay, Overlay::LeaveAnyway) {
        let words = match &app.across {
            Some(across) => format!("{}, then leaving; Esc ends it", across.words()),
            None if app.pending() == 0 => format!("{}, then leaving", app.owed.words()),
            None => format!("writing {} decisions…", app.pending()),
        };
        app.say(words);
    }
    Vec::new()
}

/// Leaves at once.
pub fn leave_anyway(app: &mut App) -> Vec<Job> {
    app.ended = Some(0);
    Vec::new()
}

/// Leaves where that was asked for and nothing is left to wait for.
pub fn leave_if_done(app: &mut App) {
    if !app.leaving || app.across.as_ref().is_some_and(|across| across.writes()) {
        return;
    }
    if app.pending() > 0 {
        if app.write_failure().is_some() {
            app.overlay = Overlay::LeaveAnyway;
        }
    } else if app.owed.is_empty() {
        app.ended = Some(0);
    }
}

/// Hears what the ledgers' writers have to say.
pub fn ledger_moved(app: &mut App) -> Vec<Job> {
    let mut moved = false;
    for record in app.records_mut() {
        moved |= record.listen();
    }
    if !moved {
        return Vec::new();
    }
    app.changed = true;
    app.left.retain(|record| record.pending() > 0);
    if let Some(why) = app.write_failure() {
        app.message = (why.to_owned(), Tone::Bad);
    }
    leave_if_done(app);
    exporting::start_kept(app)
}

/// Looks whether others have decided something about the granule on the table.
pub fn look_for_others(app: &mut App) -> Vec<Job> {
    let request = app.request();
    let Some(bench) = app.bench_mut() else { return Vec::new() };
    // One that hangs on a disk is enough.
    if bench.awaited.reread != 0 {
        return Vec::new();
    }
    let Some(record) = bench.record.open() else { return Vec::new() };
    let identity = record.identity().clone();
    bench.awaited.reread = request;
    vec![Job::Reread { request, identity }]
}
