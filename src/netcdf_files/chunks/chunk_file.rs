//! The file that chunks are read from, past the libraries.

use std::fs::{File, OpenOptions};
use std::io;
use std::os::unix::fs::{FileExt, OpenOptionsExt};
use std::path::Path;

use super::fault::ChunkFault;
use super::table::StoredChunk;
use crate::system::FileStamp;

/// An open file of which it is known which one it is.
#[derive(Debug)]
pub struct ChunkFile {
    file: File,
}

impl ChunkFile {
    /// Opens the file at `path`. Whether it is the right one, [`Self::stamp`] tells.
    pub fn open(path: &Path) -> io::Result<Self> {
        // Not waiting, for the case that the file has been replaced by a pipe since it was checked.
        let wait_for_nobody = rustix::fs::OFlags::NONBLOCK.bits();
        let flags = i32::from_ne_bytes(wait_for_nobody.to_ne_bytes());
        let file = OpenOptions::new().read(true).custom_flags(flags).open(path)?;
        Ok(Self { file })
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
