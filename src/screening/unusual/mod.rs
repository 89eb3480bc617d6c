//! What a granule's spectra are made of, and which of them are unlike the others (T20).

mod basis;
mod components;
mod fit;
mod residuals;

pub use basis::{Basis, TrainingScores, score};
pub use fit::{Fitted, Rows, fit};
pub use residuals::ManyResiduals;
