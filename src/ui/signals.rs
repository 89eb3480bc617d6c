//! Signals, heard in a thread of their own.

use std::io;
use std::sync::mpsc::Sender;
use std::thread;
use std::time::Duration;

use signal_hook::consts::{SIGCONT, SIGHUP, SIGINT, SIGTERM, SIGTSTP, SIGWINCH};
use signal_hook::iterator::Signals;
use signal_hook::low_level;

use super::event::{Ending, Event};
use super::terminal;

/// How long the screen's thread may take to finish by itself after a signal that ends the program.
/// Syncing the last decisions on a slow shared file system is the slowest part of it.
const PATIENCE: Duration = Duration::from_secs(5);

/// Starts listening.
///
/// # Errors
/// The system refuses a handler or a thread.
pub fn listen(events: Sender<Event>) -> io::Result<()> {
    let mut signals = Signals::new([SIGTERM, SIGHUP, SIGINT, SIGTSTP, SIGCONT, SIGWINCH])?;
    thread::Builder::new().name("signals".to_owned()).spawn(move || {
        for signal in signals.forever() {
            let event = match signal {
                SIGTSTP => Event::Suspend,
                SIGCONT => Event::Resumed,
                SIGWINCH => Event::Resized,
                ending => {
                    end_anyway_later(ending);
                    Event::End(Ending::Signal(ending))
                }
            };
            if events.send(event).is_err() {
                return;
            }
        }
    })?;
    Ok(())
}

/// The screen's thread may be stuck, for instance in writing to a terminal that takes nothing.
/// The program ends all the same.
fn end_anyway_later(signal: i32) {
    let _ = thread::Builder::new().name("ending".to_owned()).spawn(move || {
        thread::sleep(PATIENCE);
        let _ = thread::Builder::new().spawn(terminal::give_back);
        thread::sleep(PATIENCE / 10);
        low_level::exit(128 + signal);
    });
}

/// Whether there is a shell that can continue this job. A process group whose leader's parent lives
/// in another session (a command given to ssh, a pane that runs nothing else) could never be
/// continued from its terminal: the kernel does not stop it by a key either.
pub fn can_be_continued() -> bool {
    let parent = rustix::process::getppid();
    let session = |process| rustix::process::getsid(process).ok();
    parent.is_some_and(|parent| session(Some(parent)) == session(None))
}

/// Asks the whole job to stop, as the shell's Ctrl-Z does: a script around us has to stop too.
/// Our own answer to the signal is an `Event::Suspend`.
pub fn ask_for_stop() {
    let _ = rustix::process::kill_current_process_group(rustix::process::Signal::TSTP);
}

/// Stops this process; returns when it is continued.
pub fn stop() {
    let _ = low_level::emulate_default_handler(SIGTSTP);
}
