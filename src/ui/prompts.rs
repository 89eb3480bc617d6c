//! What keys do while something lies over the panes.

use crate::flags::Scope;

use super::app::App;
use super::by_rule;
use super::deciding;
use super::jobs::Job;
use super::key::{Code, Key};
use super::keys::Action;
use super::looking;
use super::overlay::{Deed, FlagPrompt, LinePrompt, Overlay, Purpose};
use super::signing;
use super::turning;
use super::typing;
use super::update::is_yes;
use super::views;

/// Opens what an action asks for.
pub fn open(app: &mut App, action: Action) -> Vec<Job> {
    app.overlay = match action {
        Action::Help => Overlay::Help(0),
        Action::Problems => Overlay::Problems(0),
        Action::Command => Overlay::Line(LinePrompt::new(Purpose::Command, "")),
        Action::AskAgainst => Overlay::Line(LinePrompt::new(Purpose::Command, "against ")),
        Action::AskLayer => Overlay::Line(LinePrompt::new(Purpose::Command, "layer ")),
        Action::AskChannel => Overlay::Line(LinePrompt::new(Purpose::Command, "go ")),
        Action::SetAside => Overlay::Line(LinePrompt::new(Purpose::Aside, "")),
        Action::Comment => match app.bench() {
            Some(bench) => Overlay::Line(LinePrompt::new(Purpose::Comment(bench.selection()), "")),
            None => return looking::no_granule(app),
        },
        _ => return typing::open_side(app),
    };
    Vec::new()
}

/// Takes a key while something lies over the panes.
pub fn press(app: &mut App, key: Key) -> Vec<Job> {
    let escape = key == Key::plain(Code::Esc) || key == Key::control('c');
    match std::mem::take(&mut app.overlay) {
        Overlay::None => Vec::new(),
        Overlay::Help(scroll) => {
            let lines = views::help_groups(app).iter().map(|group| group.rows.len() + 2).sum();
            scrolled(app, key, scroll, lines, Overlay::Help)
        }
        Overlay::Problems(scroll) => {
            let lines = views::last_problem_scroll(app);
            scrolled(app, key, scroll, lines, Overlay::Problems)
        }
        Overlay::Line(prompt) if escape => typing::give_up(app, &prompt),
        Overlay::Line(prompt) => typing::press(app, key, prompt),
        Overlay::Flags(_) if escape => Vec::new(),
        Overlay::Flags(prompt) => choose(app, key, prompt),
        Overlay::SignOff => signing::answer(app, key),
        Overlay::ByRule(offer) => by_rule::answer(app, key, offer),
        Overlay::LeaveAnyway => answer_leave(app, key),
    }
}

fn scrolled(
    app: &mut App,
    key: Key,
    scroll: usize,
    lines: usize,
    overlay: impl FnOnce(usize) -> Overlay,
) -> Vec<Job> {
    let page = app.layout.as_ref().map_or(10, |layout| usize::from(layout.status.y).max(2) - 1);
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
    // Beyond the end every key back would do nothing for a while.
    app.overlay = overlay(scroll.min(lines));
    Vec::new()
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
    let FlagPrompt { give, selection, channels, with_reason, .. } = prompt;
    if with_reason {
        let purpose = Purpose::Reason { give, flag, selection, channels };
        app.overlay = Overlay::Line(LinePrompt::new(purpose, ""));
        return Vec::new();
    }
    deciding::carry_out(app, Deed::flag(give, flag, channels, None), selection)
}

fn by_letter(app: &mut App, prompt: &FlagPrompt, letter: char) -> Option<String> {
    let vocabulary = &app.outside.campaign.settings().vocabulary;
    let scope = if prompt.channels.is_some() { Scope::Channel } else { Scope::Footprint };
    let kind = vocabulary.by_key(scope, letter)?;
    prompt.flags.contains(&kind.name).then(|| kind.name.clone())
}

fn answer_leave(app: &mut App, key: Key) -> Vec<Job> {
    match key.code {
        _ if is_yes(key) => return turning::leave_anyway(app),
        Code::Char('n' | 'N') | Code::Esc => {
            app.leaving = false;
            app.say(match app.pending() {
                0 => "stays",
                _ => "stays; the decisions are tried again with the next one",
            });
        }
        Code::Char('r' | 'R') => {
            app.records_mut().for_each(crate::review::Record::retry);
            app.say("trying again to write…");
        }
        _ => app.overlay = Overlay::LeaveAnyway,
    }
    Vec::new()
}
