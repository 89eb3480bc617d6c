//! The spectral shift of each detector against the granule's mean, on lines of CO2.

use rayon::prelude::*;

use super::finding::{Check, Finding, Limit, Subject};
use super::grid::ScanGrid;
use super::limits::HealthLimits;
use super::readings::BandReadings;
use super::sample::Sample;
use crate::screening::unusual::Fitted;
use crate::spectral::{SpectralShift, spectral_shift};

/// Stretches with lines of CO2 that are known well, cm-1.
const STRETCHES: [(f64, f64); 3] = [(690.0, 765.0), (2190.0, 2260.0), (2375.0, 2400.0)];
/// Parts of the granule, along the flight: what the shift differs by between them is its uncertainty.
const PARTS: usize = 6;
/// A shift must be this many times its own uncertainty.
const SURE: f64 = 4.0;

/// A detector's shift with its uncertainty, ppm.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct DetectorShift {
    /// The detector.
    pub detector: usize,
    /// Relative to the mean of all detectors.
    pub ppm: f64,
    /// The larger of what noise makes and what parts of the granule differ by.
    pub deviation: f64,
}

/// Channels side by side with lines of CO2.
struct Lines {
    channels: Vec<usize>,
    wavenumbers: Vec<f64>,
    noise: Vec<f64>,
}

/// The shift of each detector that sees something; none for a band without lines of CO2 or with one
/// detector.
pub fn detector_shifts(
    readings: &BandReadings<'_>,
    sample: &Sample,
    fitted: &Fitted,
    grid: &ScanGrid,
) -> Vec<DetectorShift> {
    let alive: Vec<usize> =
        (0..grid.detectors).filter(|one| !sample.dead_detectors.contains(one)).collect();
    let Some(lines) = lines(sample, fitted).filter(|_| alive.len() > 1) else { return Vec::new() };
    let parts = means(readings, &lines, &alive, grid);
    let of_detector = |place: usize| {
        let whole = total(&parts, place);
        let (reference, count) = reference(&parts, alive.len());
        let noise: Vec<f64> =
            lines.noise.iter().map(|noise| noise / (count / alive.len() as f64).sqrt()).collect();
        let shift = spectral_shift(&lines.wavenumbers, &reference, &whole, &noise)?;
        let of_parts = parts.iter().filter_map(|part| {
            let (reference, _) = self::reference(std::slice::from_ref(part), alive.len());
            let own = total(std::slice::from_ref(part), place);
            spectral_shift(&lines.wavenumbers, &reference, &own, &noise).map(|one| one.ppm)
        });
        let deviation = shift.deviation.max(deviation_of_mean(&of_parts.collect::<Vec<_>>()));
        let SpectralShift { ppm, .. } = shift;
        Some(DetectorShift { detector: alive[place], ppm, deviation })
    };
    (0..alive.len()).into_par_iter().filter_map(of_detector).collect()
}

/// Shifts beyond the limit.
pub fn shifted_detectors(
    readings: &BandReadings<'_>,
    shifts: &[DetectorShift],
    limits: &HealthLimits,
) -> Vec<Finding> {
    let limit = Limit::of(limits, "shift");
    let beyond = shifts
        .iter()
        .filter(|one| one.ppm.abs() > limit.value && one.ppm.abs() > SURE * one.deviation);
    beyond
        .map(|one| {
            let (subject, band) = (Subject::Detector(one.detector), Some(readings.number));
            let finding = limit.finding(Check::Shift, subject, band, one.ppm);
            finding.saying(format!(
                "± {:.1} ppm, relative to the mean of the detectors",
                one.deviation
            ))
        })
        .collect()
}

/// The first stretch of which the band has enough channels without a gap.
fn lines(sample: &Sample, fitted: &Fitted) -> Option<Lines> {
    let rows = &sample.rows;
    STRETCHES.iter().find_map(|(low, high)| {
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
        (best.len() >= FEWEST_CHANNELS).then(|| Lines {
            channels: rows.channels[best.clone()].to_vec(),
            wavenumbers: rows.wavenumbers[best.clone()].to_vec(),
            noise: fitted.noise[best].to_vec(),
        })
    })
}

/// Channels that a shift needs, margins included.
const FEWEST_CHANNELS: usize = 48;

/// Sums of one part of the granule: per detector, per channel; and how many positions they are of.
struct Part {
    sums: Vec<Vec<f64>>,
    positions: f64,
}

/// Positions at which all detectors have all channels, so that all of them see the same ground.
fn means(
    readings: &BandReadings<'_>,
    lines: &Lines,
    alive: &[usize],
    grid: &ScanGrid,
) -> Vec<Part> {
    let parts = PARTS.min(grid.lines.max(1));
    (0..parts)
        .into_par_iter()
        .map(|part| {
            let (first, end) = (grid.lines * part / parts, grid.lines * (part + 1) / parts);
            let mut sums = vec![vec![0.0; lines.channels.len()]; alive.len()];
            let (mut positions, mut buffer) = (0.0, Vec::new());
            for position in first * grid.positions..end * grid.positions {
                let spectra: Vec<Vec<f64>> = alive
                    .iter()
                    .map(|detector| {
                        readings.radiances(position * grid.detectors + detector, &mut buffer);
                        lines.channels.iter().map(|channel| buffer[*channel]).collect()
                    })
                    .collect();
                if spectra.iter().flatten().all(|value: &f64| value.is_finite()) {
                    positions += 1.0;
                    for (sums, spectrum) in sums.iter_mut().zip(spectra) {
                        sums.iter_mut().zip(spectrum).for_each(|(sum, value)| *sum += value);
                    }
                }
            }
            Part { sums, positions }
        })
        .filter(|part| part.positions > 0.0)
        .collect()
}

/// The mean spectrum of a detector over some parts.
fn total(parts: &[Part], place: usize) -> Vec<f64> {
    let positions: f64 = parts.iter().map(|part| part.positions).sum();
    let channels = parts.first().map_or(0, |part| part.sums[place].len());
    let sum = |channel: usize| parts.iter().map(|part| part.sums[place][channel]).sum::<f64>();
    (0..channels).map(|channel| sum(channel) / positions).collect()
}

/// The mean spectrum of all detectors, and how many spectra it is of.
fn reference(parts: &[Part], detectors: usize) -> (Vec<f64>, f64) {
    let of_detectors: Vec<Vec<f64>> = (0..detectors).map(|place| total(parts, place)).collect();
    let channels = of_detectors.first().map_or(0, Vec::len);
    let mean = |channel: usize| {
        of_detectors.iter().map(|spectrum| spectrum[channel]).sum::<f64>() / detectors as f64
    };
    let positions: f64 = parts.iter().map(|part| part.positions).sum();
    ((0..channels).map(mean).collect(), positions * detectors as f64)
}

fn deviation_of_mean(values: &[f64]) -> f64 {
    let count = values.len() as f64;
    if count < 2.0 {
        return 0.0;
    }
    let mean = values.iter().sum::<f64>() / count;
    let squares: f64 = values.iter().map(|value| (value - mean).powi(2)).sum();
    (squares / (count - 1.0) / count).sqrt()
}
