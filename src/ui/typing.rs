//! A line being typed: editing, completion, and what Enter does with it.

use crate::flags::Scope;

use super::app::App;
use super::channel_flags;
use super::command::{self, Command};
use super::completion::{Known, completions};
use super::deciding;
use super::exporting;
use super::jobs::Job;
use super::key::{Code, Key};
use super::keys::Action;
use super::line::{Edit, Line};
use super::looking;
use super::overlay::{Deed, LinePrompt, Overlay, Purpose};
use super::picking;
use super::side::Side;
use super::spreading;
use super::tracing;
use super::update::act;
use super::widgets::short;

/// Asks for one side of a value, beginning with the value under the cursor.
pub fn open_side(app: &mut App) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return looking::no_granule(app) };
    let text = match (bench.side(), bench.layer.value(bench.cursor)) {
        (Some(side), _) => format!("{} {}", side.relation.symbol(), side.value),
        // Of small values two decimals would be nothing.
        (None, Some(value)) if value == 0.0 || value.abs() >= 1.0 => format!("< {value:.2}"),
        (None, Some(value)) => format!("< {}", short(value)),
        (None, None) => "< ".to_owned(),
    };
    bench.set_side(Side::parse(&text).ok());
    app.overlay = Overlay::Line(LinePrompt::offering(Purpose::Side, &text));
    Vec::new()
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

/// Leaves the line without doing anything.
pub fn give_up(app: &mut App, prompt: &LinePrompt) -> Vec<Job> {
    if prompt.purpose == Purpose::Side
        && let Some(bench) = app.bench_mut()
    {
        bench.set_side(None);
    }
    Vec::new()
}

/// Takes a key into the line being typed.
pub fn press(app: &mut App, key: Key, mut prompt: LinePrompt) -> Vec<Job> {
    let is_command = prompt.purpose == Purpose::Command;
    match key.code {
        Code::Enter => return submit(app, prompt),
        Code::Tab | Code::BackTab if is_command => {
            let known = known(app);
            prompt.complete(key.code == Code::Tab, |text| completions(text, &known));
        }
        Code::Up | Code::Down if is_command => {
            let older = key.code == Code::Up;
            let found = if older { app.history.older() } else { app.history.newer() };
            if let Some(text) = found {
                prompt = LinePrompt::new(Purpose::Command, text);
            }
        }
        Code::Tab if prompt.purpose == Purpose::Side => {
            if let Ok(side) = Side::parse(prompt.line.text()) {
                let text = format!("{} {}", side.relation.opposite().symbol(), side.value);
                prompt = LinePrompt::offering(Purpose::Side, &text);
            }
        }
        Code::Up | Code::Down if prompt.purpose == Purpose::Side => {
            nudge(app, &mut prompt, key.code == Code::Up);
        }
        // Deleting in an empty line leaves it.
        Code::Backspace if prompt.line.text().is_empty() => return give_up(app, &prompt),
        _ => {
            if prompt.purpose == Purpose::Side {
                make_way(&mut prompt, key);
            }
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
        bench.set_side(side);
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
    *prompt = LinePrompt::offering(Purpose::Side, &text);
}

/// What a typed letter takes the place of: a relation stands only in front, so a second one begins
/// anew, and a number replaces the one that was offered.
fn make_way(prompt: &mut LinePrompt, key: Key) {
    let offered = std::mem::take(&mut prompt.offered);
    match key.code {
        _ if key.control || key.alt => {}
        Code::Char('<' | '>') => prompt.line = Line::new(""),
        Code::Char('0'..='9' | '.' | '-' | '+') if offered => {
            let text = prompt.line.text();
            let relation = text.trim_start_matches(['<', '>', '=']).len();
            let relation = text.get(..text.len() - relation).unwrap_or_default();
            prompt.line = Line::new(&format!("{relation} "));
        }
        _ => {}
    }
}

/// What a command's words can be completed from.
fn known(app: &App) -> Known {
    let Some(bench) = app.bench() else { return Known::default() };
    let vocabulary = &app.outside.campaign.settings().vocabulary;
    let kinds = vocabulary.of_scope(Scope::Footprint);
    let tests = bench.tests.screened.iter().flat_map(|screened| &screened.rulebook.tests);
    let margins = tests.map(|test| format!("margin(\"{}\")", test.name));
    Known {
        layers: bench.suggested.iter().cloned().chain(margins).collect(),
        flags: kinds.iter().map(|kind| kind.name.clone()).collect(),
        tests: bench.tests.screened.as_ref().map_or_else(Vec::new, |screened| {
            screened.rulebook.tests.iter().map(|test| test.name.clone()).collect()
        }),
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
        Purpose::Aside | Purpose::Comment(_) if text.is_empty() => {
            app.warn("type some words, or Esc to leave it");
            app.overlay = Overlay::Line(prompt);
            Vec::new()
        }
        Purpose::Reason { give, flag, selection, channels } => {
            deciding::carry_out(app, Deed::flag(give, flag, channels, words(&text)), selection)
        }
        Purpose::Adopt => spreading::adopt(app, words(&text)),
        Purpose::Aside => deciding::change(app, |record, now| {
            record.set_aside(&text, now).map(|()| "set aside".to_owned())
        }),
        Purpose::Comment(selection) => deciding::carry_out(app, Deed::Comment(text), selection),
    }
}

fn words(text: &str) -> Option<String> {
    (!text.is_empty()).then(|| text.to_owned())
}

/// Selects one side and goes on to the choice of the flag.
fn select_side(app: &mut App, side: Side) -> Vec<Job> {
    let Some(bench) = app.bench_mut() else { return looking::no_granule(app) };
    if bench.side_selection(side).footprints.is_empty() {
        bench.set_side(None);
        app.warn("no footprint lies on that side");
        return Vec::new();
    }
    bench.set_side(Some(side));
    act(app, Action::Flag)
}

/// Carries a command out.
fn run(app: &mut App, command: Command) -> Vec<Job> {
    match command {
        Command::Action(action) => act(app, action),
        Command::Layer(text) => looking::show_layer(app, &text),
        Command::Go(wavenumber) => looking::go_to_channel(app, wavenumber),
        Command::Flag(flag, why) => to_selection(app, Deed::Flag { give: true, flag, why }),
        Command::Withdraw(flag, why) => to_selection(app, Deed::Flag { give: false, flag, why }),
        Command::Side(side) => select_side(app, side),
        Command::Planck(kelvins) => tracing::planck(app, kelvins),
        Command::Reference(path) => tracing::reference_file(app, &path),
        Command::Against(text) => spreading::against(app, &text),
        Command::Alike(measure) => spreading::ask(app, measure),
        Command::Noisy(factor) => channel_flags::over_noise(app, factor),
        Command::Try(name) => spreading::take_test(app, &name),
        Command::Select(join, wanted) => picking::select(app, join, wanted),
        Command::Range(range) => looking::set_range(app, range),
        Command::Aside(why) => deciding::change(app, |record, now| {
            record.set_aside(&why, now).map(|()| "set aside".to_owned())
        }),
        Command::Comment(text) => to_selection(app, Deed::Comment(text)),
        Command::Spot(count) => super::spot::begin(app, count),
        Command::Export(folder) => exporting::export(app, folder),
    }
}

fn to_selection(app: &mut App, deed: Deed) -> Vec<Job> {
    let Some(bench) = app.bench() else { return looking::no_granule(app) };
    let selection = bench.selection();
    deciding::carry_out(app, deed, selection)
}
