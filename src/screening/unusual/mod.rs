//! What a granule's spectra are made of, and which of them are unlike the others (T20).

mod along;
mod basis;
mod components;
mod fit;
#[cfg(test)]
mod fit_tests;
mod noise_of_rows;
mod residuals;
mod saved;

pub use along::Along;
pub use basis::{Basis, TrainingScores, score};
pub use fit::{Fitted, Rows, fit, judged_by};
pub use noise_of_rows::pair_deviations;
pub use residuals::ManyResiduals;
pub use saved::{SavedBases, fit_together, instrument_shape};
