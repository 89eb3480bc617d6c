//! Hamming apodisation of a spectrum that an interferometer sampled on its natural grid.

use super::channel_axis::ChannelAxis;

/// Weight of the channel itself.
pub const HAMMING_CENTRE: f64 = 0.54;
/// Weight of either neighbour.
pub const HAMMING_SIDE: f64 = 0.23;
/// Standard deviation of white noise after the running mean, relative to before:
/// `sqrt(0.54^2 + 2 * 0.23^2)`.
pub const HAMMING_NOISE_FACTOR: f64 = 0.630_396_700_498_797_8;

/// The Hamming-apodised radiances (any unit) of unapodised `radiances`, both in the order of the
/// file and as long as the axis.
///
/// `R'_i = 0.23 R_{i-1} + 0.54 R_i + 0.23 R_{i+1}`: on the natural grid of `1/(2L)`, with L the
/// largest optical path difference, this running mean is exactly the Hamming function
/// `0.54 + 0.46 cos(pi x / L)`. It never reaches across a gap: the first and the last channel of
/// each stretch have no value (NaN), nor has a channel beside a missing one.
pub fn hamming3(axis: &ChannelAxis, radiances: &[f64]) -> Vec<f64> {
    let mut apodised = vec![f64::NAN; radiances.len()];
    for segment in axis.segments() {
        for triple in axis.sorted()[segment.clone()].windows(3) {
            let [before, here, behind] = [triple[0], triple[1], triple[2]];
            apodised[here] = HAMMING_SIDE * (radiances[before] + radiances[behind])
                + HAMMING_CENTRE * radiances[here];
        }
    }
    apodised
}
