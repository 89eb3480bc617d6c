//! Why a file is no granule, or why its values could not be had.

use std::path::{Path, PathBuf};

use crate::netcdf_files::{ReadError, ReadFault};
use crate::system::clean_text;

/// Why one variable cannot be used.
#[derive(Debug)]
pub enum Setback {
    /// The whole file is lost.
    File(ReadError),
    /// The variable is, in words.
    Variable(String),
}

impl From<ReadError> for Setback {
    fn from(error: ReadError) -> Self {
        match error.fault.ends_the_file() {
            true => Self::File(error),
            false => Self::Variable(error.fault.to_string()),
        }
    }
}

/// Why a file is no granule, or why its values could not be had.
#[derive(Debug, Clone, thiserror::Error)]
pub enum GranuleError {
    /// The file could not be read.
    #[error(transparent)]
    Read(ReadError),
    /// The file was read, but holds nothing that the program can use.
    #[error("{}: {why}", clean_text(&path.to_string_lossy()))]
    NotUsable {
        /// The file.
        path: PathBuf,
        /// What was looked for and what was found.
        why: String,
    },
    /// The granule has no such variable.
    #[error("{}: no variable of the footprints is called `{}`{}", clean_text(&path.to_string_lossy()), clean_text(name), near(nearest))]
    NoVariable {
        /// The file.
        path: PathBuf,
        /// The name asked for.
        name: String,
        /// Names that are there.
        nearest: Vec<String>,
    },
    /// The work was cancelled.
    #[error("cancelled")]
    Cancelled,
}

impl From<ReadError> for GranuleError {
    fn from(error: ReadError) -> Self {
        match error.fault {
            ReadFault::Cancelled { .. } => Self::Cancelled,
            _ => Self::Read(error),
        }
    }
}

impl GranuleError {
    /// The error of a file that holds nothing that can be used.
    pub fn not_usable(path: &Path, why: impl AsRef<str>) -> Self {
        Self::NotUsable { path: path.to_owned(), why: clean_text(why.as_ref()) }
    }
}

fn near(names: &[String]) -> String {
    if names.is_empty() {
        return String::new();
    }
    format!("; there are {}", clean_text(&names.join(", ")))
}
