//! Footprints that a person has decided and whose spectra are like that under the cursor.

use std::sync::Arc;

use crate::flags::{ReviewState, Scope};
use crate::review::{Measure, Measured};

use super::app::{App, Direction};
use super::bench::{Bench, overtake};
use super::jobs::Job;
use super::moving;
use super::spreading::Known;
use super::turning;

/// So many are shown; what is further away tells little.
const MOST: usize = 4;

/// A footprint that a person has decided.
#[derive(Debug, Clone, PartialEq)]
pub struct Precedent {
    /// Its granule, if that is not on the table, by its entry in the Tray.
    pub entry: Option<usize>,
    /// Which.
    pub footprint: usize,
    /// Its zero-based indices along its dimensions: `(12, 34, 5)`.
    pub position: String,
    /// The flags that it carries.
    pub flags: u32,
    /// How far its spectrum is from that under the cursor, in the unit of the measure.
    pub far: f64,
}

/// Going round the precedents of a footprint, through whatever granules they lie in. They are those of
/// its beginning: what they are measured by belongs to the granule where it began.
#[derive(Debug)]
pub struct Visit {
    from: Stop,
    stops: Vec<Stop>,
    /// How many of them were gone to.
    gone: usize,
}

#[derive(Debug, Clone)]
struct Stop {
    /// The granule by its entry in the Tray.
    entry: usize,
    footprint: usize,
    /// What is said there.
    words: String,
}

impl Visit {
    /// Whether one stands where it led to.
    fn is_at(&self, entry: usize, footprint: usize) -> bool {
        let last = self.gone.checked_sub(1).and_then(|last| self.stops.get(last));
        last.is_some_and(|stop| (stop.entry, stop.footprint) == (entry, footprint))
    }
}

impl Bench {
    /// The most alike ones, the most alike first; of equals those of this granule, then the earlier
    /// ones. The footprint under the cursor is none of them.
    pub fn precedents(&self, cursor: usize, known: &Known) -> Vec<Precedent> {
        let (Some(measured), Some(record)) = (&self.measured, self.record.open()) else {
            return Vec::new();
        };
        let (yardstick, here) = (measured.yardstick(), measured.of(cursor));
        let state = record.state();
        let by_person = |at: &usize| state.review[*at] == ReviewState::DecidedByPerson;
        let own = (0..state.review.len()).filter(by_person).filter(|at| *at != cursor);
        let own = own.map(|footprint| Precedent {
            entry: None,
            footprint,
            position: String::new(),
            flags: state.any_flags(footprint),
            far: yardstick.far(here, measured.of(footprint)),
        });
        let others = known.by(yardstick).filter(|(entry, _)| *entry != self.entry);
        let others = others.flat_map(|(entry, decided)| {
            decided.iter().map(move |one| Precedent {
                entry: Some(entry),
                footprint: one.footprint,
                position: one.position.clone(),
                flags: one.flags,
                far: yardstick.far(here, &one.spectrum),
            })
        });
        let mut all: Vec<Precedent> = own.chain(others).filter(|one| one.far.is_finite()).collect();
        all.sort_by(|one, next| one.far.total_cmp(&next.far));
        all.truncate(MOST);
        for one in all.iter_mut().filter(|one| one.entry.is_none()) {
            one.position = self.position_words(one.footprint);
        }
        all
    }
}

/// The spectra of the granule on the table are measured, so that those like the one under the cursor
/// are known; not of a granule that would have to be read once more for it.
pub fn measure(app: &mut App) -> Vec<Job> {
    let request = app.request();
    let Some(bench) = app.bench_mut() else { return Vec::new() };
    if bench.measured.is_some() || bench.review.cube().is_full() {
        return Vec::new();
    }
    bench.awaited.measured = request;
    let cancel = overtake(&mut bench.overtaken.measured);
    let review = Arc::clone(&bench.review);
    vec![Job::Measure { request, review, measure: Measure::default(), cancel }]
}

/// Takes the spectra as they were measured.
pub fn measured(app: &mut App, request: u64, found: Result<Arc<Measured>, String>) {
    let Some(bench) = app.bench_mut().filter(|bench| bench.awaited.measured == request) else {
        return;
    };
    bench.awaited.measured = 0;
    // What was compared by request meanwhile stays.
    if bench.measured.is_none() {
        bench.measured = found.ok();
    }
}

/// Goes to the most alike footprint that a person decided, then to the next, and at last back.
pub fn visit(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench() else { return super::looking::no_granule(app) };
    let (entry, cursor) = (bench.entry, bench.cursor);
    let under_way = app.visit.take().filter(|visit| visit.is_at(entry, cursor));
    let Some(mut visit) = under_way.or_else(|| begin(app)) else { return Vec::new() };
    let Some(stop) = visit.stops.get(visit.gone).cloned() else {
        if visit.gone > 0 {
            return go_to(app, &visit.from);
        }
        app.say("no footprint that a person decided was compared with this one");
        return Vec::new();
    };
    visit.gone += 1;
    let jobs = go_to(app, &stop);
    app.visit = Some(visit);
    jobs
}

/// A round from the footprint under the cursor.
fn begin(app: &App) -> Option<Visit> {
    let bench = app.bench()?;
    let stop = |precedent: &Precedent| Stop {
        entry: precedent.entry.unwrap_or(bench.entry),
        footprint: precedent.footprint,
        words: words(bench, precedent, app),
    };
    let stops = bench.precedents(bench.cursor, &app.known).iter().map(stop).collect();
    let from = Stop { entry: bench.entry, footprint: bench.cursor, words: "back again".to_owned() };
    Some(Visit { from, stops, gone: 0 })
}

fn go_to(app: &mut App, stop: &Stop) -> Vec<Job> {
    if app.current_entry() == Some(stop.entry) {
        let jobs = moving::go(app, stop.footprint);
        app.say(stop.words.clone());
        return jobs;
    }
    let jobs = turning::open(app, stop.entry, Direction::Forward);
    app.seek_footprint = Some((stop.footprint, stop.words.clone()));
    jobs
}

/// Where it is, what it carries, and how far away it is.
fn words(bench: &Bench, precedent: &Precedent, app: &App) -> String {
    let (place, flags) = (place(precedent, app), flags(precedent, app));
    let unit = bench.measured.as_ref().map_or("", |one| one.yardstick().measure().unit());
    format!("{place}: {flags}, {:.3} {unit} away", precedent.far)
}

/// Where it is: "(3, 2)", or "lowen_002.nc (3, 2)" in another granule.
pub fn place(precedent: &Precedent, app: &App) -> String {
    match precedent.entry.and_then(|entry| app.tray.entry(entry)) {
        Some(entry) => format!("{} {}", entry.name, precedent.position),
        None => precedent.position.clone(),
    }
}

/// The flags that it carries, in words.
pub fn flags(precedent: &Precedent, app: &App) -> String {
    let vocabulary = &app.outside.campaign.settings().vocabulary;
    match vocabulary.names(Scope::Footprint, precedent.flags) {
        none if none.is_empty() => "no flag".to_owned(),
        names => names.join(", "),
    }
}
