//! The thread that reads the terminal.

use std::fs::File;
use std::io::{self, IsTerminal};
use std::os::fd::{AsFd, BorrowedFd, OwnedFd};
use std::sync::mpsc::Sender;
use std::thread;

use rustix::event::{PollFd, PollFlags, Timespec, poll};
use rustix::io::Errno;

use super::event::{Ending, Event};
use super::input::InputParser;

/// How long the rest of a sequence may take. A key is 1 to 8 bytes that terminals send in one
/// piece; a slow link may still cut them.
const REST_OF_SEQUENCE: Timespec = Timespec { tv_sec: 0, tv_nsec: 50_000_000 };

/// Starts reading keys, pastes and mouse reports.
///
/// # Errors
/// There is no terminal to read from, or no thread to be had.
pub fn listen(events: Sender<Event>) -> io::Result<()> {
    let source = source()?;
    thread::Builder::new().name("keyboard".to_owned()).spawn(move || {
        let ending = read_until_gone(source.as_fd(), &events);
        // Nobody listens any more once the program is about to end.
        let _ = events.send(Event::End(ending));
    })?;
    Ok(())
}

/// Standard input where it is the terminal; else (a list of files came in through it) the
/// controlling terminal.
fn source() -> io::Result<OwnedFd> {
    let stdin = io::stdin();
    if stdin.is_terminal() {
        stdin.as_fd().try_clone_to_owned()
    } else {
        File::open("/dev/tty").map(OwnedFd::from)
    }
}

fn read_until_gone(source: BorrowedFd<'_>, events: &Sender<Event>) -> Ending {
    let mut parser = InputParser::default();
    let mut bytes = [0_u8; 4096];
    loop {
        let timeout = parser.is_waiting().then_some(&REST_OF_SEQUENCE);
        let mut waiting = [PollFd::from_borrowed_fd(source, PollFlags::IN)];
        let inputs = match poll(&mut waiting, timeout) {
            Ok(0) => parser.settle(),
            Ok(_) => match rustix::io::read(source, &mut bytes) {
                Ok(0) => return Ending::TerminalGone,
                Ok(count) => parser.feed(bytes.get(..count).unwrap_or_default()),
                Err(Errno::INTR | Errno::AGAIN) => continue,
                Err(_) => return Ending::TerminalGone,
            },
            Err(Errno::INTR) => continue,
            Err(_) => return Ending::TerminalGone,
        };
        for input in inputs {
            if events.send(Event::Input(input)).is_err() {
                return Ending::TerminalGone;
            }
        }
    }
}
