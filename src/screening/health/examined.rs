//! What an examination comes to.

use super::channels::ChannelNoise;
use super::detectors::DetectorNumbers;
use super::finding::{Check, Finding, Subject};
use super::grid::ScanGrid;
use super::shift::DetectorShift;
use crate::screening::unusual::Basis;

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
    /// Spectral shifts of the detectors against their mean, where the band has lines of CO2.
    pub shifts: Vec<DetectorShift>,
    /// The same against calculated clear spectra, or why there are none.
    pub absolute_shifts: Result<Vec<DetectorShift>, &'static str>,
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
