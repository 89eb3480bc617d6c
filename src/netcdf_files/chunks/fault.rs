//! What can be wrong with a chunk.

use std::io;

/// What is wrong with a chunk.
#[derive(Debug, thiserror::Error)]
pub enum ChunkFault {
    /// The system did not read it.
    #[error("it cannot be read: {0}")]
    Unread(io::Error),
    /// The stream is broken.
    #[error("it does not inflate")]
    Deflate,
    /// The stream holds more than the chunk.
    #[error("it inflates to more than {expected} bytes")]
    TooLong {
        /// Bytes of the chunk.
        expected: usize,
    },
    /// Too much or too little has come out.
    #[error("it holds {found} bytes instead of {expected}")]
    Length {
        /// Bytes that came out.
        found: usize,
        /// Bytes of the chunk.
        expected: usize,
    },
    /// The checksum is another one.
    #[error("its checksum does not hold")]
    Checksum,
    /// It is not in the file, and no value stands for it.
    #[error("it was never written")]
    Missing,
}

impl ChunkFault {
    /// Whether the file system did not answer in time.
    pub fn is_late(&self) -> bool {
        matches!(self, Self::Unread(error) if error.kind() == io::ErrorKind::TimedOut)
    }
}
