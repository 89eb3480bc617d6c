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
const FEWEST_IN_LINE: usize = 4;
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

/// Channels whose level steps between scan lines while that of their neighbours does not.
pub fn popping_channels(
    readings: &BandReadings<'_>,
    sample: &Sample,
    fitted: &Fitted,
    grid: &ScanGrid,
    limits: &HealthLimits,
) -> Vec<Finding> {
    let limit = Limit::of(limits, "popping_step");
    let steps = steps(sample, fitted, grid);
    let width = steps.len();
    let step = |at: usize, line: usize| steps[at].get(line).map_or(0.0, |step| step.abs());
    let mut findings = Vec::new();
    for (at, own) in steps.iter().enumerate() {
        let lines = 0..own.len();
        let Some(line) = lines.max_by(|a, b| step(at, *a).total_cmp(&step(at, *b))) else {
            continue;
        };
        let value = step(at, line);
        let beside = at.saturating_sub(1)..(at + 2).min(width);
        let alone =
            beside.filter(|one| *one != at).all(|one| step(one, line) < NEIGHBOURS_SHARE * value);
        if value > limit.value && alone {
            let stepped = (0..own.len()).filter(|line| step(at, *line) > 0.5 * value).count();
            let subject = subject(readings, sample.rows.channels[at]);
            let finding =
                limit.finding(Check::PoppingChannel, subject, Some(readings.number), value);
            findings.push(finding.saying(format!("another level in {stepped} scan lines")));
        }
    }
    findings
}

/// For each channel the level of each line with enough footprints, less the median level, in units
/// of the noise.
fn steps(sample: &Sample, fitted: &Fitted, grid: &ScanGrid) -> Vec<Vec<f64>> {
    let width = sample.rows.channels.len();
    let mut sums = vec![vec![0.0; width]; grid.lines];
    let mut counts = vec![0_usize; grid.lines];
    for (row, footprint) in fitted.residuals.chunks_exact(width).zip(&sample.footprints) {
        let line = grid.line(*footprint);
        counts[line] += 1;
        for (sum, value) in sums[line].iter_mut().zip(row) {
            *sum += value.clamp(-MOST_NOISES, MOST_NOISES);
        }
    }
    let lines: Vec<usize> =
        (0..grid.lines).filter(|line| counts[*line] >= FEWEST_IN_LINE).collect();
    (0..width)
        .map(|channel| {
            let mut levels: Vec<f64> =
                lines.iter().map(|line| sums[*line][channel] / counts[*line] as f64).collect();
            let middle = median(&mut levels.clone());
            levels.iter_mut().for_each(|level| *level -= middle);
            levels
        })
        .collect()
}

fn subject(readings: &BandReadings<'_>, channel: usize) -> Subject {
    let wavenumber = readings.band.axis.wavenumbers()[channel];
    Subject::Channel(Channel { band: readings.number, index: channel, wavenumber })
}
