//! Doubt first: from case to case, and a person's word on what the tests suggest.

use std::sync::Arc;

use crate::flags::{FootprintSet, GranuleState, ReviewState};
use crate::review::{Case, Refusal, Ruled, has_suggestion};
use crate::screening::Screened;

use super::app::{App, Direction};
use super::bench::Bench;
use super::deciding;
use super::jobs::Job;
use super::keys::Action;
use super::looking::no_granule;
use super::moving;
use super::overlay::Selection;
use super::selecting::Join;
use super::turning;

/// The cases of a granule and how far one has come with them.
#[derive(Default)]
pub struct Doubt {
    /// What is left to decide, the most doubtful first.
    pub cases: Vec<Case>,
    /// The worst footprints of the cases that were shown, the latest last.
    shown: Vec<usize>,
    /// The first case is to be shown as soon as the tests have run, as this request asked.
    pub wanted: Option<u64>,
    /// The worst footprint of the case that is shown and selected.
    in_hand: Option<usize>,
    /// It was told that no case is left here: the next time, the next granule is opened.
    end_told: bool,
}

impl Doubt {
    /// The case in hand was let go.
    pub fn let_go(&mut self) {
        self.in_hand = None;
    }

    /// How many footprints are left in doubt.
    pub fn footprints(&self) -> usize {
        self.cases.iter().map(|case| case.footprints.len()).sum()
    }
}

impl Bench {
    /// Finds the cases anew: the tests have run, or something was decided.
    pub fn find_cases(&mut self) {
        let Some(screened) = &self.tests.screened else {
            self.doubt.cases.clear();
            return;
        };
        let review = self.record.open().map_or(&[][..], |record| &record.state().review);
        let settled = |at: usize| review.get(at) == Some(&ReviewState::DecidedByPerson);
        // The first index of a first look is a window's temperature, where the granule has one.
        let window = self.indices.first().filter(|index| index.unit == "K");
        let window = window.and_then(|index| index.values.as_deref().ok()).unwrap_or_default();
        self.doubt.cases = self.review.cases(screened, settled, window);
    }
}

/// Does what a key of doubt says.
pub fn doubt(app: &mut App, action: Action) -> Vec<Job> {
    match action {
        Action::NextCase => next_case(app),
        Action::PreviousCase => previous_case(app),
        Action::Accept => accept(app),
        _ => overrule(app),
    }
}

/// The tests have run: the case that was asked for before is shown, unless keys went on with
/// something else.
pub fn tests_have_run(app: &mut App) -> Vec<Job> {
    match app.bench_mut().and_then(|bench| bench.doubt.wanted.take()) {
        Some(request) if app.is_latest(request) => next_case(app),
        Some(_) => {
            let next = app.keymap.hint(Action::NextCase);
            app.say(format!("the tests have run; {next} shows the first case"));
            Vec::new()
        }
        None => Vec::new(),
    }
}

/// Waits for the first case no longer; false where it is not waited for.
pub fn give_up(app: &mut App) -> bool {
    let given_up = app.bench_mut().is_some_and(|bench| bench.doubt.wanted.take().is_some());
    if given_up {
        app.say("no case is waited for");
    }
    given_up
}

/// Selects the most doubtful case that was not shown yet; behind the last one, a second time goes
/// on to the next granule with doubt.
fn next_case(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    if bench.tests.screened.is_none() {
        return not_yet(app);
    }
    let signed = bench.record.open().map(|record| record.state().granule);
    let doubt = &mut bench.doubt;
    doubt.end_told |= signed == Some(GranuleState::SignedOff);
    match doubt.cases.iter().position(|case| !doubt.shown.contains(&case.worst)) {
        _ if doubt.end_told => next_granule(app),
        Some(number) => show_case(app, number),
        None => {
            doubt.end_told = true;
            tell_end(app);
            Vec::new()
        }
    }
}

fn not_yet(app: &mut App) -> Vec<Job> {
    let request = app.request();
    let Some(bench) = app.bench_mut() else { return Vec::new() };
    let running = bench.awaited.screen != 0 || !bench.filling.done;
    bench.doubt.wanted = running.then_some(request);
    let run = app.keymap.hint(Action::RunTests);
    match running {
        true => app.say("the first case is shown as soon as the tests have run"),
        false => app.warn(format!("no tests have run here; {run} runs them")),
    }
    Vec::new()
}

/// Selects the case before the one that was shown last, if it is still there.
fn previous_case(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    let doubt = &mut bench.doubt;
    doubt.end_told = false;
    // The last one shown is the one in hand.
    doubt.shown.pop();
    while let Some(worst) = doubt.shown.pop() {
        if let Some(number) = doubt.cases.iter().position(|case| case.worst == worst) {
            return show_case(app, number);
        }
    }
    app.say("no case was shown before");
    Vec::new()
}

/// Footprints were decided: where the case in hand was among them, it makes room for the next one,
/// whichever key decided it.
pub fn go_on(app: &mut App, decided: &FootprintSet) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return Vec::new() };
    let Some(worst) = bench.doubt.in_hand.filter(|worst| decided.contains(*worst)) else {
        return Vec::new();
    };
    if bench.doubt.cases.iter().any(|case| case.footprints.contains(worst)) {
        return Vec::new();
    }
    bench.doubt.in_hand = None;
    let (said, tone) = app.message.clone();
    let jobs = next_case(app);
    // What was decided stands behind what is to be decided next.
    if !said.is_empty() {
        app.message = (format!("{}. Before: {said}", app.message.0), tone);
    }
    jobs
}

/// After an undo on the way through the cases, the case that is open again by it is shown.
pub fn go_back(app: &mut App, undone: &FootprintSet) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return Vec::new() };
    let doubt = &mut bench.doubt;
    if doubt.in_hand.is_none() && !doubt.end_told {
        return Vec::new();
    }
    // The latest that was shown.
    let Some(before) = doubt.shown.iter().rposition(|worst| undone.contains(*worst)) else {
        return Vec::new();
    };
    let worst = doubt.shown[before];
    let Some(number) = doubt.cases.iter().position(|case| case.worst == worst) else {
        return Vec::new();
    };
    doubt.shown.truncate(before);
    let (said, tone) = app.message.clone();
    let jobs = show_case(app, number);
    app.message = (format!("{}. {said}", app.message.0), tone);
    jobs
}

fn show_case(app: &mut App, number: usize) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return Vec::new() };
    let Some(case) = bench.doubt.cases.get(number).cloned() else { return Vec::new() };
    bench.doubt.shown.push(case.worst);
    bench.doubt.in_hand = Some(case.worst);
    bench.doubt.end_told = false;
    let count = case.footprints.len();
    let suggested = bench.tests.screened.as_ref().map(|screened| suggested(screened, &case));
    let words = format!("case of {count}");
    bench.selecting.take(Join::Anew, Selection::of(case.footprints, words));
    let jobs = moving::go(app, case.worst);
    // Which keys answer stands in the hints, how many are left beside it.
    let (doubt, suggested) = (case.doubt, suggested.unwrap_or_default());
    app.say(format!("{count} in doubt to {doubt:.2}: {suggested}"));
    jobs
}

/// What the tests suggest for a case: "cloudy 12, no flag 3".
fn suggested(screened: &Screened, case: &Case) -> String {
    let count =
        |holds: &dyn Fn(usize) -> bool| case.footprints.iter().filter(|at| holds(*at)).count();
    let mut parts: Vec<(String, usize)> = screened
        .flags
        .iter()
        .map(|flag| (flag.flag.clone(), count(&|at| flag.is_set(at))))
        .collect();
    parts.push(("no flag".to_owned(), count(&|at| !has_suggestion(screened, at))));
    parts.retain(|(_, count)| *count > 0);
    match &parts[..] {
        [(name, _)] => name.clone(),
        parts => counted(parts),
    }
}

fn counted(parts: &[(String, usize)]) -> String {
    parts.iter().map(|(name, count)| format!("{name} {count}")).collect::<Vec<_>>().join(", ")
}

/// Says that every case was shown, and what is to be done next.
fn tell_end(app: &mut App) {
    let (next, previous, sign) = (
        app.keymap.hint(Action::NextCase),
        app.keymap.hint(Action::PreviousCase),
        app.keymap.hint(Action::SignOff),
    );
    let Some(bench) = app.bench() else { return };
    let here = match bench.doubt.cases.len() {
        0 => format!("nothing is left in doubt: {sign} signs off"),
        left => format!("{left} cases left as they are: {previous} goes back, {sign} signs off"),
    };
    let onward = app.tray.next_in_doubt(bench.entry).and_then(|entry| app.tray.entry(entry));
    let onward = onward.map(|entry| format!(", {next} goes on to {}", entry.name));
    app.say(here + &onward.unwrap_or_default());
}

fn next_granule(app: &mut App) -> Vec<Job> {
    let Some(entry) = app.bench().and_then(|bench| app.tray.next_in_doubt(bench.entry)) else {
        // Round again through what was left.
        if let Some(bench) = app.bench_mut() {
            bench.doubt.shown.clear();
            bench.doubt.end_told = false;
        }
        app.say("no other granule is in doubt");
        return Vec::new();
    };
    let jobs = turning::open(app, entry, Direction::ForwardUnsigned);
    app.seek_case = Some(app.request());
    jobs
}

/// Accepts what the tests suggest for what is selected.
fn accept(app: &mut App) -> Vec<Job> {
    rule(
        app,
        |record, screened, footprints, now| record.accept(screened, footprints, now),
        "accepted",
    )
}

/// Overrules it; where no flag is suggested, the list asks which one it is instead.
fn overrule(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench() else { return no_granule(app) };
    let footprints = bench.selection().footprints;
    let none = bench.tests.screened.as_ref().is_some_and(|screened| {
        let inside = footprints.clipped(screened.footprints());
        !inside.iter().any(|at| has_suggestion(screened, at))
    });
    if none && bench.record.open().is_some() {
        let jobs = deciding::decide(app, Action::Flag);
        app.say("no flag is suggested here: which one is it?");
        return jobs;
    }
    rule(
        app,
        |record, screened, footprints, now| record.overrule(screened, footprints, now),
        "overruled",
    )
}

fn rule(
    app: &mut App,
    verb: impl FnOnce(
        &mut crate::review::Record,
        &Screened,
        &FootprintSet,
        jiff::Timestamp,
    ) -> Result<Ruled, Refusal>,
    what: &str,
) -> Vec<Job> {
    let Some(bench) = app.bench() else { return no_granule(app) };
    let Some(screened) = bench.tests.screened.clone() else { return not_yet(app) };
    let selection = bench.selection();
    // What the tests suggest is known for the granule on the table alone.
    let words = match selection.elsewhere.is_empty() {
        true => selection.words,
        false => format!("{} in this granule, none in others,", selection.footprints.len()),
    };
    let footprints = selection.footprints;
    let screened: Arc<Screened> = screened;
    let decided = deciding::decided(app, |record, now| {
        let ruled = verb(record, &screened, &footprints, now)?;
        Ok(format!("{words} {what}: {}", outcome(&ruled)))
    });
    if !decided {
        return Vec::new();
    }
    if let Some(bench) = app.bench_mut() {
        bench.selecting.clear();
    }
    go_on(app, &footprints)
}

fn outcome(ruled: &Ruled) -> String {
    let mut parts = Vec::new();
    if !ruled.given.is_empty() {
        parts.push(counted(&ruled.given));
    }
    if !ruled.withdrawn.is_empty() {
        parts.push(format!("not {}", counted(&ruled.withdrawn)));
    }
    if parts.is_empty() {
        parts.push(format!("no flag {}", ruled.footprints));
    }
    if ruled.left > 0 {
        parts.push(format!("{} left as they were", ruled.left));
    }
    parts.join("; ")
}
