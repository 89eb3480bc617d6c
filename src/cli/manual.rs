//! `radsieve completions` and `radsieve man`: both come out of the one definition of the commands.

use std::io::Write;
use std::path::PathBuf;

use anyhow::Context;
use clap::CommandFactory;
use clap_complete::Shell;

use super::Exit;

/// What was typed after `completions`.
#[derive(Debug, clap::Args)]
pub struct CompletionArguments {
    /// The shell to write completions for.
    shell: Shell,
}

/// Writes a completion script to standard output.
pub fn completions(arguments: CompletionArguments) -> anyhow::Result<Exit> {
    let mut script = Vec::new();
    clap_complete::generate(
        arguments.shell,
        &mut super::Arguments::command(),
        "radsieve",
        &mut script,
    );
    std::io::stdout().write_all(&script)?;
    Ok(Exit::Done)
}

/// What was typed after `man`.
#[derive(Debug, clap::Args)]
pub struct ManArguments {
    /// The folder to write the pages into; made where it is missing.
    #[arg(long, value_name = "DIR")]
    out: PathBuf,
}

/// Writes one manual page for the program and one per command.
pub fn man(arguments: ManArguments) -> anyhow::Result<Exit> {
    let folder = &arguments.out;
    std::fs::create_dir_all(folder)
        .with_context(|| format!("cannot make the folder {}", folder.display()))?;
    clap_mangen::generate_to(super::Arguments::command(), folder)
        .with_context(|| format!("cannot write manual pages into {}", folder.display()))?;
    Ok(Exit::Done)
}
