//! Chunks and tables of them out of any bytes, for [`crate::netcdf_files::any_bytes`].

use std::path::Path;
use std::time::Duration;

use super::chunk_file::ChunkFile;
use super::decode::{Decoder, ScratchPool};
use super::filters::{ChunkFilter, Scratch, Undone, undo};
use super::table::ChunkTable;

/// Larger variables take too long to be tried often.
const MOST_VALUES: usize = 1 << 16;

/// Reads a table and, if it holds, all values of its variable out of `file`; whether it got so far.
pub fn table(bytes: &[u8], file: &Path) -> bool {
    let Ok(table) = postcard::from_bytes::<ChunkTable>(bytes) else { return false };
    let (kind, lengths, stamp) = (table.kind, table.lengths.clone(), table.stamp);
    let Ok(table) = table.check(kind, &lengths, stamp) else { return false };
    let values: usize = lengths.iter().product();
    if values > MOST_VALUES || table.grid.chunk_values() > MOST_VALUES {
        return false;
    }
    let Ok(file) = ChunkFile::open(file, Duration::from_secs(10)) else { return false };
    let scratch = ScratchPool::default();
    let decoder =
        Decoder { table: &table, file: &file, scratch: &scratch, cancel: None, shared: false };
    if let Ok(samples) = decoder.block(&vec![0; lengths.len()], &lengths) {
        assert_eq!(samples.len(), values);
    }
    true
}

/// Undoes filters, all of them named by the first six bytes, on the other bytes.
pub fn undone(bytes: &[u8]) {
    let Some((&[order, count, mask, size, low, high], chunk)) = bytes.split_first_chunk() else {
        return;
    };
    let all = [ChunkFilter::Shuffle, ChunkFilter::Deflate, ChunkFilter::Fletcher32];
    let mut filters: Vec<ChunkFilter> = (0..3).map(|n| all[(n + usize::from(order)) % 3]).collect();
    filters.truncate(usize::from(count) % 4);
    if order & 0x80 != 0 {
        filters.reverse();
    }
    let (values, size) = (usize::from(u16::from_le_bytes([low, high])), 1 << (size % 4));
    let mut scratch = Scratch::new();
    scratch.bytes = chunk.to_vec();
    if let Ok(Undone::Plain(bytes) | Undone::Planes(bytes)) =
        undo(&filters, mask.into(), values, size, &mut scratch)
    {
        assert_eq!(bytes.len(), values * size);
    }
}

/// The bytes of a table that holds: four chunks of floats, two of them never written.
#[cfg(test)]
pub fn sound_table() -> Vec<u8> {
    use super::table::{StoredChunk, TABLE_VERSION};
    let stored = |number: usize| StoredChunk {
        number,
        address: 64 + 400 * number as u64,
        size: 400,
        mask: 0,
    };
    let metadata = std::fs::metadata(env!("CARGO_MANIFEST_PATH")).unwrap();
    let table = ChunkTable {
        version: TABLE_VERSION,
        stamp: crate::system::FileStamp::from(&metadata),
        kind: crate::netcdf_files::ValueKind::F32,
        big_endian: true,
        lengths: vec![20, 15],
        chunk: vec![10, 10],
        clipped: false,
        filters: vec![ChunkFilter::Shuffle],
        fill: Some(vec![0; 4]),
        chunks: vec![stored(0), stored(3)],
    };
    postcard::to_stdvec(&table).unwrap()
}
