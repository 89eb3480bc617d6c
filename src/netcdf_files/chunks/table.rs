//! Where the chunks of a variable lie in its file: the reader's answer, checked before it is used.

use serde::{Deserialize, Serialize};

use super::filters::{CHECKSUM_LENGTH, ChunkFilter};
use super::grid::Grid;
use crate::netcdf_files::ValueKind;
use crate::system::FileStamp;

/// The version of the table's own form; both ends are the same program, so it must agree.
pub const TABLE_VERSION: u32 = 1;

/// More chunks than this are left to the library: the lists kept for them would outgrow the gain.
pub const MOST_CHUNKS: usize = 1 << 17;

/// Larger chunks, in bytes of values, are left to the reader process and its memory limit.
pub const LARGEST_CHUNK: usize = 64 << 20;

/// More dimensions than HDF5 allows are a sign of damage.
const MOST_DIMENSIONS: usize = 32;

/// Deflated bytes may be a little more than what went in, for each block of the stream.
const DEFLATE_ROOM: usize = 1024;

/// How a variable's values are stored, and where.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct ChunkTable {
    /// The version of this form.
    pub version: u32,
    /// The file that the reader had open.
    pub stamp: FileStamp,
    /// The type of the values.
    pub kind: ValueKind,
    /// Whether the most significant byte comes first.
    pub big_endian: bool,
    /// The lengths of the variable's dimensions, slowest first.
    pub lengths: Vec<usize>,
    /// The lengths of a chunk.
    pub chunk: Vec<usize>,
    /// Whether chunks at the far edges end with the variable instead of holding unused places.
    pub clipped: bool,
    /// The filters that the values passed when they were written, in that order.
    pub filters: Vec<ChunkFilter>,
    /// The value of places in chunks that were never written, little-endian; none where it is not
    /// settled.
    pub fill: Option<Vec<u8>>,
    /// The chunks that are in the file, by their number.
    pub chunks: Vec<StoredChunk>,
}

/// A chunk in the file.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
pub struct StoredChunk {
    /// Its place among all chunks of the variable, counted row by row.
    pub number: usize,
    /// Where its bytes begin in the file.
    pub address: u64,
    /// How many bytes there are.
    pub size: usize,
    /// Bit n says that filter n was left out.
    pub mask: u32,
}

/// A table whose every number has been checked.
#[derive(Debug)]
pub struct CheckedTable {
    /// How the chunks tile the variable.
    pub grid: Grid,
    /// The type of the values.
    pub kind: ValueKind,
    /// Bytes of one value.
    pub value_size: usize,
    /// Whether the most significant byte comes first.
    pub big_endian: bool,
    /// The filters, in the order of writing.
    pub filters: Vec<ChunkFilter>,
    /// The fill value, little-endian.
    pub fill: Option<Vec<u8>>,
    chunks: Vec<StoredChunk>,
}

impl CheckedTable {
    /// The chunk with that number, if it is in the file.
    pub fn stored(&self, number: usize) -> Option<&StoredChunk> {
        let place = self.chunks.binary_search_by_key(&number, |chunk| chunk.number).ok()?;
        self.chunks.get(place)
    }
}

impl ChunkTable {
    /// The table for a variable of the given type and lengths, in the file with the given stamp; or
    /// what is wrong with it.
    pub fn check(
        self,
        kind: ValueKind,
        lengths: &[usize],
        stamp: FileStamp,
    ) -> Result<CheckedTable, &'static str> {
        require(self.version == TABLE_VERSION, "a table of another version")?;
        require(self.stamp == stamp, "the reader had another file open")?;
        require(self.kind == kind && kind.is_number(), "values of another type")?;
        require(self.lengths == lengths, "the variable has other lengths")?;
        require((1..=MOST_DIMENSIONS).contains(&lengths.len()), "too many dimensions")?;
        let value_size = kind.size().ok_or("values without a size")?;
        let grid = Grid::new(&self.lengths, &self.chunk, self.clipped)
            .ok_or("chunks that do not fit the variable")?;
        require(grid.chunks() <= MOST_CHUNKS, "too many chunks")?;
        require(grid.chunk_values() <= LARGEST_CHUNK / value_size, "chunks that are too large")?;
        self.check_filters()?;
        self.check_fill(value_size, &grid)?;
        self.check_chunks(&grid, value_size)?;
        Ok(CheckedTable {
            grid,
            kind,
            value_size,
            big_endian: self.big_endian,
            filters: self.filters,
            fill: self.fill,
            chunks: self.chunks,
        })
    }

    fn check_filters(&self) -> Result<(), &'static str> {
        let twice = |(place, filter): (usize, &ChunkFilter)| self.filters[..place].contains(filter);
        require(!self.filters.iter().enumerate().any(twice), "a filter that is used twice")?;
        require(!self.clipped || self.filters.is_empty(), "filters without chunks")
    }

    fn check_fill(&self, value_size: usize, grid: &Grid) -> Result<(), &'static str> {
        let fits = self.fill.as_ref().is_none_or(|fill| fill.len() == value_size);
        require(fits, "a fill value of another size")?;
        let complete = self.chunks.len() == grid.chunks();
        require(complete || self.fill.is_some(), "unwritten chunks without a fill value")
    }

    fn check_chunks(&self, grid: &Grid, value_size: usize) -> Result<(), &'static str> {
        let ordered = self.chunks.is_sorted_by(|one, next| one.number < next.number);
        require(ordered, "chunks out of order")?;
        let inside = self.chunks.last().is_none_or(|chunk| chunk.number < grid.chunks());
        require(inside, "a chunk outside of the variable")?;
        for chunk in &self.chunks {
            let end = chunk.address.checked_add(chunk.size as u64);
            let in_file = end.is_some_and(|end| end <= self.stamp.size()) && chunk.address > 0;
            require(in_file, "a chunk outside of the file")?;
            let bytes = grid.stored_values(chunk.number) * value_size;
            require(self.size_is_possible(chunk, bytes), "a chunk of an impossible size")?;
        }
        Ok(())
    }

    /// Whether a chunk of `bytes` bytes of values can have the size that it has in the file.
    fn size_is_possible(&self, chunk: &StoredChunk, bytes: usize) -> bool {
        let used = |filter: ChunkFilter| {
            let place = self.filters.iter().position(|&candidate| candidate == filter);
            place.is_some_and(|place| chunk.mask & (1 << place) == 0)
        };
        let checksum = if used(ChunkFilter::Fletcher32) { CHECKSUM_LENGTH } else { 0 };
        match used(ChunkFilter::Deflate) {
            false => chunk.size == bytes + checksum,
            true => chunk.size > 0 && chunk.size <= 2 * bytes + DEFLATE_ROOM,
        }
    }
}

fn require(holds: bool, fault: &'static str) -> Result<(), &'static str> {
    if holds { Ok(()) } else { Err(fault) }
}
