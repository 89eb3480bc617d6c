//! `radsieve describe`: what was understood of a file.

mod description;
mod words;

use std::io::Write;
use std::path::PathBuf;

use super::Exit;
use super::inputs::{Reading, reader_program};
use crate::granule::Granule;
use description::Description;

/// What was typed.
#[derive(Debug, clap::Args)]
pub struct Arguments {
    /// The file to describe
    file: PathBuf,
    /// Print JSON instead of text
    #[arg(long)]
    json: bool,
    #[command(flatten)]
    reading: Reading,
}

/// Runs the command.
pub fn run(arguments: Arguments) -> anyhow::Result<Exit> {
    let limits = arguments.reading.limits();
    let granule = Granule::open(&reader_program()?, &arguments.file, &limits)?;
    let description = Description::of(&granule);
    let mut out = std::io::stdout().lock();
    if arguments.json {
        serde_json::to_writer_pretty(&mut out, &description).map_err(std::io::Error::from)?;
        writeln!(out)?;
    } else {
        words::print(&description, &mut out)?;
    }
    Ok(Exit::Done)
}
