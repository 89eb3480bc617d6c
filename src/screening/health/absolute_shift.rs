//! The spectral shift of each detector against calculated clear spectra, on lines of CO2.

use super::detectors::ChannelGroup;
use super::finding::{Check, Finding};
use super::grid::ScanGrid;
use super::limits::HealthLimits;
use super::readings::BandReadings;
use super::shift::{DetectorShift, Lines, PARTS, beyond_limit, deviation_of_mean};
use crate::granule::Granule;
use crate::spectral::{ShiftReference, planck};

/// Scan lines that are looked at, spread over the granule: enough for thousands of spectra.
const MOST_LINES: usize = 24;
/// A footprint is clear whose windows are as warm as calculated, to this many K: own choice. Cloud
/// weakens lines and moves none, so that a little of it does no harm.
const CLEAR: f64 = 2.0;
/// Clear footprints that a detector needs, and a part of the granule.
const FEWEST: usize = 20;
const FEWEST_IN_PART: usize = 5;
/// What sampling errs by, as a share of the shift: the tests of the method find up to this.
const SAMPLING: f64 = 0.03;

/// A clear footprint over the channels with lines: measured, calculated.
struct Clear {
    detector: usize,
    part: usize,
    measured: Vec<f64>,
    calculated: Vec<f64>,
}

/// The shift of each detector with enough clear footprints against what was calculated for them.
///
/// # Errors
/// Why there is none, in words.
pub fn absolute_shifts(
    granule: &Granule,
    readings: &BandReadings<'_>,
    lines: Option<&Lines>,
    window: &ChannelGroup,
    grid: &ScanGrid,
) -> Result<Vec<DetectorShift>, &'static str> {
    if granule.calculated(readings.number).is_none() {
        return Err("no calculated clear spectra are given");
    }
    let lines = lines.ok_or("the band has too few neighbouring channels with lines of CO2")?;
    let clear = clear(granule, readings, lines, window, grid)?;
    let found: Vec<DetectorShift> = lines
        .alive
        .iter()
        .filter_map(|detector| {
            let own: Vec<&Clear> = clear.iter().filter(|one| one.detector == *detector).collect();
            of_detector(lines, *detector, &own)
        })
        .collect();
    match found.is_empty() {
        true => Err("too few footprints are as warm as calculated"),
        false => Ok(found),
    }
}

fn of_detector(lines: &Lines, detector: usize, clear: &[&Clear]) -> Option<DetectorShift> {
    if clear.len() < FEWEST {
        return None;
    }
    let whole = shift(lines, clear)?;
    let parts: Vec<f64> = (0..PARTS)
        .filter_map(|part| {
            let own: Vec<&Clear> = clear.iter().filter(|one| one.part == part).copied().collect();
            (own.len() >= FEWEST_IN_PART).then(|| shift(lines, &own)).flatten()
        })
        .map(|one| one.ppm)
        .collect();
    let scatter = whole.deviation.max(deviation_of_mean(&parts));
    Some(DetectorShift { detector, ppm: whole.ppm, deviation: scatter.hypot(SAMPLING * whole.ppm) })
}

fn shift(lines: &Lines, clear: &[&Clear]) -> Option<crate::spectral::SpectralShift> {
    let count = clear.len() as f64;
    let mean = |of: fn(&Clear) -> &[f64]| -> Vec<f64> {
        let mut sums = vec![0.0; lines.channels.len()];
        for one in clear {
            sums.iter_mut().zip(of(one)).for_each(|(sum, value)| *sum += value);
        }
        sums.into_iter().map(|sum| sum / count).collect()
    };
    let reference = ShiftReference::new(&lines.wavenumbers, &mean(|one| &one.calculated))?;
    let noise: Vec<f64> = lines.noise.iter().map(|noise| noise / count.sqrt()).collect();
    reference.shift_of(&mean(|one| &one.measured), &noise)
}

fn clear(
    granule: &Granule,
    readings: &BandReadings<'_>,
    lines: &Lines,
    window: &ChannelGroup,
    grid: &ScanGrid,
) -> Result<Vec<Clear>, &'static str> {
    let channels = readings.band.channels();
    let wavenumbers = readings.band.axis.wavenumbers();
    let mut clear = Vec::new();
    let mut measured = Vec::new();
    for line in (0..grid.lines).step_by(grid.lines.div_ceil(MOST_LINES).max(1)) {
        let first = line * grid.row_length();
        let range = first..first + grid.row_length();
        let mut calculated = match granule.calculated_clear(readings.number, range) {
            Ok(Some(calculated)) => calculated,
            _ => return Err("the calculated clear spectra cannot be read"),
        };
        for (offset, calculated) in calculated.chunks_exact_mut(channels).enumerate() {
            if readings.in_kelvin() {
                let both = calculated.iter_mut().zip(wavenumbers);
                both.for_each(|(value, nu)| *value = planck(*nu, *value));
            }
            readings.radiances(first + offset, &mut measured);
            let departure = window.signal(&measured) - window.signal(calculated);
            let of_lines = |values: &[f64]| -> Vec<f64> {
                lines.channels.iter().map(|channel| values[*channel]).collect()
            };
            let one = Clear {
                detector: grid.detector(offset),
                part: line * PARTS / grid.lines,
                measured: of_lines(&measured),
                calculated: of_lines(calculated),
            };
            let whole = one.measured.iter().chain(&one.calculated).all(|value| value.is_finite());
            // Not a number is not clear.
            if departure.abs() <= CLEAR && whole {
                clear.push(one);
            }
        }
    }
    Ok(clear)
}

/// Shifts beyond the limit. They are told and flag nothing: the line positions of what was calculated
/// may be off as well.
pub fn absolutely_shifted(
    readings: &BandReadings<'_>,
    shifts: &[DetectorShift],
    limits: &HealthLimits,
) -> Vec<Finding> {
    let against = "against calculated clear spectra";
    beyond_limit(readings, shifts, limits, Check::AbsoluteShift, against)
}
