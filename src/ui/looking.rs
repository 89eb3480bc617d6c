//! What is on show: layers, colours, spectra, zoom, pins.

use std::sync::Arc;

use crate::review::Review;

use super::app::App;
use super::bench::{Bench, MOST_PINS, overtake};
use super::jobs::Job;
use super::keys::Action;
use super::shown_layer::{RangeChoice, ShownLayer};
use super::tracing;

/// How many times the Field can be zoomed in; each time shows half the width and height.
pub const MOST_FIELD_ZOOM: u8 = 5;
/// Channels of a far step.
const FAR: usize = 20;

/// Steps through layers, takes the channel in hand as a layer, changes the colours' range.
pub fn layer(app: &mut App, action: Action) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    let text = match action {
        Action::NextLayer => neighbour(bench, true),
        Action::PreviousLayer => neighbour(bench, false),
        Action::ChannelLayer => bench.channel_wavenumber().map(channel_layer),
        _ => {
            let range = bench.layer.range.next();
            bench.layer.set_range(range);
            app.say(range.words());
            return Vec::new();
        }
    };
    match text {
        Some(text) => show_layer(app, &text),
        None => Vec::new(),
    }
}

/// The suggested layer after the one asked for, or before it; the first where it is none of them.
fn neighbour(bench: &Bench, forward: bool) -> Option<String> {
    let count = bench.suggested.len();
    let here = bench.suggested.iter().position(|text| *text == bench.wanted);
    let next = match here {
        Some(here) => (here + if forward { 1 } else { count - 1 }) % count,
        None => 0,
    };
    bench.suggested.get(next).cloned()
}

/// The brightness temperature of a channel as an expression. Four decimals tell any two channels
/// of a sounder apart, and the nearest channel is taken.
fn channel_layer(wavenumber: f64) -> String {
    let digits = format!("{wavenumber:.4}");
    format!("bt({})", digits.trim_end_matches('0').trim_end_matches('.'))
}

/// Asks for a layer. What is on show stays until the new one is there.
pub fn show_layer(app: &mut App, text: &str) -> Vec<Job> {
    match app.bench_mut() {
        Some(bench) => bench.wanted = text.trim().to_owned(),
        None => return no_granule(app),
    }
    refresh_layer(app)
}

/// Takes a layer that tells what the tests said off the Field, for a layer that does not.
pub fn hide_judgements(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return Vec::new() };
    bench.other_layer = None;
    if !Review::asks_tests(&bench.wanted) && !Review::asks_tests(&bench.layer.text) {
        return Vec::new();
    }
    let plain = bench.suggested.iter().find(|text| !Review::asks_tests(text)).cloned();
    bench.wanted = plain.unwrap_or_default();
    bench.layer = ShownLayer::waiting(&bench.wanted);
    refresh_layer(app)
}

/// Evaluates the layer asked for, with what is there of the spectra.
pub fn refresh_layer(app: &mut App) -> Vec<Job> {
    let request = app.request();
    let Some(bench) = app.bench_mut() else { return Vec::new() };
    bench.awaited.layer = request;
    let (review, text) = (Arc::clone(&bench.review), bench.wanted.clone());
    vec![Job::Layer { request, review, text, cancel: overtake(&mut bench.overtaken.layer) }]
}

/// Evaluates the indices of the Evidence, with what is there of the spectra.
pub fn refresh_indices(app: &mut App) -> Vec<Job> {
    let request = app.request();
    let Some(bench) = app.bench_mut() else { return Vec::new() };
    bench.awaited.indices = request;
    let texts = bench.indices.iter().map(|index| index.text.clone()).collect();
    let cancel = overtake(&mut bench.overtaken.indices);
    vec![Job::Indices { request, review: Arc::clone(&bench.review), texts, cancel }]
}

/// Sets the colours' range.
pub fn set_range(app: &mut App, range: Option<(f64, f64)>) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    let range = match range {
        Some((low, high)) => RangeChoice::Fixed(low, high),
        None => RangeChoice::Percentile(1),
    };
    bench.layer.set_range(range);
    app.say(range.words());
    Vec::new()
}

/// Flicks between the layer on show and the one before it.
pub fn other_layer(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    let Some(other) = bench.other_layer.take() else {
        app.say("no other layer was on show yet");
        return Vec::new();
    };
    bench.layer_leaves();
    bench.wanted.clone_from(&other.text);
    bench.other_layer = Some(std::mem::replace(&mut bench.layer, other));
    // It may have been evaluated before all spectra were there.
    refresh_layer(app)
}

/// Lays the Field out by latitude and longitude, or in the instrument's order again.
pub fn geographic(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    let wanted = !bench.geographic;
    let placed = bench.place_geographically(wanted);
    if placed {
        bench.selecting.drop_map_shape();
    }
    let words = match (placed, wanted) {
        (false, _) => "the file gives no latitudes and longitudes to go by",
        (true, true) => "by latitude and longitude, north is up",
        (true, false) => "in the order of the instrument",
    };
    app.say(words);
    Vec::new()
}

/// Changes what the signs over the Field tell, or whether marks are there.
pub fn signs(app: &mut App, action: Action) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    let words = match action {
        Action::Signs => {
            bench.signs = bench.signs.next();
            bench.signs.words()
        }
        _ => {
            bench.marks = !bench.marks;
            if bench.marks { "cursor, box and pins are marked" } else { "no marks on the Field" }
        }
    };
    app.say(words);
    Vec::new()
}

/// Zooms the map.
pub fn field(app: &mut App, action: Action) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    bench.field_zoom = match action {
        Action::FieldIn => (bench.field_zoom + 1).min(MOST_FIELD_ZOOM),
        _ => bench.field_zoom.saturating_sub(1),
    };
    Vec::new()
}

/// Steps through channels, zooms and pans the spectrum.
pub fn trace(app: &mut App, action: Action) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    let channel = bench.channel;
    let centre = bench.channel_wavenumber().unwrap_or_default();
    match action {
        Action::ChannelUp => bench.take_channel(channel + 1),
        Action::ChannelDown => bench.take_channel(channel.saturating_sub(1)),
        Action::ChannelFarUp => bench.take_channel(channel + FAR),
        Action::ChannelFarDown => bench.take_channel(channel.saturating_sub(FAR)),
        Action::ZoomIn => bench.window.zoom_in(centre),
        Action::ZoomOut => bench.window.zoom_out(centre),
        Action::PanLeft => bench.window.pan(false),
        Action::PanRight => bench.window.pan(true),
        _ => bench.window.show_whole(),
    }
    Vec::new()
}

/// Takes the channel nearest to a wavenumber (cm-1) in hand.
pub fn go_to_channel(app: &mut App, wavenumber: f64) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    let number = bench.channels.nearest(wavenumber);
    bench.take_channel(number);
    let Some(taken) = bench.channel_wavenumber() else { return Vec::new() };
    // A layer would refuse such a place: the channel in hand is not what was asked for.
    match bench.review.granule().channel_near(wavenumber) {
        Ok(_) => app.say(format!("channel at {taken:.2} cm-1")),
        Err(_) => app.warn(format!(
            "no channel at {wavenumber:.2} cm-1; in hand is the nearest, at {taken:.2}"
        )),
    }
    Vec::new()
}

/// Pins the footprint under the cursor, or takes pins off.
pub fn pins(app: &mut App, action: Action) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    if action == Action::Unpin {
        bench.pins.clear();
        bench.drop_lost_reference();
        return Vec::new();
    }
    let pinned = bench.pin(bench.cursor);
    bench.drop_lost_reference();
    if !pinned {
        let key = app.keymap.hint(Action::Unpin);
        app.warn(format!("{MOST_PINS} are pinned already; {key} takes all pins off"));
    }
    fill_pins(app)
}

/// Finds the spectra of pinned footprints that have none yet: in memory, or by a job where they will
/// never be there.
pub fn fill_pins(app: &mut App) -> Vec<Job> {
    let request = app.request();
    let Some(bench) = app.bench_mut() else { return Vec::new() };
    let review = &bench.review;
    for pin in bench.pins.iter_mut().filter(|pin| pin.spectrum.is_none()) {
        pin.spectrum = review.spectrum_in_memory(pin.footprint);
    }
    let without = bench.pins.iter().filter(|pin| pin.spectrum.is_none());
    let footprints: Vec<usize> = without.map(|pin| pin.footprint).collect();
    if footprints.is_empty() || !review.cube().is_full() {
        return Vec::new();
    }
    bench.awaited.pins = request;
    vec![Job::Pinned { request, review: Arc::clone(review), footprints }]
}

/// Finds the spectrum under the cursor: in memory, or by a job that reads it before all others.
pub fn spectrum(app: &mut App) -> Vec<Job> {
    let request = app.request();
    let Some(bench) = app.bench_mut() else { return Vec::new() };
    // An answer for another footprint is of no use any more.
    bench.awaited.spectrum = 0;
    bench.spectrum_problem = None;
    bench.spectrum = bench.review.spectrum_in_memory(bench.cursor);
    let mut jobs = Vec::new();
    if bench.spectrum.is_none() {
        bench.awaited.spectrum = request;
        let review = Arc::clone(&bench.review);
        jobs.push(Job::Spectrum { request, review, footprint: bench.cursor });
    }
    jobs.extend(tracing::beside(app));
    jobs
}

/// Says that there is nothing to do it with.
pub fn no_granule(app: &mut App) -> Vec<Job> {
    app.say("no granule is on the table yet");
    Vec::new()
}

#[cfg(test)]
mod tests {
    #[test]
    fn a_channel_becomes_a_short_expression() {
        for (wavenumber, text) in
            [(900.0, "bt(900)"), (900.3125, "bt(900.3125)"), (831.330_04, "bt(831.33)")]
        {
            assert_eq!(super::channel_layer(wavenumber), text);
        }
    }
}
