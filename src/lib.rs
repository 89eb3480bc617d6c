//! `radsieve` screens infrared-sounder granules: which footprints may a retrieval use?
//!
//! ```text
//!  granule.nc --reader process--> index --granule--> Granule --layers--> Layer --screening--> Evidence, doubt
//!                                                       |                                       |
//!                                        key -> ui -> Action --> review.decide <--- screen (as a test, not a person)
//!                                                       |              | appends, synced by a writer thread
//!                                                       v              v
//!                                                     screen      ledger files --replay--> flags --export--> mask.nc
//! ```
//!
//! The rooms, in reading order. A room may use the rooms above it that its own head names.
#![cfg_attr(test, allow(clippy::unwrap_used, clippy::expect_used, clippy::panic))]

pub mod system;
pub mod units;
pub mod spectral;
pub mod netcdf_files;
pub mod granule;
pub mod layers;
pub mod forward;
pub mod screening;
pub mod flags;
pub mod export;
pub mod synth;
pub mod review;
pub mod tray;
#[cfg(feature = "terminal")]
pub mod ui;
pub mod cli;
