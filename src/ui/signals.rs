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
    let leader = rustix::process::getpgrp();
    let parent = match leader == rustix::process::getpid() {
        true => rustix::process::getppid(),
        // A script around us leads the group.
        false => parent_of(leader).or_else(rustix::process::getppid),
    };
    let session = |process| rustix::process::getsid(process).ok();
    parent.is_some_and(|parent| session(Some(parent)) == session(None))
}

/// The parent of another process, where the system has a `/proc` that tells it.
fn parent_of(process: rustix::process::Pid) -> Option<rustix::process::Pid> {
    let path = format!("/proc/{}/stat", process.as_raw_nonzero());
    parent_in(&std::fs::read_to_string(path).ok()?)
}

/// `number (name) state parent …`; the name may hold anything, brackets too.
fn parent_in(stat: &str) -> Option<rustix::process::Pid> {
    let behind_name = stat.rsplit_once(')')?.1;
    rustix::process::Pid::from_raw(behind_name.split_whitespace().nth(1)?.parse().ok()?)
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

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_parent_of_a_process_is_read_whatever_its_name() {
        let parent = |stat| parent_in(stat).map(|parent| parent.as_raw_nonzero().get());
        assert_eq!(parent("41 (a) b (c) S 17 41 41 0 -1"), Some(17));
        assert_eq!(parent("41 (kernel) S 0 0 0"), None);
        assert_eq!(parent("nothing of the kind"), None);
        let own = rustix::process::getpid();
        assert_eq!(parent_of(own), rustix::process::getppid());
    }
}
