//! The parent's side: asks a reader process about one file, and gives up on it in time.

use std::io;
use std::path::{Path, PathBuf};
use std::sync::{Mutex, PoisonError};
use std::time::Duration;

use super::chunks::{AtWork, ChunkTable, Demand, FastPath, KnownFile};
use super::door;
use super::index::{FileIndex, Variable};
use super::link::Link;
use super::messages::{Reply, Request};
use super::pipe::{TimedPipe, read_samples};
use super::read_error::{ReadError, ReadFault};
use super::reader_program::{ReadLimits, ReaderProgram};
use super::samples::{Samples, ValueKind};
use super::serve::LARGEST_ANSWER;
use super::turns::Turns;
use crate::system::{Cancel, FileStamp, stamp_in_time};

/// A file that a reader process has open. Many threads may ask; their questions take turns.
///
/// A reader that dies or takes too long is killed, and the question gets an error that names the
/// file. The next question starts a new reader.
#[derive(Debug)]
pub struct FileReader {
    program: ReaderProgram,
    path: PathBuf,
    absolute: PathBuf,
    limits: ReadLimits,
    stamp: FileStamp,
    index: FileIndex,
    fast: FastPath,
    turns: Turns,
    link: Mutex<Option<Link>>,
}

impl FileReader {
    /// Starts a reader for the file at `path` and asks for its index. No values are read.
    pub fn open(
        program: &ReaderProgram,
        path: &Path,
        limits: &ReadLimits,
    ) -> Result<Self, ReadError> {
        let stamp = door::check(path, limits.per_request)?;
        let absolute =
            std::path::absolute(path).map_err(|error| ReadError::of_system(path, &error))?;
        let started =
            Link::start(program, &absolute, limits).map_err(|fault| ReadError::new(path, fault));
        let mut link = started?;
        let index =
            ask_for_index(&mut link, limits).map_err(|fault| ReadError::new(path, fault))?;
        Ok(Self {
            program: program.clone(),
            path: path.to_owned(),
            absolute,
            limits: *limits,
            stamp,
            index,
            fast: FastPath::default(),
            turns: Turns::default(),
            link: Mutex::new(Some(link)),
        })
    }

    /// Everything of the file but its values.
    pub fn index(&self) -> &FileIndex {
        &self.index
    }

    /// The file as it was named.
    pub fn path(&self) -> &Path {
        &self.path
    }

    /// How long one question may take.
    pub fn limit(&self) -> Duration {
        self.limits.per_request
    }

    /// The file's stamp when it was opened.
    pub fn stamp(&self) -> FileStamp {
        self.stamp
    }

    /// An error if the file is not the one that was opened, by device, inode, size and time.
    pub fn check_unchanged(&self) -> Result<(), ReadError> {
        let limit = self.limits.per_request;
        match stamp_in_time(&self.absolute, limit) {
            Ok(stamp) if stamp == self.stamp => Ok(()),
            Ok(_) => Err(self.error(ReadFault::Changed)),
            Err(error) => Err(ReadError::of_slow_system(&self.path, &error, limit)),
        }
    }

    /// Reads a block of a variable: `count` values along each dimension from `start`, row-major.
    /// Goes before everything that is read in the background.
    pub fn read(
        &self,
        variable: &Variable,
        start: &[usize],
        count: &[usize],
    ) -> Result<Samples, ReadError> {
        self.read_on_demand(variable, start, count, Demand { urgent: true, ..Demand::default() })
    }

    /// Says that many blocks will be read one after another: what decoding them takes of memory is
    /// kept until the answer is dropped.
    pub fn at_work(&self) -> AtWork<'_> {
        self.fast.at_work()
    }

    /// Reads all values of a variable, row-major.
    pub fn read_all(&self, variable: &Variable) -> Result<Samples, ReadError> {
        let lengths = self.index.lengths(variable);
        self.read(variable, &vec![0; lengths.len()], &lengths)
    }

    /// Reads a block, as urgent as `demand` says and until its wish to stop.
    ///
    /// Values that are stored in the usual ways are decoded in this process, by several threads
    /// unless they are urgent; all others come from the reader. A block that covers chunks as a whole
    /// costs least: a chunk that is cut by it is decoded anew for each part.
    pub fn read_on_demand(
        &self,
        variable: &Variable,
        start: &[usize],
        count: &[usize],
        demand: Demand<'_>,
    ) -> Result<Samples, ReadError> {
        let what = format!("variable `{}`", crate::system::clean_text(&variable.path));
        let fits = self.fits(variable, start, count);
        let values = fits.map_err(|why| {
            self.error(ReadFault::BadRequest { what: what.clone(), why: why.to_owned() })
        })?;
        let known = KnownFile {
            path: &self.path,
            opened: &self.absolute,
            stamp: self.stamp,
            index: &self.index,
            limit: self.limits.per_request,
        };
        let fast = self.fast.read(known, variable, (start, count), demand, || {
            self.chunk_table(variable, &what, demand.urgent)
        });
        if let Some(samples) = fast? {
            return Ok(samples);
        }
        if demand.cancel.is_some_and(Cancel::is_cancelled) {
            return Err(self.error(ReadFault::Cancelled { what }));
        }
        let request = Request::Read {
            path: variable.path.clone(),
            start: start.to_vec(),
            count: count.to_vec(),
        };
        self.ask(&request, &what, demand.urgent, |reply, input| {
            take_values(reply, input, variable.kind, values)
        })
    }

    /// Where the chunks of a variable lie; nothing where the library does not say.
    fn chunk_table(
        &self,
        variable: &Variable,
        what: &str,
        urgent: bool,
    ) -> Result<Option<ChunkTable>, ReadError> {
        let request = Request::Chunks { path: variable.path.clone() };
        let table = self.ask(&request, what, urgent, |reply, _| match reply {
            Reply::Chunks(table) => Ok(*table),
            _ => Err(io::ErrorKind::InvalidData.into()),
        });
        match table {
            Ok(table) => Ok(Some(table)),
            Err(ReadError { fault: ReadFault::Library { .. }, .. }) => Ok(None),
            Err(error) => Err(error),
        }
    }

    /// Asks the reader one question when it is its turn.
    fn ask<Answer>(
        &self,
        request: &Request,
        what: &str,
        urgent: bool,
        take: impl FnOnce(Reply, &mut TimedPipe<'_>) -> io::Result<Answer>,
    ) -> Result<Answer, ReadError> {
        let _turn = self.turns.take(urgent);
        // Values of a file that has been written over would not belong to those read before.
        self.check_unchanged()?;
        // A link is taken out while it is used, so that a panic leaves none behind half-way.
        let mut place = self.link.lock().unwrap_or_else(PoisonError::into_inner);
        let mut link = match place.take() {
            Some(link) => link,
            None => self.start_again()?,
        };
        match link.ask(request, what, &self.limits, take) {
            Ok(answer) => {
                *place = Some(link);
                Ok(answer)
            }
            Err((fault, still_good)) => {
                *place = Some(link).filter(|_| still_good);
                Err(self.error(fault))
            }
        }
    }

    fn start_again(&self) -> Result<Link, ReadError> {
        Link::start(&self.program, &self.absolute, &self.limits).map_err(|fault| self.error(fault))
    }

    /// The number of values in a block, if it lies inside the variable and fits into one answer.
    fn fits(
        &self,
        variable: &Variable,
        start: &[usize],
        count: &[usize],
    ) -> Result<usize, &'static str> {
        let lengths = self.index.lengths(variable);
        if start.len() != lengths.len() || count.len() != lengths.len() {
            return Err("the block has another number of dimensions");
        }
        let inside = |axis: usize| {
            start[axis].checked_add(count[axis]).is_some_and(|end| end <= lengths[axis])
        };
        if !(0..lengths.len()).all(inside) {
            return Err("the block reaches beyond the variable");
        }
        let size = variable.kind.size().unwrap_or(16);
        let values = count.iter().try_fold(1_usize, |product, &count| product.checked_mul(count));
        values
            .filter(|values| values.checked_mul(size).is_some_and(|bytes| bytes <= LARGEST_ANSWER))
            .ok_or("the block is too large to be read at once")
    }

    fn error(&self, fault: ReadFault) -> ReadError {
        ReadError::new(&self.path, fault)
    }
}

fn ask_for_index(link: &mut Link, limits: &ReadLimits) -> Result<FileIndex, ReadFault> {
    let index = link.ask(&Request::Index, "opening it", limits, |reply, _| match reply {
        Reply::Index(index) => match index.fault() {
            None => Ok(*index),
            Some(fault) => Err(io::Error::new(io::ErrorKind::InvalidData, fault)),
        },
        _ => Err(io::ErrorKind::InvalidData.into()),
    });
    index.map_err(|(fault, _)| fault)
}

fn take_values(
    reply: Reply,
    input: &mut TimedPipe<'_>,
    expected: ValueKind,
    values: usize,
) -> io::Result<Samples> {
    match reply {
        Reply::Values { kind, count } if kind == expected && count == values => {
            read_samples(input, kind, count)
        }
        Reply::Texts(texts) if expected == ValueKind::Text && texts.len() == values => {
            Ok(Samples::Text(texts))
        }
        _ => Err(io::Error::new(io::ErrorKind::InvalidData, "other values than those asked for")),
    }
}

#[cfg(test)]
mod tests;
