//! Damaged chunks, tables and files: clean errors, never a panic, never wrong values.

use std::path::Path;

use proptest::prelude::*;

use super::{Both, numbers};
use crate::netcdf_files::chunks::filters::{ChunkFilter, Scratch, undo};
use crate::netcdf_files::chunks::table::{ChunkTable, StoredChunk, TABLE_VERSION};
use crate::netcdf_files::{Demand, ReadFault, ValueKind};
use crate::system::{Cancel, FileStamp};

const LENGTHS: [usize; 2] = [300, 500];
const CHUNK: [usize; 2] = [50, 500];

/// A file with one variable `v` of floats, all filters on; the bytes of its chunk 1.
fn write_checked(path: &Path) -> StoredChunk {
    let file = hdf5_metno::File::create(path).unwrap();
    let builder = file.new_dataset_builder().shuffle().deflate(4).fletcher32().chunk(CHUNK);
    let data = builder.empty::<f32>().shape(LENGTHS).create("v").unwrap();
    let values: Vec<f32> = numbers(LENGTHS.iter().product()).map(|n| n as f32).collect();
    data.as_writer().write_raw(&values).unwrap();
    let chunk = data.chunk_info(1).unwrap();
    file.close().unwrap();
    StoredChunk { number: 1, address: chunk.addr, size: chunk.size as usize, mask: 0 }
}

fn change(path: &Path, change: impl FnOnce(&mut Vec<u8>)) {
    let mut bytes = std::fs::read(path).unwrap();
    change(&mut bytes);
    std::fs::write(path, bytes).unwrap();
}

#[test]
fn a_damaged_chunk_is_named_and_the_others_are_read() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("file.h5");
    let chunk = write_checked(&path);
    let middle = chunk.address as usize + chunk.size / 2;
    change(&path, |bytes| bytes[middle] ^= 0x10);
    let both = Both::open(&path);
    let error = both.fast_read("v", &[0, 0], &LENGTHS, Demand::default()).unwrap_err();
    let ReadFault::Chunk { what, place, .. } = &error.fault else { panic!("{error}") };
    assert_eq!((what.as_str(), place.as_slice()), ("variable `v`", [50, 0].as_slice()));
    assert!(error.to_string().contains("file.h5"), "{error}");
    both.assert_equal("v", &[0, 0], &[50, 500]);
    both.assert_equal("v", &[100, 0], &[200, 500]);
}

#[test]
fn a_checksum_that_does_not_hold_is_found() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("file.h5");
    let chunk = write_checked(&path);
    let last = chunk.address as usize + chunk.size - 1;
    change(&path, |bytes| bytes[last] ^= 1);
    let both = Both::open(&path);
    let error = both.fast_read("v", &[60, 0], &[1, 1], Demand::default()).unwrap_err();
    assert!(error.to_string().contains("checksum"), "{error}");
}

/// Bits without any order: the finaliser of SplitMix64.
fn scrambled(number: u64) -> u32 {
    let number = (number ^ (number >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
    let number = (number ^ (number >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
    (number >> 32) as u32
}

/// Both filters left out of one chunk, as a program may do that finds no gain in them: what the
/// chunk holds is then smaller than what the filters made of it, and stands in its place.
#[test]
fn filters_left_out_of_one_chunk_are_not_undone() {
    let folder = tempfile::tempdir().unwrap();
    for (left_out, mask) in [(&[ChunkFilter::Deflate][..], 0b10), (&[], 0b11)] {
        let path = folder.path().join(format!("{mask}.h5"));
        // The old form of the list of chunks has no checksum, so that it can be changed here.
        let mut builder = hdf5_metno::file::FileBuilder::new();
        builder.with_fapl(|plan| plan.libver_earliest());
        let file = builder.create(&path).unwrap();
        let builder = file.new_dataset_builder().shuffle().deflate(1).chunk(CHUNK);
        let data = builder.empty::<u32>().shape(LENGTHS).create("v").unwrap();
        // Bits without any order: deflated, they take a few bytes more than before.
        let values: Vec<u32> =
            (0..LENGTHS.iter().product::<usize>() as u64).map(scrambled).collect();
        data.as_writer().write_raw(&values).unwrap();
        let chunk = data.chunk_info(2).unwrap();
        drop(data);
        file.close().unwrap();
        let mut raw: Vec<u8> =
            values[50_000..75_000].iter().flat_map(|value| value.to_le_bytes()).collect();
        assert!(chunk.size as usize >= raw.len(), "the chunk has no room");
        if !left_out.is_empty() {
            raw = (0..4).flat_map(|plane| raw.iter().skip(plane).step_by(4).copied()).collect();
        }
        // A key of the chunk tree: size, mask, place of the chunk, and zero for the value's bytes.
        let key = |size: u32, mask: u32| {
            let mut key: Vec<u8> = [size, mask].iter().flat_map(|n| n.to_le_bytes()).collect();
            key.extend([100_u64, 0, 0].iter().flat_map(|n| n.to_le_bytes()));
            key
        };
        change(&path, |bytes| {
            let address = chunk.addr as usize;
            bytes[address..address + raw.len()].copy_from_slice(&raw);
            let old = key(chunk.size as u32, 0);
            let at = bytes.windows(old.len()).position(|window| window == old).unwrap();
            bytes[at..at + old.len()].copy_from_slice(&key(raw.len() as u32, mask));
        });
        let both = Both::open(&path);
        assert_eq!(both.library.chunks("v").unwrap().chunks[2].mask, mask);
        both.assert_all_equal("v");
        let expected: Vec<u8> = values.iter().flat_map(|value| value.to_le_bytes()).collect();
        assert!(both.library_read("v", &[0, 0], &LENGTHS) == expected);
    }
}

#[test]
fn a_file_that_shrinks_or_changes_is_an_error() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("file.h5");
    write_checked(&path);
    let both = Both::open(&path);
    both.assert_equal("v", &[0, 0], &LENGTHS);
    let file = std::fs::OpenOptions::new().write(true).open(&path).unwrap();
    file.set_len(5000).unwrap();
    let error = both.fast_read("v", &[0, 0], &LENGTHS, Demand::default()).unwrap_err();
    assert!(matches!(error.fault, ReadFault::Changed), "{error}");
}

#[test]
fn a_raised_wish_stops_the_reading() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("file.h5");
    write_checked(&path);
    let both = Both::open(&path);
    let cancel = Cancel::new();
    let demand = Demand { cancel: Some(&cancel), ..Demand::default() };
    assert!(both.fast_read("v", &[0, 0], &LENGTHS, demand).unwrap().is_some());
    cancel.cancel();
    let error = both.fast_read("v", &[0, 0], &LENGTHS, demand).unwrap_err();
    assert!(matches!(error.fault, ReadFault::Cancelled { .. }), "{error}");
}

fn stamp() -> FileStamp {
    let file = tempfile::NamedTempFile::new().unwrap();
    file.as_file().set_len(1 << 20).unwrap();
    FileStamp::of(file.path()).unwrap()
}

/// A sound table of four chunks.
fn table(stamp: FileStamp) -> ChunkTable {
    let chunk = |number: usize| StoredChunk {
        number,
        address: 4096 * (1 + number as u64),
        size: 900,
        mask: 0,
    };
    ChunkTable {
        version: TABLE_VERSION,
        stamp,
        kind: ValueKind::F32,
        big_endian: false,
        lengths: vec![20, 15],
        chunk: vec![10, 10],
        clipped: false,
        filters: vec![ChunkFilter::Shuffle, ChunkFilter::Deflate],
        fill: None,
        chunks: (0..4).map(chunk).collect(),
    }
}

#[test]
fn every_number_of_a_table_is_checked() {
    let stamp = stamp();
    let check = |table: ChunkTable| table.check(ValueKind::F32, &[20, 15], stamp).map(|_| ());
    check(table(stamp)).unwrap();
    let spoilers: [fn(&mut ChunkTable); 17] = [
        |table| table.version += 1,
        |table| table.kind = ValueKind::F64,
        |table| table.lengths[0] += 1,
        |table| table.chunk[0] = 0,
        |table| table.chunk[0] = usize::MAX,
        |table| table.chunk[0] = 1 << 24,
        |table| table.chunk.truncate(1),
        |table| table.clipped = true,
        |table| table.filters.push(ChunkFilter::Deflate),
        |table| table.fill = Some(vec![0; 3]),
        |table| table.chunks.truncate(3),
        |table| table.chunks[3].number = 4,
        |table| table.chunks[3].number = 2,
        |table| table.chunks[3].address = u64::MAX,
        |table| table.chunks[3].address = (1 << 20) - 899,
        |table| table.chunks[3].size = usize::MAX,
        |table| table.chunks[3].mask = 0b10,
    ];
    for (number, spoil) in spoilers.iter().enumerate() {
        let mut table = table(stamp);
        spoil(&mut table);
        assert!(check(table).is_err(), "spoiler {number}");
    }
}

fn filters() -> impl Strategy<Value = Vec<ChunkFilter>> {
    let all = vec![ChunkFilter::Shuffle, ChunkFilter::Deflate, ChunkFilter::Fletcher32];
    prop::sample::subsequence(all, 0..=3).prop_shuffle()
}

proptest! {
    /// A table with any of its bytes changed is refused, or can be followed: reading through it ends
    /// with values or with an error.
    #[test]
    fn changed_tables_are_refused_or_followed(
        changes in prop::collection::vec((any::<prop::sample::Index>(), any::<u8>()), 1..6),
    ) {
        let stamp = stamp();
        let mut bytes = postcard::to_stdvec(&table(stamp)).unwrap();
        for (place, byte) in &changes {
            let place = place.index(bytes.len());
            bytes[place] = *byte;
        }
        if let Ok(table) = postcard::from_bytes::<ChunkTable>(&bytes)
            && let Ok(table) = table.check(ValueKind::F32, &[20, 15], stamp)
        {
            for piece in table.grid.pieces(&[3, 4], &[12, 11]) {
                let Some(chunk) = table.stored(piece.number) else { continue };
                let mut scratch = Scratch::new();
                scratch.bytes = vec![0; chunk.size];
                let values = piece.stored_values;
                let _ = undo(&table.filters, chunk.mask, values, table.value_size, &mut scratch);
            }
        }
    }

    /// Any bytes, through any filters, give as many bytes as the chunk has or a fault.
    #[test]
    fn any_bytes_are_a_chunk_or_a_fault(
        filters in filters(),
        mask in 0_u32..16,
        values in 0_usize..40,
        value_size in prop::sample::select(vec![1_usize, 2, 4, 8]),
        bytes in prop::collection::vec(any::<u8>(), 0..400),
    ) {
        use crate::netcdf_files::chunks::filters::Undone;
        let mut scratch = Scratch::new();
        scratch.bytes = bytes;
        if let Ok(Undone::Plain(bytes) | Undone::Planes(bytes)) =
            undo(&filters, mask, values, value_size, &mut scratch)
        {
            prop_assert_eq!(bytes.len(), values * value_size);
        }
    }
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(32))]
    /// Damage anywhere in the chunks: either the checksum tells, or nothing has changed.
    #[test]
    fn flipped_bytes_never_give_other_values(place in any::<prop::sample::Index>(), bit in 0..8) {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("file.h5");
        let chunk = write_checked(&path);
        let good = Both::open(&path).fast_read("v", &[0, 0], &LENGTHS, Demand::default());
        change(&path, |bytes| {
            bytes[chunk.address as usize + place.index(chunk.size)] ^= 1_u8 << bit;
        });
        if let Ok(samples) = Both::open(&path).fast_read("v", &[0, 0], &LENGTHS, Demand::default()) {
            prop_assert_eq!(samples, good.unwrap());
        }
    }
}
