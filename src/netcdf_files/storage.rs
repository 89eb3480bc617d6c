//! How values are stored: chunks, filters, byte order.

use std::path::Path;

use hdf5_metno::file::{FileBuilder, FileCloseDegree, OpenMode};
use hdf5_metno::filters::Filter;

use super::index::Storage;

/// The HDF5 view of a netCDF-4 file that the netCDF library has open as well.
pub struct StorageView(hdf5_metno::File);

impl StorageView {
    /// Opens the view; none for classic files and where HDF5 refuses.
    pub fn open(path: &Path) -> Option<Self> {
        let mut builder = FileBuilder::new();
        // The same degree as the netCDF library's, or HDF5 refuses to share the open file.
        builder.with_fapl(|fapl| fapl.fclose_degree(FileCloseDegree::Weak));
        builder.open_as(path, OpenMode::Read).ok().map(Self)
    }

    /// The file, as HDF5 knows it.
    pub fn file(&self) -> &hdf5_metno::File {
        &self.0
    }

    /// The filters of a variable: all in words, and the first one that is missing here.
    pub fn filters(&self, variable: &str) -> (Vec<String>, Option<String>) {
        let filters = self.0.dataset(variable).map(|data| data.filters()).unwrap_or_default();
        let words = filters.iter().map(in_words).collect();
        let missing = filters.iter().find(|filter| is_missing(filter)).map(in_words);
        (words, missing)
    }
}

/// The storage of a variable as the netCDF library tells it, with the filters that HDF5 tells.
pub fn storage_of(
    variable: &netcdf::Variable<'_>,
    path: &str,
    view: Option<&StorageView>,
) -> Storage {
    let chunks = variable.chunking().ok().flatten();
    // Only chunks pass filters; values in one piece need not be asked about.
    let view = view.filter(|_| chunks.is_some());
    let (filters, missing_filter) = view.map(|view| view.filters(path)).unwrap_or_default();
    let endianness = variable.endianness();
    Storage {
        chunks,
        filters,
        missing_filter,
        big_endian: matches!(endianness, Ok(netcdf::Endianness::Big)),
    }
}

fn is_missing(filter: &Filter) -> bool {
    matches!(filter, Filter::SZip(..) | Filter::User(..))
}

fn in_words(filter: &Filter) -> String {
    match filter {
        Filter::Deflate(level) => format!("deflate {level}"),
        Filter::Shuffle => "shuffle".into(),
        Filter::Fletcher32 => "fletcher32".into(),
        Filter::SZip(..) => "szip".into(),
        Filter::NBit => "nbit".into(),
        Filter::ScaleOffset(_) => "scale-offset".into(),
        Filter::User(number, _) => registered_name(*number),
    }
}

/// Names of the filters met most, by their numbers in the HDF Group's register.
fn registered_name(number: i32) -> String {
    let name = match number {
        307 => "bzip2",
        32000 => "lzf",
        32001 => "blosc",
        32004 => "lz4",
        32008 => "bitshuffle",
        32013 => "zfp",
        32015 => "zstd",
        32017 => "sz",
        32026 => "blosc2",
        _ => return format!("HDF5 filter {number}"),
    };
    format!("{name} (HDF5 filter {number})")
}
