//! The whole examination of a granule's spectra as a set.

use rayon::prelude::*;

use super::channels::{ChannelNoise, channel_noise, noisy_channels, popping_channels};
use super::detectors::{DetectorNumbers, Window, detectors, sweep, sweep_difference};
use super::finding::{Check, Finding, Limit, Subject};
use super::grid::ScanGrid;
use super::limits::HealthLimits;
use super::readings::{BandReadings, Spectra};
use super::repeats::repeated_spectra;
use super::sample::{SAMPLE, Sample};
use super::shift::{DetectorShift, Lines, detector_shifts, shifted_detectors};
use super::spectra::{SpectraCheck, SpectrumReading};
use crate::granule::{Granule, GranuleError};
use crate::screening::unusual::{Basis, Fitted, Rows, SavedBases, fit, judged_by};
use crate::spectral::median;
use crate::system::Cancel;

/// What the spectra of a granule say as a set.
#[derive(Debug, Clone)]
pub struct Examined {
    /// The footprints as the instrument sees them.
    pub grid: ScanGrid,
    /// What is wrong, channels first.
    pub findings: Vec<Finding>,
    /// The bands that were examined.
    pub bands: Vec<BandHealth>,
    /// Spectra that the components do not rebuild.
    pub unusual: Vec<UnusualSpectrum>,
    /// Names of all bands of the granule.
    pub band_names: Vec<String>,
    /// For each footprint whether its spectrum, or that of a band, is bad.
    pub bad: Vec<bool>,
    /// For each footprint whether it is unusual in a band.
    pub is_unusual: Vec<bool>,
}

/// One band in numbers.
#[derive(Debug, Clone)]
pub struct BandHealth {
    /// Its place in the granule.
    pub band: usize,
    /// The components that its spectra were rebuilt from, if there are any.
    pub basis: Option<Basis>,
    /// Where they come from.
    pub origin: BasisOrigin,
    /// Score from which on a spectrum is unusual; NaN without components.
    pub limit: f64,
    /// Reconstruction scores of all footprints, noise units; NaN where there is none.
    pub scores: Vec<f64>,
    /// Noise of the channels that could be judged.
    pub noise: Vec<ChannelNoise>,
    /// Whether the file gives a noise to compare with.
    pub has_nedn: bool,
    /// The detectors, if there are several.
    pub detectors: Vec<DetectorNumbers>,
    /// What even positions are warmer than odd ones by, K, and its standard deviation.
    pub sweep: Option<(f64, f64)>,
    /// Spectral shifts of the detectors, where the band has lines of CO2.
    pub shifts: Vec<DetectorShift>,
}

/// Where components come from.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum BasisOrigin {
    /// The granule itself, for nothing else was there.
    Own,
    /// Other granules: the file.
    Saved(String),
    /// There are too few whole spectra.
    None,
}

impl BasisOrigin {
    /// For people and machines: `own`, `none`, or the file.
    pub fn name(&self) -> &str {
        match self {
            Self::Own => "own",
            Self::Saved(file) => file,
            Self::None => "none",
        }
    }
}

/// A spectrum that the components do not rebuild.
#[derive(Debug, Clone, PartialEq)]
pub struct UnusualSpectrum {
    /// The footprint.
    pub footprint: usize,
    /// The band.
    pub band: usize,
    /// Its reconstruction score, noise units.
    pub score: f64,
    /// The score from which on a spectrum is unusual.
    pub limit: f64,
    /// The channels that make it so: wavenumber (cm-1) and residual in noise units, the largest first.
    pub channels: Vec<(f64, f64)>,
}

/// Examines all bands. What is not in memory is read, more than once. Components are those `saved` of
/// other granules, if they are given, or else the granule's own.
///
/// # Errors
/// The file can't be read, or `cancel` was asked for.
pub fn examine(
    granule: &Granule,
    limits: &HealthLimits,
    saved: Option<&SavedBases>,
    cancel: &Cancel,
) -> Result<Examined, GranuleError> {
    let spectra = Spectra::new(granule, cancel);
    let examined = granule.at_work(|| examine_all(granule, &spectra, limits, saved));
    spectra.fault()?;
    Ok(examined)
}

/// The first spectra of each band, about `most`, that components can be found in, with the first guess
/// of their noise, by the name of the band.
///
/// # Errors
/// The file can't be read, or `cancel` was asked for.
pub fn training_rows(
    granule: &Granule,
    limits: &HealthLimits,
    most: usize,
    cancel: &Cancel,
) -> Result<Vec<(String, Rows, Vec<f64>)>, GranuleError> {
    let spectra = Spectra::new(granule, cancel);
    let grid = ScanGrid::of(granule.footprints());
    let rows = granule.at_work(|| {
        let take = |readings: BandReadings<'_>| {
            let sample = Sample::take(&readings, &grid, limits, most);
            (readings.band.name.clone(), sample.rows, sample.spatial_noise)
        };
        BandReadings::of(&spectra).into_iter().map(take).collect()
    });
    spectra.fault()?;
    Ok(rows)
}

fn examine_all(
    granule: &Granule,
    spectra: &Spectra<'_>,
    limits: &HealthLimits,
    saved: Option<&SavedBases>,
) -> Examined {
    let grid = ScanGrid::of(granule.footprints());
    let readings = BandReadings::of(spectra);
    let bands: Vec<BandWork<'_>> = readings
        .par_iter()
        .map(|readings| {
            let nedn = nedn(granule, readings, &grid);
            BandWork::of(*readings, nedn, saved, &grid, limits)
        })
        .collect();
    let mut findings: Vec<Finding> =
        bands.iter().flat_map(|band| band.findings.iter().cloned()).collect();
    findings.extend(missing(&bands, &grid, limits));
    findings.extend(repeats(&readings, &bands, &grid, limits));
    findings.extend(bands.iter().flat_map(|band| band.of_spectra(limits)));
    findings.sort_by_key(|finding| finding.check);
    let mut examined = Examined {
        unusual: bands.par_iter().flat_map_iter(BandWork::unusual).collect(),
        findings,
        bands: bands.into_iter().map(|band| band.health).collect(),
        band_names: granule.bands().iter().map(|band| band.name.clone()).collect(),
        bad: vec![false; grid.count()],
        is_unusual: vec![false; grid.count()],
        grid,
    };
    for finding in &examined.findings {
        let bad = finding.check.flag() == Some(Check::BAD_SPECTRUM);
        for footprint in examined.footprints_of(finding).into_iter().filter(|_| bad) {
            examined.bad[footprint] = true;
        }
    }
    for unusual in &examined.unusual {
        examined.is_unusual[unusual.footprint] = true;
    }
    examined
}

/// The file's noise of a band: of each channel the median over the detectors, as the spectra are
/// handed on.
fn nedn(granule: &Granule, readings: &BandReadings<'_>, grid: &ScanGrid) -> Option<Vec<f64>> {
    let noise = readings.band.noise.as_ref()?;
    let different = if noise.along.is_empty() { 1 } else { grid.detectors };
    let of_detectors: Vec<Vec<f64>> = (0..different.min(grid.count()))
        .filter_map(|footprint| granule.noise(readings.number, footprint).ok().flatten())
        .collect();
    if of_detectors.is_empty() || readings.in_kelvin() {
        return None;
    }
    let of_channel = |channel: usize| {
        let values = of_detectors.iter().map(|noise| noise[channel]);
        median(&mut values.filter(|value| value.is_finite()).collect::<Vec<_>>())
    };
    Some((0..readings.band.channels()).map(of_channel).collect())
}

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
struct BandWork<'g> {
    readings: BandReadings<'g>,
    health: BandHealth,
    /// Channels that should have a value.
    expected: usize,
    dead_detectors: Vec<usize>,
    spectra: Vec<SpectrumReading>,
    findings: Vec<Finding>,
    /// Power of the noise at Nyquist.
    nyquist: f64,
    windows_limit: f64,
}

impl<'g> BandWork<'g> {
    fn of(
        readings: BandReadings<'g>,
        nedn: Option<Vec<f64>>,
        saved: Option<&SavedBases>,
        grid: &ScanGrid,
        limits: &HealthLimits,
    ) -> Self {
        let sample = Sample::take(&readings, grid, limits, SAMPLE);
        let (fitted, origin) = components(&readings, &sample, saved);
        let mut findings = sample.findings.clone();
        let mut noise = Vec::new();
        if let Some(fitted) = &fitted {
            noise = channel_noise(&sample, fitted, nedn.as_deref());
            findings.extend(noisy_channels(&readings, &noise, &fitted.set_aside, limits));
            findings.extend(popping_channels(&readings, &sample, fitted, grid, limits));
        }
        let basis = fitted.as_ref().map(|fitted| &fitted.basis);
        let limit = basis.map_or(f64::NAN, |basis| basis.limit(limits.unusual));
        let lines = fitted.as_ref().and_then(|fitted| Lines::of(&sample, fitted, grid));
        let check = SpectraCheck {
            readings,
            basis,
            spike_scale: spike_scale(&sample, fitted.as_ref(), &findings),
            excused: &sample.excused,
            window: &Window::of(&readings, &sample),
            lines: lines.as_ref(),
            spike: limits.spike,
            unusual: limit,
        };
        let (spectra, sums) = check.all(grid);
        let shifts = lines.as_ref().map_or(Vec::new(), |lines| detector_shifts(lines, &sums));
        findings.extend(shifted_detectors(&readings, &shifts, limits));
        let signal: Vec<f64> = spectra.iter().map(|spectrum| spectrum.window).collect();
        let (of_detectors, found) =
            detectors(&readings, &sample, fitted.as_ref(), &signal, grid, limits);
        findings.extend(found);
        findings.extend(sweep(&readings, &signal, grid, limits));
        let windows_limit = check.ringing_limit(limits.ringing);
        let nyquist = fitted.as_ref().map_or(f64::NAN, |one| one.shape.power(std::f64::consts::PI));
        let health = BandHealth {
            band: readings.number,
            origin,
            limit,
            scores: spectra.iter().map(|spectrum| spectrum.score).collect(),
            noise,
            has_nedn: nedn.is_some(),
            detectors: of_detectors,
            sweep: sweep_difference(&signal, grid),
            shifts,
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
    fn of_spectra(&self, limits: &HealthLimits) -> Vec<Finding> {
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
    fn unusual(&self) -> Vec<UnusualSpectrum> {
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
fn spike_scale(sample: &Sample, fitted: Option<&Fitted>, findings: &[Finding]) -> Vec<f64> {
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
            Some(at) if !faulty.contains(channel) => noise / fitted.noise[at],
            _ => 0.0,
        })
        .collect()
}

/// Bands and stretches that are missing. A footprint that lacks all bands lacks its spectrum.
fn missing(bands: &[BandWork<'_>], grid: &ScanGrid, limits: &HealthLimits) -> Vec<Finding> {
    let (share, stretch) =
        (Limit::of(limits, "missing_share"), Limit::of(limits, "missing_stretch"));
    let missing_share = |band: &BandWork<'_>, footprint: usize| {
        band.spectra[footprint].missing as f64 / band.expected.max(1) as f64
    };
    let mut findings = Vec::new();
    for footprint in 0..grid.count() {
        let subject = Subject::Footprint(footprint);
        let shares: Vec<f64> = bands.iter().map(|band| missing_share(band, footprint)).collect();
        if !shares.is_empty() && shares.iter().all(|one| *one > share.value) {
            let least = shares.iter().copied().fold(f64::INFINITY, f64::min);
            findings.push(share.finding(Check::MissingChannels, subject, None, least));
            continue;
        }
        for (band, missing) in bands.iter().zip(shares) {
            let (number, length) =
                (Some(band.readings.number), band.spectra[footprint].stretch as f64);
            if missing > share.value {
                findings.push(share.finding(Check::MissingChannels, subject, number, missing));
            } else if length >= stretch.value {
                findings.push(stretch.finding(Check::MissingStretch, subject, number, length));
            }
        }
    }
    findings
}

fn repeats(
    readings: &[BandReadings<'_>],
    bands: &[BandWork<'_>],
    grid: &ScanGrid,
    limits: &HealthLimits,
) -> Vec<Finding> {
    let dead = |number: usize, detector: usize| {
        bands
            .iter()
            .any(|band| band.readings.number == number && band.dead_detectors.contains(&detector))
    };
    let keys = |footprint: usize| {
        let detector = grid.detector(footprint);
        let own = bands.iter().filter(|band| !dead(band.readings.number, detector));
        own.fold(0, |keys: u64, band| keys.rotate_left(7) ^ band.spectra[footprint].key)
    };
    repeated_spectra(readings, keys, dead, grid, limits)
}

impl Examined {
    /// What is wrong with a footprint: with itself or with its detector.
    pub fn of_footprint(&self, footprint: usize) -> impl Iterator<Item = &Finding> {
        let detector = self.grid.detector(footprint);
        self.findings.iter().filter(move |finding| match finding.subject {
            Subject::Footprint(one) => one == footprint,
            Subject::Detector(one) => one == detector,
            Subject::Channel(_) | Subject::Granule => false,
        })
    }

    /// What is wrong with channels.
    pub fn of_channels(&self) -> impl Iterator<Item = &Finding> {
        self.findings.iter().filter(|finding| matches!(finding.subject, Subject::Channel(_)))
    }

    /// The name of the band that something is limited to.
    pub fn band_name(&self, band: usize) -> &str {
        self.band_names.get(band).map_or("", String::as_str)
    }

    /// Whether a flag is suggested for a footprint.
    pub fn suggests(&self, flag: &str, footprint: usize) -> bool {
        match flag {
            Check::BAD_SPECTRUM => self.bad[footprint],
            Check::UNUSUAL => self.is_unusual[footprint],
            _ => false,
        }
    }

    /// The bands in which a footprint is unusual.
    pub fn unusual_of(&self, footprint: usize) -> impl Iterator<Item = &UnusualSpectrum> {
        self.unusual.iter().filter(move |one| one.footprint == footprint)
    }

    /// The footprints that a finding is about; none for channels and the granule.
    pub fn footprints_of(&self, finding: &Finding) -> Vec<usize> {
        match finding.subject {
            Subject::Footprint(one) => vec![one],
            Subject::Detector(one) => self.grid.of_detector(one).collect(),
            Subject::Channel(_) | Subject::Granule => Vec::new(),
        }
    }
}
