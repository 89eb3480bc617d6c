//! How many rows of footprints are read at once.

use super::layout::{Layout, Role};
use crate::netcdf_files::{FileIndex, Variable};

/// About as much is read at once: a millisecond's work where it is decoded here, so that all threads
/// have some and the picture fills evenly, and enough that questions to the reader cost little.
const BYTES_PER_SLAB: usize = 1 << 20;

/// More is not read at once even where a chunk spans more: it would be too large for one answer of the
/// reader. Chunks are then cut, and inflated once for each part.
const MOST_BYTES_PER_SLAB: usize = 64 << 20;

/// The rows of a slab: whole chunks, so that none is inflated twice, unless that is more than `most`
/// bytes.
pub fn rows_per_slab(index: &FileIndex, variable: &Variable, layout: &Layout, most: u64) -> usize {
    let most = usize::try_from(most).unwrap_or(usize::MAX).min(MOST_BYTES_PER_SLAB);
    let lengths = index.lengths(variable);
    let Some(axis) = layout.axis_of(Role::Footprint(0)) else { return 1 };
    let rows = lengths[axis].max(1);
    let values: usize = lengths.iter().product();
    let bytes_per_row = (values / rows).saturating_mul(variable.kind.size().unwrap_or(8)).max(1);
    let rows_of = |bytes: usize| (bytes / bytes_per_row).clamp(1, rows);
    let chunk = variable.storage.chunks.as_ref().map_or(1, |chunks| chunks[axis]).clamp(1, rows);
    ((rows_of(BYTES_PER_SLAB) / chunk).max(1) * chunk).min(rows_of(most))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::netcdf_files::{Dimension, FileFormat, Storage, ValueKind};

    /// Rows of a slab of float values with the given lengths (rows, channels) and chunk rows.
    fn rows(lengths: [usize; 2], chunk_rows: Option<usize>) -> usize {
        rows_within(u64::MAX, lengths, chunk_rows)
    }

    fn rows_within(most: u64, lengths: [usize; 2], chunk_rows: Option<usize>) -> usize {
        let dimension = |length| Dimension { name: "d".into(), group: 0, length, unlimited: false };
        let index = FileIndex {
            version: 1,
            format: FileFormat::Netcdf4,
            groups: Vec::new(),
            dimensions: lengths.map(dimension).to_vec(),
            variables: Vec::new(),
            unreadable: Vec::new(),
        };
        let chunks = chunk_rows.map(|rows| vec![rows, lengths[1]]);
        let variable = Variable {
            path: "v".into(),
            name: "v".into(),
            group: 0,
            dimensions: vec![0, 1],
            kind: ValueKind::F32,
            attributes: Vec::new(),
            storage: Storage { chunks, ..Storage::default() },
        };
        let layout = Layout::new(vec![Role::Footprint(0), Role::Spectral], lengths.to_vec());
        rows_per_slab(&index, &variable, &layout, most)
    }

    #[test]
    fn a_small_band_is_one_slab_and_a_large_one_is_cut_at_about_1_mb() {
        assert_eq!(rows([10, 100], None), 10);
        assert_eq!(rows([10_000, 1024], None), 256);
    }

    #[test]
    fn slabs_are_whole_chunks() {
        assert_eq!(rows([10_000, 1024], Some(100)), 200);
        assert_eq!(rows([10_000, 1024], Some(5000)), 5000, "one chunk is the least");
        assert_eq!(rows([10, 1 << 24], Some(1)), 1, "and one row");
        assert_eq!(rows([10, 100], Some(1000)), 10, "a chunk may be longer than the variable");
    }

    #[test]
    fn huge_chunks_are_cut() {
        // Chunks over all rows, as of files with a map for each channel: 3.3 GB at once.
        assert_eq!(rows([100_000, 8192], Some(100_000)), 2048);
        assert_eq!(rows_within(50_000, [100, 1024], Some(100)), 12);
        assert_eq!(rows_within(0, [100, 1024], Some(100)), 1, "a row is the least");
    }
}
