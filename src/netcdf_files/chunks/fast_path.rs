//! Reading past the reader process, as far as the way values are stored allows it.

use std::collections::BTreeMap;
use std::io;
use std::path::Path;
use std::sync::{Arc, Mutex, OnceLock, PoisonError};
use std::time::Duration;

use super::chunk_file::ChunkFile;
use super::decode::{AtWork, Decoder, ScratchPool, Stopped};
use super::table::{CheckedTable, ChunkTable};
use crate::netcdf_files::{FileFormat, FileIndex, ReadError, ReadFault, Samples, Variable};
use crate::system::{Cancel, FileStamp};

/// Smaller variables, in bytes, come from the reader with one question instead of two.
const WORTH_ASKING: usize = 256 << 10;

/// How values are wanted.
#[derive(Debug, Clone, Copy, Default)]
pub struct Demand<'a> {
    /// A person waits for them: before all that is not urgent, and past the pool of threads.
    pub urgent: bool,
    /// By the thread that asks and no other. One that holds a lock must ask so: while it waits for
    /// others of its pool it may be given work that needs the same lock.
    pub alone: bool,
    /// The wish to stop.
    pub cancel: Option<&'a Cancel>,
}

/// What is known of a file's chunks, and the memory to decode them in.
#[derive(Default)]
pub struct FastPath {
    file: OnceLock<ChunkFile>,
    tables: Mutex<BTreeMap<String, Option<Arc<CheckedTable>>>>,
    scratch: ScratchPool,
}

impl std::fmt::Debug for FastPath {
    fn fmt(&self, formatter: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        formatter.debug_struct("FastPath").finish_non_exhaustive()
    }
}

/// A file as the one who opened it knows it.
#[derive(Debug, Clone, Copy)]
pub struct KnownFile<'a> {
    /// Its path as it was named, for messages.
    pub path: &'a Path,
    /// Its absolute path.
    pub opened: &'a Path,
    /// Its stamp.
    pub stamp: FileStamp,
    /// What it holds.
    pub index: &'a FileIndex,
    /// How long the file system may take for each thing.
    pub limit: Duration,
}

impl FastPath {
    /// Keeps memory for chunks at hand until the answer is dropped.
    pub fn at_work(&self) -> AtWork<'_> {
        self.scratch.at_work()
    }

    /// Reads a block, which lies inside the variable; nothing where the reader process has to.
    ///
    /// `ask` asks the reader for the variable's chunk table, once; it answers nothing where the
    /// library says that there is none.
    pub fn read(
        &self,
        known: KnownFile<'_>,
        variable: &Variable,
        (start, count): (&[usize], &[usize]),
        demand: Demand<'_>,
        ask: impl FnOnce() -> Result<Option<ChunkTable>, ReadError>,
    ) -> Result<Option<Samples>, ReadError> {
        if !is_worth_it(known.index, variable) || count.contains(&0) {
            return Ok(None);
        }
        let Some(table) = self.table(known, variable, ask)? else { return Ok(None) };
        let file = self.file(known)?;
        let decoder = Decoder {
            table: &table,
            file,
            scratch: &self.scratch,
            cancel: demand.cancel,
            shared: !(demand.urgent || demand.alone),
        };
        let samples = decoder.block(start, count);
        // Whatever came out of a file that has changed is worth nothing, good or bad: neither another
        // file in its place nor other bytes in the same one.
        check_unchanged(known, file.stamp_if_still_at(known.opened))?;
        match samples {
            Ok(samples) => Ok(Some(samples)),
            Err(stopped) => {
                Err(ReadError::new(known.path, fault_of(stopped, variable, &table, known.limit)))
            }
        }
    }

    fn table(
        &self,
        known: KnownFile<'_>,
        variable: &Variable,
        ask: impl FnOnce() -> Result<Option<ChunkTable>, ReadError>,
    ) -> Result<Option<Arc<CheckedTable>>, ReadError> {
        if let Some(table) = self.tables().get(&variable.path) {
            return Ok(table.clone());
        }
        // Not locked meanwhile: two may ask for the same table, but nobody urgent waits for another.
        let lengths = known.index.lengths(variable);
        let table = ask()?
            .and_then(|table| table.check(variable.kind, &lengths, known.stamp).ok())
            .map(Arc::new);
        self.tables().insert(variable.path.clone(), table.clone());
        Ok(table)
    }

    fn tables(&self) -> std::sync::MutexGuard<'_, BTreeMap<String, Option<Arc<CheckedTable>>>> {
        // Entries are put whole, so a panic elsewhere spoils nothing.
        self.tables.lock().unwrap_or_else(PoisonError::into_inner)
    }

    fn file(&self, known: KnownFile<'_>) -> Result<&ChunkFile, ReadError> {
        if let Some(file) = self.file.get() {
            return Ok(file);
        }
        let file = ChunkFile::open(known.opened, known.limit)
            .map_err(|error| ReadError::of_slow_system(known.path, &error, known.limit))?;
        Ok(self.file.get_or_init(|| file))
    }
}

fn is_worth_it(index: &FileIndex, variable: &Variable) -> bool {
    let size = if variable.kind.is_number() { variable.kind.size() } else { None };
    let bytes = index
        .lengths(variable)
        .iter()
        .try_fold(size.unwrap_or(0), |product, &length| product.checked_mul(length));
    index.format == FileFormat::Netcdf4 && bytes.is_some_and(|bytes| bytes >= WORTH_ASKING)
}

fn check_unchanged(known: KnownFile<'_>, now: io::Result<FileStamp>) -> Result<(), ReadError> {
    match now {
        Ok(stamp) if stamp == known.stamp => Ok(()),
        Ok(_) => Err(ReadError::new(known.path, ReadFault::Changed)),
        Err(error) => Err(ReadError::of_slow_system(known.path, &error, known.limit)),
    }
}

fn fault_of(
    stopped: Stopped,
    variable: &Variable,
    table: &CheckedTable,
    limit: Duration,
) -> ReadFault {
    let what = format!("variable `{}`", crate::system::clean_text(&variable.path));
    match stopped {
        Stopped::Cancelled => ReadFault::Cancelled { what },
        Stopped::Chunk { fault, .. } if fault.is_late() => ReadFault::TimedOut { what, limit },
        Stopped::Chunk { number, fault } => {
            ReadFault::Chunk { what, place: table.grid.place(number), how: fault.to_string() }
        }
    }
}
