//! The spectral shift of each detector against the granule's mean, on lines of CO2.

use rayon::prelude::*;

use super::finding::{Check, Finding, Limit, Subject};
use super::grid::ScanGrid;
use super::limits::HealthLimits;
use super::readings::BandReadings;
use super::sample::Sample;
use crate::screening::unusual::Fitted;
use crate::spectral::{ShiftReference, SpectralShift};

/// Stretches with lines of CO2 that are known well, cm-1.
const STRETCHES: [(f64, f64); 3] = [(690.0, 765.0), (2190.0, 2260.0), (2375.0, 2400.0)];
/// Parts of the granule, along the flight: what the shift differs by between them is its uncertainty.
pub const PARTS: usize = 6;
/// A shift must be this many times its own uncertainty.
const SURE: f64 = 4.0;

/// A detector's shift with its uncertainty, ppm.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct DetectorShift {
    /// The detector.
    pub detector: usize,
    /// Relative to the mean of all detectors, or to what was calculated.
    pub ppm: f64,
    /// The larger of what noise makes and what parts of the granule differ by.
    pub deviation: f64,
}

/// Channels side by side with lines of CO2.
#[derive(Debug, Clone)]
pub struct Lines {
    /// Places in the band.
    pub channels: Vec<usize>,
    /// Their wavenumbers, cm-1.
    pub wavenumbers: Vec<f64>,
    /// Their noise, mW m-2 sr-1 (cm-1)-1.
    pub noise: Vec<f64>,
    /// Detectors that see something.
    pub alive: Vec<usize>,
}

/// Sums over positions at which all detectors have all channels, so that all of them see the same
/// ground: per detector and channel.
#[derive(Debug, Clone, Default)]
pub struct LineSums {
    sums: Vec<f64>,
    positions: f64,
}

impl LineSums {
    /// Adds the values of one position: all channels of the first detector, then of the next. Those of
    /// which something is missing are left out.
    pub fn add(&mut self, values: &[f64]) {
        if values.iter().all(|value| value.is_finite()) {
            self.sums.resize(values.len(), 0.0);
            self.positions += 1.0;
            self.sums.iter_mut().zip(values).for_each(|(sum, value)| *sum += value);
        }
    }

    fn join(mut self, other: &LineSums) -> Self {
        self.sums.resize(self.sums.len().max(other.sums.len()), 0.0);
        self.positions += other.positions;
        self.sums.iter_mut().zip(&other.sums).for_each(|(sum, value)| *sum += value);
        self
    }

    /// Mean spectrum of a detector, by its place among those that see something.
    fn mean(&self, place: usize, channels: usize) -> Vec<f64> {
        let sums = &self.sums[place * channels..][..channels];
        sums.iter().map(|sum| sum / self.positions).collect()
    }
}

/// The shift of each detector that sees something, from the sums of the scan lines.
pub fn detector_shifts(lines: &Lines, of_scan_lines: &[LineSums]) -> Vec<DetectorShift> {
    if lines.alive.len() < 2 {
        return Vec::new();
    }
    let parts: Vec<LineSums> = (0..PARTS)
        .map(|part| {
            let count = of_scan_lines.len();
            let range = count * part / PARTS..count * (part + 1) / PARTS;
            of_scan_lines[range].iter().fold(LineSums::default(), LineSums::join)
        })
        .filter(|part| part.positions > 0.0)
        .collect();
    let whole = parts.iter().fold(LineSums::default(), LineSums::join);
    let all = shifts(lines, &whole);
    let of_parts: Vec<Vec<Option<SpectralShift>>> =
        parts.par_iter().map(|part| shifts(lines, part)).collect();
    let detector = |(place, shift): (usize, Option<SpectralShift>)| {
        let shift = shift?;
        let between: Vec<f64> =
            of_parts.iter().filter_map(|part| Some(part.get(place)?.as_ref()?.ppm)).collect();
        let deviation = shift.deviation.max(deviation_of_mean(&between));
        Some(DetectorShift { detector: lines.alive[place], ppm: shift.ppm, deviation })
    };
    all.into_iter().enumerate().filter_map(detector).collect()
}

/// The shift of each detector against the mean of all.
fn shifts(lines: &Lines, sums: &LineSums) -> Vec<Option<SpectralShift>> {
    if sums.positions == 0.0 {
        return Vec::new();
    }
    let (detectors, channels) = (lines.alive.len(), lines.channels.len());
    let means: Vec<Vec<f64>> = (0..detectors).map(|place| sums.mean(place, channels)).collect();
    let of_channel = |at: usize| means.iter().map(|mean| mean[at]).sum::<f64>() / detectors as f64;
    let reference: Vec<f64> = (0..channels).map(of_channel).collect();
    let noise: Vec<f64> = lines.noise.iter().map(|noise| noise / sums.positions.sqrt()).collect();
    let Some(reference) = ShiftReference::new(&lines.wavenumbers, &reference) else {
        return Vec::new();
    };
    means.iter().map(|mean| reference.shift_of(mean, &noise)).collect()
}

/// Shifts beyond the limit, relative to the mean of the detectors.
pub fn shifted_detectors(
    readings: &BandReadings<'_>,
    shifts: &[DetectorShift],
    limits: &HealthLimits,
) -> Vec<Finding> {
    beyond_limit(readings, shifts, limits, Check::Shift, "relative to the mean of the detectors")
}

/// Shifts beyond the limit as findings of a check, each with its error and `against` what it was found.
pub fn beyond_limit(
    readings: &BandReadings<'_>,
    shifts: &[DetectorShift],
    limits: &HealthLimits,
    check: Check,
    against: &str,
) -> Vec<Finding> {
    let limit = Limit::of(limits, "shift");
    let beyond = shifts
        .iter()
        .filter(|one| one.ppm.abs() > limit.value && one.ppm.abs() > SURE * one.deviation);
    beyond
        .map(|one| {
            let (subject, band) = (Subject::Detector(one.detector), Some(readings.number));
            let finding = limit.finding(check, subject, band, one.ppm);
            finding.saying(format!("± {:.1} ppm, {against}", one.deviation))
        })
        .collect()
}

impl Lines {
    /// The first stretch of which a band has enough channels without a gap.
    pub fn of(sample: &Sample, fitted: &Fitted, grid: &ScanGrid) -> Option<Self> {
        let rows = &sample.rows;
        let alive: Vec<usize> =
            (0..grid.detectors).filter(|one| !sample.dead_detectors.contains(one)).collect();
        let found = STRETCHES.iter().find_map(|(low, high)| {
            let first = rows.wavenumbers.partition_point(|nu| nu < low);
            let end = rows.wavenumbers.partition_point(|nu| nu <= high);
            // The longest run without a gap or a channel that is given up.
            let mut best = first..first;
            let mut begin = first;
            for at in first..end {
                if at + 1 - begin > best.len() {
                    best = begin..at + 1;
                }
                if !rows.adjacent[at] {
                    begin = at + 1;
                }
            }
            (best.len() >= FEWEST_CHANNELS).then_some(best)
        });
        let found = found?;
        Some(Self {
            channels: rows.channels[found.clone()].to_vec(),
            wavenumbers: rows.wavenumbers[found.clone()].to_vec(),
            noise: fitted.noise[found].to_vec(),
            alive,
        })
    }
}

/// Channels that a shift needs, margins included.
const FEWEST_CHANNELS: usize = 48;

pub fn deviation_of_mean(values: &[f64]) -> f64 {
    let count = values.len() as f64;
    if count < 2.0 {
        return 0.0;
    }
    let mean = values.iter().sum::<f64>() / count;
    let squares: f64 = values.iter().map(|value| (value - mean).powi(2)).sum();
    (squares / (count - 1.0) / count).sqrt()
}
