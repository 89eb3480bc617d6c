//! The noise of a footprint's channels, as it belongs to the values that are handed on.

use super::band::Quantity;
use super::decoder::Decoder;
use super::error::GranuleError;
use super::granule_file::Granule;
use super::noise::Noise;
use crate::spectral::{nedt, nedt_at, planck_slope};

impl Granule {
    /// The noise of a footprint's channels in a band: the standard deviation that belongs to the
    /// values of [`Granule::read_spectrum`], in mW m-2 sr-1 (cm-1)-1 or K by the band's quantity,
    /// missing as NaN; nothing where the file does not give it.
    ///
    /// A noise in K for a scene of one temperature is brought to radiance by the slope of Planck's
    /// function there, and one of a band of brightness temperatures to the footprint's own
    /// temperature, channel by channel. Where spectra are apodised on request, so is the noise, as
    /// that of independent channels.
    ///
    /// # Errors
    /// The file cannot be read.
    pub fn noise(&self, band: usize, footprint: usize) -> Result<Option<Vec<f64>>, GranuleError> {
        let Some(noise) = &self.bands[band].noise else { return Ok(None) };
        let values = self.stored_noise(noise, footprint)?;
        let wavenumbers = self.bands[band].axis.wavenumbers();
        let found = values.iter().zip(wavenumbers);
        let converted: Vec<f64> = match (&self.bands[band].quantity, &noise.quantity) {
            (Quantity::Radiance(_), Quantity::Radiance(unit)) => {
                found.map(|(value, nu)| value * unit.factor_at(*nu)).collect()
            }
            (Quantity::Radiance(_), Quantity::BrightnessTemperature(_)) => {
                let scene = noise.scene.unwrap_or(f64::NAN);
                found.map(|(value, nu)| value * planck_slope(*nu, scene)).collect()
            }
            (Quantity::BrightnessTemperature(_), given) => {
                let scene = self.read_spectrum(band, footprint)?;
                let over = |((value, nu), kelvin): ((&f64, &f64), &f64)| match (given, noise.scene)
                {
                    (Quantity::Radiance(unit), _) => {
                        nedt(*nu, *kelvin, value * unit.factor_at(*nu))
                    }
                    (_, Some(from)) => nedt_at(*nu, *value, from, *kelvin),
                    (_, None) => *value,
                };
                found.zip(&scene).map(over).collect()
            }
        };
        Ok(Some(self.apodised_noise(band, converted)))
    }

    fn stored_noise(&self, noise: &Noise, footprint: usize) -> Result<Vec<f64>, GranuleError> {
        let variable = &self.index().variables[noise.place];
        let (start, count) = noise.layout.spectrum(&self.footprints.position(footprint));
        let samples = self.reader.read(variable, &start, &count)?;
        let mut values = Decoder::of(variable).decode_all(&samples);
        // A standard deviation below zero is a fill value that nobody declared.
        values.iter_mut().filter(|value| **value < 0.0).for_each(|value| *value = f64::NAN);
        Ok(values)
    }

    fn apodised_noise(&self, band: usize, values: Vec<f64>) -> Vec<f64> {
        match self.cube.apodised_by(band) {
            None => values,
            Some(mean) => {
                let channels = 0..values.len();
                channels.map(|channel| mean.deviation(channel, |at| values[at])).collect()
            }
        }
    }
}
