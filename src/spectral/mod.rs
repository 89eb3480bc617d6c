//! The physics of one spectrum: Planck function, channel axis, apodisation.
//!
//! Uses: `units`.
//!
//! **Never** opens a file.

pub mod constants;
mod planck;

pub use planck::planck;
