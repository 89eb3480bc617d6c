//! What keys do while something lies over the panes.

use crate::flags::{FootprintSet, Scope};

use super::app::App;
use super::command::{self, Command, Known, Side};
use super::deciding;
use super::jobs::Job;
use super::key::{Code, Key};
use super::keys::Action;
use super::line::Edit;
use super::looking;
use super::overlay::{FlagOrder, FlagPrompt, LinePrompt, Overlay, Purpose};
use super::turning;
use super::update::{act, is_yes};

/// Opens what an action asks for.
pub fn open(app: &mut App, action: Action) -> Vec<Job> {
    app.overlay = match action {
        Action::Help => Overlay::Help(0),
        Action::Problems => Overlay::Problems(0),
        Action::Command => Overlay::Line(LinePrompt::new(Purpose::Command, "")),
        Action::AskLayer => Overlay::Line(LinePrompt::new(Purpose::Command, "layer ")),
        Action::AskChannel => Overlay::Line(LinePrompt::new(Purpose::Command, "go ")),
        Action::SetAside => Overlay::Line(LinePrompt::new(Purpose::Aside, "")),
        Action::Comment => match app.bench() {
            Some(bench) => Overlay::Line(LinePrompt::new(Purpose::Comment(bench.selection()), "")),
            None => return looking::no_granule(app),
        },
        _ => return open_side(app),
    };
    Vec::new()
}

/// Asks for one side of a value, beginning with the value under the cursor.
fn open_side(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return looking::no_granule(app) };
    let text = match (bench.side, bench.layer.value(bench.cursor)) {
        (Some(side), _) => format!("{} {}", side.relation.symbol(), side.value),
        (None, Some(value)) => format!("< {value:.2}"),
        (None, None) => "< ".to_owned(),
    };
    bench.anchor = None;
    bench.side = Side::parse(&text).ok();
    app.overlay = Overlay::Line(LinePrompt::new(Purpose::Side, &text));
    Vec::new()
}

/// Takes a key while something lies over the panes.
pub fn press(app: &mut App, key: Key) -> Vec<Job> {
    let escape = key == Key::plain(Code::Esc) || key == Key::control('c');
    match std::mem::take(&mut app.overlay) {
        Overlay::None => Vec::new(),
        Overlay::Help(scroll) => scrolled(app, key, scroll, Overlay::Help),
        Overlay::Problems(scroll) => scrolled(app, key, scroll, Overlay::Problems),
        Overlay::Line(prompt) if escape => give_up_line(app, &prompt),
        Overlay::Line(prompt) => type_key(app, key, prompt),
        Overlay::Flags(_) if escape => Vec::new(),
        Overlay::Flags(prompt) => choose(app, key, prompt),
        Overlay::SignOff => answer_sign_off(app, key),
        Overlay::LeaveAnyway => answer_leave(app, key),
    }
}

/// Puts pasted text into the line being typed.
pub fn paste(app: &mut App, text: &str) -> Vec<Job> {
    if let Overlay::Line(prompt) = &mut app.overlay {
        prompt.line.insert(text);
        prompt.forget_completions();
        changed(app);
    }
    Vec::new()
}

fn scrolled(
    app: &mut App,
    key: Key,
    scroll: usize,
    overlay: impl FnOnce(usize) -> Overlay,
) -> Vec<Job> {
    let page = app.layout.map_or(10, |layout| usize::from(layout.status.y).max(2) - 1);
    let scroll = match key.code {
        Code::Down | Code::Char('j') => scroll + 1,
        Code::Up | Code::Char('k') => scroll.saturating_sub(1),
        Code::PageDown | Code::Char(' ') => scroll + page,
        Code::PageUp => scroll.saturating_sub(page),
        Code::Home => 0,
        // Leaving works from everywhere, with one key.
        Code::Char('q') => return turning::leave(app),
        _ => return Vec::new(),
    };
    app.overlay = overlay(scroll);
    Vec::new()
}

fn give_up_line(app: &mut App, prompt: &LinePrompt) -> Vec<Job> {
    if prompt.purpose == Purpose::Side
        && let Some(bench) = app.bench_mut()
    {
        bench.side = None;
    }
    Vec::new()
}

fn type_key(app: &mut App, key: Key, mut prompt: LinePrompt) -> Vec<Job> {
    let is_command = prompt.purpose == Purpose::Command;
    match key.code {
        Code::Enter => return submit(app, prompt),
        Code::Tab | Code::BackTab if is_command => {
            let known = known(app);
            prompt.complete(key.code == Code::Tab, |text| command::completions(text, &known));
        }
        Code::Up | Code::Down if is_command => {
            let older = key.code == Code::Up;
            let found = if older { app.history.older() } else { app.history.newer() };
            if let Some(text) = found {
                prompt = LinePrompt::new(Purpose::Command, text);
            }
        }
        Code::Up | Code::Down if prompt.purpose == Purpose::Side => {
            nudge(app, &mut prompt, key.code == Code::Up);
        }
        // Deleting in an empty line leaves it.
        Code::Backspace if prompt.line.text().is_empty() => return give_up_line(app, &prompt),
        _ => {
            if prompt.line.press(key) == Edit::Changed {
                prompt.forget_completions();
                prompt.problem.clear();
            }
        }
    }
    app.overlay = Overlay::Line(prompt);
    changed(app);
    Vec::new()
}

/// The side being typed is shown on the map at once.
fn changed(app: &mut App) {
    let Overlay::Line(prompt) = &app.overlay else { return };
    if prompt.purpose != Purpose::Side {
        return;
    }
    let side = Side::parse(prompt.line.text()).ok();
    if let Some(bench) = app.bench_mut() {
        bench.side = side;
    }
}

/// Moves the value of a side by a hundredth of what the colours span.
fn nudge(app: &App, prompt: &mut LinePrompt, up: bool) {
    let Some(bench) = app.bench() else { return };
    let Ok(side) = Side::parse(prompt.line.text()) else { return };
    let step = (bench.layer.scale.high - bench.layer.scale.low) / 100.0;
    let value = side.value + if up { step } else { -step };
    let digits =
        if step > 0.0 { (1.0 - step.log10().floor()).clamp(0.0, 12.0) as usize } else { 2 };
    let text = format!("{} {value:.digits$}", side.relation.symbol());
    *prompt = LinePrompt::new(Purpose::Side, &text);
}

/// What a command's words can be completed from.
fn known(app: &App) -> Known {
    let Some(bench) = app.bench() else { return Known::default() };
    let vocabulary = &app.outside.campaign.settings().vocabulary;
    let kinds = vocabulary.of_scope(Scope::Footprint);
    Known {
        layers: bench.suggested.clone(),
        flags: kinds.iter().map(|kind| kind.name.clone()).collect(),
    }
}

/// Enter: the line is what it is for. A line that makes no sense stays, with the reason.
fn submit(app: &mut App, mut prompt: LinePrompt) -> Vec<Job> {
    let text = prompt.line.text().trim().to_owned();
    match prompt.purpose.clone() {
        Purpose::Command if text.is_empty() => Vec::new(),
        Purpose::Command => match command::parse(&text) {
            Ok(command) => {
                app.history.keep(&text);
                run(app, command)
            }
            Err(problem) => {
                prompt.problem = problem;
                app.overlay = Overlay::Line(prompt);
                Vec::new()
            }
        },
        Purpose::Side => match Side::parse(&text) {
            Ok(side) => select_side(app, side),
            Err(problem) => {
                prompt.problem = problem;
                app.overlay = Overlay::Line(prompt);
                Vec::new()
            }
        },
        Purpose::Reason(order) => deciding::carry_out(app, order, words(&text)),
        Purpose::Aside => deciding::change(app, |record, now| {
            record.set_aside(&text, now).map(|()| "set aside".to_owned())
        }),
        Purpose::Comment(selection) => comment(app, &selection.footprints, &text),
    }
}

fn words(text: &str) -> Option<String> {
    (!text.is_empty()).then(|| text.to_owned())
}

fn comment(app: &mut App, footprints: &FootprintSet, text: &str) -> Vec<Job> {
    deciding::change(app, |record, now| {
        record.comment(footprints, text, now).map(|()| "remark written down".to_owned())
    })
}

/// Selects one side and goes on to the choice of the flag.
fn select_side(app: &mut App, side: Side) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return looking::no_granule(app) };
    if bench.side_selection(side).footprints.is_empty() {
        bench.side = None;
        app.warn("no footprint lies on that side");
        return Vec::new();
    }
    bench.side = Some(side);
    act(app, Action::Flag)
}

/// Carries a command out.
fn run(app: &mut App, command: Command) -> Vec<Job> {
    match command {
        Command::Action(action) => act(app, action),
        Command::Layer(text) => looking::show_layer(app, &text),
        Command::Go(wavenumber) => looking::go_to_channel(app, wavenumber),
        Command::Flag(flag, why) => give(app, true, flag, why),
        Command::Withdraw(flag, why) => give(app, false, flag, why),
        Command::Side(side) => select_side(app, side),
        Command::Range(range) => looking::set_range(app, range),
        Command::Aside(why) => deciding::change(app, |record, now| {
            record.set_aside(&why, now).map(|()| "set aside".to_owned())
        }),
        Command::Comment(text) => match app.bench() {
            Some(bench) => {
                let footprints = bench.selection().footprints;
                comment(app, &footprints, &text)
            }
            None => looking::no_granule(app),
        },
        Command::Export(folder) => deciding::export(app, folder),
    }
}

fn give(app: &mut App, give: bool, flag: String, why: Option<String>) -> Vec<Job> {
    let Some(bench) = app.bench() else { return looking::no_granule(app) };
    let selection = bench.selection();
    deciding::carry_out(app, FlagOrder { give, flag, selection }, why)
}

/// A flag by its letter or by the cursor; Tab asks for a reason after the choice.
fn choose(app: &mut App, key: Key, mut prompt: FlagPrompt) -> Vec<Job> {
    let count = prompt.flags.len().max(1);
    let chosen = match key.code {
        Code::Up => {
            prompt.cursor = (prompt.cursor + count - 1) % count;
            None
        }
        Code::Down => {
            prompt.cursor = (prompt.cursor + 1) % count;
            None
        }
        Code::Tab => {
            prompt.with_reason = !prompt.with_reason;
            None
        }
        Code::Enter => prompt.flags.get(prompt.cursor).cloned(),
        Code::Char(letter) => by_letter(app, &prompt, letter),
        _ => None,
    };
    let Some(flag) = chosen else {
        app.overlay = Overlay::Flags(prompt);
        return Vec::new();
    };
    let order = FlagOrder { give: prompt.give, flag, selection: prompt.selection };
    if prompt.with_reason {
        app.overlay = Overlay::Line(LinePrompt::new(Purpose::Reason(order), ""));
        return Vec::new();
    }
    deciding::carry_out(app, order, None)
}

fn by_letter(app: &mut App, prompt: &FlagPrompt, letter: char) -> Option<String> {
    let vocabulary = &app.outside.campaign.settings().vocabulary;
    let kind = vocabulary.by_key(Scope::Footprint, letter)?;
    prompt.flags.contains(&kind.name).then(|| kind.name.clone())
}

fn answer_sign_off(app: &mut App, key: Key) -> Vec<Job> {
    match key.code {
        _ if is_yes(key) => deciding::sign_off(app, true),
        Code::Char('n' | 'N') => deciding::sign_off(app, false),
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

fn answer_leave(app: &mut App, key: Key) -> Vec<Job> {
    match key.code {
        _ if is_yes(key) => return turning::leave_anyway(app),
        Code::Char('n' | 'N') | Code::Esc => {
            app.leaving = false;
            app.say("stays; the decisions are tried again with the next one");
        }
        Code::Char('r' | 'R') => {
            app.records_mut().for_each(crate::review::Record::retry);
            app.say("trying again to write…");
        }
        _ => app.overlay = Overlay::LeaveAnyway,
    }
    Vec::new()
}
