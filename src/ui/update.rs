//! What an event does to the state, and which jobs follow from it.

use super::app::{App, Table};
use super::bench::Bench;
use super::colour::Tone;
use super::event::{Button, Event, Input, Mouse};
use super::jobs::Job;
use super::key::{Code, Key};
use super::keys::Action;
use super::overlay::Overlay;
use super::panes::Pane;
use super::{
    across, answers, by_rule, channel_flags, deciding, doubting, exporting, ledger, looking,
    moving, picking, precedents, prompts, screening, spot, spreading, strip, tracing, turning,
    typing, views,
};

/// Changes the state by an event and names the jobs to be started.
pub fn update(app: &mut App, event: Event) -> Vec<Job> {
    match event {
        Event::Input(input) => {
            if !input.is_hover() {
                app.hear();
            }
            take_input(app, input)
        }
        Event::Answer(answer) => answers::take(app, answer),
        Event::LedgerMoved => turning::ledger_moved(app),
        Event::Rested => {
            app.rested = true;
            Vec::new()
        }
        // What is drawn tells how far the work is.
        Event::Working => Vec::new(),
        Event::Quiet => turning::look_for_others(app),
        Event::Suspend => {
            app.suspend = true;
            Vec::new()
        }
        Event::Resumed => {
            app.renew = true;
            Vec::new()
        }
        Event::Resized => Vec::new(),
        Event::End(ending) => {
            app.end(ending);
            Vec::new()
        }
    }
}

fn take_input(app: &mut App, input: Input) -> Vec<Job> {
    match input {
        Input::Key(key) if app.layout.is_none() => press_unseen(app, key),
        // Where nothing is seen nothing is done.
        _ if app.layout.is_none() => Vec::new(),
        Input::Key(key) => press(app, key),
        Input::Paste(text) => typing::paste(app, &text),
        Input::Mouse(mouse) => click(app, mouse),
    }
}

/// On a screen that is too small to show what a key does, one can leave, whatever lies over the
/// panes.
fn press_unseen(app: &mut App, key: Key) -> Vec<Job> {
    match app.keymap.action_of(key) {
        Some(Action::Quit) => {
            app.overlay = Overlay::None;
            turning::leave(app)
        }
        Some(action @ (Action::Suspend | Action::Redraw)) => act(app, action),
        _ => Vec::new(),
    }
}

fn press(app: &mut App, key: Key) -> Vec<Job> {
    app.hovered = None;
    let action = app.keymap.action_of(key);
    // Stopping and drawing anew work whatever lies over the panes.
    let always = matches!(action, Some(Action::Suspend | Action::Redraw));
    if !always && !matches!(app.overlay, Overlay::None) {
        return prompts::press(app, key);
    }
    if !always && let Some(jobs) = spot::press(app, key) {
        return jobs;
    }
    match action {
        Some(action) => act(app, action),
        None => {
            app.say(format!("no key {key}; {} shows the keys", app.keymap.hint(Action::Help)));
            Vec::new()
        }
    }
}

/// Does what an action says.
pub fn act(app: &mut App, action: Action) -> Vec<Job> {
    use Action as A;
    match action {
        A::Up | A::Down | A::Left | A::Right | A::PageUp | A::PageDown => moving::step(app, action),
        A::RowStart | A::RowEnd | A::First | A::Last => moving::step(app, action),
        A::Open if app.focus() == Pane::Ledger => ledger::switch(app),
        A::Open if app.focus() == Pane::Evidence => precedents::visit(app),
        A::Withdraw if app.focus() == Pane::Ledger => ledger::take_back(app),
        A::NextGranule | A::PreviousGranule | A::NextUnsigned | A::Open => {
            turning::turn(app, action)
        }
        A::StripAlong => strip::turn(app),
        A::NextLayer | A::PreviousLayer | A::ChannelLayer | A::CycleRange => {
            looking::layer(app, action)
        }
        A::Geographic => looking::geographic(app),
        A::OtherLayer => looking::other_layer(app),
        A::Signs | A::Marks => looking::signs(app, action),
        A::FieldIn | A::FieldOut => looking::field(app, action),
        A::ChannelUp | A::ChannelDown | A::ChannelFarUp | A::ChannelFarDown => {
            looking::trace(app, action)
        }
        A::SwitchQuantity | A::Reference | A::Envelope | A::Planck | A::NoiseBars => {
            tracing::act(app, action)
        }
        A::ZoomIn | A::ZoomOut | A::PanLeft | A::PanRight | A::WholeSpectrum => {
            looking::trace(app, action)
        }
        A::Pin | A::Unpin => looking::pins(app, action),
        A::Flag | A::Again | A::Withdraw | A::Assess | A::Undo | A::Redo => {
            deciding::decide(app, action)
        }
        A::NextTest | A::PreviousTest | A::Valley | A::TurnSide => spreading::act(app, action),
        A::Alike => spreading::ask(app, None),
        A::Growing => spreading::switch(app),
        A::ChannelInterval | A::FlagChannels | A::WithdrawChannels => {
            channel_flags::act(app, action)
        }
        A::Adopt => spreading::ask_to_adopt(app),
        A::Box | A::Polygon | A::Join | A::Invert | A::Reselect => picking::pick(app, action),
        A::SignOff | A::Reopen => deciding::decide(app, action),
        A::ByRule => by_rule::ask(app),
        A::SpotCheck => spot::begin(app, spot::USUAL),
        A::RunTests => screening::start(app),
        A::NextCase | A::PreviousCase | A::Accept | A::Overrule => doubting::doubt(app, action),
        A::Export => exporting::export(app, None),
        A::AskLayer
        | A::AskAgainst
        | A::AskChannel
        | A::Side
        | A::Comment
        | A::SetAside
        | A::Command => prompts::open(app, action),
        A::Help | A::Problems => prompts::open(app, action),
        A::NextPane | A::PreviousPane => {
            let pane = next_pane(app, action == A::NextPane);
            focus(app, pane)
        }
        A::Pane(pane) => focus(app, pane),
        A::Maximise => {
            let zoomed = app.panes.is_zoomed();
            app.panes.zoom(!zoomed);
            Vec::new()
        }
        A::Mouse => {
            app.mouse = !app.mouse;
            let words = match app.mouse {
                true => {
                    let key = app.keymap.hint(Action::Mouse);
                    format!("the mouse moves the cursor; {key} gives it back to the terminal")
                }
                false => "the mouse is the terminal's".to_owned(),
            };
            app.say(words);
            Vec::new()
        }
        A::Redraw => {
            app.redraw = true;
            Vec::new()
        }
        A::Suspend => {
            if super::signals::can_be_continued() {
                super::signals::ask_for_stop();
            } else {
                app.say("no shell is there to go back to");
            }
            Vec::new()
        }
        A::Cancel => cancel(app),
        A::Quit => turning::leave(app),
    }
}

fn focus(app: &mut App, pane: Pane) -> Vec<Job> {
    app.panes.focus_on(pane);
    if pane == Pane::Tray {
        app.tray_cursor = app.current_entry().unwrap_or(0);
    }
    Vec::new()
}

/// The next pane on show, or the one before; of all panes where one has the screen for itself.
fn next_pane(app: &App, forward: bool) -> Pane {
    let mut pane = app.focus().step(forward);
    while !app.panes.is_zoomed() && pane != app.focus() && app.area_of(pane).is_none() {
        pane = pane.step(forward);
    }
    pane
}

/// Esc lets go of one thing at a time: leaving, what runs through the Tray, opening, selection, zoomed pane, running tests, then
/// the message.
fn cancel(app: &mut App) -> Vec<Job> {
    if app.leaving {
        app.leaving = false;
        app.say("stays");
        return Vec::new();
    }
    let let_go = |bench: &mut Bench| {
        let dropped = bench.selecting.let_go() || bench.drop_channel_pick();
        if !bench.selecting.is_on() {
            bench.doubt.let_go();
        }
        dropped
    };
    if across::give_up(app) {
        return Vec::new();
    }
    let given_up = picking::give_up(app);
    let let_go = !given_up && app.bench_mut().is_some_and(let_go);
    if let_go && app.message.1 != Tone::Bad {
        // It told of what is let go now.
        app.say("");
    }
    let dropped = given_up || let_go;
    if matches!(app.table, Table::Opening { .. }) {
        turning::give_up_opening(app);
    } else if !dropped && app.panes.is_zoomed() {
        app.panes.zoom(false);
    } else if !dropped
        && !spreading::give_up(app)
        && !doubting::give_up(app)
        && !tracing::give_up(app)
        && !screening::give_up(app)
        && !strip::give_up(app)
    {
        app.say("");
    }
    Vec::new()
}

fn click(app: &mut App, mouse: Mouse) -> Vec<Job> {
    let blind = app.bench().is_some_and(Bench::is_blind);
    if !app.mouse || blind || !matches!(app.overlay, Overlay::None) {
        return Vec::new();
    }
    if mouse.button == Button::Move {
        hover(app, mouse);
        return Vec::new();
    }
    app.hovered = None;
    moving::click(app, mouse)
}

/// Says what the mouse is over, in place of what the cursor is on.
fn hover(app: &mut App, mouse: Mouse) {
    let words = views::under_mouse(app, mouse.column, mouse.row);
    app.changed |= words != app.hovered;
    app.hovered = words;
}

/// True for the keys that answer a yes-or-no question.
pub fn is_yes(key: Key) -> bool {
    matches!(key.code, Code::Char('y' | 'Y'))
}
