//! A band: one variable with a spectral dimension.

use super::noise::Noise;
use crate::spectral::ChannelAxis;
use crate::units::{RadianceUnit, SpectralUnit, TemperatureUnit};

/// What the values of a band are, in the file's unit.
#[derive(Debug, Clone, PartialEq)]
pub enum Quantity {
    /// Spectral radiance.
    Radiance(RadianceUnit),
    /// Brightness temperature.
    BrightnessTemperature(TemperatureUnit),
}

impl Quantity {
    /// What it is, in words.
    pub fn label(&self) -> &'static str {
        match self {
            Self::Radiance(_) => "radiance",
            Self::BrightnessTemperature(_) => "brightness temperature",
        }
    }

    /// The unit that values are handed on in.
    pub fn working_unit(&self) -> String {
        match self {
            Self::Radiance(_) => RadianceUnit::WORKING.label(),
            Self::BrightnessTemperature(_) => TemperatureUnit::Kelvin.label().to_owned(),
        }
    }
}

/// How the spectra of a band are apodised.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Apodisation {
    /// Not at all.
    None,
    /// By Hamming's function.
    Hamming,
    /// Not in the file; by Hamming's function as values are handed on, for it was asked for.
    HammingApplied,
    /// As the file says, in its words (safe to show).
    Other(String),
    /// The file does not say.
    Unknown,
}

impl Apodisation {
    /// In words, safe to show.
    pub fn label(&self) -> &str {
        match self {
            Self::None => "none",
            Self::Hamming => "Hamming",
            Self::HammingApplied => "Hamming, applied on request",
            Self::Other(words) => words,
            Self::Unknown => "unknown",
        }
    }
}

/// A spectral axis by its first value and the step from channel to channel, in the axis's unit.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct AxisSteps {
    /// Where the first channel lies.
    pub first: f64,
    /// How far each is from the one before.
    pub step: f64,
}

/// A band of channels.
#[derive(Debug, Clone, PartialEq)]
pub struct Band {
    /// A short name that is valid inside of a CF variable name.
    pub name: String,
    /// The path of the variable in the file.
    pub variable: String,
    /// The channels' wavenumbers in the file's order.
    pub axis: ChannelAxis,
    /// The path of the variable that gives the spectral axis; empty where it is given by steps.
    pub axis_variable: String,
    /// The axis's first value and step, where it is given so.
    pub axis_steps: Option<AxisSteps>,
    /// The unit of that variable, or of the steps.
    pub axis_unit: SpectralUnit,
    /// The name of the spectral dimension in the file.
    pub dimension: String,
    /// What the values are.
    pub quantity: Quantity,
    /// The unit text exactly as in the file.
    pub unit_text: String,
    /// How the spectra are apodised.
    pub apodisation: Apodisation,
    /// For each channel whether no layer may use it: it is given up as bad, or apodising leaves it
    /// without a value.
    pub bad: Vec<bool>,
    /// Its noise, where the file gives one; [`super::Granule::noise`] reads it.
    pub noise: Option<Noise>,
}

impl Band {
    /// How many channels it has.
    pub fn channels(&self) -> usize {
        self.axis.len()
    }

    /// The lowest and the highest wavenumber, cm-1.
    pub fn range(&self) -> (f64, f64) {
        let wavenumbers = self.axis.wavenumbers();
        let low = wavenumbers.iter().copied().fold(f64::INFINITY, f64::min);
        (low, wavenumbers.iter().copied().fold(f64::NEG_INFINITY, f64::max))
    }

    /// The smallest and the largest distance between neighbours without a gap, cm-1; none for one channel.
    pub fn spacing(&self) -> Option<(f64, f64)> {
        let (wavenumbers, sorted) = (self.axis.wavenumbers(), self.axis.sorted());
        let mut spacings = self.axis.segments().iter().flat_map(|segment| {
            sorted[segment.clone()]
                .windows(2)
                .map(|pair| wavenumbers[pair[1]] - wavenumbers[pair[0]])
        });
        let first = spacings.next()?;
        Some(
            spacings
                .fold((first, first), |(low, high), spacing| (low.min(spacing), high.max(spacing))),
        )
    }
}

/// One channel of a granule.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Channel {
    /// The band's place in the granule's list.
    pub band: usize,
    /// The channel's place in the band, in the file's order.
    pub index: usize,
    /// Its wavenumber, cm-1.
    pub wavenumber: f64,
}

#[cfg(test)]
impl Band {
    /// A band of radiances in the working unit, for tests.
    pub(super) fn of_wavenumbers(wavenumbers: &[f64], apodisation: Apodisation) -> Self {
        Self {
            name: "b".into(),
            variable: "b".into(),
            axis: ChannelAxis::new(wavenumbers.to_vec()).unwrap(),
            axis_variable: "nu".into(),
            axis_steps: None,
            axis_unit: SpectralUnit::PerCentimetre,
            dimension: "nu".into(),
            quantity: Quantity::Radiance(RadianceUnit::WORKING),
            unit_text: String::new(),
            apodisation,
            bad: vec![false; wavenumbers.len()],
            noise: None,
        }
    }
}
