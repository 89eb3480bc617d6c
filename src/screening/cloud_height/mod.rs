//! Cloud height by CO2 slicing, as a retrieval that lends its results to layers.
//!
//! Two channels that see into different depths lose radiance to a cloud in a ratio that depends on
//! the cloud's pressure alone. Sources: [Smith & Platt 1978], [Menzel et al. 1983],
//! [Wylie & Menzel 1999].

mod air;
mod clear;
mod intervals;
mod profile;
mod retrieve;
mod slicing;

#[cfg(test)]
mod granule_tests;

pub(super) use slicing::overcast;

pub use profile::{Profile, ProfileError};
pub use retrieve::{CLOUD_HEIGHT_NAMES, CloudHeight};
