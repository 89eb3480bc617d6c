//! Keys, mouse and commands on the Spread.

use std::sync::Arc;

use super::{Against, Source};
use crate::review::{NewThreshold, ThresholdChange};
use crate::screening::{Sense, Threshold, proposed_threshold};
use crate::ui::app::App;
use crate::ui::bench::{Bench, overtake};
use crate::ui::event::Button;
use crate::ui::jobs::Job;
use crate::ui::keys::Action;
use crate::ui::looking::no_granule;
use crate::ui::overlay::{LinePrompt, Overlay, Purpose};
use crate::ui::owed;
use crate::ui::screening;
use crate::ui::selecting::Shape;
use crate::ui::turning;

/// Steps that the range of values is divided into, at the least.
const STEPS: f64 = 100.0;
/// Steps of a far move.
const FAR: f64 = 10.0;

/// Does what a key of the Spread says.
pub fn act(app: &mut App, action: Action) -> Vec<Job> {
    match action {
        Action::NextTest => next_test(app, true),
        Action::PreviousTest => next_test(app, false),
        Action::Valley => to_valley(app),
        _ => turn(app),
    }
}

/// Moves the threshold, or the place on the picture of two layers. False for keys that mean nothing
/// there.
pub fn step(app: &mut App, action: Action) -> bool {
    let Some(bench) = app.bench_mut() else { return false };
    let two = bench.spread.against.is_some();
    let (across, upwards) = match action {
        Action::Left => (-1.0, 0.0),
        Action::Right => (1.0, 0.0),
        Action::Up if two => (0.0, 1.0),
        Action::Down if two => (0.0, -1.0),
        Action::Up | Action::PageUp => (FAR, 0.0),
        Action::Down | Action::PageDown => (-FAR, 0.0),
        _ => return false,
    };
    let values = bench.spread_values().into_owned();
    let Some(range) = bench.spread_range(&values) else { return true };
    let x = bench.spread.x.unwrap_or_else(|| first_place(&values, range));
    let moved = nudged(x, across, range);
    let y = upwards_of(bench, upwards);
    put(bench, moved, y);
    true
}

/// Where the threshold stands before it was moved.
fn first_place(values: &[f64], range: (f64, f64)) -> f64 {
    proposed_threshold(values).unwrap_or((range.0 + range.1) / 2.0)
}

/// A round step for a range of values.
pub(super) fn step_of(range: (f64, f64)) -> f64 {
    let rough = (range.1 - range.0) / STEPS;
    let power = 10f64.powf(rough.log10().floor());
    let fits = |factor: &f64| factor * power >= rough * 0.999;
    power * [1.0, 2.0, 5.0].into_iter().find(fits).unwrap_or(10.0)
}

/// A value moved by so many steps, to a round one.
pub(super) fn nudged(value: f64, steps: f64, range: (f64, f64)) -> f64 {
    let step = step_of(range);
    rounded((value / step + steps).round(), step)
}

/// So many steps as a number with no more digits than the step has.
fn rounded(count: f64, step: f64) -> f64 {
    let value = count * step;
    let decimals = (-step.log10().floor()).clamp(0.0, 15.0) as usize;
    format!("{value:.decimals$}").parse().unwrap_or(value)
}

fn upwards_of(bench: &Bench, steps: f64) -> Option<f64> {
    let against = bench.spread.against.as_ref()?;
    let range = crate::screening::usual_range(&against.values)?;
    let y = bench.spread.y.unwrap_or((range.0 + range.1) / 2.0);
    Some(nudged(y, steps, range))
}

/// Puts the threshold, or the place on the picture of two layers; a threshold selects what lies
/// beyond it unless something else is being drawn.
pub(super) fn put(bench: &mut Bench, x: f64, y: Option<f64>) {
    bench.spread.x = Some(x);
    bench.spread.y = y;
    if bench.spread.against.is_none()
        && matches!(bench.selecting.shape, None | Some(Shape::Side(_)))
    {
        bench.selecting.shape = Some(Shape::Threshold);
    }
}

/// The threshold goes to the valley between two heaps of values.
fn to_valley(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    let values = bench.spread_values().into_owned();
    let place = bench.spread_range(&values).zip(proposed_threshold(&values));
    let Some((range, valley)) = place else {
        app.say("no valley: the values do not differ");
        return Vec::new();
    };
    let valley = nudged(valley, 0.0, range);
    let y = bench.spread.y;
    put(bench, valley, y);
    app.say(format!("the valley of the histogram (Otsu 1979) is at {valley}"));
    Vec::new()
}

fn turn(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    bench.spread.above = !bench.spread.above;
    let words = if bench.spread.above { "above" } else { "below" };
    app.say(format!("what lies {words} the threshold"));
    Vec::new()
}

/// Takes the next test that the file allows in hand, or the one before, or none again.
fn next_test(app: &mut App, forward: bool) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    let Some(screened) = bench.tests.screened.clone() else { return tests_missing(app) };
    let allowed: Vec<Source> = std::iter::once(Source::Layer)
        .chain(
            (0..screened.tests.len())
                .filter(|at| screened.tests[*at].way.is_some())
                .map(Source::Test),
        )
        .collect();
    let here = allowed.iter().position(|source| *source == bench.spread.source).unwrap_or(0);
    let count = allowed.len();
    let next = allowed[(here + if forward { 1 } else { count - 1 }) % count];
    take(app, next)
}

fn tests_missing(app: &mut App) -> Vec<Job> {
    app.warn("the tests have not run over this granule yet");
    Vec::new()
}

/// Takes the test of this name in hand, to try its threshold.
pub fn take_test(app: &mut App, name: &str) -> Vec<Job> {
    let Some(bench) = app.bench() else { return no_granule(app) };
    let Some(screened) = bench.tests.screened.clone() else { return tests_missing(app) };
    let Some(place) = crate::ui::picking::test_named(&screened.rulebook.tests, name) else {
        app.warn(format!("no test {name}, or several begin like this; Tab lists them"));
        return Vec::new();
    };
    take(app, Source::Test(place))
}

fn take(app: &mut App, source: Source) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return Vec::new() };
    bench.forget_spread();
    bench.spread.source = source;
    let Some((screened, place, way)) = bench.spread_test() else {
        let lacks = match source {
            Source::Layer | Source::Alike => "the Spread shows the layer again".to_owned(),
            Source::Test(_) => "the file does not allow this test".to_owned(),
        };
        bench.spread.source = Source::Layer;
        app.say(lacks);
        return Vec::new();
    };
    let threshold = match way.threshold {
        Threshold::Number(number) => number,
        _ => 0.0,
    };
    let (name, above) = (screened.rulebook.tests[place].name.clone(), way.sense == Sense::Above);
    bench.spread.above = above;
    put(bench, threshold, None);
    app.panes.focus_on(crate::ui::panes::Pane::Spread);
    let adopt = app.keymap.hint(Action::Adopt);
    app.say(format!("{name}: the arrows move its threshold, {adopt} takes it over"));
    Vec::new()
}

/// Asks for a second layer, or takes it away where there are no words.
pub fn against(app: &mut App, text: &str) -> Vec<Job> {
    let request = app.request();
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    bench.forget_spread();
    if text.is_empty() {
        bench.spread.against = None;
        app.say("one layer");
        return Vec::new();
    }
    bench.awaited.against = request;
    let cancel = overtake(&mut bench.overtaken.against);
    let review = Arc::clone(&bench.review);
    vec![Job::Against { request, review, text: text.to_owned(), cancel }]
}

/// Takes the second layer.
pub fn against_found(app: &mut App, request: u64, found: Result<Against, String>) -> Vec<Job> {
    let latest = app.is_latest(request);
    let Some(bench) = app.bench_mut().filter(|bench| bench.awaited.against == request) else {
        return Vec::new();
    };
    bench.awaited.against = 0;
    match found {
        Ok(against) if !latest => {
            // What was drawn on one layer by now means nothing on two.
            let text = against.text.clone();
            bench.forget_spread();
            bench.spread.against = Some(against);
            app.say(format!("{text} lies upwards in the Spread"));
        }
        Ok(against) => {
            bench.spread.against = Some(against);
            app.panes.focus_on(crate::ui::panes::Pane::Spread);
        }
        Err(why) => app.warn(why),
    }
    Vec::new()
}

/// A click puts the threshold there, a drag brushes.
pub fn click(app: &mut App, button: Button, (x, y): (f64, f64)) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return Vec::new() };
    let values = bench.spread_values().into_owned();
    let Some(range) = bench.spread_range(&values) else { return Vec::new() };
    let two = bench.spread.against.is_some();
    let begun = bench.spread.x.zip(Some(bench.spread.y.unwrap_or(y)));
    let shape = &mut bench.selecting.shape;
    match (shape, button) {
        (Some(Shape::Region(corners)), _) => corners.push((x, y)),
        (Some(Shape::Range(_) | Shape::Rectangle(_)), _) => {}
        (shape, Button::Drag) => {
            if let Some((from, up)) = begun {
                *shape = Some(if two { Shape::Rectangle((from, up)) } else { Shape::Range(from) });
            }
        }
        _ => {}
    }
    put(bench, nudged(x, 0.0, range), two.then_some(y));
    Vec::new()
}

/// Asks why the threshold is taken over into the campaign's rulebook.
pub fn ask_to_adopt(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench() else { return no_granule(app) };
    if bench.spread_test().is_none() || bench.spread.x.is_none() {
        let next = app.keymap.hint(Action::NextTest);
        app.say(format!("no test is in hand; {next} takes one"));
        return Vec::new();
    }
    if bench.spread_test().is_some_and(|(_, _, way)| way.sense != bench.spread_sense()) {
        let turn = app.keymap.hint(Action::TurnSide);
        app.warn(format!(
            "the test looks at the other side of its threshold; {turn} turns it back"
        ));
        return Vec::new();
    }
    app.overlay = Overlay::Line(LinePrompt::new(Purpose::Adopt, ""));
    Vec::new()
}

/// Takes the threshold over into the campaign's rulebook.
pub fn adopt(app: &mut App, why: Option<String>) -> Vec<Job> {
    let request = app.request();
    let now = app.now();
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    let Some((screened, place, _)) = bench.spread_test() else { return Vec::new() };
    let (Some(to), Some(way)) = (bench.spread.x, screened.tests[place].way) else {
        return Vec::new();
    };
    let test = screened.rulebook.tests[place].name.clone();
    let fingerprint = screened.rulebook.fingerprint.clone();
    let to = NewThreshold::Tried { to, fingerprint };
    let change = ThresholdChange { test, way, to, why, now };
    app.owed.begin(request, "the rulebook".to_owned());
    vec![Job::Adopt { request, change }]
}

/// The rulebook has changed: the tests run anew, over whatever is on the table by now.
pub fn adopted(app: &mut App, request: u64, found: Result<String, String>) -> Vec<Job> {
    if app.owed.end(request).is_none() {
        return Vec::new();
    }
    let mut jobs = Vec::new();
    match found {
        Ok(words) => {
            jobs = screening::start(app);
            app.say(words);
        }
        Err(why) => owed::failed(app, format!("the rulebook stays as it was: {why}")),
    }
    turning::leave_if_done(app);
    jobs
}
