//! How alike the spectra of a granule are to one of them.

use super::Review;
use crate::granule::Channel;
use crate::spectral::{distance, spectral_angle};
use crate::system::Cancel;

/// By what spectra are compared.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Measure {
    /// Root mean square of the differences of brightness temperatures, K.
    #[default]
    Distance,
    /// The angle between spectra of radiance, degrees: blind to brightness alone.
    Angle,
}

impl Measure {
    /// What it is, in words.
    pub fn words(self) -> &'static str {
        match self {
            Measure::Distance => "distance in BT",
            Measure::Angle => "spectral angle",
        }
    }

    /// Its unit.
    pub fn unit(self) -> &'static str {
        match self {
            Measure::Distance => "K",
            Measure::Angle => "degrees",
        }
    }
}

/// Windows between absorption lines, cm-1, in which surface, cloud, dust and ash differ; short waves
/// are left out, where the sun shines in by day.
const WINDOWS: [(f64, f64); 4] =
    [(780.0, 980.0), (1080.0, 1130.0), (1130.0, 1170.0), (1200.0, 1240.0)];
/// Channels that are compared at the most: shapes of surface and particles are broad.
const MOST_CHANNELS: usize = 48;

impl Review {
    /// How far every spectrum is from that of `footprint`, over valid channels in windows, or over
    /// all valid channels where the granule has none there. NaN where too much is missing.
    ///
    /// # Errors
    /// In one line: there is no channel to compare, the footprint has no spectrum, the file can't be
    /// read, or it was cancelled.
    pub fn alike(
        &self,
        footprint: usize,
        measure: Measure,
        cancel: &Cancel,
    ) -> Result<Vec<f64>, String> {
        let name = match measure {
            Measure::Distance => "bt",
            Measure::Angle => "rad",
        };
        let texts: Vec<String> = self
            .compared_channels()
            .iter()
            .map(|channel| format!("{name}({:.4})", channel.wavenumber))
            .collect();
        let texts: Vec<&str> = texts.iter().map(String::as_str).collect();
        let layers = self.layers(&texts, cancel).into_iter();
        let layers = layers.collect::<Result<Vec<_>, String>>()?;
        let spectrum = |at: usize| -> Vec<f64> {
            let value = |values: &Vec<f64>| values.get(at).copied().unwrap_or(f64::NAN);
            layers.iter().map(|layer| value(&layer.values)).collect()
        };
        let here = spectrum(footprint);
        let far = |other: &[f64]| match measure {
            Measure::Distance => distance(&here, other),
            Measure::Angle => spectral_angle(&here, other),
        };
        if far(&here).is_nan() {
            return Err("too little of this spectrum is there to compare it".to_owned());
        }
        let count = layers.first().map_or(0, |layer| layer.values.len());
        Ok((0..count).map(|at| far(&spectrum(at))).collect())
    }

    /// The channels that spectra are compared over, spread evenly.
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
