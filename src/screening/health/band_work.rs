//! One band from its sample to its findings.

use super::absolute_shift::{absolute_shifts, absolutely_shifted};
use super::channels::{channel_noise, noisy_channels};
use super::detectors::{DetectorChannels, detectors, sweep, sweep_difference};
use super::examined::{BandHealth, BasisOrigin, UnusualSpectrum};
use super::finding::{Check, Finding, Limit, Subject};
use super::grid::ScanGrid;
use super::limits::HealthLimits;
use super::popping::popping_channels;
use super::readings::BandReadings;
use super::sample::{SAMPLE, Sample};
use super::shift::{Lines, detector_shifts, shifted_detectors};
use super::spectra::{SpectraCheck, SpectrumReading};
use crate::granule::Granule;
use crate::screening::unusual::{Basis, Fitted, SavedBases, fit, judged_by};
use crate::spectral::median;

/// The components of a band: saved ones as far as the sample has their channels, else its own.
fn components(
    readings: &BandReadings<'_>,
    sample: &Sample,
    saved: Option<&SavedBases>,
) -> (Option<Fitted>, BasisOrigin) {
    if let Some(saved) = saved
        && let Some(basis) = saved.of_band(&readings.band.name)
        && let Some(fitted) = judged_by(basis.restricted(&sample.rows.channels), &sample.rows)
    {
        return (Some(fitted), BasisOrigin::Saved(saved.file.clone()));
    }
    match fit(&sample.rows, &sample.spatial_noise) {
        Some(fitted) => (Some(fitted), BasisOrigin::Own),
        None => (None, BasisOrigin::None),
    }
}

/// A band with what was worked out on the way.
pub struct BandWork<'g> {
    /// The band.
    pub readings: BandReadings<'g>,
    /// What it comes to.
    pub health: BandHealth,
    /// Channels that should have a value.
    pub expected: usize,
    /// Detectors that see nothing.
    pub dead_detectors: Vec<usize>,
    /// Every spectrum.
    pub spectra: Vec<SpectrumReading>,
    /// What is wrong with channels and detectors.
    pub findings: Vec<Finding>,
    /// Power of the noise at Nyquist.
    nyquist: f64,
    windows_limit: f64,
}

impl<'g> BandWork<'g> {
    /// Takes the sample, finds the components, looks at every spectrum.
    pub fn of(
        granule: &Granule,
        readings: BandReadings<'g>,
        told: Option<FileNoise>,
        saved: Option<&SavedBases>,
        grid: &ScanGrid,
        limits: &HealthLimits,
    ) -> Self {
        let sample = Sample::take(&readings, grid, limits, SAMPLE);
        let (fitted, origin) = components(&readings, &sample, saved);
        let mut findings = sample.findings.clone();
        let mut noise = Vec::new();
        if let Some(fitted) = &fitted {
            noise = channel_noise(&sample, fitted, told.as_ref().map(|told| &told.channels[..]));
            findings.extend(noisy_channels(&readings, &noise, &fitted.set_aside, limits));
            findings.extend(popping_channels(&readings, &sample, fitted, grid, limits));
        }
        let basis = fitted.as_ref().map(|fitted| &fitted.basis);
        let limit = basis.map_or(f64::NAN, |basis| basis.limit(limits.unusual));
        let lines = fitted.as_ref().and_then(|fitted| Lines::of(&sample, fitted, grid));
        let compared = DetectorChannels::of(&readings, &sample);
        let check = SpectraCheck {
            readings,
            basis,
            spike_scale: spike_scale(&sample, fitted.as_ref(), &findings),
            excused: &sample.excused,
            compared: &compared,
            lines: lines.as_ref(),
            spike: limits.spike,
            unusual: limit,
        };
        let (spectra, sums) = check.all(grid);
        let shifts = lines.as_ref().map_or(Vec::new(), |lines| detector_shifts(lines, &sums));
        findings.extend(shifted_detectors(&readings, &shifts, limits));
        let absolute_shifts =
            absolute_shifts(granule, &readings, lines.as_ref(), &compared.window, grid);
        let absolute = absolute_shifts.as_deref().unwrap_or_default();
        findings.extend(absolutely_shifted(&readings, absolute, limits));
        let signals = [
            spectra.iter().map(|spectrum| spectrum.window).collect::<Vec<f64>>(),
            spectra.iter().map(|spectrum| spectrum.uniform).collect(),
        ];
        let told_of = told.as_ref().map_or(&[][..], |told| &told.detectors);
        let (of_detectors, found) =
            detectors(&readings, &sample, fitted.as_ref(), told_of, &signals, grid, limits);
        findings.extend(found);
        findings.extend(sweep(&readings, &signals[0], grid, limits));
        let windows_limit = check.ringing_limit(limits.ringing);
        let nyquist = fitted.as_ref().map_or(f64::NAN, |one| one.shape.power(std::f64::consts::PI));
        let health = BandHealth {
            band: readings.number,
            origin,
            limit,
            scores: spectra.iter().map(|spectrum| spectrum.score).collect(),
            noise,
            has_nedn: told.is_some(),
            detectors: of_detectors,
            sweep: sweep_difference(&signals[0], grid),
            shifts,
            absolute_shifts,
            basis: fitted.map(|fitted| fitted.basis),
        };
        let expected = sample.excused.iter().filter(|excused| !**excused).count();
        let dead_detectors = sample.dead_detectors;
        Self {
            readings,
            health,
            expected,
            dead_detectors,
            spectra,
            findings,
            nyquist,
            windows_limit,
        }
    }

    /// Spikes and ringing.
    pub fn of_spectra(&self, limits: &HealthLimits) -> Vec<Finding> {
        let spike = Limit::of(limits, "spike");
        let ringing = Limit::of(limits, "ringing").raised_to(self.windows_limit);
        let mut powers: Vec<f64> = self
            .spectra
            .iter()
            .filter_map(|spectrum| Some(spectrum.ringing?.power))
            .filter(|power| power.is_finite())
            .collect();
        let usual = median(&mut powers).max(self.nyquist);
        let mut scores: Vec<f64> =
            self.health.scores.iter().copied().filter(|score| score.is_finite()).collect();
        let usual_score = median(&mut scores);
        let wavenumbers = self.readings.band.axis.wavenumbers();
        let mut findings = Vec::new();
        for (footprint, spectrum) in self.spectra.iter().enumerate() {
            let (subject, band) = (Subject::Footprint(footprint), Some(self.readings.number));
            for (channel, value) in &spectrum.spikes {
                let finding = spike.finding(Check::Spike, subject, band, *value);
                findings.push(finding.saying(format!("{:.4} cm-1", wavenumbers[*channel])));
            }
            let Some(found) = spectrum.ringing else { continue };
            // Where the components do not fit, all frequencies have more power.
            let misfit = (spectrum.score / usual_score).powi(2).max(1.0);
            let value = found.power / usual;
            if value > ringing.value * misfit && found.amplitude > LEAST_RINGING {
                let finding = ringing.finding(Check::Ringing, subject, band, value);
                let detail = format!("amplitude {:.1} noises", found.amplitude);
                findings.push(finding.saying(detail));
            }
        }
        findings
    }

    /// The spectra beyond the limit, with the channels that make them so.
    pub fn unusual(&self) -> Vec<UnusualSpectrum> {
        let Some(basis) = &self.health.basis else { return Vec::new() };
        let mut buffer = Vec::new();
        let scores = self.health.scores.iter().enumerate();
        let beyond = scores.filter(|(_, score)| **score > self.health.limit);
        beyond
            .map(|(footprint, score)| {
                self.readings.radiances(footprint, &mut buffer);
                UnusualSpectrum {
                    footprint,
                    band: self.readings.number,
                    score: *score,
                    limit: self.health.limit,
                    channels: largest(basis, &basis.residual(&buffer)),
                }
            })
            .collect()
    }
}

/// Ringing of less than this share of the noise harms nobody.
const LEAST_RINGING: f64 = 0.5;
/// So many channels are named.
const NAMED: usize = 5;
/// Channels this near to one that is named already are part of the same feature.
const SAME_FEATURE: usize = 3;

/// The channels with the largest residuals, one for each feature.
fn largest(basis: &Basis, residual: &[f64]) -> Vec<(f64, f64)> {
    let mut order: Vec<usize> =
        (0..residual.len()).filter(|at| residual[*at].is_finite()).collect();
    order.sort_by(|one, next| residual[*next].abs().total_cmp(&residual[*one].abs()));
    let mut named: Vec<usize> = Vec::new();
    for at in order {
        if named.len() < NAMED && named.iter().all(|other| at.abs_diff(*other) > SAME_FEATURE) {
            named.push(at);
        }
    }
    named.into_iter().map(|at| (basis.wavenumbers[at], residual[at])).collect()
}

/// What residuals are multiplied with to be in units of a channel's own noise, 0 for channels that
/// are known to be faulty.
fn spike_scale(sample: &Sample, fitted: Option<&Fitted>, findings: &[Finding]) -> Vec<f32> {
    let Some(fitted) = fitted else { return Vec::new() };
    let faulty: Vec<usize> = findings
        .iter()
        .filter_map(|finding| match finding.subject {
            Subject::Channel(channel) => Some(channel.index),
            _ => None,
        })
        .collect();
    let own = |channel: &usize| sample.rows.channels.iter().position(|one| one == channel);
    let basis = fitted.basis.channels.iter().zip(&fitted.basis.noise);
    basis
        .map(|(channel, noise)| match own(channel) {
            Some(at) if !faulty.contains(channel) => (noise / fitted.noise[at]) as f32,
            _ => 0.0,
        })
        .collect()
}

/// The noise that the file gives for a band, as the spectra are handed on.
pub struct FileNoise {
    /// Of each channel the median over the detectors.
    pub channels: Vec<f64>,
    /// Of each detector what its noise is in units of that: the median over the channels. Empty where
    /// the file tells all detectors the same.
    pub detectors: Vec<f64>,
}

impl FileNoise {
    /// That of a band, if the file gives it.
    pub fn of(granule: &Granule, readings: &BandReadings<'_>, grid: &ScanGrid) -> Option<Self> {
        let noise = readings.band.noise.as_ref()?;
        let different = if noise.along.is_empty() { 1 } else { grid.detectors };
        let of_detectors: Vec<Vec<f64>> = (0..different.min(grid.count()))
            .filter_map(|footprint| granule.noise(readings.number, footprint).ok().flatten())
            .collect();
        if of_detectors.is_empty() || readings.in_kelvin() {
            return None;
        }
        let finite = |values: &mut dyn Iterator<Item = f64>| -> f64 {
            median(&mut values.filter(|value| value.is_finite()).collect::<Vec<_>>())
        };
        let channels: Vec<f64> = (0..readings.band.channels())
            .map(|channel| finite(&mut of_detectors.iter().map(|noise| noise[channel])))
            .collect();
        let share = |noise: &Vec<f64>| {
            finite(&mut noise.iter().zip(&channels).map(|(own, usual)| own / usual))
        };
        let mut detectors: Vec<f64> = of_detectors.iter().map(share).collect();
        if of_detectors.len() < grid.detectors {
            detectors.clear();
        }
        Some(Self { channels, detectors })
    }
}
