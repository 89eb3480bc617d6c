//! Synthetic granules with their truth: scenes, noise and defects on top of `forward`.
//!
//! Uses: `system`, `units`, `spectral`, `netcdf_files`, `forward`.
//!
//! **Never** is used by what it tests.

mod calculated;
mod defects;
mod faulty;
mod field;
mod file_values;
mod file_variables;
mod granule_file;
mod instrument;
mod noise;
mod perturbation;
mod recipe;
mod scene;
mod scenes;
mod shape;
mod shift;
mod spectra;
mod storage;
mod sun;
mod swath;
mod told_noise;
mod truth;
mod typical_noise;

pub use calculated::{Calculation, make_calculated};
pub use granule_file::{ContentError, SynthError, make_granule};
pub use recipe::{DEFAULT_SEED, Recipe};
pub use scenes::SceneName;
pub use shape::{Shape, ShapeError};
pub use told_noise::ToldNoise;
