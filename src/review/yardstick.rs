//! What spectra are compared by.

use super::Review;
use crate::granule::Channel;
use crate::screening::unusual::{Basis, instrument_shape};
use crate::spectral::{distance, spectral_angle};

/// By what spectra are compared.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Measure {
    /// Root mean square of the differences of brightness temperatures, K.
    #[default]
    Distance,
    /// The angle between spectra of radiance, degrees: blind to brightness alone.
    Angle,
    /// Root mean square of the differences along principal components, in standard deviations of the
    /// spectra that these were found in: every way in which those differ counts alike.
    Components,
}

impl Measure {
    /// All of them.
    pub const ALL: [Measure; 3] = [Measure::Distance, Measure::Angle, Measure::Components];

    /// As it is typed.
    pub fn word(self) -> &'static str {
        match self {
            Measure::Distance => "distance",
            Measure::Angle => "angle",
            Measure::Components => "components",
        }
    }

    /// What it is, in words.
    pub fn words(self) -> &'static str {
        match self {
            Measure::Distance => "distance in BT",
            Measure::Angle => "spectral angle",
            Measure::Components => "distance in components",
        }
    }

    /// Its unit.
    pub fn unit(self) -> &'static str {
        match self {
            Measure::Distance => "K",
            Measure::Angle => "degrees",
            Measure::Components => "deviations",
        }
    }
}

/// Windows between absorption lines, cm-1, in which surface, cloud, dust and ash differ; short waves
/// are left out, where the sun shines in by day.
const WINDOWS: [(f64, f64); 4] =
    [(780.0, 980.0), (1080.0, 1130.0), (1130.0, 1170.0), (1200.0, 1240.0)];
/// Channels that are compared at the most: shapes of surface and particles are broad.
const MOST_CHANNELS: usize = 48;

/// What spectra are compared by, the same for several granules.
#[derive(Debug, Clone)]
pub struct Yardstick {
    pub(super) measure: Measure,
    pub(super) axes: Axes,
}

/// The numbers that stand for a spectrum.
#[derive(Debug, Clone)]
pub(super) enum Axes {
    /// The values at these wavenumbers, cm-1.
    Channels(Vec<f64>),
    /// The places along components, band by band, for an instrument of this shape.
    Components {
        /// See [`instrument_shape`].
        instrument: String,
        /// By the place of the band in a granule.
        bands: Vec<(usize, Basis)>,
    },
}

impl Yardstick {
    /// By what it compares.
    pub fn measure(&self) -> Measure {
        self.measure
    }

    /// How far two spectra are from each other, each as the numbers that stand for it; NaN where too
    /// much of one is missing.
    pub fn far(&self, one: &[f64], other: &[f64]) -> f64 {
        match self.measure {
            Measure::Distance | Measure::Components => distance(one, other),
            Measure::Angle => spectral_angle(one, other),
        }
    }
}

impl Review {
    /// What to compare spectra by, as far as the granule allows it.
    ///
    /// # Errors
    /// In one line: there is no channel to compare, or there are no components.
    pub fn yardstick(&self, measure: Measure) -> Result<Yardstick, String> {
        let axes = match measure {
            Measure::Distance | Measure::Angle => {
                let channels = self.compared_channels();
                Axes::Channels(channels.iter().map(|channel| channel.wavenumber).collect())
            }
            Measure::Components => {
                let instrument = instrument_shape(self.granule());
                Axes::Components { instrument, bands: self.components()? }
            }
        };
        let none = matches!(&axes, Axes::Channels(channels) if channels.is_empty());
        if none {
            Err("no channel can be compared".to_owned())
        } else {
            Ok(Yardstick { measure, axes })
        }
    }

    /// The components that the tests held the spectra against: the campaign's, or the granule's own.
    fn components(&self) -> Result<Vec<(usize, Basis)>, String> {
        let tested = self.tested();
        let examined = tested.as_deref().and_then(|screened| screened.examined.as_ref());
        let Some(examined) = examined else {
            return Err("the components come with the tests, which have not run".to_owned());
        };
        let bands = examined.bands.iter();
        let bands: Vec<(usize, Basis)> =
            bands.filter_map(|band| Some((band.band, band.basis.clone()?))).collect();
        match bands.is_empty() {
            true => Err("there are too few whole spectra to find components in".to_owned()),
            false => Ok(bands),
        }
    }

    /// The channels that spectra are compared over, spread evenly: valid ones in windows, or all valid
    /// ones where the granule has none there.
    fn compared_channels(&self) -> Vec<Channel> {
        let granule = self.granule();
        let mut channels: Vec<Channel> =
            WINDOWS.iter().flat_map(|(low, high)| granule.channels_between(*low, *high)).collect();
        if channels.is_empty() {
            channels = granule.channels_between(0.0, f64::INFINITY);
        }
        let step = channels.len().div_ceil(MOST_CHANNELS).max(1);
        channels.into_iter().step_by(step).collect()
    }
}
