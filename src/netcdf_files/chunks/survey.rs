//! Asks HDF5 where the chunks of a variable lie. Runs in the reader process and in tests only.

use hdf5_metno::dataset::{ChunkOpts, DatasetCreate, FillTime, Layout};
use hdf5_metno::datatype::{ByteOrder, Datatype};
use hdf5_metno::filters::Filter;
use hdf5_metno::types::H5Type;
use hdf5_metno::{Dataset, File};

use super::filters::ChunkFilter;
use super::grid::Grid;
use super::table::{ChunkTable, MOST_CHUNKS, StoredChunk, TABLE_VERSION};
use crate::netcdf_files::ValueKind;
use crate::system::FileStamp;

/// Values stored in one piece are taken in parts of about this many bytes.
const PART: usize = 1 << 20;

/// What the netCDF library puts before the name of a variable that shares it with a dimension but is
/// no coordinate of it; the dimension has the plain name.
const BESIDE_DIMENSION: &str = "_nc4_non_coord_";

/// Why the values are left to the library.
type Unfit = String;

/// The chunk table of the variable at `path`, with values of type `kind`; or why there is none.
pub fn survey(
    file: &File,
    path: &str,
    kind: ValueKind,
    stamp: FileStamp,
) -> Result<ChunkTable, Unfit> {
    let data = dataset(file, path)?;
    let plan = data.dcpl().map_err(words)?;
    if data.filename() != file.filename() || !plan.get_external().map_err(words)?.is_empty() {
        return Err("its values are in another file".into());
    }
    let big_endian = byte_order(&data.dtype().map_err(words)?, kind)?;
    let lengths = data.get_shape().map_err(words)?;
    let mut table = ChunkTable {
        version: TABLE_VERSION,
        stamp,
        kind,
        big_endian,
        lengths,
        chunk: Vec::new(),
        clipped: false,
        filters: filters(&plan)?,
        fill: fill(&plan, kind)?,
        chunks: Vec::new(),
    };
    match plan.get_layout().map_err(words)? {
        Layout::Chunked => chunked(&data, &plan, &mut table)?,
        Layout::Contiguous => contiguous(&data, &mut table)?,
        Layout::Compact | Layout::Virtual => return Err("its layout is not chunked".into()),
    }
    Ok(table)
}

fn words(error: hdf5_metno::Error) -> Unfit {
    error.to_string()
}

fn dataset(file: &File, path: &str) -> Result<Dataset, Unfit> {
    let (group, name) = path.rsplit_once('/').unwrap_or(("", path));
    let beside = format!("{group}/{BESIDE_DIMENSION}{name}");
    file.dataset(&beside).or_else(|_| file.dataset(path)).map_err(words)
}

/// Whether the most significant byte comes first, if the type is exactly the one expected.
fn byte_order(stored: &Datatype, kind: ValueKind) -> Result<bool, Unfit> {
    match kind {
        ValueKind::I8 => byte_order_of::<i8>(stored),
        ValueKind::U8 => byte_order_of::<u8>(stored),
        ValueKind::I16 => byte_order_of::<i16>(stored),
        ValueKind::U16 => byte_order_of::<u16>(stored),
        ValueKind::I32 => byte_order_of::<i32>(stored),
        ValueKind::U32 => byte_order_of::<u32>(stored),
        ValueKind::I64 => byte_order_of::<i64>(stored),
        ValueKind::U64 => byte_order_of::<u64>(stored),
        ValueKind::F32 => byte_order_of::<f32>(stored),
        ValueKind::F64 => byte_order_of::<f64>(stored),
        ValueKind::Text | ValueKind::Character | ValueKind::Other => None,
    }
    .ok_or_else(|| "its values are of an unusual type".into())
}

fn byte_order_of<Value: H5Type>(stored: &Datatype) -> Option<bool> {
    if stored.is::<Value>() {
        return Some(cfg!(target_endian = "big"));
    }
    let same = stored.to_descriptor().ok()? == Value::type_descriptor();
    match stored.byte_order() {
        ByteOrder::BigEndian if same => Some(true),
        _ => None,
    }
}

/// Only what is undone exactly; an error in telling the filters must not look like no filters.
fn filters(plan: &DatasetCreate) -> Result<Vec<ChunkFilter>, Unfit> {
    let known = |filter: &Filter| match filter {
        Filter::Shuffle => Ok(ChunkFilter::Shuffle),
        Filter::Deflate(_) => Ok(ChunkFilter::Deflate),
        Filter::Fletcher32 => Ok(ChunkFilter::Fletcher32),
        other => Err(format!("its filter {other:?} is undone by the library only")),
    };
    plan.get_filters().map_err(words)?.iter().map(known).collect()
}

/// The fill value, unless the library leaves unwritten places as they happen to be.
fn fill(plan: &DatasetCreate, kind: ValueKind) -> Result<Option<Vec<u8>>, Unfit> {
    if plan.get_fill_time().map_err(words)? == FillTime::Never {
        return Ok(None);
    }
    macro_rules! fill_of {
        ($number:ty) => {
            plan.get_fill_value_as::<$number>()
                .map(|fill| fill.map(|fill| fill.to_le_bytes().to_vec()))
        };
    }
    match kind {
        ValueKind::I8 => fill_of!(i8),
        ValueKind::U8 => fill_of!(u8),
        ValueKind::I16 => fill_of!(i16),
        ValueKind::U16 => fill_of!(u16),
        ValueKind::I32 => fill_of!(i32),
        ValueKind::U32 => fill_of!(u32),
        ValueKind::I64 => fill_of!(i64),
        ValueKind::U64 => fill_of!(u64),
        ValueKind::F32 => fill_of!(f32),
        ValueKind::F64 => fill_of!(f64),
        ValueKind::Text | ValueKind::Character | ValueKind::Other => Ok(None),
    }
    .map_err(words)
}

fn chunked(data: &Dataset, plan: &DatasetCreate, table: &mut ChunkTable) -> Result<(), Unfit> {
    table.chunk = plan.get_chunk().map_err(words)?.ok_or("its chunks have no lengths")?;
    let options = plan.get_chunk_opts().map_err(words)?.unwrap_or(ChunkOpts::empty());
    if options.contains(ChunkOpts::DONT_FILTER_PARTIAL_CHUNKS) && !table.filters.is_empty() {
        return Err("its chunks at the edges are stored in another way".into());
    }
    let grid = Grid::new(&table.lengths, &table.chunk, false).ok_or("it is empty")?;
    let mut lost = false;
    let visit = data.chunks_visit(|chunk| {
        let place: Vec<usize> = chunk.offset.iter().map(|&place| place as usize).collect();
        match (grid.number_at(&place), usize::try_from(chunk.size)) {
            (Some(number), Ok(size)) if table.chunks.len() < MOST_CHUNKS => {
                let (address, mask) = (chunk.addr, chunk.filter_mask);
                table.chunks.push(StoredChunk { number, address, size, mask });
                0
            }
            // The rest need not be seen.
            _ => {
                lost = true;
                1
            }
        }
    });
    visit.map_err(words)?;
    if lost {
        return Err("its chunks are too many, or lie outside of it".into());
    }
    table.chunks.sort_unstable_by_key(|chunk| chunk.number);
    Ok(())
}

/// Values in one piece are taken as chunks that lie one behind the other.
fn contiguous(data: &Dataset, table: &mut ChunkTable) -> Result<(), Unfit> {
    let address = data.offset().ok_or("it was never written")?;
    let size = table.kind.size().ok_or("its values have no size")?;
    table.chunk = parts(&table.lengths, PART / size);
    table.clipped = true;
    let grid = Grid::new(&table.lengths, &table.chunk, true).ok_or("it is empty")?;
    if grid.chunks() > MOST_CHUNKS {
        return Err("it is too large".into());
    }
    let mut next = address;
    for number in 0..grid.chunks() {
        let bytes = grid.stored_values(number) * size;
        table.chunks.push(StoredChunk { number, address: next, size: bytes, mask: 0 });
        next = next.checked_add(bytes as u64).ok_or("it lies outside of the file")?;
    }
    Ok(())
}

/// Lengths of parts of at most `most` values whose values lie side by side in row-major order.
fn parts(lengths: &[usize], most: usize) -> Vec<usize> {
    let mut part = vec![1; lengths.len()];
    let mut values = 1;
    for axis in (0..lengths.len()).rev() {
        part[axis] = lengths[axis].min((most / values).max(1));
        values *= part[axis];
        if part[axis] < lengths[axis] {
            break;
        }
    }
    part
}
