//! A block of values out of the chunks that hold it.

use std::sync::{Mutex, MutexGuard, PoisonError};

use rayon::prelude::*;

use super::chunk_file::ChunkFile;
use super::fault::ChunkFault;
use super::filters::{Scratch, undo};
use super::grid::Piece;
use super::sample::{Sample, Source};
use super::table::CheckedTable;
use crate::netcdf_files::{Samples, ValueKind};
use crate::system::Cancel;

/// Shorter runs, in values, are not worth being handed to several threads.
const SHORTEST_SHARED_RUN: usize = 16;

/// Memory for a chunk, in bytes, that is kept when nobody works; more is given back.
const KEPT_SCRATCH: usize = 8 << 20;

/// Why there are no values.
#[derive(Debug)]
pub enum Stopped {
    /// Someone asked to stop.
    Cancelled,
    /// A chunk is damaged.
    Chunk {
        /// Its number.
        number: usize,
        /// What is wrong with it.
        fault: ChunkFault,
    },
}

/// Memory that threads undo chunks in, one piece for each that is at work.
#[derive(Default)]
pub struct ScratchPool(Mutex<Kept>);

#[derive(Default)]
struct Kept {
    scratch: Vec<Scratch>,
    at_work: usize,
}

/// Keeps the memory that large chunks take until it is dropped: taking it anew for each block costs
/// more than using it.
pub struct AtWork<'a>(&'a ScratchPool);

impl ScratchPool {
    /// Says that more blocks will follow soon.
    pub fn at_work(&self) -> AtWork<'_> {
        self.kept().at_work += 1;
        AtWork(self)
    }

    fn take(&self) -> Scratch {
        self.kept().scratch.pop().unwrap_or_else(Scratch::new)
    }

    fn give_back(&self, scratch: Scratch) {
        self.kept().scratch.push(scratch);
    }

    fn kept(&self) -> MutexGuard<'_, Kept> {
        // Pieces are put and taken whole, so a panic elsewhere spoils nothing.
        self.0.lock().unwrap_or_else(PoisonError::into_inner)
    }
}

impl Drop for AtWork<'_> {
    fn drop(&mut self) {
        let mut kept = self.0.kept();
        kept.at_work -= 1;
        if kept.at_work == 0 {
            kept.scratch.retain(|scratch| scratch.held() <= KEPT_SCRATCH);
        }
    }
}

/// What is needed to decode chunks of one variable.
pub struct Decoder<'a> {
    /// Where the chunks are, and how they are stored.
    pub table: &'a CheckedTable,
    /// The file that they are in.
    pub file: &'a ChunkFile,
    /// Memory to work in.
    pub scratch: &'a ScratchPool,
    /// The wish to stop, looked at before each chunk.
    pub cancel: Option<&'a Cancel>,
    /// Whether several threads may work. With one, nothing waits for other work in the pool.
    pub shared: bool,
}

impl Decoder<'_> {
    /// The values of a block, which lies inside the variable and is not empty, row-major.
    pub fn block(&self, start: &[usize], count: &[usize]) -> Result<Samples, Stopped> {
        let _at_work = self.scratch.at_work();
        Ok(match self.table.kind {
            ValueKind::I8 => Samples::I8(self.values(start, count)?),
            ValueKind::U8 => Samples::U8(self.values(start, count)?),
            ValueKind::I16 => Samples::I16(self.values(start, count)?),
            ValueKind::U16 => Samples::U16(self.values(start, count)?),
            ValueKind::I32 => Samples::I32(self.values(start, count)?),
            ValueKind::U32 => Samples::U32(self.values(start, count)?),
            ValueKind::I64 => Samples::I64(self.values(start, count)?),
            ValueKind::U64 => Samples::U64(self.values(start, count)?),
            ValueKind::F32 => Samples::F32(self.values(start, count)?),
            ValueKind::F64 => Samples::F64(self.values(start, count)?),
            // A checked table is of numbers.
            ValueKind::Text | ValueKind::Character | ValueKind::Other => Samples::U8(Vec::new()),
        })
    }

    fn values<Value: Sample>(
        &self,
        start: &[usize],
        count: &[usize],
    ) -> Result<Vec<Value>, Stopped> {
        let row_values: usize = count[1..].iter().product();
        let mut values = vec![Value::default(); count[0] * row_values];
        let mut rest = values.as_mut_slice();
        let mut rows = Vec::new();
        for (first, length) in self.table.grid.rows(start[0], count[0]) {
            let (part, behind) = rest.split_at_mut(length * row_values);
            rest = behind;
            rows.push((first, length, part));
        }
        let row = |(first, length, part): (usize, usize, &mut [Value])| {
            let (mut start, mut count) = (start.to_vec(), count.to_vec());
            (start[0], count[0]) = (first, length);
            self.row(&self.table.grid.pieces(&start, &count), part)
        };
        match self.shared && rows.len() > 1 {
            true => first_fault(rows.into_par_iter().map(row).collect())?,
            false => rows.into_iter().try_for_each(row)?,
        }
        Ok(values)
    }

    /// One row of chunks, which make up one stretch of the block.
    fn row<Value: Sample>(&self, pieces: &[Piece], out: &mut [Value]) -> Result<(), Stopped> {
        let short = |piece: &Piece| piece.runs.length < SHORTEST_SHARED_RUN;
        if !self.shared || pieces.len() == 1 || pieces.iter().any(short) {
            return pieces.iter().try_for_each(|piece| {
                self.piece(piece, |source| {
                    for (in_chunk, in_block) in piece.runs.starts() {
                        let run = &mut out[in_block..in_block + piece.runs.length];
                        Value::copy(source, in_chunk, run);
                    }
                })
            });
        }
        let shares = shares(pieces, out);
        let piece = |(piece, runs): (&Piece, Vec<&mut [Value]>)| {
            self.piece(piece, |source| {
                for ((in_chunk, _), run) in piece.runs.starts().zip(runs) {
                    Value::copy(source, in_chunk, run);
                }
            })
        };
        first_fault(pieces.par_iter().zip(shares).map(piece).collect())
    }

    /// Undoes one chunk and hands its values to `copy`.
    fn piece(&self, piece: &Piece, copy: impl FnOnce(&Source<'_>)) -> Result<(), Stopped> {
        if self.cancel.is_some_and(Cancel::is_cancelled) {
            return Err(Stopped::Cancelled);
        }
        let table = self.table;
        let Some(chunk) = table.stored(piece.number) else {
            let fault = || Stopped::Chunk { number: piece.number, fault: ChunkFault::Missing };
            copy(&Source::Fill(table.fill.as_deref().ok_or_else(fault)?));
            return Ok(());
        };
        let mut scratch = self.scratch.take();
        let undone = self.file.read(chunk, &mut scratch.bytes).and_then(|()| {
            undo(&table.filters, chunk.mask, piece.stored_values, table.value_size, &mut scratch)
        });
        let result = undone
            .map(|undone| copy(&Source::Chunk { undone, big_endian: table.big_endian }))
            .map_err(|fault| Stopped::Chunk { number: piece.number, fault });
        self.scratch.give_back(scratch);
        result
    }
}

/// The first fault in the order of the chunks, whichever thread met it first.
fn first_fault(results: Vec<Result<(), Stopped>>) -> Result<(), Stopped> {
    results.into_iter().collect()
}

/// Cuts `out` into the runs of the pieces, so that several threads may write into it.
fn shares<'a, Value>(pieces: &[Piece], out: &'a mut [Value]) -> Vec<Vec<&'a mut [Value]>> {
    let mut places: Vec<(usize, usize, usize)> = pieces
        .iter()
        .enumerate()
        .flat_map(|(owner, piece)| {
            piece.runs.starts().map(move |(_, in_block)| (in_block, piece.runs.length, owner))
        })
        .collect();
    places.sort_unstable();
    let mut shares: Vec<Vec<&mut [Value]>> = pieces.iter().map(|_| Vec::new()).collect();
    let mut rest = out;
    for (_, length, owner) in places {
        // The runs lie side by side: together the pieces cover the block, each place once.
        let (run, behind) = rest.split_at_mut(length);
        rest = behind;
        shares[owner].push(run);
    }
    shares
}
