//! The reader process: the only place where the C libraries read, started by the program itself.

use std::path::PathBuf;

use super::Exit;
use crate::netcdf_files::{confine, serve};

/// The hidden command's name.
pub const NAME: &str = "reader-process";

/// What was typed, by the program itself.
#[derive(Debug, clap::Args)]
pub struct Arguments {
    /// Bytes of address space that the process may use.
    #[arg(long, value_name = "BYTES")]
    memory: u64,
    /// The one file that it may read.
    path: PathBuf,
}

/// Runs the command.
pub fn run(arguments: Arguments) -> anyhow::Result<Exit> {
    // A panic is an answer here, not a message; the libraries' iterators panic on damaged files.
    std::panic::set_hook(Box::new(|_| {}));
    confine(&arguments.path, arguments.memory);
    serve(&arguments.path, std::io::stdin(), std::io::stdout().lock(), end_at_once);
    Ok(Exit::Done)
}

/// Ends the process even while another thread is stuck inside a library: nothing is tidied up.
fn end_at_once() {
    let this = rustix::process::getpid();
    // Nothing is left to try where a process may not end itself.
    let _ = rustix::process::kill_process(this, rustix::process::Signal::KILL);
}
