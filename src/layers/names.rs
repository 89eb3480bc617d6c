//! What lends names and numbers to expressions: a granule, or anything else with footprints.

use std::ops::Range;

use super::neighbours::Neighbours;
use super::retrieval::Retrieval;
use super::syntax::{Expression, Judgement};
use super::unit::LayerUnit;
use crate::granule::Channel;
use crate::system::clean_text;

/// Values by name, one per footprint, with what they are measured in.
#[derive(Debug, Clone, PartialEq)]
pub struct Values {
    /// NaN where missing.
    pub values: Vec<f64>,
    /// Their unit.
    pub unit: LayerUnit,
}

/// Why a name or a place in the spectrum has no numbers here.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NameError {
    /// No channel is near enough.
    #[error("no channel near {wanted} cm-1; {}", nearest_words(*nearest))]
    NoChannel {
        /// The wavenumber asked for, cm-1.
        wanted: f64,
        /// The wavenumber of the nearest valid channel, cm-1.
        nearest: Option<f64>,
    },
    /// No valid channel lies in an interval.
    #[error("no channel between {low} and {high} cm-1; {}", nearest_words(*nearest))]
    NoChannelBetween {
        /// Where the interval begins, cm-1.
        low: f64,
        /// Where it ends, cm-1.
        high: f64,
        /// The wavenumber of the valid channel nearest to its middle, cm-1.
        nearest: Option<f64>,
    },
    /// The name means something, but not in this file.
    #[error("the file gives no {0}")]
    NotInFile(String),
    /// Nothing is called that.
    #[error("there is no {name}")]
    Unknown {
        /// The name.
        name: String,
        /// Names that there are.
        known: Vec<String>,
    },
    /// The file has no variable of the footprints that is called that.
    #[error("the file has no variable of the footprints called \"{}\"", clean_text(name))]
    NoVariable {
        /// The name.
        name: String,
        /// Names that there are.
        known: Vec<String>,
    },
    /// Footprints do not stand in clusters.
    #[error("the file has no clusters of detectors: no third dimension of footprints")]
    NoClusters,
    /// No tests have been run, or they are running still.
    #[error("no screening tests have been run here that could tell {0}")]
    NotJudged(&'static str),
    /// A function of what no method works out here.
    #[error("{0} is not worked out here")]
    NotWorkedOut(&'static str),
    /// The file could not be read.
    #[error("{0}")]
    Unreadable(String),
}

fn nearest_words(nearest: Option<f64>) -> String {
    match nearest {
        Some(nearest) => format!("the nearest is at {nearest} cm-1"),
        None => "there are no valid channels".to_owned(),
    }
}

/// Lends what screening tests say.
pub trait Judgements: Sync {
    /// What they say about each footprint; `of` is a flag, or a test of `margin`.
    ///
    /// # Errors
    /// There is no such flag or test.
    fn judged(&self, judgement: Judgement, of: Option<&str>) -> Result<Values, NameError>;
}

/// What an expression can ask of a granule, or of anything else that has footprints. All numbers
/// are f64 with NaN for missing; footprints are numbered in row-major order.
pub trait Names: Sync {
    /// Number of footprints.
    fn footprints(&self) -> usize;

    /// The nearest valid channel.
    ///
    /// # Errors
    /// None near enough; the error names the nearest.
    fn channel_near(&self, wavenumber: f64) -> Result<Channel, NameError>;

    /// The valid channels of an interval (cm-1, both ends included), of all bands.
    fn channels_between(&self, low: f64, high: f64) -> Vec<Channel>;

    /// Whether the file stores brightness temperature in the channel's band.
    fn stores_temperature(&self, channel: &Channel) -> bool;

    /// Radiances, mW m-2 sr-1 (cm-1)-1, of some channels over a range of footprints; those of the
    /// first channel come first. `out` holds `channels.len() * footprints.len()` numbers.
    fn radiances(&self, channels: &[Channel], footprints: Range<usize>, out: &mut [f64]);

    /// Brightness temperatures, K, in the same order; asked only of channels that store them.
    fn temperatures(&self, channels: &[Channel], footprints: Range<usize>, out: &mut [f64]);

    /// Where numbers are read as they are asked for: how many footprints, from the first one on, are
    /// best asked for together, by several threads side by side. Nothing where they lie in memory.
    fn footprints_at_once(&self) -> Option<usize> {
        None
    }

    /// Whether a model calculated the channel's clear-sky spectra.
    ///
    /// # Errors
    /// It did not; the error says how to come by them.
    fn calculates(&self, channel: &Channel) -> Result<(), NameError>;

    /// The brightness temperatures, K, that a model calculated for some channels under clear sky, in
    /// the order of [`Self::radiances`]; asked only of channels that it [calculates](Self::calculates).
    ///
    /// # Errors
    /// They can't be read; `out` is left as it was where that is so.
    fn clear_temperatures(
        &self,
        channels: &[Channel],
        footprints: Range<usize>,
        out: &mut [f64],
    ) -> Result<(), NameError>;

    /// Whether a footprint is left out: its numbers from the spectrum are missing, and no test speaks
    /// about it.
    fn is_left_out(&self, _footprint: usize) -> bool {
        false
    }

    /// Whether all of the channel's numbers have been read; those that have not are NaN.
    fn is_complete(&self, channel: &Channel) -> bool;

    /// Values by a bare name: geolocation, an index of a footprint dimension.
    ///
    /// # Errors
    /// The name is unknown, or this file does not give it.
    fn named(&self, name: &str) -> Result<Values, NameError>;

    /// A variable by its name in the file.
    ///
    /// # Errors
    /// There is none of that name, or it can't be read.
    fn variable(&self, name: &str) -> Result<Values, NameError>;

    /// A definition by name.
    fn definition(&self, name: &str) -> Option<&Expression>;

    /// What screening tests say about each footprint; `of` is a flag, or a test of `margin`.
    ///
    /// # Errors
    /// No tests have been run, or there is no such flag or test.
    fn judged(&self, judgement: Judgement, of: Option<&str>) -> Result<Values, NameError>;

    /// Lengths of the footprint dimensions, slowest first.
    fn lengths(&self) -> &[usize];

    /// The retrievals whose results are names.
    fn retrievals(&self) -> &[&dyn Retrieval];

    /// How many footprints in a row are the detectors at one scan line and position; 1 where
    /// footprints do not stand in clusters.
    fn cluster(&self) -> usize {
        self.lengths().iter().skip(2).product()
    }

    /// Which footprints lie beside which.
    fn neighbours(&self) -> &Neighbours;
}
