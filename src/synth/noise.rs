//! Detector noise.

use rand_chacha::ChaCha8Rng;
use rand_chacha::rand_core::SeedableRng;
use rand_distr::{Distribution, StandardNormal};

use super::instrument::{Band, Correlation};

/// Noise of one footprint in one band, mW m-2 sr-1 (cm-1)-1, to be added to `radiances`.
///
/// Every footprint and band has its own stream of numbers, so that the order in which they are made
/// does not matter.
pub fn noise(
    seed: u64,
    footprint: usize,
    band_number: usize,
    band: &Band,
    radiances: &[f32],
) -> Vec<f32> {
    let mut random = ChaCha8Rng::seed_from_u64(seed ^ 0x05EE_D0F4_015E);
    random.set_stream((footprint as u64) << 4 | band_number as u64);
    let kernel = band.correlation.kernel();
    let margin = kernel.len() / 2;
    let white: Vec<f32> =
        (0..radiances.len() + 2 * margin).map(|_| StandardNormal.sample(&mut random)).collect();
    white
        .windows(kernel.len())
        .zip(radiances.iter().zip(&band.nedn))
        .enumerate()
        .map(|(index, (white, (radiance, nedn)))| {
            let value: f32 = white.iter().zip(&kernel).map(|(a, b)| a * b).sum();
            value * nedn * band.growth(index, *radiance)
        })
        .collect()
}

impl Correlation {
    /// Weights that turn white noise into noise of this correlation and of standard deviation 1.
    fn kernel(self) -> Vec<f32> {
        let raw: &[f32] = match self {
            Correlation::None => &[1.0],
            // The three-point mean itself.
            Correlation::Hamming => &[0.23, 0.54, 0.23],
            // A Gaussian of FWHM 0.5 on samples of 0.25: exp(-4 ln2 (lag/2)^2).
            Correlation::Gaussian => &[0.0625, 0.5, 1.0, 0.5, 0.0625],
        };
        let norm = raw.iter().map(|weight| weight * weight).sum::<f32>().sqrt();
        raw.iter().map(|weight| weight / norm).collect()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn correlation(kind: Correlation, lag: usize) -> f32 {
        let kernel = kind.kernel();
        kernel.iter().zip(kernel.iter().skip(lag)).map(|(a, b)| a * b).sum()
    }

    #[test]
    fn apodised_noise_is_correlated_as_published() {
        // Hamming: 0.625063 and 0.133115 at lags 1 and 2, from 0.54 and 0.23.
        assert!((correlation(Correlation::Hamming, 1) - 0.625063).abs() < 1e-5);
        assert!((correlation(Correlation::Hamming, 2) - 0.133115).abs() < 1e-5);
        // Gaussian of FWHM 0.5 sampled at 0.25: exp(-2 ln2 (lag/2)^2) = 0.707, 0.25, 0.044; the
        // kernel is cut at two samples.
        assert!((correlation(Correlation::Gaussian, 1) - 0.707).abs() < 0.02);
        assert!((correlation(Correlation::Gaussian, 2) - 0.25).abs() < 0.02);
    }
}
