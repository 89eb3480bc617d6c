//! Which program reads files, and what it may use.

use std::path::PathBuf;
use std::time::Duration;

/// The hidden command of the program that makes it a reader.
pub const READER_COMMAND: &str = "reader-process";

/// The program that is started as a reader: this one, by its path.
#[derive(Debug, Clone)]
pub struct ReaderProgram(pub(super) Option<PathBuf>);

impl ReaderProgram {
    /// The program at `path` (`current_exe` in `main`), which knows the hidden command.
    pub fn new(path: impl Into<PathBuf>) -> Self {
        Self(Some(path.into()))
    }

    /// A thread of this process instead of a process of its own, for unit tests: no limits hold.
    #[cfg(test)]
    pub fn in_process() -> Self {
        Self(None)
    }
}

/// What a reader, and the values that it brings, may use.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ReadLimits {
    /// How long one question may take; opening is one question.
    pub per_request: Duration,
    /// Bytes of address space of the reader process.
    pub memory: u64,
    /// Bytes that the values of one file may take in this process; as the machine allows where none
    /// are given.
    pub values: Option<u64>,
}

impl Default for ReadLimits {
    /// Ten seconds a question and 2 GiB.
    fn default() -> Self {
        Self { per_request: Duration::from_secs(10), memory: 2 << 30, values: None }
    }
}
