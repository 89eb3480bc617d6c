//! Why a file could not be read, with its path and what to do about it.

use std::io;
use std::path::{Path, PathBuf};
use std::time::Duration;

use crate::system::clean_text;

/// Why a file could not be read.
#[derive(Debug, Clone, thiserror::Error)]
#[error("{}: {fault}", shown(path))]
pub struct ReadError {
    /// The file.
    pub path: PathBuf,
    /// What went wrong.
    pub fault: ReadFault,
}

/// What went wrong with a file.
#[derive(Debug, Clone, thiserror::Error)]
pub enum ReadFault {
    /// The file is not there or not ours to read.
    #[error("cannot be opened: {0}")]
    Unreadable(String),
    /// The path names something that is not a file.
    #[error("is {0}, not a file")]
    NotAFile(&'static str),
    /// The path looks like an address on a network or a request for another storage format.
    #[error("looks like an address; only files of this machine are read: fetch it first")]
    Address,
    /// The file has no bytes.
    #[error("is empty: fetch it again")]
    Empty,
    /// The first bytes are of another kind of file.
    #[error(
        "is neither netCDF nor HDF5 (it begins with \"{0}\"): fetch it again, or give the right file"
    )]
    OtherFormat(String),
    /// The library refused.
    #[error("{what}: {reason}; the file may be damaged or cut short: fetch it again")]
    Library {
        /// What was asked of it.
        what: String,
        /// What it said.
        reason: String,
    },
    /// The values went through a filter that the program does not have.
    #[error(
        "{what}: its values are compressed with {filter}, which this program cannot decode; \
         repack a copy with deflate: `nccopy -F none -d 4 in.nc out.nc` or `h5repack -f GZIP=4 in.nc out.nc` \
         where that filter is installed"
    )]
    MissingFilter {
        /// What was asked for.
        what: String,
        /// The filter.
        filter: String,
    },
    /// The reader took too long.
    #[error(
        "{what} was given up after {} s; the file may be damaged, or its file system hangs: \
         fetch it again, or try a local copy", limit.as_secs_f64()
    )]
    TimedOut {
        /// What was asked for.
        what: String,
        /// How long the reader had.
        limit: Duration,
    },
    /// The reader ended without an answer.
    #[error("{what}: the reader process {how}; the file is probably damaged: fetch it again")]
    Died {
        /// What was asked for.
        what: String,
        /// How it ended.
        how: String,
    },
    /// The reader's answer makes no sense.
    #[error("{what}: the reader process answered nonsense ({how}); the file is probably damaged")]
    Nonsense {
        /// What was asked for.
        what: String,
        /// What is wrong with the answer.
        how: String,
    },
    /// A chunk of values is damaged.
    #[error("{what}: the chunk that begins at {place:?} is damaged ({how}): fetch the file again")]
    Chunk {
        /// What was asked for.
        what: String,
        /// The place of the chunk's first value along each dimension.
        place: Vec<usize>,
        /// What is wrong with it.
        how: String,
    },
    /// Someone asked to stop.
    #[error("{what}: reading was stopped")]
    Cancelled {
        /// What was asked for.
        what: String,
    },
    /// The file is no longer what it was when it was opened.
    #[error("has changed since it was opened: open it again")]
    Changed,
    /// More was asked for than one answer may hold, or a block outside of the variable.
    #[error("{what}: {why}")]
    BadRequest {
        /// What was asked for.
        what: String,
        /// What is wrong with it.
        why: String,
    },
    /// The reader process could not be started.
    #[error("cannot start the reader process: {0}")]
    NoReader(String),
}

impl ReadFault {
    /// Whether the whole file is lost rather than one variable: asking on would only take more time.
    pub fn ends_the_file(&self) -> bool {
        !matches!(
            self,
            Self::Library { .. }
                | Self::MissingFilter { .. }
                | Self::Chunk { .. }
                | Self::BadRequest { .. }
        )
    }
}

impl ReadError {
    /// The error of a file.
    pub fn new(path: &Path, fault: ReadFault) -> Self {
        Self { path: path.to_owned(), fault }
    }

    /// The error of a file that the system would not open.
    pub fn of_system(path: &Path, error: &io::Error) -> Self {
        Self::new(path, ReadFault::Unreadable(error.to_string()))
    }

    /// The same where the system had `limit` to answer.
    pub fn of_slow_system(path: &Path, error: &io::Error, limit: Duration) -> Self {
        match error.kind() {
            io::ErrorKind::TimedOut => {
                let what = "reading it".to_owned();
                Self::new(path, ReadFault::TimedOut { what, limit })
            }
            _ => Self::of_system(path, error),
        }
    }
}

/// A path that is safe to print.
fn shown(path: &Path) -> String {
    clean_text(&path.to_string_lossy())
}
