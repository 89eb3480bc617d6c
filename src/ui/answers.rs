//! What the answers of jobs do to the state. An answer that is no longer waited for is dropped.

use std::sync::Arc;

use crate::flags::LedgerReading;
use crate::layers::{Layer, LayerUnit};
use crate::review::{Record, Review, Spectrum};
use crate::tray::Standing;

use super::across;
use super::app::{App, Table};
use super::bench::{Bench, Quality, RecordState};
use super::by_rule;
use super::colour::Tone;
use super::deciding;
use super::exporting;
use super::jobs::{Answer, Job};
use super::keys::Action;
use super::ledger;
use super::looking;
use super::panes::Arrangement;
use super::picking;
use super::place::Place;
use super::precedents;
use super::screening;
use super::shown_layer::ShownLayer;
use super::spreading;
use super::strip;
use super::tracing;
use super::turning;
use super::undoing;

/// Takes an answer.
pub fn take(app: &mut App, answer: Answer) -> Vec<Job> {
    match answer {
        Answer::Standing { entry, found } => standing(app, entry, found),
        Answer::SignedOff { request, entry, found } => by_rule::signed(app, request, entry, found),
        Answer::Opened { request, found } => opened(app, request, found),
        Answer::Filling { request, share, of_layer } => filling(app, request, share, of_layer),
        Answer::Filled { request, found } => filled(app, request, found),
        Answer::Record { request, found } => record(app, request, found),
        Answer::Changes(changes, problems) => {
            ledger::take_changes(app, changes, problems);
            Vec::new()
        }
        Answer::Reread { request, found } => reread(app, request, found),
        Answer::Layer { request, found } => layer(app, request, found),
        Answer::Indices { request, found } => indices(app, request, found),
        Answer::Quality { request, found } => quality(app, request, found),
        Answer::Screened { request, found } => screening::take(app, request, found),
        Answer::Spectrum { request, found } => spectrum(app, request, found),
        Answer::Pinned { request, found } => pinned(app, request, found),
        Answer::Trace { request, found } => tracing::take(app, request, found),
        Answer::Along { request, entry, found } => {
            strip::take(app, request, entry, found);
            Vec::new()
        }
        Answer::Beside { request, found } => {
            if let Some(bench) = awaited(app, |bench| bench.awaited.beside == request) {
                bench.awaited.beside = 0;
                bench.look.beside = Some(found);
            }
            Vec::new()
        }
        Answer::Exported { request, found } => exporting::exported(app, request, found),
        Answer::Against { request, found } => spreading::against_found(app, request, found),
        Answer::Across { request, entry, found } => across::take(app, request, entry, found),
        Answer::AcrossFailed { request, why } => {
            across::failed(app, request, why);
            Vec::new()
        }
        Answer::Measured { request, found } => {
            precedents::measured(app, request, found);
            Vec::new()
        }
        Answer::Alike { request, found } => spreading::found(app, request, found),
        Answer::Adopted { request, found } => spreading::adopted(app, request, found),
        Answer::Selected { request, join, found } => picking::selected(app, request, join, found),
    }
}

fn standing(app: &mut App, entry: usize, found: Result<Standing, String>) -> Vec<Job> {
    match found {
        // What the open record says is newer than what was read from the disk.
        Ok(_) if app.bench().is_some_and(|bench| bench.entry == entry) => {}
        Ok(standing) => app.tray.set_standing(entry, standing),
        Err(why) => app.tray.set_error(entry, Some(why)),
    }
    if app.searching { turning::open_first(app) } else { Vec::new() }
}

fn opened(app: &mut App, request: u64, found: Result<Arc<Review>, String>) -> Vec<Job> {
    let Table::Opening { entry, request: awaited, direction } = app.table else {
        return Vec::new();
    };
    if awaited != request {
        return Vec::new();
    }
    let review = match found {
        Ok(review) => review,
        Err(why) => return turning::could_not_open(app, entry, direction, why),
    };
    app.tray.set_error(entry, None);
    let first_layer = app.outside.first_layer.clone();
    let mut bench = Bench::new(entry, review, first_layer);
    bench.doubt.wanted = app.seek_case.take();
    let (fill, record, quality) = (app.request(), app.request(), app.request());
    bench.filling.request = fill;
    bench.awaited.record = record;
    bench.awaited.quality = quality;
    let mut jobs = vec![Job::Fill {
        request: fill,
        review: Arc::clone(&bench.review),
        layer: bench.wanted.clone(),
        cancel: bench.filling.cancel.clone(),
    }];
    // The first picture needs the processors for itself.
    bench.behind_first_picture = vec![
        Job::Record { request: record, review: Arc::clone(&bench.review) },
        Job::Quality { request: quality, review: Arc::clone(&bench.review) },
    ];
    let problems = bench.review.granule().problems().len();
    let bases = bench.review.bases_problem().map(crate::system::clean_text);
    app.table = Table::Bench(Box::new(bench));
    strip::fit(app);
    match problems {
        // Why files before this one were passed over has to stay to be read.
        _ if app.message.1 == Tone::Bad => {}
        _ if bases.is_some() => app.warn(bases.unwrap_or_default()),
        _ if app.welcome.is_some() => {
            let welcome = app.welcome.take().unwrap_or_default();
            app.say(welcome);
        }
        _ if !app.keymap.problems().is_empty() => {
            let problem = app.keymap.problems().join("; ");
            app.warn(problem);
        }
        0 => app.say(""),
        count => {
            let key = app.keymap.hint(Action::Problems);
            app.say(format!("{count} found missing, guessed or odd: {key} shows"));
        }
    }
    jobs.extend(looking::spectrum(app));
    jobs.extend(looking::refresh_layer(app));
    jobs
}

fn filling(app: &mut App, request: u64, share: f64, of_layer: bool) -> Vec<Job> {
    let Some(bench) = awaited(app, |bench| bench.filling.request == request) else {
        return Vec::new();
    };
    bench.filling.share = share;
    if of_layer && !bench.filling.of_layer {
        bench.filling.of_layer = true;
        return looking::refresh_layer(app);
    }
    more_is_there(app)
}

fn filled(app: &mut App, request: u64, found: Result<(), String>) -> Vec<Job> {
    let Some(bench) = awaited(app, |bench| bench.filling.request == request) else {
        return Vec::new();
    };
    bench.filling.done = true;
    bench.filling.of_layer = true;
    bench.filling.share = 1.0;
    let mut jobs = std::mem::take(&mut bench.behind_first_picture);
    if let Err(why) = found {
        bench.filling.problem = Some(why.clone());
        app.message = (why, Tone::Bad);
    }
    // Whatever is on its way was begun without the last of the spectra.
    jobs.extend(looking::refresh_layer(app));
    jobs.extend(looking::refresh_indices(app));
    jobs.extend(screening::start(app));
    jobs.extend(looking::fill_pins(app));
    jobs
}

/// More spectra are there: what is on show is evaluated anew, unless that is under way.
fn more_is_there(app: &mut App) -> Vec<Job> {
    let mut jobs = Vec::new();
    let Some(bench) = app.bench() else { return jobs };
    let (awaited, of_layer) = (bench.awaited, bench.filling.of_layer);
    if awaited.layer == 0 {
        jobs.extend(looking::refresh_layer(app));
    }
    if awaited.indices == 0 && of_layer {
        jobs.extend(looking::refresh_indices(app));
    }
    jobs.extend(looking::fill_pins(app));
    jobs
}

fn record(
    app: &mut App,
    request: u64,
    found: Result<(Box<Record>, Option<Place>), String>,
) -> Vec<Job> {
    let Some(bench) = awaited(app, |bench| bench.awaited.record == request) else {
        return Vec::new();
    };
    bench.awaited.record = 0;
    match found {
        Ok((record, place)) => {
            let problem = record.problems().first().cloned();
            let record = unwritten(&mut app.left, record);
            let Some(bench) = app.bench_mut() else { return Vec::new() };
            bench.record = RecordState::Open(record);
            bench.compare_tests();
            bench.find_cases();
            let asked_early = std::mem::take(&mut bench.asked_early);
            deciding::update_tray(app);
            if let Some(problem) = problem {
                app.warn(problem);
            } else if asked_early {
                // The key may have been meant for what was on show then, so it is not carried out.
                app.say("the ledgers are read: press the key again");
            }
            let mut jobs = place.map_or_else(Vec::new, |place| go_to_place(app, place));
            if let Some((footprint, words)) = app.seek_footprint.take() {
                jobs.extend(super::moving::go(app, footprint));
                app.say(words);
            }
            jobs.extend(undoing::done_elsewhere(app));
            jobs
        }
        Err(why) => {
            bench.record = RecordState::Failed(why.clone());
            app.message = (format!("nothing can be decided: {why}"), Tone::Bad);
            Vec::new()
        }
    }
}

/// The record that was left while its last decisions were on the way to the disk, where there is
/// one of this granule: what was read may lack them.
fn unwritten(left: &mut Vec<Record>, read: Box<Record>) -> Box<Record> {
    let Some(place) = left.iter().position(|one| one.identity().hash == read.identity().hash)
    else {
        return read;
    };
    let mut record = left.swap_remove(place);
    record.take_over_from(*read);
    Box::new(record)
}

/// Shows what others have decided meanwhile.
fn reread(app: &mut App, request: u64, found: LedgerReading) -> Vec<Job> {
    let Some(bench) = awaited(app, |bench| bench.awaited.reread == request) else {
        return Vec::new();
    };
    bench.awaited.reread = 0;
    let Some(record) = bench.record.open_mut() else { return Vec::new() };
    let new = record.take_over(found);
    if !new.is_empty() {
        bench.compare_tests();
        bench.find_cases();
        app.changed = true;
        deciding::update_tray(app);
        let all: usize = new.values().sum();
        let decisions = if all == 1 { "decision" } else { "decisions" };
        let whose: Vec<String> = new.into_keys().collect();
        app.say(format!("{all} {decisions} by {} came in", whose.join(", ")));
    }
    Vec::new()
}

/// Goes back to where one was, but for what keys have changed by now.
fn go_to_place(app: &mut App, place: Place) -> Vec<Job> {
    let asked_for = app.outside.first_layer.is_some();
    let Some(bench) = app.bench_mut() else { return Vec::new() };
    let now = bench.place(&Arrangement::default());
    let mut place = place.but_for(&bench.begun, now);
    if bench.selecting.is_on() {
        // What is being drawn goes on from here.
        place.cursor = bench.cursor;
    }
    bench.go_to(&place);
    let layer = place.layer.clone().filter(|layer| !asked_for && *layer != bench.wanted);
    // Whoever has stood the panes otherwise by now keeps them so.
    let mut jobs = Vec::new();
    if app.panes == Arrangement::default() {
        app.panes.restore(&place.panes, place.zoomed);
        jobs.extend(strip::restore(app, place.strip_along));
    }
    jobs.extend(looking::fill_pins(app));
    jobs.extend(looking::spectrum(app));
    if let Some(layer) = layer {
        jobs.extend(looking::show_layer(app, &layer));
    }
    jobs
}

fn layer(app: &mut App, request: u64, found: Result<Layer, String>) -> Vec<Job> {
    let Some(bench) = awaited(app, |bench| bench.awaited.layer == request) else {
        return Vec::new();
    };
    bench.awaited.layer = 0;
    let mut jobs = Vec::new();
    match found {
        Ok(layer) => {
            if bench.layer.text != bench.wanted {
                bench.layer_leaves();
                let new = ShownLayer::waiting(&bench.wanted);
                let before = std::mem::replace(&mut bench.layer, new);
                bench.other_layer = Some(before).filter(|layer| !layer.values.is_empty());
            }
            let difference = layer.unit == LayerUnit::KelvinDifference;
            bench.layer.bands = layer.bands;
            bench.layer.fill(layer.values, layer.unit.label(), difference, layer.notes);
            tracing::mark_used(bench);
            jobs.extend(strip::refresh(app));
        }
        Err(why) if bench.layer.text == bench.wanted => bench.layer.problem = Some(why),
        Err(why) => {
            // What was on show stays.
            bench.wanted = bench.layer.text.clone();
            app.warn(why);
        }
    }
    if let Some(bench) = app.bench_mut().filter(|bench| bench.filling.of_layer) {
        jobs.extend(std::mem::take(&mut bench.behind_first_picture));
    }
    jobs
}

fn indices(app: &mut App, request: u64, found: Vec<Result<Layer, String>>) -> Vec<Job> {
    let Some(bench) = awaited(app, |bench| bench.awaited.indices == request) else {
        return Vec::new();
    };
    bench.awaited.indices = 0;
    for (index, found) in bench.indices.iter_mut().zip(found) {
        index.values = found.map(|layer| {
            index.unit = layer.unit.label().to_owned();
            layer.values
        });
    }
    // Cases are parted by what a window sees.
    bench.find_cases();
    Vec::new()
}

fn quality(app: &mut App, request: u64, found: Vec<Quality>) -> Vec<Job> {
    if let Some(bench) = awaited(app, |bench| bench.awaited.quality == request) {
        bench.awaited.quality = 0;
        bench.quality = found;
    }
    Vec::new()
}

fn spectrum(app: &mut App, request: u64, found: Result<Spectrum, String>) -> Vec<Job> {
    let Some(bench) = awaited(app, |bench| bench.awaited.spectrum == request) else {
        return Vec::new();
    };
    bench.awaited.spectrum = 0;
    match found {
        Ok(spectrum) => bench.spectrum = Some(spectrum),
        Err(why) => bench.spectrum_problem = Some(why),
    }
    Vec::new()
}

fn pinned(app: &mut App, request: u64, found: Vec<Spectrum>) -> Vec<Job> {
    let Some(bench) = awaited(app, |bench| bench.awaited.pins == request) else {
        return Vec::new();
    };
    bench.awaited.pins = 0;
    for spectrum in found {
        let pin = bench.pins.iter_mut().find(|pin| pin.footprint == spectrum.footprint);
        if let Some(pin) = pin {
            pin.spectrum = Some(spectrum);
        }
    }
    Vec::new()
}

/// The granule on the table, if it waits for this answer.
fn awaited(app: &mut App, is_awaited: impl FnOnce(&Bench) -> bool) -> Option<&mut Bench> {
    app.bench_mut().filter(|bench| is_awaited(bench))
}
