//! Channels that jump between levels.

use rayon::prelude::*;

use super::channels::subject;
use super::finding::{Check, Finding, Limit};
use super::grid::ScanGrid;
use super::limits::HealthLimits;
use super::readings::BandReadings;
use super::sample::Sample;
use super::within_lines::WithinLines;
use crate::screening::unusual::{Along, Fitted};

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
/// A step of more than this share of the limit is looked at anew.
const HINT: f64 = 0.4;
/// A channel with less leverage than this has taught the components nothing that matters here.
const LEARNED: f64 = 0.15;

/// A step in the level of a channel.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Step {
    /// The line behind which it comes, as a place among those with a level.
    pub line: usize,
    /// Its size in units of the channel's noise.
    pub value: f64,
    /// What noise makes of it, in the same units.
    pub deviation: f64,
}

/// Channels whose level steps from one scan line to the next while that of their neighbours does not.
///
/// A step that returns in some lines is common enough to make a component of its own, or to become part
/// of one that goes along with it by chance. Channels of which components could have learned are therefore
/// explained anew, by what they do within lines, where there is no step; and so are those that step by
/// less than the limit, for part of the step may be hidden.
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
    let along = Along::of(&sample.rows, &fitted.basis);
    let finding = |at: usize| {
        let plain = levels.largest_step(at);
        let hinted = plain.is_some_and(|step| step.value > HINT * limit.value);
        let anew = hinted || levels.may_be_learned(at);
        let within = anew.then(|| WithinLines::of(sample, &along, grid, at));
        let step = match within.flatten() {
            Some(within) => within.largest_step(&levels.lines),
            None => plain,
        };
        let Step { line, value, deviation } = step?;
        let beside = at.saturating_sub(1)..(at + 2).min(width);
        let alone = beside
            .filter(|one| *one != at && !levels.may_be_learned(*one))
            .all(|one| levels.step(one, line) < NEIGHBOURS_SHARE * value);
        if value > limit.value && value > SURE * deviation && alone {
            let subject = subject(readings, sample.rows.channels[at]);
            let finding =
                limit.finding(Check::PoppingChannel, subject, Some(readings.number), value);
            let line = levels.lines[line];
            return Some(finding.saying(format!("between lines {line} and the next")));
        }
        None
    };
    (0..width).into_par_iter().filter_map(finding).collect()
}

/// For each channel the level of each line with enough footprints, in units of the noise.
///
/// Levels are those of what the *other* channels leave unexplained. With orthonormal components the
/// residual of a channel that is predicted from the others alone is its residual over `1 - h`, h being
/// its leverage [Cook & Weisberg 1982], and what it scatters by grows by `1 / sqrt(1 - h)`.
struct Levels {
    of_channels: Vec<Vec<f64>>,
    /// The lines.
    lines: Vec<usize>,
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
            lines,
        }
    }

    /// Whether components may have learned what a channel does alone.
    fn may_be_learned(&self, channel: usize) -> bool {
        self.from_others[channel] > 1.0 / (1.0 - LEARNED)
    }

    /// From a line to the next.
    fn step(&self, channel: usize, line: usize) -> f64 {
        let levels = &self.of_channels[channel];
        (levels[line + 1] - levels[line]).abs()
    }

    /// The largest step of a channel.
    fn largest_step(&self, channel: usize) -> Option<Step> {
        let step = |line: usize| {
            let means = 1.0 / self.counts[line] + 1.0 / self.counts[line + 1];
            let deviation = (means * self.from_others[channel]).sqrt();
            Step { line, value: self.step(channel, line), deviation }
        };
        let steps = (0..self.counts.len().saturating_sub(1)).map(step);
        steps
            .filter(|step| step.value.is_finite())
            .max_by(|one, next| one.value.total_cmp(&next.value))
    }
}

/// Factors from the residuals of the rows' channels to those that the other channels leave.
fn from_others(sample: &Sample, fitted: &Fitted) -> Vec<f64> {
    let channels = &sample.rows.channels;
    // Nothing but itself explains a channel that was set aside.
    let factor = |set_aside: &bool| if *set_aside { 1.0 / LEAST_FREE } else { 1.0 };
    let mut factors: Vec<f64> = fitted.set_aside.iter().map(factor).collect();
    for (channel, own) in fitted.basis.channels.iter().zip(fitted.basis.leverages()) {
        if let Some(at) = channels.iter().position(|one| one == channel) {
            factors[at] = 1.0 / (1.0 - own).max(LEAST_FREE);
        }
    }
    factors
}
