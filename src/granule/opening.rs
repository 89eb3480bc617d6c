//! How files are opened: by which reader, within which limits, with which layout file.

use std::path::Path;

use super::error::GranuleError;
use super::granule_file::Granule;
use super::layout_file::LayoutFile;
use super::lent::{LenderPattern, Within};
use super::memory_plan::MemoryPlan;
use crate::netcdf_files::{FileReader, ReadLimits, ReaderProgram};

/// How files are opened; the same for all files of a run.
#[derive(Debug, Clone)]
pub struct Opening {
    /// The program that reads.
    pub program: ReaderProgram,
    /// Its limits.
    pub limits: ReadLimits,
    /// What the user says of the files.
    pub layout: LayoutFile,
    /// Files that lend fields to them.
    pub with: Vec<LenderPattern>,
    /// How near their places must be where they are joined by place and time.
    pub within: Within,
}

impl Opening {
    /// With the usual limits and without a layout file.
    pub fn new(program: ReaderProgram) -> Self {
        Self {
            program,
            limits: ReadLimits::default(),
            layout: LayoutFile::default(),
            with: Vec::new(),
            within: Within::default(),
        }
    }

    /// Opens a file and understands it. No spectra are read.
    ///
    /// # Errors
    /// The file cannot be read, holds no spectra that can be used, or does not fit the layout file.
    pub fn open(&self, path: &Path) -> Result<Granule, GranuleError> {
        let reader = FileReader::open(&self.program, path, &self.limits)?;
        super::open::open(reader, &MemoryPlan::of(&self.limits), self)
    }
}
