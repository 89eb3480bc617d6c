//! The spot check: footprints one after the other, without the tests' verdict, judged by a person.

use crate::flags::ReviewState;
use crate::review::{Judgement, SpotSample, draw_sample};

use super::app::App;
use super::bench::Bench;
use super::deciding;
use super::jobs::Job;
use super::key::{Code, Key};
use super::keys::{self, Action, Group};
use super::looking::{self, no_granule};
use super::moving;
use super::overlay::Selection;
use super::selecting::Join;
use super::spreading::Source;

/// Footprints drawn with flag and without, unless another number is asked for. With none wrong among
/// so many, at most one in six is with 95 % confidence.
pub const USUAL: usize = 20;

/// A spot check under way.
pub struct Spot {
    sample: SpotSample,
    judged: Vec<Judgement>,
}

impl Bench {
    /// Whether what the tests and others said is hidden, because a person judges without it.
    pub fn is_blind(&self) -> bool {
        self.spot.is_some()
    }
}

/// Draws the sample and shows its first footprint.
pub fn begin(app: &mut App, each: usize) -> Vec<Job> {
    // The clock is as good a source as any, and what was drawn is recorded with its seed.
    let seed = app.now().as_nanosecond() as u64;
    let vocabulary = app.outside.campaign.settings().vocabulary.clone();
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    let Some(record) = bench.record.open() else { return deciding::not_ready(app) };
    let Some(screened) = &bench.tests.screened else {
        app.warn("a spot check asks what the tests call plain, and none have run");
        return Vec::new();
    };
    let review = &record.state().review;
    let settled = |at: usize| review.get(at) == Some(&ReviewState::DecidedByPerson);
    let sample = draw_sample(screened, &vocabulary, settled, each, seed);
    if sample.is_empty() {
        app.warn("the tests call nothing plain that no person has decided");
        return Vec::new();
    }
    bench.spot = Some(Spot { sample, judged: Vec::new() });
    bench.selecting.clear();
    // What is on the Spread may show what the tests say.
    bench.forget_spread();
    bench.spread.source = Source::Layer;
    bench.spread.against = None;
    bench.awaited.against = 0;
    bench.awaited.alike = 0;
    let mut jobs = looking::hide_judgements(app);
    jobs.extend(show(app));
    jobs
}

/// Takes a key while a spot check is under way; `None` for keys that only look.
pub fn press(app: &mut App, key: Key) -> Option<Vec<Job>> {
    app.bench().filter(|bench| bench.is_blind())?;
    if key.control || key.alt {
        return refused(app, key);
    }
    let said = match key.code {
        Code::Char('y') => Judgement::Fit,
        Code::Char('n') => Judgement::Unfit,
        Code::Char('u') => Judgement::Untold,
        Code::Backspace => return Some(back(app)),
        Code::Esc => return Some(leave(app)),
        _ => return refused(app, key),
    };
    Some(judge(app, said))
}

/// Whatever would decide something, show a verdict or leave the granule waits.
fn refused(app: &mut App, key: Key) -> Option<Vec<Job>> {
    let action = app.keymap.action_of(key)?;
    let waits = matches!(
        keys::group_of(action),
        Some(Group::Deciding | Group::Selecting | Group::Thresholds)
    ) || matches!(
        action,
        Action::NextGranule | Action::PreviousGranule | Action::NextUnsigned | Action::Open
    ) || matches!(action, Action::Signs | Action::OtherLayer | Action::Command)
        || matches!(action, Action::NextLayer | Action::PreviousLayer | Action::AskLayer)
        || matches!(action, Action::AskChannel | Action::AskAgainst)
        || matches!(action, Action::FlagChannels | Action::WithdrawChannels);
    if !waits {
        return None;
    }
    tell(app);
    Some(Vec::new())
}

fn judge(app: &mut App, said: Judgement) -> Vec<Job> {
    let asked = app.bench().and_then(|bench| {
        let spot = bench.spot.as_ref()?;
        Some(spot.sample.footprint(spot.judged.len())? == bench.cursor)
    });
    if asked == Some(false) {
        // A look around led elsewhere: back first, for what is judged is what is shown.
        return show(app);
    }
    let Some(spot) = app.bench_mut().and_then(|bench| bench.spot.as_mut()) else {
        return Vec::new();
    };
    spot.judged.push(said);
    if spot.judged.len() < spot.sample.len() { show(app) } else { finish(app) }
}

fn back(app: &mut App) -> Vec<Job> {
    if let Some(spot) = app.bench_mut().and_then(|bench| bench.spot.as_mut()) {
        spot.judged.pop();
    }
    show(app)
}

fn leave(app: &mut App) -> Vec<Job> {
    if let Some(bench) = app.bench_mut() {
        bench.spot = None;
    }
    app.say("the spot check was left; nothing of it is kept");
    Vec::new()
}

/// Puts the cursor on the footprint that is to be judged.
fn show(app: &mut App) -> Vec<Job> {
    let spot = app.bench().and_then(|bench| bench.spot.as_ref());
    let footprint = spot.and_then(|spot| spot.sample.footprint(spot.judged.len()));
    let jobs = footprint.map_or_else(Vec::new, |footprint| moving::go(app, footprint));
    tell(app);
    jobs
}

fn tell(app: &mut App) {
    let Some(spot) = app.bench().and_then(|bench| bench.spot.as_ref()) else { return };
    let (here, all) = (spot.judged.len() + 1, spot.sample.len());
    app.say(format!(
        "spot check {here} of {all}: fit for the retrieval? y yes, n no, u can't tell, Esc leaves it"
    ));
}

/// Writes down what came of it; what was judged wrong is selected, to be decided next.
fn finish(app: &mut App) -> Vec<Job> {
    let Some(spot) = app.bench_mut().and_then(|bench| bench.spot.take()) else {
        return Vec::new();
    };
    let check = spot.sample.judged(&spot.judged);
    let (words, wrong) = (check.words(), check.wrong());
    let kept = deciding::decided(app, |record, now| {
        record.spot_check(check, now);
        Ok(format!("spot check: {words}"))
    });
    if kept
        && !wrong.is_empty()
        && let Some(bench) = app.bench_mut()
    {
        let words = format!("{} judged wrong", wrong.len());
        bench.selecting.take(Join::Anew, Selection::of(wrong, words));
    }
    Vec::new()
}
