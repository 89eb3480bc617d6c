//! `radsieve export`: masks and lists from the ledgers.

use std::path::{Path, PathBuf};

use serde_json::json;

use super::inputs::{Inputs, Reading};
use super::output::{Output, tell_refused};
use super::{Exit, surroundings};
use crate::export::{Exported, Exporter, Form, Provenance};
use crate::flags::Campaign;
use crate::system::clean_text;

/// What was typed.
#[derive(Debug, clap::Args)]
#[command(
    after_help = "Equal file names from different folders never overwrite each other: the second \
    gets a short hash in its name.\n\nA mask is a screening aid for retrieval runs, not a warning \
    service. RADSIEVE_PERSON names who exports; RADSIEVE_NOW (as in 2026-01-31T12:00:00Z) stops the \
    clock, so that the same decisions give the same bytes."
)]
pub struct Arguments {
    #[command(flatten)]
    inputs: Inputs,
    #[command(flatten)]
    reading: Reading,
    /// The campaign folder with the ledgers; it is only read.
    #[arg(long, value_name = "DIR", default_value = surroundings::DEFAULT_CAMPAIGN)]
    campaign: PathBuf,
    /// Where to write; made if it is not there. The granules are never written to.
    #[arg(long, value_name = "DIR")]
    out: PathBuf,
    /// A CF flag mask for each granule, or the list of its usable footprints.
    #[arg(long, value_enum, default_value_t = Format::Nc)]
    format: Format,
    /// Print a summary as JSON instead of the names of the files written.
    #[arg(long)]
    json: bool,
}

#[derive(Debug, Clone, Copy, clap::ValueEnum)]
enum Format {
    /// `<stem>.mask.nc`: flags, review state and channel flags that line up with the radiances.
    Nc,
    /// `<stem>.usable.csv`: indices and positions of the footprints that a retrieval may use.
    Csv,
}

impl From<Format> for Form {
    fn from(format: Format) -> Self {
        match format {
            Format::Nc => Form::Mask,
            Format::Csv => Form::UsableList,
        }
    }
}

/// Runs the command.
pub fn run(arguments: Arguments) -> anyhow::Result<Exit> {
    let files = arguments.inputs.files()?;
    let now = surroundings::now()?;
    let campaign = Campaign::open(&arguments.campaign)?;
    for problem in &campaign.settings().problems {
        say!("radsieve: {}", clean_text(problem));
    }
    let opening = arguments.reading.opening()?;
    let provenance = Provenance {
        program: env!("CARGO_PKG_VERSION").to_owned(),
        now,
        person: surroundings::person(),
        campaign: campaign.settings().title.clone(),
        ledger_problems: Vec::new(),
    };
    let form = arguments.format.into();
    let mut exporter =
        Exporter::new(&campaign, &opening.program, provenance, form, &arguments.out, &files)?;
    let mut results = Vec::new();
    let mut output = Output::default();
    for file in &files {
        let granule = opening.open(file);
        let result = granule.map_err(Into::into).and_then(|granule| {
            tell_refused(&granule);
            exporter.export(&granule)
        });
        let result = result.map_err(|error: crate::export::NotExported| error.to_string());
        tell(file, &result, (!arguments.json).then_some(&mut output));
        results.push((file.as_path(), result));
    }
    if arguments.json {
        output.line(summary(&results));
    }
    let failed = results.iter().filter(|(_, result)| result.is_err()).count();
    output.end(Exit::of_many(results.len() - failed, failed))
}

/// Messages on standard error; the file's name on standard output, for scripts.
fn tell(file: &Path, result: &Result<Exported, String>, names: Option<&mut Output>) {
    let file = clean_text(&file.display().to_string());
    match result {
        Ok(exported) => {
            for message in &exported.messages {
                say!("radsieve: {file}: {}", clean_text(message));
            }
            if let Some(output) = names {
                output.path(&exported.path);
            }
        }
        // Messages of granules begin with the path already.
        Err(error) if error.starts_with(&file) => say!("radsieve: {}", clean_text(error)),
        Err(error) => say!("radsieve: {file}: {}", clean_text(error)),
    }
}

fn summary(results: &[(&Path, Result<Exported, String>)]) -> serde_json::Value {
    let entry = |(file, result): &(&Path, Result<Exported, String>)| {
        let file = file.display().to_string();
        match result {
            Ok(exported) => json!({
                "file": file,
                "written": exported.path.display().to_string(),
                "granule_state": exported.state,
                "decisions": exported.decisions,
                "reviewers": exported.people,
                "counts": exported.counts,
                "messages": exported.messages,
            }),
            Err(error) => json!({ "file": file, "error": error }),
        }
    };
    json!({ "schema": 1, "files": results.iter().map(entry).collect::<Vec<_>>() })
}
