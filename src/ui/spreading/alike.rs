//! Footprints whose spectra resemble the one under the cursor.

use std::sync::Arc;

use super::acting::{nudged, put};
use super::{Alike, Reach, Source};
use crate::review::Measure;
use crate::screening::proposed_threshold;
use crate::ui::across;
use crate::ui::app::App;
use crate::ui::bench::{Bench, overtake};
use crate::ui::jobs::Job;
use crate::ui::keys::Action;
use crate::ui::looking::no_granule;
use crate::ui::panes::Pane;
use crate::ui::panes::field::Placement;

/// Asks how far every spectrum is from the one under the cursor, by this measure; without one by the
/// usual one, or the next where that footprint is compared already.
pub fn ask(app: &mut App, measure: Option<Measure>) -> Vec<Job> {
    let request = app.request();
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    if !bench.filling.done {
        app.say("spectra are compared as soon as all are read");
        return Vec::new();
    }
    let measure = measure.unwrap_or_else(|| next_measure(bench));
    bench.awaited.alike = request;
    let cancel = overtake(&mut bench.overtaken.alike);
    let footprint = bench.cursor;
    if let Some(measured) = bench.measured_by(measure) {
        return found(app, request, Alike::of(measured, footprint));
    }
    let review = Arc::clone(&bench.review);
    app.say(format!("comparing spectra by {}…", measure.words()));
    vec![Job::Alike { request, review, footprint, measure, cancel }]
}

fn next_measure(bench: &Bench) -> Measure {
    let Some(alike) = bench.spread_alike().filter(|alike| alike.footprint == bench.cursor) else {
        return Measure::default();
    };
    let here = Measure::ALL.iter().position(|one| *one == alike.measure());
    Measure::ALL[here.map_or(0, |here| (here + 1) % Measure::ALL.len())]
}

/// Ends the comparison and the second layer that are awaited; false where none is.
pub fn give_up(app: &mut App) -> bool {
    let awaits = |bench: &&mut Bench| bench.awaited.alike != 0 || bench.awaited.against != 0;
    let Some(bench) = app.bench_mut().filter(awaits) else { return false };
    bench.awaited.alike = 0;
    bench.awaited.against = 0;
    bench.overtaken.alike.cancel();
    bench.overtaken.against.cancel();
    app.say("given up");
    true
}

/// Shows the distances on the Spread, with a threshold at the valley between alike and other ones.
pub fn found(app: &mut App, request: u64, found: Result<Alike, String>) -> Vec<Job> {
    let (like, reach) = (app.keymap.hint(Action::Alike), app.keymap.hint(Action::Growing));
    let Some(bench) = app.bench_mut().filter(|bench| bench.awaited.alike == request) else {
        return Vec::new();
    };
    bench.awaited.alike = 0;
    let alike = match found {
        Ok(alike) => alike,
        Err(why) => {
            app.warn(why);
            return Vec::new();
        }
    };
    let words = alike.measure().words();
    bench.measured = Some(Arc::clone(&alike.measured));
    if !app.is_latest(request) {
        app.say(format!("compared by {words}; {like} shows those like the one under the cursor"));
        return Vec::new();
    }
    across::end_looking(app);
    let Some(bench) = app.bench_mut() else { return Vec::new() };
    bench.forget_spread();
    bench.spread.against = None;
    bench.spread.above = false;
    bench.spread.reach = Reach::Grown;
    let cut = first_cut(&alike, &bench.order);
    bench.spread.alike = Some(alike);
    bench.spread.source = Source::Alike;
    bench.spread.x = cut;
    let range = bench.spread_range(&bench.spread_values());
    let Some((cut, range)) = cut.zip(range) else {
        app.say("all spectra are alike");
        return Vec::new();
    };
    put(bench, nudged(cut, 0.0, range), None);
    app.panes.focus_on(Pane::Spread);
    app.say(format!("alike by {words}; {reach}: here, Tray; {like}: next measure"));
    Vec::new()
}

/// How alike at first: twice as far as the one's neighbours on the map usually are, but not beyond
/// the valley between alike and other ones.
fn first_cut(alike: &Alike, map: &Placement) -> Option<f64> {
    let valley = proposed_threshold(&alike.values)?;
    let (column, row) = map.place_of(alike.footprint)?;
    let around = (row.saturating_sub(1)..=row + 1)
        .flat_map(|y| (column.saturating_sub(1)..=column + 1).map(move |x| (x, y)));
    let mut near: Vec<f64> = around
        .filter_map(|(x, y)| map.footprint_at(x, y))
        .filter(|one| *one != alike.footprint)
        .filter_map(|one| alike.values.get(one).copied().filter(|value| value.is_finite()))
        .collect();
    near.sort_by(f64::total_cmp);
    let usual = near.get(near.len() / 2).map_or(valley, |median| 2.0 * median);
    Some(usual.min(valley))
}
