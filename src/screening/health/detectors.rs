//! Detectors against each other, and the sweep directions: where a band sees the ground.

use rayon::prelude::*;

use super::finding::{Check, Finding, Limit, Subject};
use super::grid::ScanGrid;
use super::limits::HealthLimits;
use super::readings::BandReadings;
use super::sample::Sample;
use crate::screening::unusual::{Fitted, pair_deviations};
use crate::spectral::{brightness_temperature_or_nan, centre_and_deviation, median, planck_slope};

/// At most so many channels are looked at together: enough that their noise is averaged out.
const TOGETHER: usize = 16;
/// Positions that count as uniform: this share, with the smallest differences.
const UNIFORM: f64 = 0.5;
/// Fewer positions say nothing about a detector.
const FEWEST: usize = 20;
/// A bias must be this many times its own uncertainty.
const SURE: f64 = 5.0;

/// A detector of a band in numbers.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct DetectorNumbers {
    /// Its noise over that of the other detectors; NaN where unknown.
    pub noise: f64,
    /// What the file says of this; 1 where it tells all detectors the same, or nothing.
    pub told_noise: f64,
    /// Its bias in the band's windows against the others, K; NaN where unknown.
    pub bias: f64,
    /// Standard deviation of the bias, K.
    pub bias_deviation: f64,
    /// The same in the channels that vary the least over the granule.
    pub uniform_bias: f64,
    /// Standard deviation of that, K.
    pub uniform_deviation: f64,
}

/// Some channels of a band, and how their radiances become temperature.
#[derive(Debug, Clone)]
pub struct ChannelGroup {
    /// Channel, its mean radiance, kelvin per radiance.
    weights: Vec<(usize, f64, f64)>,
}

/// What detectors are compared in. Clouds make a window uneven, and then it says little about a
/// detector; channels that see only high air are even nearly everywhere.
#[derive(Debug, Clone)]
pub struct DetectorChannels {
    /// The channels that are the warmest on average: where the band sees deepest.
    pub window: ChannelGroup,
    /// The channels whose temperature varies the least over the granule, noise included.
    pub uniform: ChannelGroup,
}

impl DetectorChannels {
    /// Those of a band.
    pub fn of(readings: &BandReadings<'_>, sample: &Sample) -> Self {
        let rows = &sample.rows;
        let count = rows.count() as f64;
        let mut channels: Vec<(usize, f64, f64, f64)> = (0..rows.channels.len())
            .into_par_iter()
            .map(|at| {
                let mean = rows.column(at).sum::<f64>() / count;
                let kelvin = brightness_temperature_or_nan(rows.wavenumbers[at], mean);
                let spread = rows.column(at).map(|value| (value - mean).abs()).sum::<f64>() / count;
                let spread = spread / planck_slope(rows.wavenumbers[at], kelvin);
                (rows.channels[at], mean, kelvin, spread)
            })
            .filter(|one| one.2.is_finite() && one.3.is_finite())
            .collect();
        let group = |channels: &[(usize, f64, f64, f64)]| {
            let weight = |(channel, mean, kelvin, _): &(usize, f64, f64, f64)| {
                let nu = readings.band.axis.wavenumbers()[*channel];
                (*channel, *mean, 1.0 / planck_slope(nu, *kelvin))
            };
            ChannelGroup { weights: channels.iter().take(TOGETHER).map(weight).collect() }
        };
        channels.sort_by(|one, next| next.2.total_cmp(&one.2));
        let window = group(&channels);
        channels.sort_by(|one, next| one.3.total_cmp(&next.3));
        Self { window, uniform: group(&channels) }
    }
}

impl ChannelGroup {
    /// What a spectrum is warmer by than the mean of the sample, K; NaN where a value is missing.
    pub fn signal(&self, radiances: &[f64]) -> f64 {
        let kelvin = self.weights.iter();
        let sum: f64 = kelvin.map(|(at, mean, weight)| (radiances[*at] - mean) * weight).sum();
        sum / self.weights.len() as f64
    }
}

/// The detectors in numbers, and what is wrong with them. `signals`: those of all footprints in the
/// window, then in the uniform channels; `told`: what the file says of the detectors' noise, empty
/// where it says nothing.
pub fn detectors(
    readings: &BandReadings<'_>,
    sample: &Sample,
    fitted: Option<&Fitted>,
    told: &[f64],
    signals: &[Vec<f64>; 2],
    grid: &ScanGrid,
    limits: &HealthLimits,
) -> (Vec<DetectorNumbers>, Vec<Finding>) {
    if grid.detectors < 2 {
        return Default::default();
    }
    let alive: Vec<usize> =
        (0..grid.detectors).filter(|one| !sample.dead_detectors.contains(one)).collect();
    let noise = match fitted {
        Some(fitted) => noise_ratios(sample, fitted, grid),
        None => vec![f64::NAN; grid.detectors],
    };
    let [in_window, in_uniform] = signals.each_ref().map(|signal| biases(signal, &alive, grid));
    let (noisy, striped) = (Limit::of(limits, "noisy_detector"), Limit::of(limits, "striping"));
    let mut numbers = Vec::new();
    let mut findings = Vec::new();
    for detector in 0..grid.detectors {
        let (subject, band) = (Subject::Detector(detector), Some(readings.number));
        let ((bias, bias_deviation), (uniform_bias, uniform_deviation)) =
            (in_window[detector], in_uniform[detector]);
        let noise = noise[detector];
        let told_noise = told.get(detector).copied().filter(|one| *one > 0.0).unwrap_or(1.0);
        numbers.push(DetectorNumbers {
            noise,
            told_noise,
            bias,
            bias_deviation,
            uniform_bias,
            uniform_deviation,
        });
        if !alive.contains(&detector) {
            continue;
        }
        if noise / told_noise > noisy.value {
            let finding = noisy.finding(Check::NoisyDetector, subject, band, noise / told_noise);
            let detail = match told.is_empty() {
                true => String::new(),
                false => format!("the file says {told_noise:.2} of the others, found {noise:.2}"),
            };
            findings.push(finding.saying(detail));
        }
        let biased = [
            (bias, bias_deviation, "in the band's windows"),
            (uniform_bias, uniform_deviation, "in the channels that vary the least"),
        ];
        // Where both show it, the surer one is told.
        let sure = |(bias, deviation, _): &(f64, f64, &str)| (bias / deviation).abs();
        let beyond =
            biased.into_iter().filter(|one| one.0.abs() > striped.value && sure(one) > SURE);
        if let Some((bias, deviation, place)) =
            beyond.max_by(|one, next| sure(one).total_cmp(&sure(next)))
        {
            let finding = striped.finding(Check::Striping, subject, band, bias);
            findings.push(finding.saying(format!("± {deviation:.3} K {place}")));
        }
    }
    (numbers, findings)
}

/// The noise of each detector over the usual one, from the residuals of pairs.
fn noise_ratios(sample: &Sample, fitted: &Fitted, grid: &ScanGrid) -> Vec<f64> {
    let width = sample.rows.channels.len();
    let of_detector = |detector: usize| {
        let own = |(row, _): &&(usize, usize)| grid.detector(sample.footprints[*row]) == detector;
        let pairs: Vec<(usize, usize)> = sample.rows.pairs.iter().filter(own).copied().collect();
        let mut deviations = pair_deviations(&fitted.residuals, width, &pairs);
        deviations.retain(|deviation| deviation.is_finite());
        median(&mut deviations)
    };
    let deviations: Vec<f64> = (0..grid.detectors).map(of_detector).collect();
    let mut there: Vec<f64> = deviations.iter().copied().filter(|one| one.is_finite()).collect();
    let usual = median(&mut there);
    deviations.into_iter().map(|deviation| deviation / usual).collect()
}

/// The bias of each detector against the median of the others at the same position, over the most
/// uniform positions, with its standard deviation.
fn biases(signal: &[f64], alive: &[usize], grid: &ScanGrid) -> Vec<(f64, f64)> {
    let clusters = signal.chunks_exact(grid.detectors);
    let mut uniform: Vec<(f64, &[f64])> = clusters
        .filter(|cluster| alive.iter().all(|detector| cluster[*detector].is_finite()))
        .map(|cluster| {
            let mut values: Vec<f64> = alive.iter().map(|detector| cluster[*detector]).collect();
            (centre_and_deviation(&mut values).1, cluster)
        })
        .collect();
    uniform.sort_by(|one, next| one.0.total_cmp(&next.0));
    uniform.truncate(((UNIFORM * uniform.len() as f64) as usize).max(FEWEST));
    let of_detector = |detector: usize| {
        if uniform.len() < FEWEST || !alive.contains(&detector) || alive.len() < 2 {
            return (f64::NAN, f64::NAN);
        }
        let mut differences: Vec<f64> = uniform
            .iter()
            .map(|(_, cluster)| {
                let others = alive.iter().filter(|one| **one != detector);
                cluster[detector] - median(&mut others.map(|one| cluster[*one]).collect::<Vec<_>>())
            })
            .collect();
        let (bias, deviation) = centre_and_deviation(&mut differences);
        // A median of normal numbers has 1.2533 times the deviation of their mean.
        (bias, 1.2533 * deviation / (uniform.len() as f64).sqrt())
    };
    (0..grid.detectors).map(of_detector).collect()
}

/// What even positions are warmer than odd ones by, K, with its standard deviation: each position
/// against the mean of its neighbours in the line, where those agree best.
pub fn sweep_difference(signal: &[f64], grid: &ScanGrid) -> Option<(f64, f64)> {
    let mut steps: Vec<(f64, f64)> = Vec::new();
    for footprint in 0..signal.len() {
        let position = footprint / grid.detectors % grid.positions.max(1);
        if position == 0 || position + 1 >= grid.positions {
            continue;
        }
        let (before, here, behind) = (
            signal[footprint - grid.detectors],
            signal[footprint],
            signal[footprint + grid.detectors],
        );
        let sign = if position.is_multiple_of(2) { 1.0 } else { -1.0 };
        let step = sign * (here - 0.5 * (before + behind));
        if step.is_finite() {
            steps.push(((before - behind).abs(), step));
        }
    }
    steps.sort_by(|one, next| one.0.total_cmp(&next.0));
    steps.truncate((UNIFORM * steps.len() as f64) as usize);
    if steps.len() < FEWEST {
        return None;
    }
    let mut differences: Vec<f64> = steps.iter().map(|(_, step)| *step).collect();
    let (difference, deviation) = centre_and_deviation(&mut differences);
    Some((difference, 1.2533 * deviation / (steps.len() as f64).sqrt()))
}

/// A sweep difference beyond its limit.
pub fn sweep(
    readings: &BandReadings<'_>,
    signal: &[f64],
    grid: &ScanGrid,
    limits: &HealthLimits,
) -> Option<Finding> {
    let limit = Limit::of(limits, "sweep");
    let (difference, deviation) = sweep_difference(signal, grid)?;
    let found = difference.abs() > limit.value && difference.abs() > SURE * deviation;
    found.then(|| {
        let band = Some(readings.number);
        let finding = limit.finding(Check::Sweep, Subject::Granule, band, difference);
        finding.saying(format!("even positions against odd ones, ± {deviation:.3} K"))
    })
}

#[cfg(test)]
mod tests {
    use rand_chacha::ChaCha8Rng;
    use rand_chacha::rand_core::SeedableRng;
    use rand_distr::{Distribution, StandardNormal};

    use super::*;

    /// A slope over the granule, a biased detector, and noise of 0.05 K.
    fn signal(grid: &ScanGrid, biased: usize, bias: f64) -> Vec<f64> {
        let mut random = ChaCha8Rng::seed_from_u64(11);
        let value = |at: usize| {
            let own = if grid.detector(at) == biased { bias } else { 0.0 };
            let noise: f64 = StandardNormal.sample(&mut random);
            0.02 * grid.line(at) as f64 + own + 0.05 * noise
        };
        (0..grid.count()).map(value).collect()
    }

    #[test]
    fn a_biased_detector_is_told_from_the_others() {
        let grid = ScanGrid { lines: 20, positions: 15, detectors: 9 };
        let alive: Vec<usize> = (0..9).collect();
        let found = biases(&signal(&grid, 4, 0.5), &alive, &grid);
        for (detector, (bias, deviation)) in found.into_iter().enumerate() {
            let expected = if detector == 4 { 0.5 } else { 0.0 };
            // Medians over 150 positions: 0.05 K * 1.25 / 12, and the others' noise; four of those.
            assert!((bias - expected).abs() < 0.025, "{detector}: {bias}");
            assert!(deviation < 0.01);
        }
    }

    #[test]
    fn alternating_positions_are_seen_and_slopes_are_not() {
        let grid = ScanGrid { lines: 12, positions: 20, detectors: 1 };
        let plain = signal(&grid, 5, 0.0);
        let (difference, deviation) = sweep_difference(&plain, &grid).unwrap();
        assert!(difference.abs() < 5.0 * deviation, "{difference} {deviation}");
        let swept: Vec<f64> = plain
            .iter()
            .enumerate()
            .map(|(at, value)| value + if (at % 20) % 2 == 0 { 0.3 } else { 0.0 })
            .collect();
        let (difference, deviation) = sweep_difference(&swept, &grid).unwrap();
        assert!((difference - 0.3).abs() < 5.0 * deviation, "{difference} {deviation}");
        assert!(deviation < 0.02);
    }
}
