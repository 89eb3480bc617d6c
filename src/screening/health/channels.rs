//! Channels that are noisier than they should be, or jump between levels.

use super::finding::{Check, Finding, Limit, Subject};
use super::grid::ScanGrid;
use super::limits::HealthLimits;
use super::readings::BandReadings;
use super::sample::Sample;
use crate::granule::Channel;
use crate::screening::unusual::Fitted;
use crate::spectral::{median, running_median};

/// Neighbours to either side whose noise a channel's noise is compared with.
const REACH: usize = 12;
/// A channel that only itself explains must stand out among its neighbours by this much in the
/// differences of alike footprints as well: it may see what no other channel sees.
const ALSO_RAW: f64 = 1.3;
/// Residuals count for no more than this in the level of a line, so that spikes do not make one.
const MOST_NOISES: f64 = 8.0;
/// A line with fewer footprints of the sample has no level.
const FEWEST_IN_LINE: f64 = 4.0;
/// Of a channel that explains itself nearly alone the others know nothing to divide by.
const LEAST_FREE: f64 = 0.05;
/// A step must be this many times its own deviation: in a granule there are some hundred thousand.
const SURE: f64 = 6.0;
/// A step is one channel's own if its neighbours have less than this share of it.
const NEIGHBOURS_SHARE: f64 = 0.5;

/// How noisy a channel is.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ChannelNoise {
    /// The channel, as a place in the band.
    pub channel: usize,
    /// From what the components leave, mW m-2 sr-1 (cm-1)-1.
    pub noise: f64,
    /// From the pairs of footprints that are the most alike, mW m-2 sr-1 (cm-1)-1.
    pub spatial: f64,
    /// What it should be: the file's NEdN, times what the neighbours' noise is above theirs; where the
    /// file gives none, the noise of the neighbours.
    pub expected: f64,
}

/// The noise of the sample's channels. `nedn` is the file's, for all channels of the band.
pub fn channel_noise(sample: &Sample, fitted: &Fitted, nedn: Option<&[f64]>) -> Vec<ChannelNoise> {
    let channels = &sample.rows.channels;
    let file = |channel: usize| {
        let value = nedn.map_or(f64::NAN, |nedn| nedn[channel]);
        if value > 0.0 { value } else { f64::NAN }
    };
    let over_file: Vec<f64> =
        channels.iter().zip(&fitted.noise).map(|(channel, noise)| noise / file(*channel)).collect();
    let (usual_ratio, usual) =
        (running_median(&over_file, REACH), running_median(&fitted.noise, REACH));
    let noise = |at: usize| {
        // Photon noise grows with the scene in all channels of a region alike: that is no fault of one.
        let expected = file(channels[at]) * usual_ratio[at].max(1.0);
        ChannelNoise {
            channel: channels[at],
            noise: fitted.noise[at],
            spatial: sample.spatial_noise[at],
            expected: if expected.is_finite() { expected } else { usual[at] },
        }
    };
    (0..channels.len()).map(noise).collect()
}

/// Channels that are too noisy.
pub fn noisy_channels(
    readings: &BandReadings<'_>,
    noise: &[ChannelNoise],
    set_aside: &[bool],
    limits: &HealthLimits,
) -> Vec<Finding> {
    let limit = Limit::of(limits, "noisy_channel");
    let raw: Vec<f64> = noise.iter().map(|one| one.spatial).collect();
    let usual = running_median(&raw, REACH);
    let found = noise.iter().enumerate().filter(|(at, one)| {
        let also_raw = !set_aside[*at] || one.spatial > ALSO_RAW * usual[*at];
        one.noise > limit.value * one.expected && also_raw
    });
    found
        .map(|(_, one)| {
            let subject = subject(readings, one.channel);
            let (band, value) = (Some(readings.number), one.noise / one.expected);
            let detail = format!(
                "noise {:.3e}, expected {:.3e} mW m-2 sr-1 (cm-1)-1",
                one.noise, one.expected
            );
            limit.finding(Check::NoisyChannel, subject, band, value).saying(detail)
        })
        .collect()
}

/// Channels whose level steps from one scan line to the next while that of their neighbours does not.
///
/// What returns in some lines goes together with the scene by chance, and components take part of it
/// along: levels then drift with the scene, but from one line to the next they still jump.
pub fn popping_channels(
    readings: &BandReadings<'_>,
    sample: &Sample,
    fitted: &Fitted,
    grid: &ScanGrid,
    limits: &HealthLimits,
) -> Vec<Finding> {
    let limit = Limit::of(limits, "popping_step");
    let levels = Levels::of(sample, fitted, grid);
    let width = levels.of_channels.len();
    let mut findings = Vec::new();
    for at in 0..width {
        let Some(line) = levels.largest_step(at) else { continue };
        let value = levels.step(at, line);
        let beside = at.saturating_sub(1)..(at + 2).min(width);
        let alone = beside
            .filter(|one| *one != at)
            .all(|one| levels.step(one, line) < NEIGHBOURS_SHARE * value);
        if value > limit.value && value > SURE * levels.deviation(at, line) && alone {
            let subject = subject(readings, sample.rows.channels[at]);
            let finding =
                limit.finding(Check::PoppingChannel, subject, Some(readings.number), value);
            let lines = levels.elsewhere(at, value);
            findings.push(finding.saying(format!("another level in {lines} scan lines")));
        }
    }
    findings
}

/// For each channel the level of each line with enough footprints, in units of the noise.
///
/// Levels are those of what the *other* channels leave unexplained. With orthonormal components the
/// residual of a channel that is predicted from the others alone is its residual over `1 - h`, h being
/// its leverage [Cook & Weisberg 1982], and what it scatters by grows by `1 / sqrt(1 - h)`.
struct Levels {
    of_channels: Vec<Vec<f64>>,
    /// Footprints of the sample in each of the lines.
    counts: Vec<f64>,
    /// One over `1 - h`.
    from_others: Vec<f64>,
}

impl Levels {
    fn of(sample: &Sample, fitted: &Fitted, grid: &ScanGrid) -> Self {
        let width = sample.rows.channels.len();
        let mut sums = vec![vec![0.0; width]; grid.lines];
        let mut counts = vec![0.0; grid.lines];
        let from_others = from_others(sample, fitted);
        for (row, footprint) in fitted.residuals.chunks_exact(width).zip(&sample.footprints) {
            let line = grid.line(*footprint);
            counts[line] += 1.0;
            for (sum, (value, factor)) in sums[line].iter_mut().zip(row.iter().zip(&from_others)) {
                *sum += (value * factor).clamp(-MOST_NOISES, MOST_NOISES);
            }
        }
        let lines: Vec<usize> =
            (0..grid.lines).filter(|line| counts[*line] >= FEWEST_IN_LINE).collect();
        let level = |channel: usize, line: &usize| sums[*line][channel] / counts[*line];
        Self {
            of_channels: (0..width)
                .map(|channel| lines.iter().map(|line| level(channel, line)).collect())
                .collect(),
            counts: lines.iter().map(|line| counts[*line]).collect(),
            from_others,
        }
    }

    /// From a line to the next.
    fn step(&self, channel: usize, line: usize) -> f64 {
        let levels = &self.of_channels[channel];
        (levels[line + 1] - levels[line]).abs()
    }

    /// The line behind which a channel's level changes the most.
    fn largest_step(&self, channel: usize) -> Option<usize> {
        let steps = 0..self.counts.len().saturating_sub(1);
        steps
            .filter(|line| self.step(channel, *line).is_finite())
            .max_by(|a, b| self.step(channel, *a).total_cmp(&self.step(channel, *b)))
    }

    /// What noise makes of a step.
    fn deviation(&self, channel: usize, line: usize) -> f64 {
        let means = 1.0 / self.counts[line] + 1.0 / self.counts[line + 1];
        (means * self.from_others[channel]).sqrt()
    }

    /// Lines in which a channel is further from its usual level than half a step.
    fn elsewhere(&self, channel: usize, step: f64) -> usize {
        let levels = &self.of_channels[channel];
        let middle = median(&mut levels.clone());
        levels.iter().filter(|level| (**level - middle).abs() > 0.5 * step).count()
    }
}

/// Factors from the residuals of the rows' channels to those that the other channels leave.
fn from_others(sample: &Sample, fitted: &Fitted) -> Vec<f64> {
    let channels = &sample.rows.channels;
    let mut factors = vec![1.0; channels.len()];
    for (channel, own) in fitted.basis.channels.iter().zip(fitted.basis.leverages()) {
        if let Some(at) = channels.iter().position(|one| one == channel) {
            factors[at] = 1.0 / (1.0 - own).max(LEAST_FREE);
        }
    }
    factors
}

fn subject(readings: &BandReadings<'_>, channel: usize) -> Subject {
    let wavenumber = readings.band.axis.wavenumbers()[channel];
    Subject::Channel(Channel { band: readings.number, index: channel, wavenumber })
}
