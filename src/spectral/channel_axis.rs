//! The wavenumbers of a band's channels: nearest channel, intervals, gaps.

use std::ops::Range;

use super::segments::{segments, usual_spacing};

/// Why a list of wavenumbers is no axis.
#[derive(Debug, Clone, Copy, PartialEq, Eq, thiserror::Error)]
pub enum AxisError {
    /// No channels.
    #[error("the spectral axis has no channels")]
    Empty,
    /// A wavenumber that is not finite or not positive.
    #[error("channel {index} (from 0) of the spectral axis has no finite, positive wavenumber")]
    NoWavenumber {
        /// Index of the channel, from 0.
        index: usize,
    },
}

/// The wavenumbers (cm-1) of a band's channels, in the order of the file: finite and positive, in
/// any order, with gaps and unequal spacing.
#[derive(Debug, Clone, PartialEq)]
pub struct ChannelAxis {
    wavenumbers: Vec<f64>,
    sorted: Vec<usize>,
    ascending: Vec<f64>,
    segments: Vec<Range<usize>>,
    /// For each place in ascending order.
    local_spacing: Vec<f64>,
}

/// The channel nearest to a wavenumber.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Nearest {
    /// Index in the order of the file.
    pub index: usize,
    /// Its wavenumber, cm-1.
    pub wavenumber: f64,
    /// How far it lies from the wavenumber asked for, cm-1, never negative.
    pub distance: f64,
    /// The channel spacing around it, cm-1.
    pub local_spacing: f64,
}

/// An axis of one channel has no spacing. As much as a spectrum's coarsest sampling is assumed.
const LONE_SPACING: f64 = 0.01;

impl ChannelAxis {
    /// An axis of wavenumbers in cm-1, in the order of the file.
    ///
    /// # Errors
    /// No channels, or one whose wavenumber is not finite and positive.
    pub fn new(wavenumbers: Vec<f64>) -> Result<Self, AxisError> {
        if wavenumbers.is_empty() {
            return Err(AxisError::Empty);
        }
        let sensible = |wavenumber: &f64| wavenumber.is_finite() && *wavenumber > 0.0;
        if let Some(index) = wavenumbers.iter().position(|wavenumber| !sensible(wavenumber)) {
            return Err(AxisError::NoWavenumber { index });
        }
        let mut sorted: Vec<usize> = (0..wavenumbers.len()).collect();
        sorted.sort_by(|one, next| wavenumbers[*one].total_cmp(&wavenumbers[*next]));
        let ascending: Vec<f64> = sorted.iter().map(|index| wavenumbers[*index]).collect();
        let segments = segments(&ascending);
        let local_spacing = local_spacings(&ascending, &segments);
        Ok(Self { wavenumbers, sorted, ascending, segments, local_spacing })
    }

    /// Number of channels, never zero.
    #[allow(clippy::len_without_is_empty)] // An axis without channels can't be made.
    pub fn len(&self) -> usize {
        self.wavenumbers.len()
    }

    /// Wavenumbers, cm-1, in the order of the file.
    pub fn wavenumbers(&self) -> &[f64] {
        &self.wavenumbers
    }

    /// Indices of the channels in ascending order of wavenumber; equal ones in the file's order.
    pub fn sorted(&self) -> &[usize] {
        &self.sorted
    }

    /// Stretches without a gap, as ranges of places in [`Self::sorted`]; together they cover all.
    pub fn segments(&self) -> &[Range<usize>] {
        &self.segments
    }

    /// The channel nearest to `wavenumber` (cm-1). Halfway between two it is the lower one.
    pub fn nearest(&self, wavenumber: f64) -> Nearest {
        self.nearest_among(wavenumber, |_| true).unwrap_or_else(|| self.at(0, wavenumber))
    }

    /// The nearest of the channels that `accepts` lets through (it is asked with the index in the
    /// file's order), or none where it accepts none.
    pub fn nearest_among(
        &self,
        wavenumber: f64,
        accepts: impl Fn(usize) -> bool,
    ) -> Option<Nearest> {
        let split = self.ascending.partition_point(|value| *value < wavenumber);
        let accepted = |place: &usize| accepts(self.sorted[*place]);
        let below = (0..split).rev().find(accepted);
        let above = (split..self.ascending.len()).find(accepted);
        let below = below.map(|place| self.at(place, wavenumber));
        let above = above.map(|place| self.at(place, wavenumber));
        match (below, above) {
            (Some(below), Some(above)) if above.distance < below.distance => Some(above),
            (below, above) => below.or(above),
        }
    }

    /// Indices of the channels from `low` to `high` (cm-1, both included), in ascending order.
    pub fn between(&self, low: f64, high: f64) -> Vec<usize> {
        let begin = self.ascending.partition_point(|value| *value < low);
        let end = self.ascending.partition_point(|value| *value <= high).max(begin);
        self.sorted[begin..end].to_vec()
    }

    fn at(&self, place: usize, wavenumber: f64) -> Nearest {
        Nearest {
            index: self.sorted[place],
            wavenumber: self.ascending[place],
            distance: (self.ascending[place] - wavenumber).abs(),
            local_spacing: self.local_spacing[place],
        }
    }
}

/// The larger of the distances to the neighbours in the same segment. A channel that stands alone
/// between gaps takes the usual spacing around it.
fn local_spacings(ascending: &[f64], segments: &[Range<usize>]) -> Vec<f64> {
    let spacings: Vec<f64> = ascending.windows(2).map(|pair| pair[1] - pair[0]).collect();
    let lone = |place: usize| match spacings.len() {
        0 => LONE_SPACING * ascending[place],
        count => usual_spacing(&spacings, place.min(count - 1)),
    };
    let in_segment = |place: usize, segment: &Range<usize>| {
        let before = (place > segment.start).then(|| spacings[place - 1]);
        let behind = (place + 1 < segment.end).then(|| spacings[place]);
        before.into_iter().chain(behind).reduce(f64::max)
    };
    segments
        .iter()
        .flat_map(|segment| segment.clone().map(move |place| (place, segment)))
        .map(|(place, segment)| in_segment(place, segment).unwrap_or_else(|| lone(place)))
        .collect()
}
