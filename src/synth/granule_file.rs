//! A synthetic granule as a CF file, written scan line by scan line.

use std::path::Path;

use super::file_values::{put_coordinates, put_quality, put_spectra, put_truth};
use super::file_variables::{define_band, define_coordinates, define_truth};
use super::recipe::Recipe;
use super::spectra::{Geometry, Maker};
use crate::netcdf_files::{NetcdfWriter, WriterError};
use crate::system::{Cancel, WriteError, write_whole};

/// Why a granule was not made.
#[derive(Debug, thiserror::Error)]
pub enum SynthError {
    /// The file could not be written.
    #[error(transparent)]
    Write(#[from] WriteError<ContentError>),
}

/// Why the content of a granule was not finished.
#[derive(Debug, thiserror::Error)]
pub enum ContentError {
    /// The netCDF library refused something.
    #[error(transparent)]
    Netcdf(#[from] WriterError),
    /// Someone asked to stop.
    #[error("stopped before the file was whole; nothing was left behind")]
    Cancelled,
}

/// Makes the granule of a recipe at `target`. `progress` gets scan lines done and in all.
///
/// The bytes depend on the recipe alone, not on the clock or the number of threads.
pub fn make_granule(
    recipe: Recipe,
    target: &Path,
    cancel: &Cancel,
    progress: &mut dyn FnMut(usize, usize),
) -> Result<(), SynthError> {
    let maker = Maker::new(recipe);
    let layout = Layout::new(&maker);
    write_whole(target, |path| write(recipe, &maker, &layout, path, cancel, progress))?;
    Ok(())
}

/// Footprint dimensions and how many scan lines go into one chunk.
pub(super) struct Layout {
    pub names: Vec<&'static str>,
    pub lengths: Vec<usize>,
    pub lines_in_chunk: usize,
}

/// Values of a chunk: large enough to compress, small enough to read one footprint quickly.
const CHUNK_VALUES: usize = 300_000;

impl Layout {
    pub(super) fn new(maker: &Maker) -> Layout {
        let swath = &maker.swath;
        let mut names = vec!["scan_line", "position"];
        let mut lengths = vec![swath.lines, swath.positions];
        if swath.side > 1 {
            names.push("detector");
            lengths.push(swath.detectors());
        }
        let widest = maker.instrument.bands.iter().map(|band| band.wavenumbers.len()).max();
        let line_values = swath.positions * swath.detectors() * widest.unwrap_or(1);
        let lines_in_chunk = (CHUNK_VALUES / line_values).clamp(1, swath.lines);
        Layout { names, lengths, lines_in_chunk }
    }
}

fn write(
    recipe: Recipe,
    maker: &Maker,
    layout: &Layout,
    path: &Path,
    cancel: &Cancel,
    progress: &mut dyn FnMut(usize, usize),
) -> Result<(), ContentError> {
    let geometry = maker.geometry();
    let mut file = NetcdfWriter::create(path)?;
    describe(&mut file, recipe, maker, &geometry)?;
    for (name, length) in layout.names.iter().zip(&layout.lengths) {
        file.dimension(name, *length)?;
    }
    define_coordinates(&mut file, layout)?;
    for band in &maker.instrument.bands {
        define_band(&mut file, maker, layout, band)?;
        if let Some(told) = recipe.nedn {
            told.define(&mut file, layout, band)?;
        }
    }
    define_truth(&mut file, maker, layout)?;
    put_coordinates(&mut file, maker, layout, &geometry)?;
    for band in &maker.instrument.bands {
        if let Some(told) = recipe.nedn {
            told.put(&mut file, maker, layout, band)?;
        }
    }
    let lines = maker.swath.lines;
    let mut truths = Vec::with_capacity(geometry.len());
    for first in (0..lines).step_by(layout.lines_in_chunk) {
        let last = (first + layout.lines_in_chunk).min(lines);
        let mut made = Vec::new();
        for line in first..last {
            if cancel.is_cancelled() {
                return Err(ContentError::Cancelled);
            }
            made.extend(maker.line(line));
            progress(line + 1, lines);
        }
        put_spectra(&mut file, maker, layout, first..last, &made)?;
        truths.extend(made.iter().map(|made| made.truth));
    }
    put_quality(&mut file, &geometry, &truths)?;
    put_truth(&mut file, maker, &truths)?;
    file.close()?;
    Ok(())
}

/// Time of a count of seconds since 2000, as CF's `history` begins its lines.
fn iso_time(seconds: f64) -> String {
    const EPOCH_2000: i64 = 946_684_800;
    jiff::Timestamp::from_second(EPOCH_2000 + seconds.round() as i64)
        .map_or_else(|_| String::new(), |time| time.to_string())
}

fn describe(
    file: &mut NetcdfWriter,
    recipe: Recipe,
    maker: &Maker,
    geometry: &[Geometry],
) -> Result<(), WriterError> {
    let place = recipe.scene.place();
    let time = |geometry: Option<&Geometry>| geometry.map_or(0.0, |g| g.sight.time);
    let attributes = [
        ("Conventions", "CF-1.8".to_owned()),
        ("title", format!("Synthetic granule of the imaginary Brindle sounder: {place}")),
        ("summary", format!("Synthetic: {}", recipe.scene.summary())),
        ("institution", "none: instrument, orbit and places are imaginary".to_owned()),
        (
            "source",
            format!(
                "synthetic: forward model with approximate spectroscopy; imaginary Brindle sounder \
                 ({}); scene {}, seed {}{}",
                maker.instrument.description,
                recipe.scene.label(),
                recipe.seed,
                recipe.perturbed.map_or_else(String::new, |seed| format!(
                    ", air, ground, clouds and noise perturbed from seed {seed}"
                ))
            ),
        ),
        (
            "comment",
            "Synthetic demonstration data. Not for science, not for tuning thresholds of real \
             data. What is true about each footprint stands in the group `truth`."
                .to_owned(),
        ),
        (
            "history",
            format!(
                "{} {} (time of the scene)",
                iso_time(time(geometry.first())),
                recipe.command()
            ),
        ),
        ("references", "docs/forward.md of radsieve".to_owned()),
        ("platform", "Brindle (imaginary)".to_owned()),
        ("time_coverage_start", iso_time(time(geometry.first()))),
        ("time_coverage_end", iso_time(time(geometry.last()))),
    ];
    for (name, value) in attributes {
        file.global_attribute(name, value)?;
    }
    Ok(())
}
