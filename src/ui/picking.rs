//! Selecting, by keys, by command and by mouse.

use std::sync::Arc;

use crate::flags::{FootprintSet, Scope};
use crate::screening::{Test, TestResult};
use crate::system::Cancel;

use super::app::App;
use super::deciding;
use super::event::Button;
use super::jobs::Job;
use super::keys::Action;
use super::looking::no_granule;
use super::overlay::Selection;
use super::panes::Pane;
use super::selecting::{Found, Join, Says, Shape, Wanted};

/// Does what a key of selecting says.
pub fn pick(app: &mut App, action: Action) -> Vec<Job> {
    match action {
        Action::Box | Action::Polygon if app.focus() == Pane::Spread => brush(app, action),
        Action::Box => draw_box(app),
        Action::Polygon => draw_polygon(app),
        Action::Invert => invert(app),
        Action::Reselect => select_again(app),
        _ => change_join(app),
    }
}

/// Begins a box at the cursor, or keeps what is being drawn.
fn draw_box(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    if bench.selecting.shape.is_some() {
        return keep_shape(app);
    }
    bench.selecting.shape = Some(Shape::Box(bench.cursor));
    let keep = app.keymap.hint(Action::Box);
    app.say(format!("box: move the cursor; {keep} keeps it"));
    Vec::new()
}

/// Sets a corner at the cursor; a second one at the same place keeps the polygon.
fn draw_polygon(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    let cursor = bench.cursor;
    match &mut bench.selecting.shape {
        Some(Shape::Polygon(corners)) if corners.last() == Some(&cursor) => return keep_shape(app),
        Some(Shape::Polygon(corners)) => corners.push(cursor),
        shape => *shape = Some(Shape::Polygon(vec![cursor])),
    }
    let (corner, keep) = (app.keymap.hint(Action::Polygon), app.keymap.hint(Action::Box));
    app.say(format!("polygon: {corner} sets a corner, {keep} keeps it"));
    Vec::new()
}

/// Begins a range of values, or a rectangle or polygon on the picture of two layers; or keeps it.
fn brush(app: &mut App, action: Action) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    // Before the place was moved it is that of the footprint under the cursor.
    let under = |values: &[f64]| values.get(bench.cursor).copied().filter(|one| one.is_finite());
    let here = under(&bench.spread_values());
    let above = bench.spread.against.as_ref().and_then(|against| under(&against.values));
    if bench.spread.x.is_none() && here.is_some() {
        (bench.spread.x, bench.spread.y) = (here, above);
    }
    let Some(x) = bench.spread.x else {
        app.say("the arrows set the place to begin at");
        return Vec::new();
    };
    let at = (x, bench.spread.y.unwrap_or(0.0));
    let two = bench.spread.against.is_some();
    let shape = match (&mut bench.selecting.shape, action) {
        (Some(Shape::Region(corners)), Action::Polygon) if corners.last() != Some(&at) => {
            corners.push(at);
            return Vec::new();
        }
        (Some(Shape::Range(_) | Shape::Rectangle(_) | Shape::Region(_)), _) => {
            return keep_shape(app);
        }
        (_, Action::Polygon) if two => Shape::Region(vec![at]),
        _ if two => Shape::Rectangle(at),
        _ => Shape::Range(x),
    };
    bench.selecting.shape = Some(shape);
    let keep = app.keymap.hint(Action::Box);
    app.say(format!("move on with the arrows; {keep} keeps it"));
    Vec::new()
}

/// What is being drawn becomes the selection, or a part of it.
fn keep_shape(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return Vec::new() };
    if let Some(shape) = bench.shape_selection() {
        let join = bench.selecting.join;
        join_to_selection(app, join, shape, None);
    }
    Vec::new()
}

/// Joins to what is selected, and says what came of it.
fn join_to_selection(app: &mut App, join: Join, selection: Selection, note: Option<String>) {
    let Some(bench) = app.bench_mut() else { return };
    let from_nothing = join.takes_away() && bench.selecting.kept().is_none();
    bench.selecting.take(join, selection);
    let other = app.keymap.hint(Action::Join);
    let why = || format!("nothing was there to take it from; {other} joins otherwise");
    tell(app, if from_nothing { Some(why()) } else { note });
}

fn invert(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    if let Some(shape) = bench.shape_selection() {
        bench.selecting.take(bench.selecting.join, shape);
    }
    bench.selecting.invert(bench.footprints());
    tell(app, None);
    Vec::new()
}

fn select_again(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    match bench.selecting.last().cloned() {
        Some(last) => {
            bench.selecting.take(Join::Anew, last);
            tell(app, None);
        }
        None => app.say("nothing was selected before"),
    }
    Vec::new()
}

fn change_join(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    bench.selecting.join = bench.selecting.join.next();
    let words = bench.selecting.join.words();
    app.say(words);
    Vec::new()
}

/// Says how much is selected now.
fn tell(app: &mut App, note: Option<String>) {
    let Some(bench) = app.bench() else { return };
    let words = match bench.selecting.kept() {
        Some(kept) => format!("{} of {} selected", kept.footprints.len(), bench.footprints()),
        None => "nothing is selected".to_owned(),
    };
    match note {
        Some(note) => app.warn(format!("{words}; {note}")),
        None => app.say(words),
    }
}

/// Selects what was asked for, at once or by a job.
pub fn select(app: &mut App, join: Join, wanted: Wanted) -> Vec<Job> {
    let words = wanted.words();
    let footprints = match wanted {
        Wanted::Condition(text) => return seek(app, join, text),
        Wanted::Test(name, says) => return select_by_test(app, join, &name, says),
        Wanted::All => app.bench().map(|bench| FootprintSet::all(bench.footprints())),
        Wanted::NoFlag => carrying(app, |flags| flags == 0),
        Wanted::Flag(name) => {
            let vocabulary = &app.outside.campaign.settings().vocabulary;
            let kind = vocabulary.by_name(&name).filter(|kind| kind.scope == Scope::Footprint);
            let Some(mask) = kind.map(|kind| kind.mask()) else {
                app.warn(format!("no flag {name}; Tab lists them"));
                return Vec::new();
            };
            carrying(app, |flags| flags & mask != 0)
        }
    };
    match footprints {
        Some(footprints) => take(app, join, Selection::of(footprints, words), None),
        None => return deciding::not_ready(app),
    }
    Vec::new()
}

/// The footprints whose flags are like this, if what was decided is known.
fn carrying(app: &App, fits: impl Fn(u32) -> bool) -> Option<FootprintSet> {
    let bench = app.bench()?;
    let state = bench.record.open()?.state();
    Some((0..bench.footprints()).filter(|one| fits(state.any_flags(*one))).collect())
}

/// The footprints about which a test of the rulebook says this.
fn select_by_test(app: &mut App, join: Join, name: &str, says: Says) -> Vec<Job> {
    let Some(bench) = app.bench() else { return no_granule(app) };
    let Some(screened) = bench.tests.screened.clone() else {
        app.warn("the tests have not run over this granule yet");
        return Vec::new();
    };
    let all = screened.rulebook.tests.iter().zip(&screened.tests);
    let exact = all.clone().filter(|(test, _)| test.name == name).count() > 0;
    let meant = |test: &Test| if exact { test.name == name } else { test.name.starts_with(name) };
    let found: Vec<(&Test, &TestResult)> = all.filter(|(test, _)| meant(test)).collect();
    let name = match &found[..] {
        [] => {
            app.warn(format!("no test {name}; Tab lists them"));
            return Vec::new();
        }
        [(test, _)] => test.name.clone(),
        several => format!("one of {} tests {name}", several.len()),
    };
    // Of several, one has to speak, or none to have a result.
    let verdicts = |footprint: usize| {
        let mut verdicts = found.iter().map(move |(_, result)| result.verdicts[footprint]);
        match says {
            Says::Missing => verdicts.all(|verdict| says.fits(verdict)),
            _ => verdicts.any(|verdict| says.fits(verdict)),
        }
    };
    let footprints = (0..screened.footprints()).filter(|one| verdicts(*one));
    let selection = Selection::of(footprints.collect(), Wanted::Test(name, says).words());
    let lacks = found.iter().map(|(_, result)| &result.lacks).find(|lacks| !lacks.is_empty());
    take(app, join, selection, lacks.cloned());
    Vec::new()
}

/// The test of this name, or the only one whose name begins like this.
pub fn test_named(tests: &[Test], name: &str) -> Option<usize> {
    let exact = tests.iter().position(|test| test.name == name);
    exact.or_else(|| {
        let mut begin = tests.iter().enumerate().filter(|(_, test)| test.name.starts_with(name));
        let first = begin.next().map(|(place, _)| place);
        first.filter(|_| begin.next().is_none())
    })
}

fn seek(app: &mut App, join: Join, text: String) -> Vec<Job> {
    let request = app.request();
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    bench.selecting.seeking.cancel();
    bench.selecting.seeking = Cancel::new();
    let cancel = bench.selecting.seeking.clone();
    bench.awaited.select = request;
    app.say("selecting…");
    let Some(bench) = app.bench() else { return Vec::new() };
    vec![Job::Select { request, review: Arc::clone(&bench.review), join, text, cancel }]
}

/// Waits for what is being looked for no longer; false where nothing is.
pub fn give_up(app: &mut App) -> bool {
    let Some(bench) = app.bench_mut().filter(|bench| bench.awaited.select != 0) else {
        return false;
    };
    bench.awaited.select = 0;
    bench.selecting.seeking.cancel();
    app.say("nothing more is selected");
    true
}

/// Takes what a job has found.
pub fn selected(app: &mut App, request: u64, join: Join, found: Found) -> Vec<Job> {
    let Some(bench) = app.bench_mut().filter(|bench| bench.awaited.select == request) else {
        return Vec::new();
    };
    bench.awaited.select = 0;
    match found {
        Ok((selection, note)) => take(app, join, selection, note),
        Err(why) => app.warn(why),
    }
    Vec::new()
}

fn take(app: &mut App, join: Join, mut selection: Selection, note: Option<String>) {
    selection.words = format!("{} {}", selection.footprints.len(), selection.words);
    join_to_selection(app, join, selection, note);
}

/// A drag begins a box, or sets the corners of the polygon that is being drawn.
pub fn draw_with_mouse(app: &mut App, button: Button, footprint: usize) {
    let Some(bench) = app.bench_mut() else { return };
    let cursor = bench.cursor;
    match &mut bench.selecting.shape {
        Some(Shape::Polygon(corners)) if corners.last() != Some(&footprint) => {
            corners.push(footprint)
        }
        None | Some(Shape::Side(_)) if button == Button::Drag && cursor != footprint => {
            bench.selecting.shape = Some(Shape::Box(cursor));
        }
        _ => {}
    }
}

/// A box drawn with the mouse is kept when its button comes up.
pub fn mouse_up(app: &mut App) -> Vec<Job> {
    match app.bench().and_then(|bench| bench.selecting.shape.as_ref()) {
        Some(Shape::Box(_) | Shape::Range(_) | Shape::Rectangle(_)) => keep_shape(app),
        _ => Vec::new(),
    }
}
