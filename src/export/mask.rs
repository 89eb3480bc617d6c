//! Writing a flag mask: the contract that retrieval runs rely on.

use std::path::Path;

use super::attributes::write_globals;
use super::mask_layout::Mask;
use super::provenance::{Provenance, Record};
use super::source::MaskSource;
use crate::netcdf_files::{NetcdfWriter, WriterError};
use crate::system::{Placing, WriteError, clean_text, place_whole};

/// Why a mask or a list was not written.
#[derive(Debug, thiserror::Error)]
pub enum ExportError {
    /// The mask could not be written.
    #[error(transparent)]
    Mask(#[from] WriteError<WriterError>),
    /// The list could not be written.
    #[error(transparent)]
    List(#[from] WriteError<std::io::Error>),
    /// Flags and granule do not belong together.
    #[error("the flags are of {flags} footprints, the granule has {granule}")]
    Mismatch {
        /// Footprints that the flags are about.
        flags: usize,
        /// Footprints of the granule.
        granule: usize,
    },
}

impl ExportError {
    /// Whether somebody else has put a file under that name meanwhile.
    pub fn is_taken(&self) -> bool {
        matches!(self, Self::Mask(WriteError::Taken { .. }) | Self::List(WriteError::Taken { .. }))
    }
}

/// Writes the mask of a granule to `target`, whole or not at all, over what stands there or only
/// where nothing does.
///
/// Gives the problems that the mask carries in its attributes: those of the granule, of the
/// ledgers and of flags that do not fit the granule.
///
/// # Errors
/// The file cannot be written, or the flags are of another granule.
pub fn write_mask(
    source: &MaskSource,
    record: &Record<'_>,
    provenance: &Provenance,
    target: &Path,
    placing: Placing,
) -> Result<Vec<String>, ExportError> {
    let (flags, granule) = (record.state.review.len(), source.footprint_count());
    if flags != granule {
        return Err(ExportError::Mismatch { flags, granule });
    }
    let mask = Mask::plan(source, record);
    let mut problems = source.problems.clone();
    problems.extend(provenance.ledger_problems.iter().cloned());
    problems.extend(record.state.problems.iter().cloned());
    problems.extend(mask.misfits());
    let problems: Vec<String> = problems.iter().map(|problem| clean_text(problem)).collect();
    place_whole(target, placing, |temporary| {
        let mut writer = NetcdfWriter::create(temporary)?;
        write_globals(&mut writer, source, record, provenance, &problems)?;
        mask.define(&mut writer)?;
        mask.fill(&mut writer)?;
        writer.close()
    })?;
    Ok(problems)
}
