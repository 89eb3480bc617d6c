//! `radsieve review`.

use super::Exit;

/// What was typed.
#[derive(Debug, clap::Args)]
pub struct Arguments {}

/// Runs the command.
pub fn run(_arguments: Arguments) -> anyhow::Result<Exit> {
    anyhow::bail!("review is not part of this version yet")
}
