//! One granule on the table: open, look, decide, withdraw, sign off.
//!
//! Uses: `system`, `units`, `spectral`, `netcdf_files`, `granule`, `layers`, `screening`, `flags`,
//! `export`.
//!
//! **Never** draws or prints.

mod cases;
mod adopting;
mod alike;
mod basis_file;
mod channel_verbs;
mod exporting;
mod many_spectra;
mod producer;
mod record;
mod reference_spectrum;
mod rulebook_of;
mod rulings;
mod tests_decide;
#[allow(clippy::module_inception)] // The room is named after the thing.
mod review;
mod spectra_decide;
mod spectrum;
mod spot_sample;
mod steps;
mod suggestions;
mod verbs;
mod yardstick;

pub use adopting::{NewThreshold, ThresholdChange, adopt_threshold};
pub use alike::Measured;
pub use basis_file::{BasisFileError, basis_path, read_bases, write_bases};
pub use cases::Case;
pub use exporting::ExportedBy;
pub use many_spectra::ManySpectra;
pub use producer::{Producer, Rejection};
pub use record::Record;
pub use reference_spectrum::ReferenceSpectrum;
pub use review::Review;
pub use rulebook_of::{NoRulebook, name_of, rulebook_name, rulebook_of};
pub use rulings::{Ruled, has_suggestion};
pub use spectrum::{BandSpectrum, Spectrum};
pub use spot_sample::{Judgement, SpotSample, draw_sample};
pub use steps::step_name;
pub use tests_decide::{OnRecord, Recorded, test_acts};
pub use verbs::Refusal;
pub use yardstick::{Measure, Yardstick};
