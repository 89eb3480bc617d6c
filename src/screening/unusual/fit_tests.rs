//! Fitting components to spectra whose noise and faults are known.

use rand_chacha::ChaCha8Rng;
use rand_chacha::rand_core::SeedableRng;
use rand_distr::{Distribution, StandardNormal};

use super::{Fitted, Rows, fit, score};
use crate::spectral::{HAMMING_CENTRE, HAMMING_NOISE_FACTOR, HAMMING_SIDE};

const CHANNELS: usize = 120;
const PAIRS: usize = 200;
/// Noise of every channel.
const NOISE: f64 = 0.2;

/// Pairs of spectra of three smooth shapes, alike within a pair, with noise as Hamming's function makes
/// it, which `spoil` changes (row, channel, noise of deviation 1).
fn rows(spoil: impl Fn(usize, usize, f64) -> f64) -> Rows {
    let mut random = ChaCha8Rng::seed_from_u64(21);
    let mut normal = move || -> f64 { StandardNormal.sample(&mut random) };
    let mut radiances = Vec::new();
    for pair in 0..PAIRS {
        let strengths = [60.0 * normal(), 20.0 * normal(), 6.0 * normal()];
        for row in [2 * pair, 2 * pair + 1] {
            let white: Vec<f64> = (0..CHANNELS + 2).map(|_| normal()).collect();
            for (channel, w) in white.windows(3).enumerate() {
                let apodised = HAMMING_CENTRE * w[1] + HAMMING_SIDE * (w[0] + w[2]);
                let noise = spoil(row, channel, apodised / HAMMING_NOISE_FACTOR);
                let shape = |k: usize| ((k + 1) as f64 * channel as f64 / 17.0).sin();
                let signal: f64 = (0..3).map(|k| strengths[k] * shape(k)).sum();
                radiances.push(80.0 + signal + NOISE * noise);
            }
        }
    }
    Rows {
        channels: (0..CHANNELS).collect(),
        wavenumbers: (0..CHANNELS).map(|at| 700.0 + 0.625 * at as f64).collect(),
        adjacent: (0..CHANNELS).map(|at| at + 1 < CHANNELS).collect(),
        radiances,
        pairs: (0..PAIRS).map(|pair| (2 * pair, 2 * pair + 1)).collect(),
    }
}

/// Begins with a noise that is three times too large.
fn fitted(rows: &Rows) -> Fitted {
    fit(rows, &[3.0 * NOISE; CHANNELS]).unwrap()
}

#[test]
fn noise_its_correlations_and_the_number_of_components_are_found() {
    let found = fitted(&rows(|_, _, noise| noise));
    assert_eq!(found.basis.components(), 3);
    assert!(found.set_aside.iter().all(|aside| !aside));
    for noise in &found.noise {
        // 200 differences know a median deviation to 1.17 / sqrt(200), 8 %; of 120 channels none is off
        // by more than three and a half of those.
        assert!((noise / NOISE - 1.0).abs() < 0.3, "{noise}");
    }
    // Published: 0.625 and 0.133, nothing beyond. Each of the three smooth components takes the noise's
    // power at low frequency, 1 + 2 (0.625 + 0.133), out of 120 channels, and with it as much of the
    // product at every lag. 24,000 products scatter by less than 0.01.
    let taken = 3.0 * (1.0 + 2.0 * (0.625 + 0.133)) / CHANNELS as f64;
    let expected = [0.625, 0.133, 0.0, 0.0].map(|one| (one - taken) / (1.0 - taken));
    for (found, expected) in found.shape.correlations().iter().zip(expected) {
        assert!((found - expected).abs() < 0.04, "{found} {expected}");
    }
    // The noise of the last round's residuals is what the next would divide by.
    let scores = found.basis.scores;
    assert!((scores.mean - 1.0).abs() < 0.05 && scores.left_out < 4, "{scores:?}");
}

#[test]
fn a_channel_that_explains_itself_is_set_aside_and_its_noise_told() {
    let found = fitted(&rows(|_, channel, noise| if channel == 50 { 12.0 * noise } else { noise }));
    assert_eq!(found.set_aside.iter().filter(|aside| **aside).count(), 1);
    assert!(found.set_aside[50] && !found.basis.channels.contains(&50));
    assert!((found.noise[50] / NOISE / 12.0 - 1.0).abs() < 0.3, "{}", found.noise[50]);
}

#[test]
fn spectra_unlike_the_others_are_left_out_and_have_a_high_score() {
    // A narrow feature in every fiftieth spectrum.
    let feature = |row: usize, channel: usize| row % 50 == 7 && (30..36).contains(&channel);
    let rows = rows(|row, channel, noise| noise + if feature(row, channel) { 15.0 } else { 0.0 });
    let found = fitted(&rows);
    assert_eq!(found.basis.components(), 3, "the feature is no component");
    assert!(found.basis.scores.left_out >= 8);
    let beyond = |row: &usize| {
        let own = &rows.radiances[row * CHANNELS..][..CHANNELS];
        score(&found.basis.residual(own)) > found.basis.limit(4.0)
    };
    let (strange, plain): (Vec<usize>, Vec<usize>) = (0..2 * PAIRS).partition(|row| row % 50 == 7);
    assert!(strange.iter().all(beyond));
    // Four deviations are rare: a few in a hundred thousand of normal numbers, a few more of these.
    assert!(plain.iter().filter(|row| beyond(row)).count() <= 2);
}

#[test]
fn few_spectra_have_no_basis() {
    let mut few = rows(|_, _, noise| noise);
    few.radiances.truncate(20 * CHANNELS);
    few.pairs.truncate(10);
    assert!(fit(&few, &[NOISE; CHANNELS]).is_none());
}
