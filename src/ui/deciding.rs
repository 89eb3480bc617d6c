//! Decisions from keys: flags, withdrawals, undo and redo, signing off.

use jiff::Timestamp;

use crate::flags::{Act, Decision, FootprintSet, Ruling, Scope};
use crate::review::{Record, Refusal, step_name};

use super::across::{self, Errand};
use super::app::App;
use super::bench::RecordState;
use super::doubting;
use super::jobs::Job;
use super::keys::Action;
use super::looking::no_granule;
use super::overlay::{Deed, FlagPrompt, Overlay, Selection};
use super::signing;
use super::undoing;

/// Does what a key of deciding says.
pub fn decide(app: &mut App, action: Action) -> Vec<Job> {
    match action {
        Action::Flag => choose_flag(app, true),
        Action::Withdraw => choose_flag(app, false),
        Action::Again => again(app),
        Action::Assess => assess(app),
        Action::SignOff => signing::ask(app),
        Action::Undo | Action::Redo => undoing::undo_or_redo(app, action),
        _ => change(app, |record, now| record.reopen(now).map(|()| "taken in hand again".into())),
    }
}

/// Lets a verb change the record, says what came of it, and keeps the Tray in step.
pub fn change(
    app: &mut App,
    verb: impl FnOnce(&mut Record, Timestamp) -> Result<String, Refusal>,
) -> Vec<Job> {
    decided(app, verb);
    Vec::new()
}

/// The same; true where something was decided.
pub fn decided(
    app: &mut App,
    verb: impl FnOnce(&mut Record, Timestamp) -> Result<String, Refusal>,
) -> bool {
    let now = app.now();
    let look_only = app.outside.look_only.clone();
    let Some(bench) = app.bench_mut() else {
        no_granule(app);
        return false;
    };
    let outcome = match &mut bench.record {
        RecordState::Open(_) if look_only.is_some() => {
            Err(format!("looking only: {}", look_only.unwrap_or_default()))
        }
        RecordState::Open(record) => verb(record, now).map_err(|refusal| refusal.to_string()),
        RecordState::Reading => {
            bench.asked_early = true;
            Err("one moment: the ledgers are still being read".to_owned())
        }
        RecordState::Failed(why) => Err(format!("nothing can be decided: {why}")),
    };
    let done = outcome.is_ok();
    match outcome {
        Ok(words) => {
            bench.find_cases();
            app.say(words);
        }
        Err(words) => app.warn(words),
    }
    update_tray(app);
    done
}

/// Says why nothing can be decided yet, or at all.
pub fn not_ready(app: &mut App) -> Vec<Job> {
    change(app, |_, _| Ok(String::new()))
}

/// Takes the state of the granule on the table over into the Tray.
pub fn update_tray(app: &mut App) {
    let Some(bench) = app.bench() else { return };
    let Some(record) = bench.record.open() else { return };
    let (entry, standing) = (bench.entry, bench.standing(record));
    app.tray.set_standing(entry, standing);
}

/// Opens the list of flags for the selection: all flags to give, those that are there to withdraw.
fn choose_flag(app: &mut App, give: bool) -> Vec<Job> {
    let Some(bench) = app.bench() else { return no_granule(app) };
    let Some(record) = bench.record.open() else { return not_ready(app) };
    let selection = bench.selection();
    let there = selection
        .footprints
        .iter()
        .fold(0, |flags, footprint| flags | record.state().any_flags(footprint));
    // What footprints of granules that are not on the table carry is known to their ledgers.
    let unknown = !selection.elsewhere.is_empty();
    let kinds = record.vocabulary().of_scope(Scope::Footprint);
    let flags: Vec<String> = kinds
        .iter()
        .filter(|kind| give || unknown || there & kind.mask() != 0)
        .map(|kind| kind.name.clone())
        .collect();
    if flags.is_empty() {
        app.warn(format!("{}: no flag to withdraw", selection.words));
        return Vec::new();
    }
    let last = match &app.last_deed {
        Some(Deed::Flag { flag, .. }) => flags.iter().position(|one| one == flag),
        _ => None,
    };
    let cursor = last.unwrap_or(0);
    app.overlay = Overlay::Flags(FlagPrompt {
        give,
        selection,
        flags,
        cursor,
        with_reason: false,
        channels: None,
    });
    Vec::new()
}

/// Does the latest decision once more, with its reason, to what is selected now.
fn again(app: &mut App) -> Vec<Job> {
    let Some(deed) = app.last_deed.clone() else { return choose_flag(app, true) };
    let Some(bench) = app.bench() else { return no_granule(app) };
    if let Deed::FlagChannels { give, flag, why, .. } = deed {
        let (channels, words) = bench.picked_channels();
        let selection = Selection::of(FootprintSet::empty(), words);
        return carry_out(app, Deed::FlagChannels { give, flag, channels, why }, selection);
    }
    let selection = bench.selection();
    carry_out(app, deed, selection)
}

/// Does something to a selection; it is let go then, and a key repeats the deed.
pub fn carry_out(app: &mut App, deed: Deed, selection: Selection) -> Vec<Job> {
    let Selection { footprints, words, elsewhere } = selection;
    let several = !elsewhere.is_empty();
    let decided_here = footprints.clone();
    if several && across::is_writing(app) {
        return Vec::new();
    }
    let now = app.now();
    let step = several.then(|| step_name(&app.outside.author, now));
    let (again, part) = (deed.clone(), step.clone());
    let done = decided(app, move |record, _| {
        if several && footprints.is_empty() {
            return Ok(words);
        }
        match record.as_part_of(part, |record| apply(record, deed, &footprints, &words, now)) {
            // In others it may stand.
            Err(Refusal::NotFlagged(_)) if several => Ok(words),
            outcome => outcome,
        }
    });
    if !done {
        return Vec::new();
    }
    app.last_deed = Some(again.clone());
    let mut jobs = Vec::new();
    if let Some(bench) = app.bench_mut() {
        // What the deed was not about stays to be decided.
        match again {
            Deed::FlagChannels { .. } => {
                bench.drop_channel_pick();
            }
            _ => {
                bench.selecting.clear();
                jobs = doubting::go_on(app, &decided_here);
            }
        }
    }
    let Some(step) = step else { return jobs };
    let entries: Vec<usize> = elsewhere.keys().copied().collect();
    jobs.extend(across::begin(
        app,
        Errand::Decide { deed: again, at: elsewhere, step, now },
        &entries,
    ));
    jobs
}

/// Does something to footprints, which `words` name, or to channels; in words.
///
/// # Errors
/// Those of the verb.
pub fn apply(
    record: &mut Record,
    deed: Deed,
    footprints: &FootprintSet,
    words: &str,
    now: Timestamp,
) -> Result<String, Refusal> {
    match deed {
        Deed::Flag { give: true, flag, why } => {
            record.flag(&flag, footprints, why, now).map(|()| format!("{words}: {flag}"))
        }
        Deed::Flag { flag, why, .. } => {
            let count = record.withdraw(&flag, footprints, why, now)?;
            Ok(format!("{words}: {flag} withdrawn from {count}"))
        }
        Deed::FlagChannels { give: true, flag, channels, why } => {
            record.flag_channels(&flag, &channels, why, now).map(|()| format!("{words}: {flag}"))
        }
        Deed::FlagChannels { flag, channels, why, .. } => {
            let count = record.withdraw_channels(&flag, &channels, why, now)?;
            Ok(format!("{words}: {flag} withdrawn from {count}"))
        }
        Deed::Assess => {
            record.assess(footprints, None, now).map(|()| format!("{words}: looked at"))
        }
        Deed::Comment(text) => {
            record.comment(footprints, &text, now).map(|()| format!("{words}: remark written down"))
        }
    }
}

fn assess(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench() else { return no_granule(app) };
    let selection = bench.selection();
    carry_out(app, Deed::Assess, selection)
}

/// A decision in a few words.
pub fn words(decision: &Decision) -> String {
    let count = decision.act.footprints().map_or(0, FootprintSet::len);
    let what = match &decision.act {
        Act::Flag { flag, .. } => format!("{flag} at {count}"),
        Act::Withdraw { flag, .. } => format!("{flag} withdrawn at {count}"),
        Act::FlagChannels { flag, channels } => format!("{flag} at {} channels", channels.len()),
        Act::WithdrawChannels { flag, channels } => {
            format!("{flag} withdrawn at {} channels", channels.len())
        }
        Act::Assess { .. } => format!("looked at {count}"),
        Act::Judge { ruling: Ruling::Accepted, .. } => format!("suggestion accepted at {count}"),
        Act::Judge { ruling: Ruling::Overruled, .. } => format!("suggestion overruled at {count}"),
        Act::SpotCheck(check) => format!("spot check: {}", check.words()),
        Act::Revoke { .. } => "undo".to_owned(),
        Act::SignOff { .. } => "sign-off".to_owned(),
        Act::SetAside => "set aside".to_owned(),
        Act::Reopen => "taken in hand again".to_owned(),
        Act::Comment { .. } => "remark".to_owned(),
        Act::Unknown { kind } => format!("{kind}, which this version does not know"),
    };
    match &decision.why {
        Some(why) => format!("{what} ({})", crate::system::clean_text(why)),
        None => what,
    }
}
