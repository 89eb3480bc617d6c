//! The list of usable footprints as CSV.

use std::path::Path;

use super::mask::ExportError;
use super::provenance::Record;
use super::source::MaskSource;
use super::target::Owner;
use crate::granule::FootprintGrid;
use crate::system::{Placing, place_whole};

/// The column that says which granule a row is of.
const OWNER: &str = "granule";

/// Writes the footprints that a retrieval may use by the default rule, whole or not at all; gives
/// their number.
///
/// One row per footprint in row-major order: the zero-based index along each footprint dimension
/// under its name in the granule, `lat`, `lon` where known (an empty cell is missing), the bands in
/// which an excluding flag limited to bands stands (separated by blanks), and the beginning
/// of the granule's BLAKE3 hash.
///
/// # Errors
/// The file cannot be written, or the flags are of another granule.
pub fn write_usable_list(
    source: &MaskSource,
    record: &Record<'_>,
    target: &Path,
    placing: Placing,
) -> Result<usize, ExportError> {
    let (flags, granule) = (record.state.review.len(), source.footprint_count());
    if flags != granule {
        return Err(ExportError::Mismatch { flags, granule });
    }
    let usable: Vec<usize> =
        (0..granule).filter(|&at| record.state.usable(at, record.vocabulary)).collect();
    let (names, lengths) = source.footprints.iter().cloned().unzip();
    let grid = FootprintGrid::new(names, lengths);
    place_whole(target, placing, |temporary| {
        let mut csv = csv::Writer::from_path(temporary)?;
        csv.write_record(header(source, &grid))?;
        for &footprint in &usable {
            csv.write_record(row(source, record, &grid, footprint))?;
        }
        csv.flush()
    })?;
    Ok(usable.len())
}

fn header(source: &MaskSource, grid: &FootprintGrid) -> Vec<String> {
    let mut header: Vec<String> = grid.names().to_vec();
    header.extend(source.latitude.iter().map(|_| grid.column("lat")));
    header.extend(source.longitude.iter().map(|_| grid.column("lon")));
    header.extend(["bands_lost".to_owned(), OWNER.to_owned()]);
    header
}

fn row(
    source: &MaskSource,
    record: &Record<'_>,
    grid: &FootprintGrid,
    footprint: usize,
) -> Vec<String> {
    let mut row: Vec<String> = grid.position(footprint).iter().map(ToString::to_string).collect();
    for values in [&source.latitude, &source.longitude].into_iter().flatten() {
        let value = values.get(footprint).filter(|value| value.is_finite());
        row.push(value.map(ToString::to_string).unwrap_or_default());
    }
    let excluding = record.vocabulary.excluding_mask();
    let lost = record
        .state
        .band_flags
        .iter()
        .filter(|(_, flags)| flags.get(footprint).is_some_and(|flags| flags & excluding != 0));
    let lost: Vec<&str> = lost.map(|(name, _)| name.as_str()).collect();
    row.extend([lost.join(" "), short(source).to_owned()]);
    row
}

/// Whose the list at `path` is, where `source` may be its granule.
pub fn list_owner(path: &Path, source: &MaskSource) -> Owner {
    let Ok(mut csv) = csv::Reader::from_path(path) else { return Owner::Other };
    let column = csv.headers().ok().and_then(|names| {
        // A dimension may go by that name; the column of ours is the last one.
        names.iter().enumerate().filter(|(_, name)| *name == OWNER).map(|(at, _)| at).last()
    });
    let Some(column) = column else { return Owner::Other };
    match csv.records().next() {
        None => Owner::Unknown,
        Some(Ok(row)) if row.get(column) == Some(short(source)) => {
            Owner::Granule(source.hash.clone())
        }
        Some(Ok(row)) => Owner::Granule(row.get(column).unwrap_or_default().to_owned()),
        Some(Err(_)) => Owner::Other,
    }
}

/// The beginning of the hash: enough to tell granules apart, and short enough for each row.
fn short(source: &MaskSource) -> &str {
    source.hash.get(..12).unwrap_or(&source.hash)
}
