//! How an instrument does, from the spectra of one granule: channels, detectors, single spectra.
//!
//! No judgement here looks at anything but the spectra, and the noise that the file gives.

mod absolute_shift;
mod band_work;
mod channels;
mod detectors;
mod examine;
mod examined;
mod finding;
mod grid;
mod limits;
mod popping;
mod readings;
mod repeats;
mod sample;
mod shift;
mod spectra;
mod within_lines;

pub use channels::ChannelNoise;
pub use detectors::DetectorNumbers;
pub use examine::{examine, training_rows};
pub use examined::{BandHealth, BasisOrigin, Examined, UnusualSpectrum};
pub use finding::{Check, Finding, Subject};
pub use grid::ScanGrid;
pub use limits::{HealthLimits, LIMITS, LimitKind};
pub use shift::DetectorShift;
