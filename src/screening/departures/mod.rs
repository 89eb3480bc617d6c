//! Departures from calculated clear spectra, and which channels cloud reaches into (T19).
//!
//! ```text
//!  observed - calculated - bias  --ranked by height, averaged--> the first channel that cloud affects
//! ```
//!
//! Sources: [McNally & Watts 2003]; that thresholds and the size of the filter matter is known from
//! its own follow-up studies.

mod bias;
mod departure;
mod filter;
mod ranked;
mod ranking;
mod scene;

#[cfg(test)]
mod granule_tests;

pub use departure::Departures;
pub use ranked::{RANKED_NAMES, RankedChannels};
