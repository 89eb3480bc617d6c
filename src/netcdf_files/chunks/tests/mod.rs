//! What comes out of chunks equals what the netCDF library reads from the same file.

mod damage;
mod equality;
mod geometry;

use std::path::{Path, PathBuf};

use super::{Demand, FastPath, KnownFile};
use crate::netcdf_files::library_file::LibraryFile;
use crate::netcdf_files::{FileIndex, ReadError, Samples, Variable, with_values};
use crate::system::FileStamp;

/// A file in the hands of the library and of the fast path.
struct Both {
    path: PathBuf,
    library: LibraryFile,
    index: FileIndex,
    stamp: FileStamp,
    fast: FastPath,
}

impl Both {
    fn open(path: &Path) -> Self {
        let library = LibraryFile::open(path).unwrap();
        Self {
            path: path.to_owned(),
            index: library.index().unwrap(),
            library,
            stamp: FileStamp::of(path).unwrap(),
            fast: FastPath::default(),
        }
    }

    fn variable(&self, path: &str) -> &Variable {
        self.index.variable(path).unwrap()
    }

    /// What the fast path reads; nothing where it leaves the variable to the library.
    fn fast_read(
        &self,
        path: &str,
        start: &[usize],
        count: &[usize],
        demand: Demand<'_>,
    ) -> Result<Option<Samples>, ReadError> {
        let known = KnownFile {
            path: &self.path,
            opened: &self.path,
            stamp: self.stamp,
            index: &self.index,
            limit: std::time::Duration::from_secs(60),
        };
        let ask = || Ok(self.library.chunks(path).ok());
        self.fast.read(known, self.variable(path), (start, count), demand, ask)
    }

    /// The bytes of a block as the library reads it, least significant first.
    fn library_read(&self, path: &str, start: &[usize], count: &[usize]) -> Vec<u8> {
        let mut bytes = Vec::new();
        self.library.read_values(path, start, count, &mut bytes).unwrap();
        bytes
    }

    /// Asserts that a block is the same in both hands, read by one thread and by several.
    fn assert_equal(&self, path: &str, start: &[usize], count: &[usize]) {
        let expected = self.library_read(path, start, count);
        for urgent in [false, true] {
            let demand = Demand { urgent, ..Demand::default() };
            let samples = self.fast_read(path, start, count, demand).unwrap();
            let samples = samples.unwrap_or_else(|| panic!("{path} was left to the library"));
            assert!(bytes_of(&samples) == expected, "{path} from {start:?} of {count:?}");
        }
    }

    /// The same for the whole variable and for some of its blocks.
    fn assert_all_equal(&self, path: &str) {
        let lengths = self.index.lengths(self.variable(path));
        self.assert_equal(path, &vec![0; lengths.len()], &lengths);
        for part in 2..5 {
            let start: Vec<usize> = lengths.iter().map(|length| length / (part + 1)).collect();
            let count: Vec<usize> = lengths.iter().map(|length| length.div_ceil(part)).collect();
            self.assert_equal(path, &start, &count);
        }
        let last: Vec<usize> = lengths.iter().map(|length| length - 1).collect();
        self.assert_equal(path, &last, &vec![1; lengths.len()]);
    }

    fn assert_left_to_library(&self, path: &str) {
        let lengths = self.index.lengths(self.variable(path));
        let start = vec![0; lengths.len()];
        let samples = self.fast_read(path, &start, &lengths, Demand::default()).unwrap();
        assert!(samples.is_none(), "{path} was decoded");
    }
}

fn bytes_of(samples: &Samples) -> Vec<u8> {
    with_values!(
        samples,
        values => values.iter().flat_map(|value| value.to_le_bytes()).collect(),
        _texts => panic!("strings")
    )
}

/// Numbers that use all bytes of their type, from a linear congruential generator (the constants of
/// Knuth's MMIX), smoothed by a running index so that they deflate.
fn numbers(count: usize) -> impl Iterator<Item = u64> {
    let mut state = 1_u64;
    (0..count as u64).map(move |index| {
        state =
            state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        (index << 40) ^ (state >> 45)
    })
}
