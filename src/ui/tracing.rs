//! What keys and commands do to the Trace beyond channels and zoom: quantity, reference, envelope,
//! Planck curves, noise.

use std::sync::Arc;

use super::app::App;
use super::bench::{Bench, overtake};
use super::jobs::{Job, TraceAsk, TraceFound};
use super::keys::Action;
use super::looking::no_granule;
use super::trace_look::{Envelope, Reference, TraceQuantity, USUAL_PLANCK};
use super::typed_path::typed_path;

/// Changes what the Trace shows.
pub fn act(app: &mut App, action: Action) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    match action {
        Action::SwitchQuantity => {
            bench.look.quantity = bench.look.quantity.next();
            Vec::new()
        }
        Action::Reference => next_reference(app),
        Action::Envelope => envelope(app),
        Action::Planck => {
            let temperatures = match bench.look.planck.is_empty() {
                true => USUAL_PLANCK.to_vec(),
                false => Vec::new(),
            };
            planck(app, temperatures)
        }
        _ => bars(app),
    }
}

/// Shows Planck curves of these temperatures (K), in the quantity that they are curves in.
pub fn planck(app: &mut App, temperatures: Vec<f64>) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    let words = match temperatures.is_empty() {
        true => "no Planck curves".to_owned(),
        false => {
            bench.look.quantity = TraceQuantity::Radiance;
            let all: Vec<String> = temperatures.iter().map(f64::to_string).collect();
            format!("Planck curves at {} K", all.join(", "))
        }
    };
    bench.look.planck = temperatures;
    app.say(words);
    Vec::new()
}

/// Reads a spectrum out of a file to compare with.
pub fn reference_file(app: &mut App, path: &str) -> Vec<Job> {
    ask(app, TraceAsk::File(typed_path(path)))
}

fn next_reference(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    let next = bench.next_reference();
    if next == Some(Reference::Mean) && bench.look.mean.is_none() {
        if !bench.filling.done {
            return still_read(app);
        }
        return ask(app, TraceAsk::Mean);
    }
    refer_to(app, next);
    beside(app)
}

fn refer_to(app: &mut App, reference: Option<Reference>) {
    let Some(bench) = app.bench_mut() else { return };
    bench.look.reference = reference;
    let words = match bench.reference_words() {
        Some(name) => format!("differences to {name}"),
        None => "spectra as they are".to_owned(),
    };
    app.say(words);
}

/// The envelope of what is selected, of all footprints where nothing is; or takes it off.
fn envelope(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    if bench.look.envelope.take().is_some() {
        app.say("no envelope");
        return Vec::new();
    }
    if !bench.filling.done {
        return still_read(app);
    }
    let (footprints, words) = match bench.selecting.is_on() {
        true => {
            let selection = bench.selection();
            (selection.footprints, selection.words)
        }
        false => ((0..bench.footprints()).collect(), "all footprints".to_owned()),
    };
    ask(app, TraceAsk::Envelope(footprints, words))
}

fn bars(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    bench.look.bars = !bench.look.bars;
    let words = match (bench.look.bars, bench.has_noise()) {
        (true, true) => "noise bars: one standard deviation, as the file gives it",
        (true, false) => "the file gives no noise",
        (false, _) => "no noise bars",
    };
    app.say(words);
    beside(app)
}

/// Asks for what stands beside the spectrum under the cursor, where it is shown and not known.
pub fn beside(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench() else { return Vec::new() };
    let known = bench.look.beside.as_ref().is_some_and(|one| one.footprint == bench.cursor);
    let bars = bench.look.bars && bench.has_noise();
    let calculated = bench.look.reference == Some(Reference::Calculated);
    let footprint = bench.cursor;
    let request = app.request();
    let Some(bench) = app.bench_mut() else { return Vec::new() };
    // What was asked for about another footprint would take the place of what is known.
    bench.awaited.beside = 0;
    if known || !(bars || calculated) {
        return Vec::new();
    }
    bench.awaited.beside = request;
    vec![Job::Beside { request, review: Arc::clone(&bench.review), footprint }]
}

fn still_read(app: &mut App) -> Vec<Job> {
    app.say("the spectra are still being read; press the key again in a moment");
    Vec::new()
}

fn ask(app: &mut App, ask: TraceAsk) -> Vec<Job> {
    let request = app.request();
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    bench.awaited.trace = request;
    let cancel = overtake(&mut bench.overtaken.trace);
    vec![Job::Trace { request, review: Arc::clone(&bench.review), ask, cancel }]
}

/// Waits for what was asked for no longer; false where nothing was.
pub fn give_up(app: &mut App) -> bool {
    let Some(bench) = app.bench_mut().filter(|bench| bench.awaited.trace != 0) else {
        return false;
    };
    bench.awaited.trace = 0;
    bench.overtaken.trace.cancel();
    app.say("given up");
    true
}

/// Takes what was asked for.
pub fn take(app: &mut App, request: u64, found: Result<TraceFound, String>) -> Vec<Job> {
    let waits = |bench: &&mut Bench| bench.awaited.trace == request;
    let Some(bench) = app.bench_mut().filter(waits) else { return Vec::new() };
    bench.awaited.trace = 0;
    match found {
        Ok(TraceFound::Mean(mean)) => {
            bench.look.mean = Some(mean);
            refer_to(app, Some(Reference::Mean));
        }
        Ok(TraceFound::File(file)) => {
            bench.look.file = Some(file);
            refer_to(app, Some(Reference::File));
        }
        Ok(TraceFound::Envelope(spectra, words)) => {
            let sampled = match spectra.sampled == spectra.footprints {
                true => String::new(),
                false => format!(", quartiles of {} of them", spectra.sampled),
            };
            let said = format!("lowest, quartiles and highest of {words}{sampled}");
            bench.look.envelope = Some(Envelope { words, spectra });
            app.say(said);
        }
        Err(why) => app.warn(why),
    }
    Vec::new()
}

/// Finds the channels that the layer on show is made from.
pub fn mark_used(bench: &mut Bench) {
    let wavenumber = |channel: crate::granule::Channel| {
        let band = bench.review.granule().bands().get(channel.band)?;
        band.axis.wavenumbers().get(channel.index).copied()
    };
    let channels = bench.review.channels_of_layer(&bench.layer.text);
    bench.look.used = channels.into_iter().filter_map(wavenumber).collect();
}
