//! The loop: drain all events, then draw once if something changed. An idle screen writes nothing.

use std::io;
use std::sync::Arc;
use std::sync::mpsc::{Receiver, RecvTimeoutError, channel};
use std::time::{Duration, Instant};

use super::app::App;
use super::draw::{draw, draw_over};
use super::event::{Button, Ending, Event, Input};
use super::jobs::Answer;
use super::runner::Runner;
use super::terminal::{MouseReports, Screen};
use super::update::update;
use super::{keyboard, signals, terminal, turning, work};

/// While decisions are on their way to the disk, the ledger's writer is asked this often.
const LEDGER_PAUSE: Duration = Duration::from_millis(15);
/// After so long without any event the ledgers are read once more: others may have decided.
const QUIET: Duration = Duration::from_secs(10);
/// While work goes on beside the keys, how far it is is drawn anew so often.
const WORK_PAUSE: Duration = Duration::from_millis(250);
/// Where little is to be sent the cursor rests after so long without a key: longer than one that
/// is held down takes to come again.
const REST: Duration = Duration::from_millis(150);
/// How long the last decisions may take on the way out after a signal.
const LAST_WRITES: Duration = Duration::from_secs(4);

/// How a review ended.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Ended {
    /// The exit code: 0, or 128 and the number of a signal.
    pub code: u8,
    /// Decisions that could not be written: how many and why.
    pub unwritten: Option<String>,
}

/// Takes the terminal over and reviews until the person leaves or a signal comes. The terminal is
/// given back in every case.
///
/// # Errors
/// The terminal can't be taken over or read.
pub fn run(mut app: App) -> io::Result<Ended> {
    let (sender, events) = channel();
    signals::listen(sender.clone())?;
    let mut screen = Screen::take(reports(&app), !app.low_bandwidth)?;
    keyboard::listen(sender.clone())?;
    let mut runner = Runner::new(Arc::clone(&app.outside), sender);
    for job in turning::start(&mut app) {
        runner.start(job);
    }
    let mut heard = Instant::now();
    while app.ended.is_none() {
        if show(&mut app, &mut screen).is_err() {
            app.end(Ending::TerminalGone);
            break;
        }
        let Some(event) = next_event(&app, &events, heard) else { continue };
        heard = if is_input(&event) { Instant::now() } else { heard };
        handle(&mut app, &mut screen, &mut runner, event);
        while let Ok(event) = events.try_recv() {
            heard = if is_input(&event) { Instant::now() } else { heard };
            handle(&mut app, &mut screen, &mut runner, event);
        }
        // Under a stream of keys no pause comes in which the writer would be asked.
        if app.pending() > 0 {
            handle(&mut app, &mut screen, &mut runner, Event::LedgerMoved);
        }
    }
    drop(screen);
    Ok(finish(app))
}

/// Waits for the next event. While decisions are pending the writer may have news at any moment.
/// Whether the cursor rests goes by the last key alone: work beside the keys tells of itself all the
/// time.
fn next_event(app: &App, events: &Receiver<Event>, heard: Instant) -> Option<Event> {
    let rest = REST.saturating_sub(heard.elapsed());
    if !app.rested && rest.is_zero() {
        return Some(Event::Rested);
    }
    let writing = app.pending() > 0 && (app.write_failure().is_none() || app.leaving);
    let (pause, passed) = match (app.rested, writing) {
        (false, _) => (rest, Event::Rested),
        (true, true) => (LEDGER_PAUSE, Event::LedgerMoved),
        (true, false) if app.is_working() => (WORK_PAUSE, Event::Working),
        (true, false) => (QUIET, Event::Quiet),
    };
    match events.recv_timeout(pause) {
        Ok(event) => Some(event),
        Err(RecvTimeoutError::Timeout) => Some(passed),
        Err(RecvTimeoutError::Disconnected) => None,
    }
}

fn handle(app: &mut App, screen: &mut Screen, runner: &mut Runner, event: Event) {
    app.changed |= !tells_by_itself(&event);
    let mouse = app.mouse;
    for job in update(app, event) {
        runner.start(job);
    }
    if mouse != app.mouse {
        // A terminal that is gone shows itself at the next drawing.
        let _ = screen.set_mouse(reports(app));
    }
}

fn is_input(event: &Event) -> bool {
    matches!(event, Event::Input(input) if !input.is_hover())
}

/// Whether `update` says itself that something changed: the ledgers may have no news, and what the mouse
/// passes over may have the same words.
fn tells_by_itself(event: &Event) -> bool {
    match event {
        Event::LedgerMoved
        | Event::Quiet
        | Event::Answer(Answer::Reread { .. } | Answer::Changes(..)) => true,
        Event::Input(Input::Mouse(mouse)) => mouse.button == Button::Move,
        _ => false,
    }
}

fn reports(app: &App) -> MouseReports {
    match (app.mouse, app.low_bandwidth) {
        (false, _) => MouseReports::Off,
        (true, true) => MouseReports::Buttons,
        (true, false) => MouseReports::Moves,
    }
}

/// Draws, if something changed.
fn show(app: &mut App, screen: &mut Screen) -> io::Result<()> {
    if app.suspend {
        app.suspend = false;
        terminal::give_back();
        signals::stop();
        app.renew = true;
    }
    if app.renew {
        app.renew = false;
        // All settings of the terminal may have been changed meanwhile.
        screen.take_again(reports(app))?;
        app.changed = true;
    }
    if std::mem::take(&mut app.redraw) {
        screen.forget()?;
        app.changed = true;
    }
    if !std::mem::take(&mut app.changed) {
        return Ok(());
    }
    app.lay_out(screen.size()?);
    if app.low_bandwidth {
        return screen.draw_kept(|frame, last| draw_over(app, last, frame));
    }
    screen.draw(|frame| draw(app, frame))
}

/// Keeps the place and waits for the last decisions, for a while.
fn finish(mut app: App) -> Ended {
    for job in turning::keep_place(&app) {
        work::perform(&job, &app.outside, &|_| {});
    }
    let code = app.ended.unwrap_or(0);
    let mut unwritten: Vec<String> = Vec::new();
    for record in app.take_records() {
        if let Err(error) = record.close(LAST_WRITES) {
            unwritten.push(error.to_string());
        }
    }
    let unwritten = (!unwritten.is_empty()).then(|| unwritten.join("; "));
    Ended { code, unwritten }
}
