//! `radsieve train`: what the spectra of a campaign's granules are made of.

use std::io::Write;
use std::path::PathBuf;

use serde_json::json;

use super::exit::UsageError;
use super::inputs::{Inputs, Reading};
use super::{Exit, surroundings};
use crate::flags::Campaign;
use crate::review::{Producer, basis_path, rulebook_of, write_bases};
use crate::screening::health::training_rows;
use crate::screening::unusual::{Rows, SavedBases, fit_together, instrument_shape};
use crate::system::{Cancel, clean_text};

/// Spectra of all granules together: many times the components that are kept.
const SPECTRA: usize = 6000;
/// And at least as many of each granule.
const FEWEST_EACH: usize = 100;

/// A band's name, and the rows and noise that each granule gives.
type BandRows = (String, Vec<(Rows, Vec<f64>)>);

/// What was typed.
#[derive(Debug, clap::Args)]
#[command(after_help = "Example:\n  radsieve train spring/*.nc --campaign spring\n\n\
    The principal components are kept in the campaign's folder, in one file for each instrument; \
    screen and review then hold spectra against them. Without them each granule is held against its \
    own, which cannot find what is common in it. Take granules of all seasons and places, other than \
    those to be screened. What is unlike the others is left out, and so is what the producer rejects.")]
pub struct Arguments {
    #[command(flatten)]
    inputs: Inputs,
    #[command(flatten)]
    reading: Reading,
    /// The campaign folder; made if it is not there.
    #[arg(long, value_name = "DIR", default_value = surroundings::DEFAULT_CAMPAIGN)]
    campaign: PathBuf,
    /// JSON in place of text.
    #[arg(long)]
    json: bool,
}

/// Runs the command.
pub fn run(arguments: Arguments) -> anyhow::Result<Exit> {
    let files = arguments.inputs.files()?;
    let opening = arguments.reading.opening()?;
    let campaign = Campaign::open_or_create(&arguments.campaign)?;
    let limits = rulebook_of(&campaign).map_err(|error| UsageError(error.to_string()))?.health;
    let each = (SPECTRA / files.len().max(1)).max(FEWEST_EACH);
    let mut place: Option<(PathBuf, String)> = None;
    let mut granules = Vec::new();
    let mut bands: Vec<BandRows> = Vec::new();
    let mut rejected = 0;
    let mut failed = 0;
    for file in &files {
        let granule = match opening.open(file) {
            Ok(granule) => granule,
            Err(error) => {
                say!("radsieve: {}", clean_text(&error.to_string()));
                failed += 1;
                continue;
            }
        };
        let shape = instrument_shape(&granule);
        let (_, first) =
            place.get_or_insert_with(|| (basis_path(campaign.folder(), &granule), shape.clone()));
        if *first != shape {
            let file = clean_text(&file.display().to_string());
            say!(
                "radsieve: {file} is of another instrument than the first file, and left out: {shape}, \
                 not {first}"
            );
            failed += 1;
            continue;
        }
        granule.fill(&Cancel::new(), &mut |_| {})?;
        // What the producer rejects is no example of a sound spectrum.
        let producer = Producer::of(&granule, &campaign.settings().quality);
        for problem in &producer.problems {
            say!("radsieve: {}: {problem}", clean_text(&file.display().to_string()));
        }
        rejected += producer.left_out.iter().filter(|left_out| **left_out).count();
        let rows = training_rows(&granule, &limits, &producer.left_out, each, &Cancel::new())?;
        for (name, rows, noise) in rows {
            match bands.iter_mut().find(|(band, _)| *band == name) {
                Some((_, all)) => all.push((rows, noise)),
                None => bands.push((name, vec![(rows, noise)])),
            }
        }
        granules.push(granule.name());
    }
    let Some((path, instrument)) = place else {
        return Ok(Exit::Failed);
    };
    let fitted = bands.iter().filter_map(|(name, all)| Some((name.clone(), fit_together(all)?)));
    let bases = SavedBases { instrument, granules, bands: fitted.collect(), file: String::new() };
    if bases.bands.is_empty() {
        anyhow::bail!("there are too few whole spectra to find components in");
    }
    write_bases(&path, &bases)?;
    let bands = bases.bands.iter().map(|(name, basis)| {
        json!({
            "band": name,
            "components": basis.components(),
            "spectra": basis.scores.spectra,
            "left_out": basis.scores.left_out,
            "mean_score": basis.scores.mean,
            "score_deviation": basis.scores.deviation,
        })
    });
    let mut out = std::io::stdout().lock();
    if arguments.json {
        let file = path.display().to_string();
        let bands = bands.collect::<Vec<_>>();
        let answer = json!({
            "schema": 1,
            "file": file,
            "bands": bands,
            "rejected_by_producer": rejected,
        });
        writeln!(out, "{answer}")?;
        return Ok(Exit::of_many(files.len() - failed, failed));
    }
    for (name, basis) in &bases.bands {
        let (name, scores) = (clean_text(name), &basis.scores);
        let (components, spectra) = (basis.components(), scores.spectra);
        let left_out = scores.left_out;
        writeln!(out, "{name}: {components} components of {spectra} spectra, {left_out} left out")?;
    }
    if rejected > 0 {
        writeln!(out, "{rejected} footprints that the producer rejects were not taken")?;
    }
    writeln!(out, "{}", clean_text(&path.display().to_string()))?;
    Ok(Exit::of_many(files.len() - failed, failed))
}
