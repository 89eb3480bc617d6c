//! The status line and the line of hints.

use crate::ui::app::App;
use crate::ui::bench::{Bench, RecordState};
use crate::ui::colour::Tone;
use crate::ui::keys::Action;
use crate::ui::overlay::{LinePrompt, Overlay, Purpose};
use crate::ui::panes::Pane;
use crate::ui::selecting::Join;

/// Short facts at the right of the status line, the most important first.
pub fn status_facts(app: &App) -> Vec<(String, Tone)> {
    let mut facts = Vec::new();
    if app.outside.look_only.is_some() {
        facts.push(("looking only".to_owned(), Tone::Warning));
    }
    match (app.pending(), app.write_failure()) {
        (0, _) => {}
        (pending, Some(_)) => facts.push((format!("{pending} NOT WRITTEN"), Tone::Bad)),
        (pending, None) => facts.push((format!("{pending} pending"), Tone::Warning)),
    }
    if let Some(across) = &app.across {
        facts.push((format!("{}, Esc ends it", across.words()), Tone::Faint));
    }
    if !app.owed.is_empty() {
        facts.push((app.owed.words(), Tone::Faint));
    }
    let Some(bench) = app.bench() else { return facts };
    facts.extend(cases_left(bench));
    if bench.selecting.is_on() {
        facts.push((selected(bench), Tone::Accent));
    }
    if bench.awaited.screen != 0 {
        let percent = (100.0 * bench.tests.cancel.share()).floor();
        facts.push((format!("tests {percent:.0} %, Esc ends them"), Tone::Faint));
    }
    if let RecordState::Open(record) = &bench.record {
        if app.pending() == 0 && record.decisions().iter().any(|one| one.by_person()) {
            facts.push(("kept".to_owned(), Tone::Good));
        }
        let counts = record.counts();
        facts.push((format!("{} flagged", counts.flagged), Tone::Plain));
        facts.push((format!("{} no flag", counts.no_flag), Tone::Plain));
        facts.push((format!("{} not assessed", counts.not_assessed), Tone::Plain));
        facts.push((record.state().granule.name().to_owned(), Tone::Plain));
    }
    if let Some(fact) = filling(bench) {
        facts.push(fact);
    }
    facts
}

/// How many cases are left to decide: always in view, once the tests have run.
fn cases_left(bench: &Bench) -> Option<(String, Tone)> {
    bench.tests.screened.as_ref().zip(bench.record.open())?;
    if bench.is_blind() {
        return None;
    }
    Some(match bench.doubt.cases.len() {
        0 => ("no case left".to_owned(), Tone::Good),
        1 => ("1 case left".to_owned(), Tone::Strong),
        cases => (format!("{cases} cases left"), Tone::Strong),
    })
}

/// How many footprints the next decision is about, and how what is being drawn changes that.
fn selected(bench: &Bench) -> String {
    let count = bench.selection().count();
    match (bench.selecting.kept(), bench.shape_selection()) {
        (Some(kept), Some(shape)) => {
            let (kept, shape) = (kept.count(), shape.count());
            match bench.selecting.join {
                Join::Anew => format!("{count} selected"),
                join => format!("{kept} {} {shape}: {count} selected", join.sign()),
            }
        }
        _ => format!("{count} selected"),
    }
}

fn filling(bench: &Bench) -> Option<(String, Tone)> {
    if bench.filling.problem.is_some() {
        return Some(("spectra incomplete".to_owned(), Tone::Bad));
    }
    let percent = (bench.filling.share * 100.0).floor();
    (!bench.filling.done).then(|| (format!("reading {percent:.0} %"), Tone::Faint))
}

/// Keys worth knowing at this moment: (key, what it does).
pub fn hints(app: &App) -> Vec<(String, &'static str)> {
    let selecting = app.bench().is_some_and(|bench| bench.selecting.is_on());
    let trying = app.focus() == Pane::Spread
        && app.bench().is_some_and(|bench| bench.selecting.kept().is_none());
    let actions: &[(Action, &'static str)] = if trying {
        &[
            (Action::Left, "and Right: threshold"),
            (Action::Valley, "valley"),
            (Action::TurnSide, "side"),
            (Action::NextTest, "test"),
            (Action::Adopt, "adopt"),
            (Action::Box, "brush"),
            (Action::Flag, "flag"),
            (Action::Cancel, "let go"),
        ]
    } else if selecting {
        &[
            (Action::Accept, "accept"),
            (Action::Overrule, "overrule"),
            (Action::Flag, "flag"),
            (Action::Withdraw, "withdraw"),
            (Action::Assess, "looked at"),
            (Action::Again, "again"),
            (Action::Comment, "remark"),
            (Action::Box, "box"),
            (Action::Polygon, "polygon"),
            (Action::Join, "add, minus"),
            (Action::Invert, "invert"),
            (Action::Cancel, "let go"),
        ]
    } else if app.focus() == Pane::Ledger {
        &[
            (Action::Withdraw, "take back or put back"),
            (Action::Open, "granule or footprint"),
            (Action::Down, "down"),
            (Action::Up, "up"),
            (Action::NextPane, "pane"),
            (Action::Help, "help"),
        ]
    } else if app.focus() == Pane::Evidence {
        &[
            (Action::Open, "most alike"),
            (Action::PageDown, "scroll"),
            (Action::NextPane, "pane"),
            (Action::NextCase, "doubt"),
            (Action::Flag, "flag"),
            (Action::Help, "help"),
            (Action::Quit, "leave"),
        ]
    } else if app.focus() == Pane::Tray {
        &[
            (Action::Open, "open"),
            (Action::Down, "down"),
            (Action::Up, "up"),
            (Action::NextPane, "pane"),
            (Action::Help, "help"),
            (Action::Quit, "leave"),
        ]
    } else {
        &[
            (Action::Help, "help"),
            (Action::NextPane, "or 1-7 pane"),
            (Action::NextCase, "doubt"),
            (Action::Command, "command"),
            (Action::Flag, "flag"),
            (Action::Box, "box"),
            (Action::Side, "side"),
            (Action::Undo, "undo"),
            (Action::NextLayer, "layer"),
            (Action::SignOff, "sign off"),
            (Action::NextGranule, "next"),
            (Action::Quit, "leave"),
        ]
    };
    actions.iter().map(|(action, does)| (app.keymap.hint(*action), *does)).collect()
}

/// While one side of a value is being typed: how many footprints lie there.
pub fn side_preview(app: &App) -> Option<String> {
    let Overlay::Line(LinePrompt { purpose: Purpose::Side, .. }) = &app.overlay else {
        return None;
    };
    let bench = app.bench()?;
    Some(match bench.side() {
        Some(side) => {
            let count = bench.side_selection(side).footprints.len();
            let all = bench.footprints();
            format!("{count} of {all} footprints; Up Down change it, Tab turns it, Enter goes on")
        }
        None => "type < or > and a value".to_owned(),
    })
}
