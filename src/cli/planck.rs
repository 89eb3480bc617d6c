//! `radsieve planck`.

use super::Exit;

/// What was typed.
#[derive(Debug, clap::Args)]
pub struct Arguments {}

/// Runs the command.
pub fn run(_arguments: Arguments) -> anyhow::Result<Exit> {
    anyhow::bail!("planck is not part of this version yet")
}
