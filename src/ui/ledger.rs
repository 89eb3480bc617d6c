//! Going through what was decided, and taking any of it back.

use jiff::Timestamp;

use crate::flags::{Act, Decision, RulebookChange};
use crate::review::ThresholdChange;

use super::app::App;
use super::deciding::{self, words};
use super::jobs::Job;
use super::keys::Action;
use super::looking::no_granule;

/// How one goes through the Ledger.
#[derive(Debug, Clone, Copy, Default)]
pub struct LedgerLook {
    /// All decisions about the granule, instead of those about the footprint under the cursor.
    pub whole: bool,
    /// The row in hand, 0 for the newest.
    pub cursor: usize,
}

/// Rows that a page moves.
const PAGE: usize = 10;

/// A row of the Ledger.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Row {
    /// A decision about the granule, by its place in the record.
    Decision(usize),
    /// A change of the campaign's rulebook, by its place among them.
    Change(usize),
}

/// The rows on show, the newest first: decisions, and among them the changes of the rulebook.
pub fn rows_on_show(app: &App) -> Vec<Row> {
    let Some(bench) = app.bench().filter(|bench| !bench.is_blind()) else { return Vec::new() };
    let Some(record) = bench.record.open() else { return Vec::new() };
    let about = |decision: &Decision| {
        // What was undone is about what the undo takes back.
        let meant = record.meant_by(decision).unwrap_or(decision);
        app.ledger.whole
            || matches!(meant.act, Act::SetAside | Act::Reopen | Act::SignOff { .. })
            || meant.act.footprints().is_some_and(|set| set.contains(bench.cursor))
    };
    let decisions = record.decisions().iter().enumerate().filter(|(_, decision)| about(decision));
    let decisions = decisions.map(|(place, decision)| (decision.at, Row::Decision(place)));
    let changes = app.rulebook_changes.iter().enumerate();
    let changes = changes.map(|(place, change)| (change.at, Row::Change(place)));
    let mut rows: Vec<(Timestamp, Row)> = decisions.chain(changes).collect();
    // Of one moment, the order in which they stand is kept.
    rows.sort_by_key(|(at, _)| *at);
    rows.into_iter().rev().map(|(_, row)| row).collect()
}

/// Takes what was changed in the rulebook, by whoever works on the campaign.
pub fn take_changes(app: &mut App, changes: Vec<RulebookChange>, problems: Vec<String>) {
    if app.rulebook_changes == changes {
        return;
    }
    app.changed = true;
    app.rulebook_changes = changes;
    if let Some(problem) = problems.first() {
        app.warn(problem.clone());
    }
}

/// Moves the row in hand; false for keys that mean nothing here. Left and right move the footprint.
pub fn step(app: &mut App, action: Action) -> bool {
    let last = rows_on_show(app).len().saturating_sub(1);
    let here = app.ledger.cursor.min(last);
    app.ledger.cursor = match action {
        Action::Up => here.saturating_sub(1),
        Action::Down => here + 1,
        Action::PageUp => here.saturating_sub(PAGE),
        Action::PageDown => here + PAGE,
        Action::First => 0,
        Action::Last => last,
        _ => return false,
    }
    .min(last);
    true
}

/// Shows the decisions about the whole granule, or those about the footprint again.
pub fn switch(app: &mut App) -> Vec<Job> {
    app.ledger = LedgerLook { whole: !app.ledger.whole, cursor: 0 };
    app.say(match app.ledger.whole {
        true => "all decisions about the granule",
        false => "the decisions about the footprint under the cursor",
    });
    Vec::new()
}

/// Takes the decision in hand back, whoever made it; one that was taken back is put back.
pub fn take_back(app: &mut App) -> Vec<Job> {
    let rows = rows_on_show(app);
    let Some(bench) = app.bench() else { return no_granule(app) };
    let Some(record) = bench.record.open() else { return deciding::not_ready(app) };
    let cursor = app.ledger.cursor.min(rows.len().saturating_sub(1));
    if let Some(Row::Change(place)) = rows.get(cursor) {
        return take_change_back(app, *place);
    }
    let row = rows.get(cursor).and_then(|row| match row {
        Row::Decision(place) => record.decisions().get(*place),
        Row::Change(_) => None,
    });
    let Some(decision) = row else {
        app.warn("no decision is here to be taken back");
        return Vec::new();
    };
    let id = decision.id.clone();
    let jobs = deciding::change(app, |record, now| {
        let (taken, decision) = record.turn(&id, now)?;
        let verb = if taken { "taken back" } else { "put back" };
        let what = match (&decision.act, record.meant_by(&decision)) {
            (Act::Revoke { .. }, Some(meant)) => format!("what was done to {}", words(meant)),
            _ => words(&decision),
        };
        Ok(format!("{verb}: {what} by {}", decision.speaker()))
    });
    // The newest stands first: the cursor stays on the decision that it was on.
    let added = rows_on_show(app).len().saturating_sub(rows.len());
    app.ledger.cursor = cursor + added;
    jobs
}

/// Puts a threshold back to what it was; that is a change of the rulebook like any other.
fn take_change_back(app: &mut App, place: usize) -> Vec<Job> {
    if let Some(why) = &app.outside.look_only {
        let words = format!("looking only: {why}");
        app.warn(words);
        return Vec::new();
    }
    let (request, now) = (app.request(), app.now());
    let Some(change) = app.rulebook_changes.get(place) else { return Vec::new() };
    let why = Some(format!("takes back the change by {}", change.person));
    let change = ThresholdChange::taking_back(change, why, now);
    app.owed.begin(request, "the rulebook".to_owned());
    vec![Job::Adopt { request, change }]
}
