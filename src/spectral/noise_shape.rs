//! How the noise of neighbouring channels goes together: correlations, and the power at a frequency.
//!
//! Apodisation makes neighbours share their noise; what is expected of a filtered spectrum, and of the
//! principal components of noise, follows from the correlations.

use std::f64::consts::PI;

/// Correlations of the noise at lags 1, 2, … channels; none beyond.
#[derive(Debug, Clone, PartialEq)]
pub struct NoiseShape {
    correlations: Vec<f64>,
}

impl NoiseShape {
    /// The furthest lag that is looked at: the apodisations in use reach no further.
    pub const FURTHEST: usize = 4;

    /// From correlations at lags 1, 2, …
    pub fn new(correlations: Vec<f64>) -> Self {
        Self { correlations }
    }

    /// Noise of channels that know nothing of each other: an unapodised interferometer, a grating.
    pub fn white() -> Self {
        Self::new(Vec::new())
    }

    /// Noise behind Hamming's function on the natural grid: `2 * 0.54 * 0.23` and `0.23^2` over
    /// `0.54^2 + 2 * 0.23^2`, 0.625 and 0.133 [Harris 1978].
    pub fn hamming() -> Self {
        Self::new(vec![0.625_062_908_907_901_3, 0.133_115_249_119_275_3])
    }

    /// Measured on rows of noise of unit deviation: `rows` gives a channel and its neighbour in one
    /// stretch at some lag, and is asked for lags 1 to [`Self::FURTHEST`].
    pub fn measured(mut products: impl FnMut(usize) -> Option<f64>) -> Self {
        Self::new((1..=Self::FURTHEST).map_while(&mut products).collect())
    }

    /// The correlations at lags 1, 2, …
    pub fn correlations(&self) -> &[f64] {
        &self.correlations
    }

    /// Power of the noise at an angular frequency (radians per channel, 0 to pi), 1 for white
    /// noise: `1 + 2 sum rho_k cos(k w)`, never below zero.
    pub fn power(&self, frequency: f64) -> f64 {
        let terms = self.correlations.iter().zip(1..);
        let sum: f64 = terms.map(|(rho, lag)| rho * (f64::from(lag) * frequency).cos()).sum();
        (1.0 + 2.0 * sum).max(0.0)
    }

    /// The largest power over all frequencies.
    pub fn largest_power(&self) -> f64 {
        (0..=32).map(|step| self.power(f64::from(step) * PI / 32.0)).fold(0.0, f64::max)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::spectral::{HAMMING_CENTRE, HAMMING_SIDE};

    #[test]
    fn hamming_noise_is_that_of_its_running_mean() {
        let total = HAMMING_CENTRE.powi(2) + 2.0 * HAMMING_SIDE.powi(2);
        let shape = NoiseShape::hamming();
        let expected = [2.0 * HAMMING_CENTRE * HAMMING_SIDE / total, HAMMING_SIDE.powi(2) / total];
        for (found, expected) in shape.correlations().iter().zip(expected) {
            // A few roundings.
            assert!((found - expected).abs() < 1e-12, "{found} {expected}");
        }
        // Published: 0.625063 and 0.133115.
        assert!((shape.correlations()[0] - 0.625_063).abs() < 5e-7);
        assert!((shape.correlations()[1] - 0.133_115).abs() < 5e-7);
        // The running mean passes (0.54 + 0.46 cos w)^2 of the power: all of it at 0, 0.08^2 at pi.
        for frequency in [0.0, 1.0, 2.0, PI] {
            let gain = HAMMING_CENTRE + 2.0 * HAMMING_SIDE * f64::cos(frequency);
            assert!((shape.power(frequency) - gain.powi(2) / total).abs() < 1e-12);
        }
        assert!((shape.largest_power() - 1.0 / total).abs() < 1e-12);
    }

    #[test]
    fn white_noise_is_the_same_everywhere() {
        assert_eq!(NoiseShape::white().power(0.3), 1.0);
        assert_eq!(NoiseShape::white().largest_power(), 1.0);
    }
}
