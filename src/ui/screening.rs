//! The rulebook run over the granule on the table, beside the keys.

use std::sync::Arc;

use crate::screening::Screened;
use crate::system::Cancel;

use super::app::App;
use super::colour::Tone;
use super::jobs::Job;
use super::keys::Action;
use super::looking;
use super::selecting::Shape;
use super::spreading::{self, Source};
use super::{deciding, doubting, precedents};

/// Runs the tests over the granule on the table; the newest request wins.
pub fn start(app: &mut App) -> Vec<Job> {
    let request = app.request();
    let Some(bench) = app.bench_mut() else { return looking::no_granule(app) };
    if !bench.filling.done {
        app.say("the tests run as soon as all spectra are read");
        return Vec::new();
    }
    bench.tests.cancel.cancel();
    bench.tests.cancel = Cancel::new();
    bench.awaited.screen = request;
    let (review, cancel) = (Arc::clone(&bench.review), bench.tests.cancel.clone());
    vec![Job::Screen { request, review, cancel }]
}

/// Takes what the tests say.
pub fn take(app: &mut App, request: u64, found: Result<Arc<Screened>, String>) -> Vec<Job> {
    let Some(bench) = app.bench_mut().filter(|bench| bench.awaited.screen == request) else {
        return Vec::new();
    };
    bench.awaited.screen = 0;
    let drawn = bench.selecting.shape.clone();
    // A threshold in hand belongs to a test of the run before, and may be counted from its limit.
    let in_hand = bench.spread_test();
    let in_hand = in_hand.map(|(before, place, _)| before.rulebook.tests[place].name.clone());
    if matches!(bench.spread.source, Source::Test(_)) {
        bench.forget_spread();
        bench.spread.source = Source::Layer;
    }
    match found {
        Ok(screened) => {
            bench.suggest_judgements(&screened);
            bench.tests.screened = Some(screened);
            bench.tests.problem = None;
            bench.compare_tests();
            bench.find_cases();
            deciding::update_tray(app);
            // A layer may be made of what the tests say.
            let mut jobs = looking::refresh_layer(app);
            jobs.extend(doubting::tests_have_run(app));
            jobs.extend(precedents::measure(app));
            if let Some(test) = in_hand {
                jobs.extend(take_again(app, &test, drawn));
            }
            return jobs;
        }
        Err(why) => {
            bench.tests.screened = None;
            bench.tests.problem = Some(why.clone());
            app.message = (format!("the tests could not run: {why}"), Tone::Bad);
        }
    }
    Vec::new()
}

/// Takes the test that was in hand before the tests ran in hand again, with nothing tried on it. Its
/// threshold selects again only where it did: whoever let go of it does not decide about it.
fn take_again(app: &mut App, test: &str, drawn: Option<Shape>) -> Vec<Job> {
    let (focus, message) = (app.focus(), app.message.clone());
    let jobs = spreading::take_test(app, test);
    if let Some(bench) = app.bench_mut().filter(|_| drawn != Some(Shape::Threshold)) {
        bench.selecting.shape = drawn;
        bench.selecting.drop_spread_shape();
    }
    app.panes.focus_on(focus);
    app.message = message;
    jobs
}

/// Waits for the tests no longer; false where none are running.
pub fn give_up(app: &mut App) -> bool {
    let Some(bench) = app.bench_mut().filter(|bench| bench.awaited.screen != 0) else {
        return false;
    };
    bench.awaited.screen = 0;
    bench.tests.cancel.cancel();
    app.say(format!("the tests were given up; {} runs them", app.keymap.hint(Action::RunTests)));
    true
}
