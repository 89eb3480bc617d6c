//! The verb that exports.

use std::path::{Path, PathBuf};

use jiff::Timestamp;

use super::Review;
use crate::export::{Exported, Exporter, Form, NotExported, Provenance};
use crate::flags::Campaign;
use crate::netcdf_files::ReaderProgram;

/// Who exports, when, with what.
#[derive(Debug, Clone)]
pub struct ExportedBy {
    /// The version of the program.
    pub program: String,
    /// The person.
    pub person: String,
    /// The moment.
    pub now: Timestamp,
}

impl Review {
    /// Writes the flag mask into `folder`, which is made if it is not there, from what the ledgers
    /// hold on the disk. None of `inputs` is ever written to.
    ///
    /// Returns where it was written and what has to be said about it.
    ///
    /// # Errors
    /// The folder can't be made, the granule can't be read, the mask can't be written.
    pub fn export(
        &self,
        campaign: &Campaign,
        program: &ReaderProgram,
        by: &ExportedBy,
        folder: &Path,
        inputs: &[PathBuf],
    ) -> Result<Exported, NotExported> {
        let provenance = Provenance {
            program: by.program.clone(),
            now: by.now,
            person: by.person.clone(),
            campaign: campaign.settings().title.clone(),
            ledger_problems: Vec::new(),
        };
        let mut exporter =
            Exporter::new(campaign, program, provenance, Form::Mask, folder, inputs)?;
        exporter.export(self.granule())
    }
}
