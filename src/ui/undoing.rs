//! Undo and redo, in the order of time of the person's decisions, across the granules of the Tray.

use jiff::Timestamp;

use crate::flags::{FootprintSet, OwnTimes};

use super::across::{self, Errand};
use super::app::{App, Direction};
use super::deciding::{self, words};
use super::doubting;
use super::jobs::Job;
use super::keys::Action;
use super::moving;
use super::turning;

/// Takes back the person's latest decision, or the latest undo. Where that was about another
/// granule, it is opened first, so that one sees what is taken back.
pub fn undo_or_redo(app: &mut App, action: Action) -> Vec<Job> {
    if across::is_writing(app) {
        return Vec::new();
    }
    let Some(bench) = app.bench() else { return super::looking::no_granule(app) };
    let (here, entry) = (bench.record.open().map(|record| record.own_times()), bench.entry);
    let Some(here) = here else { return deciding::not_ready(app) };
    match elsewhere(app, &here, entry, action) {
        Elsewhere::Later(entry) => {
            let jobs = turning::open(app, entry, Direction::Forward);
            app.then = Some(action);
            jobs
        }
        Elsewhere::Ended => {
            app.warn("nothing to redo: something else was decided since");
            Vec::new()
        }
        Elsewhere::Nothing => in_this_granule(app, action),
    }
}

/// What other granules have to say.
enum Elsewhere {
    /// The latest was about this one.
    Later(usize),
    /// What was decided about another one ended the redo here.
    Ended,
    /// Nothing that concerns this granule.
    Nothing,
}

fn elsewhere(app: &App, here: &OwnTimes, entry: usize, action: Action) -> Elsewhere {
    let moment: fn(&OwnTimes) -> Option<Timestamp> =
        if action == Action::Undo { |own| own.undo } else { |own| own.redo };
    let other = app.tray.latest(entry, moment);
    let latest = other.filter(|(_, at)| moment(here).is_none_or(|here| here < *at));
    if action == Action::Redo {
        let redone = latest.map(|(_, at)| at).or(here.redo);
        let decided = app.tray.latest(entry, |own| own.decided).map(|(_, at)| at);
        if redone.is_some() && decided.max(here.decided) > redone {
            return Elsewhere::Ended;
        }
    }
    latest.map_or(Elsewhere::Nothing, |(entry, _)| Elsewhere::Later(entry))
}

/// Undoes or redoes here, and in all other granules that the same step decided about.
fn in_this_granule(app: &mut App, action: Action) -> Vec<Job> {
    let (back, now, mut step) = (action == Action::Undo, app.now(), None);
    let mut about = FootprintSet::empty();
    let done = deciding::decided(app, |record, _| {
        let decision = if back { record.undo(now)? } else { record.redo(now)? };
        step.clone_from(&decision.step);
        about = decision.act.footprints().cloned().unwrap_or_default();
        let verb = if back { "undone" } else { "redone" };
        Ok(format!("{verb}: {}", words(&decision)))
    });
    let mut jobs = if done && back { doubting::go_back(app, &about) } else { Vec::new() };
    let Some(step) = step.filter(|_| done) else { return jobs };
    let part = |entry: &usize| {
        let standing = app.tray.entry(*entry).and_then(|row| row.standing.as_ref());
        standing.is_some_and(|standing| standing.steps.contains(&step))
    };
    let entries: Vec<usize> = across::others(app).into_iter().filter(part).collect();
    jobs.extend(across::begin(app, Errand::Turn { step, back, now }, &entries));
    jobs
}

/// The granule that an undo or a redo was about is open: it is done, with the cursor at the place.
pub fn done_elsewhere(app: &mut App) -> Vec<Job> {
    let Some(action) = app.then.take() else { return Vec::new() };
    let mut jobs = in_this_granule(app, action);
    let Some(bench) = app.bench() else { return jobs };
    let name = bench.review.granule().name();
    let place = bench.record.open().and_then(|record| {
        // The last decision is the undo or the redo itself; it names what it is about.
        let target = record.meant_by(record.decisions().last()?)?;
        target.act.footprints()?.iter().next()
    });
    app.message.0 = format!("{name}: {}", app.message.0);
    if let Some(footprint) = place {
        jobs.extend(moving::go(app, footprint));
    }
    jobs
}
