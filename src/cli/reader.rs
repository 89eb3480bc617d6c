//! The reader process: the only place where the C libraries read, started by the program itself.

use super::Exit;

/// The hidden command's name.
pub const NAME: &str = "reader-process";

/// What was typed.
#[derive(Debug, clap::Args)]
pub struct Arguments {}

/// Runs the command.
pub fn run(_arguments: Arguments) -> anyhow::Result<Exit> {
    anyhow::bail!("reader-process is not part of this version yet")
}
