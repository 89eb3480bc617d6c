//! Ringing: neighbouring channels of alternating sign, as of a disturbed interferogram.

use std::f64::consts::PI;

/// Channels of one window: long enough to be narrow in frequency, short enough that ringing at a
/// band's edge fills it.
const WINDOW: usize = 24;
/// Sums that grow side by side; a part of a window's length.
const LANES: usize = 8;
/// Fewer windows say nothing about the power.
const FEWEST: usize = 3;
/// Deviations of the power of noise alone that a small number of windows must exceed: below this, a
/// power of three times the expected one is not rare.
const SURE: f64 = 9.0;

/// Windows over the channels of a band.
#[derive(Debug, Clone)]
pub struct RingingWindows {
    /// First channel of each window, [`WINDOW`] long.
    first: Vec<usize>,
    /// Weights of alternating sign, tapered so that what is smooth drops out.
    weights: Vec<f64>,
}

/// What the windows say of one spectrum.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Ringing {
    /// Power at Nyquist, 1 for white noise of unit deviation.
    pub power: f64,
    /// Size of the alternating part, noise units.
    pub amplitude: f64,
}

impl RingingWindows {
    /// Windows side by side over stretches of adjacent channels; `None` where there are too few.
    pub fn over(adjacent: &[bool]) -> Option<Self> {
        let mut first = Vec::new();
        let mut begin = 0;
        for (channel, adjacent) in adjacent.iter().enumerate() {
            if channel + 1 - begin == WINDOW {
                first.push(begin);
                begin = channel + 1;
            } else if !adjacent {
                begin = channel + 1;
            }
        }
        let taper = |at: usize| (PI * (at as f64 + 0.5) / WINDOW as f64).sin().powi(2);
        let sign = |at: usize| if at.is_multiple_of(2) { 1.0 } else { -1.0 };
        let weights = (0..WINDOW).map(|at| sign(at) * taper(at)).collect();
        (first.len() >= FEWEST).then_some(Self { first, weights })
    }

    /// The ringing of a residual in noise units, channel by channel; missing channels count as
    /// nothing.
    pub fn of(&self, residual: impl Fn(usize) -> f64) -> Ringing {
        self.ringing_of(self.first.iter().map(|first| self.alternating(*first, &residual).powi(2)))
    }

    /// The same of a residual without gaps, faster.
    pub fn of_whole(&self, residual: &[f32]) -> Ringing {
        self.ringing_of(self.first.iter().map(|first| {
            let window = &residual[*first..first + WINDOW];
            let mut sums = [0.0_f64; LANES];
            let lanes = self.weights.chunks_exact(LANES).zip(window.chunks_exact(LANES));
            for (weights, values) in lanes {
                for ((sum, weight), value) in sums.iter_mut().zip(weights).zip(values) {
                    *sum += weight * f64::from(*value);
                }
            }
            sums.iter().sum::<f64>().powi(2)
        }))
    }

    fn ringing_of(&self, squares: impl Iterator<Item = f64>) -> Ringing {
        let squares: f64 = squares.sum();
        let mean = squares / self.first.len() as f64;
        let sum: f64 = self.weights.iter().map(|weight| weight.abs()).sum();
        let power: f64 = self.weights.iter().map(|weight| weight.powi(2)).sum();
        Ringing { power: mean / power, amplitude: mean.sqrt() / sum }
    }

    fn alternating(&self, first: usize, residual: impl Fn(usize) -> f64) -> f64 {
        let value = |at: usize| {
            let value = residual(first + at);
            if value.is_finite() { value } else { 0.0 }
        };
        self.weights.iter().enumerate().map(|(at, weight)| weight * value(at)).sum()
    }

    /// How much of a direction (of unit length over the channels) is alternation: 1 for channels of
    /// alternating sign and equal size, little for anything else.
    pub fn share(&self, direction: impl Fn(usize) -> f64) -> f64 {
        let covered = self.first.iter().flat_map(|first| *first..first + WINDOW);
        let power: f64 = covered.map(|at| direction(at).powi(2)).sum();
        let mean = power / (self.first.len() * WINDOW) as f64;
        let amplitude = self.of(&direction).amplitude;
        if mean > 0.0 { amplitude.powi(2) / mean } else { 0.0 }
    }

    /// Power, over the expected one, from which on noise is not to blame: `limit`, or more where there
    /// are few windows. The power is a mean of squares, of deviation `sqrt(2 / windows)`.
    pub fn limit(&self, limit: f64) -> f64 {
        limit.max(1.0 + SURE * (2.0 / self.first.len() as f64).sqrt())
    }
}

#[cfg(test)]
mod tests {
    use rand_chacha::ChaCha8Rng;
    use rand_chacha::rand_core::SeedableRng;
    use rand_distr::{Distribution, StandardNormal};

    use super::*;
    use crate::spectral::{HAMMING_CENTRE, HAMMING_NOISE_FACTOR, HAMMING_SIDE, NoiseShape};

    fn noise(count: usize, seed: u64) -> Vec<f64> {
        let mut random = ChaCha8Rng::seed_from_u64(seed);
        (0..count).map(|_| StandardNormal.sample(&mut random)).collect()
    }

    #[test]
    fn noise_has_the_power_that_its_shape_says() {
        let windows = RingingWindows::over(&vec![true; 24 * 400]).unwrap();
        let white = noise(24 * 400 + 2, 3);
        // A mean of 400 squares: deviation of 7 %.
        assert!((windows.of(|at| white[at]).power - 1.0).abs() < 0.2);
        let apodised: Vec<f64> = white
            .windows(3)
            .map(|w| (HAMMING_CENTRE * w[1] + HAMMING_SIDE * (w[0] + w[2])) / HAMMING_NOISE_FACTOR)
            .collect();
        let expected = NoiseShape::hamming().power(PI);
        let found = windows.of(|at| apodised[at]).power;
        // The window is not infinitely narrow, and the power rises steeply from its minimum.
        assert!(found > 0.8 * expected && found < 2.5 * expected, "{found} {expected}");
    }

    #[test]
    fn a_whole_residual_rings_as_one_value_after_the_other_says() {
        let windows = RingingWindows::over(&[true; 240]).unwrap();
        let white: Vec<f32> = noise(240, 5).iter().map(|value| *value as f32).collect();
        let one = windows.of(|at| f64::from(white[at]));
        let other = windows.of_whole(&white);
        // Sums in another order: a few roundings of f64.
        assert!((one.power / other.power - 1.0).abs() < 1e-12, "{one:?} {other:?}");
        assert!((one.amplitude / other.amplitude - 1.0).abs() < 1e-12);
    }

    #[test]
    fn an_alternating_part_is_measured_and_a_smooth_one_is_not_seen() {
        let windows = RingingWindows::over(&vec![true; 240]).unwrap();
        let sign = |at: usize| if at.is_multiple_of(2) { 1.0 } else { -1.0 };
        let found = windows.of(|at| 3.0 * sign(at) + 50.0 + 0.2 * at as f64);
        assert!((found.amplitude - 3.0).abs() < 0.05, "{}", found.amplitude);
        // A line structure of period 2.5 channels leaks through the taper by a fiftieth.
        let lines = windows.of(|at| (2.0 * PI * at as f64 / 2.5).sin());
        assert!(lines.amplitude < 0.025, "{}", lines.amplitude);
    }

    #[test]
    fn a_direction_that_alternates_is_known() {
        let windows = RingingWindows::over(&[true; 240]).unwrap();
        let sign = |at: usize| if at.is_multiple_of(2) { 0.1 } else { -0.1 };
        assert!((windows.share(sign) - 1.0).abs() < 1e-12);
        assert!(windows.share(|at| (2.0 * PI * at as f64 / 2.5).sin()) < 1e-3);
        // White: 9 / 12^2 of it, the power of the window over the square of its sum.
        let white = noise(240, 9);
        assert!((windows.share(|at| white[at]) - 0.0625).abs() < 0.06);
    }

    #[test]
    fn few_windows_need_more() {
        let adjacent: Vec<bool> = (0..100).map(|at| at != 40).collect();
        let windows = RingingWindows::over(&adjacent).unwrap();
        assert_eq!(windows.first, [0, 41, 65]);
        assert!(windows.limit(3.0) > 8.0);
        assert!(RingingWindows::over(&[true; 60]).is_none());
    }
}
