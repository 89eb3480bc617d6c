//! `radsieve describe`: what was understood of a file.

mod description;
mod quality_map;
mod words;

use std::io::Write;
use std::path::PathBuf;

use super::Exit;
use super::inputs::Reading;
use crate::flags::Campaign;
use crate::granule::layout_text;
use crate::review::Producer;
use description::Description;

/// What was typed.
#[derive(Debug, clap::Args)]
pub struct Arguments {
    /// The file to describe
    file: PathBuf,
    /// Print JSON instead of text
    #[arg(long)]
    json: bool,
    /// Print what was found as a layout file, to be edited and given back by --layout
    #[arg(long, conflicts_with = "json")]
    as_layout: bool,
    /// Print a starting map of the producer's quality, for the campaign's campaign.toml
    #[arg(long, conflicts_with_all = ["json", "as_layout"])]
    as_quality_map: bool,
    /// A campaign folder: what its map makes of the producer's quality, and what it leaves out, goes
    /// among the problems
    #[arg(long, value_name = "DIR")]
    campaign: Option<PathBuf>,
    #[command(flatten)]
    reading: Reading,
}

/// Runs the command.
pub fn run(arguments: Arguments) -> anyhow::Result<Exit> {
    let granule = arguments.reading.opening()?.open(&arguments.file)?;
    let mut out = std::io::stdout().lock();
    if arguments.as_layout {
        out.write_all(layout_text(&granule).as_bytes())?;
        return Ok(Exit::Done);
    }
    if arguments.as_quality_map {
        out.write_all(quality_map::quality_map_text(&granule).as_bytes())?;
        return Ok(Exit::Done);
    }
    let mut description = Description::of(&granule)?;
    if let Some(folder) = &arguments.campaign {
        let campaign = Campaign::open(folder)?;
        description.take(&Producer::of(&granule, &campaign.settings().quality));
    }
    if arguments.json {
        serde_json::to_writer_pretty(&mut out, &description).map_err(std::io::Error::from)?;
        writeln!(out)?;
    } else {
        words::print(&description, &mut out)?;
    }
    Ok(Exit::Done)
}
