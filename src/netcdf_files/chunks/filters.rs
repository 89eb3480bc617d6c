//! Undoing the filters that a chunk passed when it was written.

use libdeflater::{DecompressionError, Decompressor};
use serde::{Deserialize, Serialize};

use super::fault::ChunkFault;
use super::fletcher32;

/// Bytes of a checksum, which stand behind the bytes that it is of.
pub const CHECKSUM_LENGTH: usize = 4;

/// The filters that are undone here; HDF5 File Format Specification, section IV.A.2.l.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
pub enum ChunkFilter {
    /// All first bytes of the values, then all second ones, and so on.
    Shuffle,
    /// A zlib stream (RFC 1950).
    Deflate,
    /// A checksum behind the bytes.
    Fletcher32,
}

/// The memory that chunks are undone in, used for one after another.
pub struct Scratch {
    /// The chunk's bytes, as far as its filters have been undone; at first as they are in the file.
    pub bytes: Vec<u8>,
    spare: Vec<u8>,
    decompressor: Decompressor,
}

impl Scratch {
    /// Empty memory.
    pub fn new() -> Self {
        Self { bytes: Vec::new(), spare: Vec::new(), decompressor: Decompressor::new() }
    }

    /// Bytes of memory held.
    pub fn held(&self) -> usize {
        self.bytes.capacity() + self.spare.capacity()
    }
}

/// The values of a chunk, all filters undone but perhaps the shuffling of their bytes.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Undone<'a> {
    /// Value by value.
    Plain(&'a [u8]),
    /// All first bytes of the values, then all second ones, and so on.
    Planes(&'a [u8]),
}

/// Undoes the `filters` that `mask` does not leave out, on the bytes in `scratch`: `values` values of
/// `value_size` bytes come out, or a fault.
///
/// Shuffling that was done first of all is left for the copy into place to undo, which has to touch
/// every byte anyway.
pub fn undo<'a>(
    filters: &[ChunkFilter],
    mask: u32,
    values: usize,
    value_size: usize,
    scratch: &'a mut Scratch,
) -> Result<Undone<'a>, ChunkFault> {
    let used: Vec<ChunkFilter> = (0_u32..)
        .zip(filters)
        .filter(|(place, _)| mask.checked_shr(*place).unwrap_or(0) & 1 == 0)
        .map(|(_, &filter)| filter)
        .collect();
    for (place, filter) in used.iter().enumerate().rev() {
        let checksums = used[..place].iter().filter(|&&f| f == ChunkFilter::Fletcher32).count();
        let bytes = values * value_size + checksums * CHECKSUM_LENGTH;
        match filter {
            ChunkFilter::Deflate => inflate(bytes, scratch)?,
            ChunkFilter::Fletcher32 => take_checksum_off(&mut scratch.bytes)?,
            ChunkFilter::Shuffle if value_size == 1 => {}
            ChunkFilter::Shuffle if place == 0 => {
                return expect_length(&scratch.bytes, bytes).map(Undone::Planes);
            }
            ChunkFilter::Shuffle => {
                unshuffle(&scratch.bytes, value_size, &mut scratch.spare);
                std::mem::swap(&mut scratch.bytes, &mut scratch.spare);
            }
        }
    }
    expect_length(&scratch.bytes, values * value_size).map(Undone::Plain)
}

fn expect_length(bytes: &[u8], length: usize) -> Result<&[u8], ChunkFault> {
    if bytes.len() == length {
        Ok(bytes)
    } else {
        Err(ChunkFault::Length { found: bytes.len(), expected: length })
    }
}

fn inflate(bytes: usize, scratch: &mut Scratch) -> Result<(), ChunkFault> {
    scratch.spare.resize(bytes, 0);
    match scratch.decompressor.zlib_decompress(&scratch.bytes, &mut scratch.spare) {
        Ok(found) if found == bytes => {
            std::mem::swap(&mut scratch.bytes, &mut scratch.spare);
            Ok(())
        }
        Ok(found) => Err(ChunkFault::Length { found, expected: bytes }),
        Err(DecompressionError::InsufficientSpace) => Err(ChunkFault::TooLong { expected: bytes }),
        Err(DecompressionError::BadData) => Err(ChunkFault::Deflate),
    }
}

fn take_checksum_off(bytes: &mut Vec<u8>) -> Result<(), ChunkFault> {
    let (data, checksum) = bytes.split_last_chunk().ok_or(ChunkFault::Checksum)?;
    if !fletcher32::holds(data, u32::from_le_bytes(*checksum)) {
        return Err(ChunkFault::Checksum);
    }
    let length = data.len();
    bytes.truncate(length);
    Ok(())
}

/// Bytes behind the last whole value were left where they are.
fn unshuffle(shuffled: &[u8], value_size: usize, plain: &mut Vec<u8>) {
    let values = shuffled.len() / value_size;
    let (planes, rest) = shuffled.split_at(values * value_size);
    plain.clear();
    plain.resize(planes.len(), 0);
    for (plane, bytes) in planes.chunks_exact(values.max(1)).enumerate() {
        for (value, &byte) in plain.chunks_exact_mut(value_size).zip(bytes) {
            value[plane] = byte;
        }
    }
    plain.extend_from_slice(rest);
}
