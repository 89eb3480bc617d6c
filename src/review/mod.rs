//! One granule on the table: open, look, decide, withdraw, sign off.
//!
//! Uses: `system`, `units`, `spectral`, `netcdf_files`, `granule`, `layers`, `flags`, `export`.
//!
//! **Never** draws or prints.

mod exporting;
mod record;
#[allow(clippy::module_inception)] // The room is named after the thing.
mod review;
mod spectrum;
mod suggestions;
mod verbs;

pub use exporting::ExportedBy;
pub use record::Record;
pub use review::Review;
pub use spectrum::{BandSpectrum, Spectrum};
pub use verbs::Refusal;
