//! Hamming apodisation of a spectrum that an interferometer sampled on its natural grid.

use super::channel_axis::ChannelAxis;

/// Weight of the channel itself.
pub const HAMMING_CENTRE: f64 = 0.54;
/// Weight of either neighbour.
pub const HAMMING_SIDE: f64 = 0.23;
/// Standard deviation of white noise after the running mean, relative to before:
/// `sqrt(0.54^2 + 2 * 0.23^2)`.
pub const HAMMING_NOISE_FACTOR: f64 = 0.630_396_700_498_979_4;

/// The Hamming-apodised radiances (any unit) of unapodised `radiances`, both in the order of the
/// file and as long as the axis.
///
/// `R'_i = 0.23 R_{i-1} + 0.54 R_i + 0.23 R_{i+1}`: on the natural grid of `1/(2L)`, with L the
/// largest optical path difference, this running mean is exactly the Hamming function
/// `0.54 + 0.46 cos(pi x / L)`. It never reaches across a gap: the first and the last channel of
/// each stretch have no value (NaN), nor has a channel beside a missing one.
pub fn hamming3(axis: &ChannelAxis, radiances: &[f64]) -> Vec<f64> {
    let mean = Hamming3::new(axis, |_| true);
    (0..radiances.len()).map(|channel| mean.at(channel, |place| radiances[place])).collect()
}

/// The same running mean, for those who take it channel by channel.
#[derive(Debug, Clone, PartialEq)]
pub struct Hamming3 {
    /// For each channel those before and behind it; none where it is the end of a stretch.
    neighbours: Vec<Option<[usize; 2]>>,
}

impl Hamming3 {
    /// For the channels of an axis. One that is not usable has no value, nor have those beside it.
    pub fn new(axis: &ChannelAxis, usable: impl Fn(usize) -> bool) -> Self {
        let mut neighbours = vec![None; axis.len()];
        for segment in axis.segments() {
            for triple in axis.sorted()[segment.clone()].windows(3) {
                if triple.iter().all(|&channel| usable(channel)) {
                    neighbours[triple[1]] = Some([triple[0], triple[2]]);
                }
            }
        }
        Self { neighbours }
    }

    /// Whether a channel has a value.
    pub fn has(&self, channel: usize) -> bool {
        self.neighbours[channel].is_some()
    }

    /// The value of a channel from the radiances before; NaN where it has none.
    #[inline]
    pub fn at(&self, channel: usize, radiance: impl Fn(usize) -> f64) -> f64 {
        match self.neighbours[channel] {
            Some([before, behind]) => {
                HAMMING_SIDE * (radiance(before) + radiance(behind))
                    + HAMMING_CENTRE * radiance(channel)
            }
            None => f64::NAN,
        }
    }

    /// The standard deviation of a channel's value where those before are independent of each other
    /// with the given ones: the root of the sum of the squares, each with its weight. NaN where the
    /// channel has no value.
    pub fn deviation(&self, channel: usize, before: impl Fn(usize) -> f64) -> f64 {
        let squared = |place: usize, weight: f64| (weight * before(place)).powi(2);
        match self.neighbours[channel] {
            Some([one, other]) => (squared(one, HAMMING_SIDE)
                + squared(channel, HAMMING_CENTRE)
                + squared(other, HAMMING_SIDE))
            .sqrt(),
            None => f64::NAN,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn axis(wavenumbers: &[f64]) -> ChannelAxis {
        ChannelAxis::new(wavenumbers.to_vec()).unwrap()
    }

    /// Equality that takes missing for missing.
    fn assert_same(found: &[f64], expected: &[f64]) {
        assert_eq!(found.len(), expected.len());
        for (found, expected) in found.iter().zip(expected) {
            assert!(found == expected || found.is_nan() && expected.is_nan(), "{found} {expected}");
        }
    }

    const NONE: f64 = f64::NAN;

    #[test]
    fn equal_noise_shrinks_by_the_factor() {
        let mean = Hamming3::new(&axis(&[650.0, 650.625, 651.25]), |_| true);
        assert!((mean.deviation(1, |_| 2.0) / 2.0 - HAMMING_NOISE_FACTOR).abs() < 1e-15);
        assert!(mean.deviation(0, |_| 2.0).is_nan());
    }

    #[test]
    fn a_single_channel_spreads_to_its_neighbours() {
        let axis = axis(&[650.0, 650.625, 651.25, 651.875, 652.5]);
        let apodised = hamming3(&axis, &[0.0, 0.0, 1.0, 0.0, 0.0]);
        assert_same(&apodised, &[NONE, 0.23, 0.54, 0.23, NONE]);
    }

    #[test]
    fn a_channel_that_is_not_usable_spoils_those_beside_it() {
        let axis = axis(&[650.0, 650.625, 651.25, 651.875, 652.5, 653.125]);
        let mean = Hamming3::new(&axis, |channel| channel != 1);
        let has: Vec<bool> = (0..6).map(|channel| mean.has(channel)).collect();
        assert_eq!(has, [false, false, false, true, true, false]);
    }

    #[test]
    fn a_flat_spectrum_stays_flat() {
        let axis = axis(&[650.0, 650.625, 651.25, 651.875]);
        assert_same(&hamming3(&axis, &[8.0; 4]), &[NONE, 8.0, 8.0, NONE]);
    }

    #[test]
    fn gaps_are_never_crossed() {
        let axis = axis(&[1.0, 2.0, 3.0, 4.0, 50.0, 51.0, 52.0, 53.0].map(|step| 600.0 + step));
        let apodised = hamming3(&axis, &[1.0; 8]);
        assert_same(&apodised, &[NONE, 1.0, 1.0, NONE, NONE, 1.0, 1.0, NONE]);
    }

    #[test]
    fn a_missing_channel_takes_its_neighbours_along() {
        let axis = axis(&[1.0, 2.0, 3.0, 4.0, 5.0, 6.0].map(|step| 600.0 + step));
        let apodised = hamming3(&axis, &[1.0, 1.0, NONE, 1.0, 1.0, 1.0]);
        assert_same(&apodised, &[NONE, NONE, NONE, NONE, 1.0, NONE]);
    }

    #[test]
    fn descending_axes_give_the_same() {
        let up = axis(&[650.0, 651.0, 652.0, 653.0]);
        let down = axis(&[653.0, 652.0, 651.0, 650.0]);
        let mut reversed = hamming3(&down, &[4.0, 1.0, 7.0, 2.0]);
        reversed.reverse();
        assert_same(&reversed, &hamming3(&up, &[2.0, 7.0, 1.0, 4.0]));
    }

    #[test]
    fn weights_and_noise() {
        assert_eq!(HAMMING_CENTRE + 2.0 * HAMMING_SIDE, 1.0);
        let factor = HAMMING_CENTRE.hypot(HAMMING_SIDE.hypot(HAMMING_SIDE));
        // A few roundings of f64.
        assert!((HAMMING_NOISE_FACTOR / factor - 1.0).abs() < 1e-15, "{factor}");
    }
}
