//! Signing off: what there is to answer for, and for whom the rest counts as looked at.

use std::collections::BTreeSet;

use crate::flags::{Counts, GranuleState, ReviewState};
use crate::review::{Record, has_suggestion};

use super::app::App;
use super::bench::Bench;
use super::deciding;
use super::jobs::Job;
use super::key::{Code, Key};
use super::keys::Action;
use super::looking::no_granule;
use super::overlay::Overlay;

/// What becomes of the footprints that nobody has assessed.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Rest {
    /// The person looked at them: those without a flag may be used.
    LookedAt,
    /// The tests' word stands for them; what they could not assess stays not assessed.
    Tested,
    /// They stay not assessed.
    Open,
}

/// Shows what would be signed off and asks.
pub fn ask(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench() else { return no_granule(app) };
    match bench.record.open() {
        Some(record) if record.state().granule == GranuleState::SignedOff => {
            // Refused, with the reason.
            sign_off(app, Rest::Open)
        }
        Some(_) => {
            app.overlay = Overlay::SignOff;
            Vec::new()
        }
        None => deciding::not_ready(app),
    }
}

/// Takes the answer.
pub fn answer(app: &mut App, key: Key) -> Vec<Job> {
    let Some((bench, record)) = on_table(app) else { return Vec::new() };
    let open = !record.state().rest(record.vocabulary()).is_empty();
    let tested = left_to_tests(bench, record).0 > 0;
    match key.code {
        Code::Char('y' | 'Y') => sign_off(app, if open { Rest::LookedAt } else { Rest::Open }),
        Code::Char('t' | 'T') if tested => sign_off(app, Rest::Tested),
        Code::Char('n' | 'N') if open => sign_off(app, Rest::Open),
        Code::Enter if !open => sign_off(app, Rest::Open),
        Code::Esc => {
            app.say("not signed off");
            Vec::new()
        }
        _ => {
            app.overlay = Overlay::SignOff;
            Vec::new()
        }
    }
}

fn sign_off(app: &mut App, rest: Rest) -> Vec<Job> {
    let next = app.keymap.hint(Action::NextUnsigned);
    let screened = app.bench().and_then(|bench| bench.tests.screened.clone());
    let jobs = deciding::change(app, move |record, now| {
        if let (Rest::Tested, Some(screened)) = (rest, &screened) {
            record.tests_decide(screened, now)?;
        }
        record.sign_off(rest == Rest::LookedAt, now)?;
        Ok(format!("signed off; {next}: next granule"))
    });
    if let Some(bench) = app.bench_mut() {
        bench.compare_tests();
    }
    jobs
}

fn on_table(app: &App) -> Option<(&Bench, &Record)> {
    let bench = app.bench()?;
    Some((bench, bench.record.open()?))
}

/// How many footprints that nobody has assessed the tests could answer for, and how many of those
/// they would flag.
fn left_to_tests(bench: &Bench, record: &Record) -> (usize, usize) {
    let Some(screened) = &bench.tests.screened else { return (0, 0) };
    let review = &record.state().review;
    let open = |at: &usize| review.get(*at) == Some(&ReviewState::NotAssessed);
    let tested = (0..screened.footprints()).filter(open).filter(|at| screened.assessed[*at]);
    tested.fold((0, 0), |(tested, suggested), at| {
        (tested + 1, suggested + usize::from(has_suggestion(screened, at)))
    })
}

/// What there is to answer for, a line each, and what may be answered.
pub fn summary(app: &App) -> Vec<String> {
    let Some((bench, record)) = on_table(app) else { return Vec::new() };
    let counts = record.counts();
    let mut lines = vec![
        format!(
            "{} footprints: {} flagged, {} no flag, {} not assessed",
            counts.footprints, counts.flagged, counts.no_flag, counts.not_assessed
        ),
        flags(counts),
        by_whom(record),
    ];
    if bench.tests.screened.is_some() {
        let (cases, all) = (bench.doubt.cases.len(), bench.doubt.footprints());
        lines.push(format!("left in doubt: {all}, in {cases} cases"));
    }
    lines.extend(record.spot_checks().map(|check| format!("spot check: {}", check.words())));
    lines.push(String::new());
    lines.extend(answers(bench, record));
    lines
}

fn flags(counts: &Counts) -> String {
    let flags = counts.per_flag.iter().map(|(flag, count)| format!("{flag} {count}"));
    match flags.collect::<Vec<_>>().join(", ") {
        none if none.is_empty() => "no flags".to_owned(),
        flags => format!("flags: {flags}"),
    }
}

/// Who has decided, and for how many footprints persons and tests answer.
fn by_whom(record: &Record) -> String {
    let counts = record.counts();
    let standing = record.decisions().iter().zip(record.standing());
    let persons = standing.filter(|(decision, stands)| **stands && decision.by_person());
    let names: BTreeSet<String> = persons.map(|(decision, _)| decision.speaker()).collect();
    let names: Vec<String> = names.into_iter().collect();
    let names = if names.is_empty() { String::new() } else { format!(" ({})", names.join(", ")) };
    format!("decided by persons {}{names}, by tests alone {}", counts.by_person, counts.by_test)
}

fn answers(bench: &Bench, record: &Record) -> Vec<String> {
    let open = record.state().rest(record.vocabulary()).len();
    if open == 0 {
        return vec!["Enter, y: sign off".to_owned(), "Esc: do not sign off".to_owned()];
    }
    let mut lines = Vec::new();
    let (tested, suggested) = left_to_tests(bench, record);
    if tested > 0 {
        let rest = open.saturating_sub(tested);
        let rest = if rest > 0 { format!("; {rest} stay not assessed") } else { String::new() };
        lines.push(format!("t: the tests answer for {tested} of them{rest}"));
    }
    // Whoever says so overrules the tests, and should know it.
    let also = match suggested {
        0 => String::new(),
        count => format!(", also the {count} that the tests would flag"),
    };
    lines.push(format!("y: the {open} were looked at and may be used{also}"));
    lines.push(format!("n: the {open} stay not assessed, and are not used"));
    lines.push("Esc: do not sign off".to_owned());
    lines
}
