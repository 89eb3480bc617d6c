//! The file that chunks are read from, past the libraries.

use std::io;
use std::path::Path;
use std::time::Duration;

use super::fault::ChunkFault;
use super::table::StoredChunk;
use crate::system::{FileStamp, PatientFile};

/// An open file of which it is known which one it is.
#[derive(Debug)]
pub struct ChunkFile {
    file: PatientFile,
}

impl ChunkFile {
    /// Opens the file at `path`, whose file system has `limit` for each thing that is asked of it.
    /// Whether it is the right file, [`Self::stamp_if_still_at`] tells.
    pub fn open(path: &Path, limit: Duration) -> io::Result<Self> {
        Ok(Self { file: PatientFile::open(path, limit)? })
    }

    /// The stamp of the open file as it is now; that of the file at `path` where that is another one.
    pub fn stamp_if_still_at(&self, path: &Path) -> io::Result<FileStamp> {
        self.file.stamp_if_still_at(path)
    }

    /// Reads the bytes of a chunk into `bytes`.
    pub fn read(&self, chunk: &StoredChunk, bytes: &mut Vec<u8>) -> Result<(), ChunkFault> {
        bytes.resize(chunk.size, 0);
        self.file.read_exact_at(bytes, chunk.address).map_err(ChunkFault::Unread)
    }
}
