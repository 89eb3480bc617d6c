//! One granule from its ledgers to its mask or list. The review and the batch both go this way.

use std::path::{Path, PathBuf};

use super::mask::{ExportError, write_mask};
use super::of_granule::granule_identity;
use super::provenance::{Provenance, Record};
use super::source::MaskSource;
use super::target::{Chosen, NoTarget, Targets, mask_owner};
use super::usable_list::{list_owner, write_usable_list};
use crate::flags::{
    Campaign, Counts, FlagState, GranuleState, LedgerProblem, LedgerReading, Vocabulary,
    read_ledgers,
};
use crate::granule::{Granule, GranuleError};
use crate::netcdf_files::ReaderProgram;

/// What is written for each granule.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Form {
    /// A CF flag mask, `<stem>.mask.nc`.
    Mask,
    /// The usable footprints as CSV, `<stem>.usable.csv`.
    UsableList,
}

impl Form {
    /// What follows the stem in a file name.
    pub fn ending(self) -> &'static str {
        match self {
            Self::Mask => ".mask.nc",
            Self::UsableList => ".usable.csv",
        }
    }
}

/// Why a granule was not exported.
#[derive(Debug, thiserror::Error)]
pub enum NotExported {
    /// The granule cannot be read.
    #[error(transparent)]
    Granule(#[from] GranuleError),
    /// A ledger file as a whole cannot be read: flags would be missing without a trace.
    #[error("{0}; the export would miss its decisions: mend it, or move that file out of the way")]
    Ledger(String),
    /// The folder to write into cannot be made.
    #[error("cannot make the folder {}: {source}", folder.display())]
    Folder {
        /// The folder.
        folder: PathBuf,
        /// What the system said.
        source: std::io::Error,
    },
    /// There is no name to write under.
    #[error(transparent)]
    Target(#[from] NoTarget),
    /// The file cannot be written.
    #[error(transparent)]
    Write(#[from] ExportError),
}

/// What was written.
#[derive(Debug, Clone, PartialEq)]
pub struct Exported {
    /// The file.
    pub path: PathBuf,
    /// How many footprints are in which state.
    pub counts: Counts,
    /// How far the granule has come.
    pub state: GranuleState,
    /// How many decisions went into it.
    pub decisions: usize,
    /// Whose.
    pub people: Vec<String>,
    /// What the user should know: another name than expected, ledgers with trouble, none at all.
    pub messages: Vec<String>,
}

/// Exports the granules of one run.
pub struct Exporter<'a> {
    campaign: &'a Campaign,
    program: &'a ReaderProgram,
    provenance: Provenance,
    form: Form,
    targets: Targets,
}

impl<'a> Exporter<'a> {
    /// Exports into `folder`, which is made if it is not there. `inputs` are all granules of the run:
    /// none of them is ever written to.
    ///
    /// # Errors
    /// The folder cannot be made.
    pub fn new(
        campaign: &'a Campaign,
        program: &'a ReaderProgram,
        provenance: Provenance,
        form: Form,
        folder: &Path,
        inputs: &[PathBuf],
    ) -> Result<Self, NotExported> {
        let unmade = |source| NotExported::Folder { folder: folder.to_owned(), source };
        std::fs::create_dir_all(folder).map_err(unmade)?;
        let targets = Targets::new(folder, form.ending(), inputs);
        Ok(Self { campaign, program, provenance, form, targets })
    }

    /// Replays the ledgers of a granule and writes its mask or list.
    ///
    /// # Errors
    /// The granule or a whole ledger file cannot be read, or nothing can be written.
    pub fn export(&mut self, granule: &Granule) -> Result<Exported, NotExported> {
        let source = MaskSource::of(granule)?;
        let identity = granule_identity(granule)?;
        let reading = read_ledgers(self.campaign, &identity);
        if let Some(problem) = reading.problems.iter().find(|problem| problem.loss.is_of_a_file()) {
            return Err(NotExported::Ledger(problem.to_string()));
        }
        let vocabulary = &self.campaign.settings().vocabulary;
        let state = FlagState::replay(
            source.footprint_count(),
            &identity.bands,
            &reading.decisions,
            vocabulary,
        );
        let mut messages = ledger_messages(&reading, &state);
        let record = Record { decisions: &reading.decisions, state: &state, vocabulary };
        let path = self.write(granule.path(), &source, &record, &reading, &mut messages)?;
        Ok(exported(path, &record, vocabulary, messages))
    }

    fn write(
        &mut self,
        input: &Path,
        source: &MaskSource,
        record: &Record<'_>,
        reading: &LedgerReading,
        messages: &mut Vec<String>,
    ) -> Result<PathBuf, NotExported> {
        let (form, program) = (self.form, self.program);
        loop {
            let chosen = self.targets.choose(input, source, |path| match form {
                Form::Mask => mask_owner(program, path),
                Form::UsableList => list_owner(path, source),
            })?;
            match self.write_to(&chosen, source, record, reading) {
                // Another export was quicker: that name is looked at anew. There are three.
                Err(error) if error.is_taken() => {}
                written => {
                    written?;
                    messages.extend(chosen.note);
                    return Ok(chosen.path);
                }
            }
        }
    }

    fn write_to(
        &self,
        chosen: &Chosen,
        source: &MaskSource,
        record: &Record<'_>,
        reading: &LedgerReading,
    ) -> Result<(), ExportError> {
        match self.form {
            Form::Mask => {
                let mut provenance = self.provenance.clone();
                provenance.ledger_problems =
                    reading.problems.iter().map(LedgerProblem::without_folder).collect();
                write_mask(source, record, &provenance, &chosen.path, chosen.placing).map(drop)
            }
            Form::UsableList => {
                write_usable_list(source, record, &chosen.path, chosen.placing).map(drop)
            }
        }
    }
}

fn ledger_messages(reading: &LedgerReading, state: &FlagState) -> Vec<String> {
    let mut messages: Vec<String> = reading.problems.iter().map(ToString::to_string).collect();
    messages.extend(state.problems.iter().cloned());
    if reading.decisions.is_empty() {
        messages.push(
            "no decision in this campaign: every footprint is not_assessed, none is usable"
                .to_owned(),
        );
    } else if state.granule != GranuleState::SignedOff {
        messages.push(format!("the granule is not signed off ({})", state.granule.name()));
    }
    messages
}

fn exported(
    path: PathBuf,
    record: &Record<'_>,
    vocabulary: &Vocabulary,
    messages: Vec<String>,
) -> Exported {
    Exported {
        path,
        counts: record.state.counts(vocabulary),
        state: record.state.granule,
        decisions: record.decisions.len(),
        people: record.people(),
        messages,
    }
}
