//! The file that chunks are read from, past the libraries.

use std::fs::File;
use std::io;
use std::os::unix::fs::FileExt;
use std::path::Path;

use super::fault::ChunkFault;
use super::table::StoredChunk;
use crate::netcdf_files::door::open_without_waiting;
use crate::system::FileStamp;

/// An open file of which it is known which one it is.
#[derive(Debug)]
pub struct ChunkFile {
    file: File,
}

impl ChunkFile {
    /// Opens the file at `path`. Whether it is the right one, [`Self::stamp`] tells.
    pub fn open(path: &Path) -> io::Result<Self> {
        Ok(Self { file: open_without_waiting(path)? })
    }

    /// The stamp of the open file as it is now.
    pub fn stamp(&self) -> io::Result<FileStamp> {
        Ok(FileStamp::from(&self.file.metadata()?))
    }

    /// Reads the bytes of a chunk into `bytes`.
    pub fn read(&self, chunk: &StoredChunk, bytes: &mut Vec<u8>) -> Result<(), ChunkFault> {
        bytes.resize(chunk.size, 0);
        self.file.read_exact_at(bytes, chunk.address).map_err(ChunkFault::Unread)
    }
}
