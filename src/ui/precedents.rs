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

/// Going round the precedents of a footprint.
#[derive(Debug, Clone)]
pub struct Visit {
    from: usize,
    round: Vec<usize>,
    at: usize,
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
    let known = std::mem::take(&mut app.known);
    let next = app.bench_mut().map(|bench| next_stop(bench, &known));
    app.known = known;
    match next {
        None => super::looking::no_granule(app),
        Some(None) => {
            app.say("no footprint that a person decided was compared with this one");
            Vec::new()
        }
        Some(Some(Stop::Back(footprint))) => {
            let jobs = moving::go(app, footprint);
            app.say("back again");
            jobs
        }
        Some(Some(Stop::At(precedent))) => go_to(app, &precedent),
    }
}

enum Stop {
    At(Precedent),
    Back(usize),
}

fn next_stop(bench: &mut Bench, known: &Known) -> Option<Stop> {
    let cursor = bench.cursor;
    let under_way = bench.visit.take().filter(|visit| visit.round.last() == Some(&cursor));
    let mut visit = under_way.unwrap_or(Visit { from: cursor, round: Vec::new(), at: 0 });
    let precedents = bench.precedents(visit.from, known);
    let Some(next) = precedents.get(visit.at) else {
        return (visit.at > 0).then_some(Stop::Back(visit.from));
    };
    visit.at += 1;
    visit.round.push(next.footprint);
    bench.visit = Some(visit);
    Some(Stop::At(next.clone()))
}

fn go_to(app: &mut App, precedent: &Precedent) -> Vec<Job> {
    let words = app.bench().map(|bench| words(bench, precedent, app)).unwrap_or_default();
    let Some(entry) = precedent.entry else {
        let jobs = moving::go(app, precedent.footprint);
        app.say(words);
        return jobs;
    };
    let jobs = turning::open(app, entry, Direction::Forward);
    app.seek_footprint = Some((precedent.footprint, words));
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
