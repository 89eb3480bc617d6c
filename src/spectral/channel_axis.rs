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

#[cfg(test)]
mod tests {
    use super::*;

    fn axis(wavenumbers: &[f64]) -> ChannelAxis {
        ChannelAxis::new(wavenumbers.to_vec()).unwrap()
    }

    #[test]
    fn senseless_axes_are_refused() {
        assert_eq!(ChannelAxis::new(Vec::new()), Err(AxisError::Empty));
        for senseless in [f64::NAN, 0.0, -650.0, f64::INFINITY] {
            let refused = ChannelAxis::new(vec![650.0, senseless]);
            assert_eq!(refused, Err(AxisError::NoWavenumber { index: 1 }));
        }
    }

    #[test]
    fn the_nearest_channel_knows_its_surroundings() {
        let axis = axis(&[650.0, 650.625, 651.25]);
        let nearest = axis.nearest(650.7);
        assert_eq!((nearest.index, nearest.wavenumber), (1, 650.625));
        assert_eq!(nearest.local_spacing, 0.625);
        // 650.7 is no binary number: one rounding.
        assert!((nearest.distance - 0.075).abs() < 1e-12);
        assert_eq!(axis.nearest(650.3125).index, 0, "halfway the lower one");
        assert_eq!(axis.nearest(1.0).index, 0);
        assert_eq!(axis.nearest(5000.0).index, 2);
    }

    #[test]
    fn the_order_of_the_file_is_kept() {
        let axis = axis(&[900.0, 700.0, 800.0]);
        assert_eq!(axis.wavenumbers(), [900.0, 700.0, 800.0]);
        assert_eq!(axis.sorted(), [1, 2, 0]);
        assert_eq!(axis.nearest(890.0).index, 0);
        assert_eq!(axis.between(700.0, 800.0), [1, 2]);
        assert_eq!(axis.between(1000.0, 600.0), Vec::<usize>::new());
    }

    #[test]
    fn refused_channels_are_passed_over() {
        let axis = axis(&[650.0, 651.0, 652.0]);
        assert_eq!(axis.nearest_among(650.9, |index| index != 1).map(|near| near.index), Some(0));
        assert_eq!(axis.nearest_among(651.2, |index| index != 1).map(|near| near.index), Some(2));
        assert_eq!(axis.nearest_among(651.0, |_| false), None);
    }

    #[test]
    fn spacing_stops_at_gaps() {
        let axis = axis(&[650.0, 651.0, 652.0, 653.0, 900.0, 902.0, 904.0, 906.0]);
        assert_eq!(axis.segments(), [0..4, 4..8]);
        assert_eq!(axis.nearest(660.0).local_spacing, 1.0);
        assert_eq!(axis.nearest(890.0).local_spacing, 2.0);
    }

    #[test]
    fn a_lone_channel_has_a_spacing_too() {
        assert_eq!(axis(&[900.0]).nearest(900.0).local_spacing, 9.0);
        let islands = axis(&[650.0, 651.0, 652.0, 700.0, 748.0, 749.0, 750.0]);
        assert_eq!(islands.nearest(700.0).local_spacing, 1.0);
    }

    #[test]
    fn equal_wavenumbers_are_borne() {
        let axis = axis(&[650.0, 651.0, 651.0, 652.0]);
        assert_eq!(axis.sorted(), [0, 1, 2, 3]);
        assert_eq!(axis.nearest(651.0).index, 1, "the first in the file");
    }

    proptest::proptest! {
        #[test]
        fn every_channel_is_nearest_to_itself(
            wavenumbers in proptest::collection::vec(600.0..2800.0f64, 1..60),
        ) {
            let axis = ChannelAxis::new(wavenumbers.clone()).unwrap();
            for wavenumber in &wavenumbers {
                proptest::prop_assert_eq!(axis.nearest(*wavenumber).wavenumber, *wavenumber);
            }
            let covered: usize = axis.segments().iter().map(|segment| segment.len()).sum();
            proptest::prop_assert_eq!(covered, wavenumbers.len());
            proptest::prop_assert_eq!(axis.between(0.0, 1e4).len(), wavenumbers.len());
        }
    }
}
