//! How many rows of footprints are read at once.

use super::layout::{Layout, Role};
use crate::netcdf_files::{FileIndex, Variable};

/// About as much is read at once: far below a second even where it is compressed, and enough that
/// the questions to the reader cost nothing.
const BYTES_PER_SLAB: usize = 8 << 20;

/// The rows of a slab: whole chunks, so that none is inflated twice.
pub fn rows_per_slab(index: &FileIndex, variable: &Variable, layout: &Layout) -> usize {
    let lengths = index.lengths(variable);
    let Some(axis) = layout.axis_of(Role::Footprint(0)) else { return 1 };
    let rows = lengths[axis].max(1);
    let values: usize = lengths.iter().product();
    let bytes_per_row = (values / rows).saturating_mul(variable.kind.size().unwrap_or(8)).max(1);
    let wanted = (BYTES_PER_SLAB / bytes_per_row).clamp(1, rows);
    let chunk = variable.storage.chunks.as_ref().map_or(1, |chunks| chunks[axis]).clamp(1, rows);
    (wanted / chunk).max(1) * chunk
}
