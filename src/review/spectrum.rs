//! One footprint's spectrum in both quantities.

use super::Review;
use crate::granule::{GranuleError, Quantity};
use crate::spectral::{brightness_temperature_or_nan, planck};

/// One footprint's spectrum, band by band.
#[derive(Debug, Clone, PartialEq)]
pub struct Spectrum {
    /// The footprint, in row-major order.
    pub footprint: usize,
    /// The bands, in the granule's order.
    pub bands: Vec<BandSpectrum>,
}

/// One band of a spectrum; channels in the order of the file, missing values NaN.
#[derive(Debug, Clone, PartialEq)]
pub struct BandSpectrum {
    /// mW m-2 sr-1 (cm-1)-1.
    pub radiances: Vec<f64>,
    /// K.
    pub temperatures: Vec<f64>,
}

impl BandSpectrum {
    /// A band of these radiances (mW m-2 sr-1 (cm-1)-1) at these wavenumbers (cm-1).
    pub fn of_radiances(wavenumbers: &[f64], radiances: Vec<f64>) -> Self {
        let pairs = wavenumbers.iter().zip(&radiances);
        let temperatures =
            pairs.map(|(at, value)| brightness_temperature_or_nan(*at, *value)).collect();
        Self { radiances, temperatures }
    }
}

impl Review {
    /// The spectrum of a footprint, if all bands of it have been read.
    pub fn spectrum_in_memory(&self, footprint: usize) -> Option<Spectrum> {
        let cube = self.cube();
        let here = |band| cube.has_slab(band, cube.slab_of(band, footprint));
        if footprint >= cube.footprints() || !(0..self.granule().bands().len()).all(here) {
            return None;
        }
        self.read_spectrum(footprint).ok()
    }

    /// What a model calculated for a footprint under a clear sky, if anything was for any band; a band
    /// without it is missing.
    ///
    /// # Errors
    /// The file can't be read.
    pub fn calculated_spectrum(&self, footprint: usize) -> Result<Option<Spectrum>, GranuleError> {
        let bands = 0..self.granule().bands().len();
        if !bands.clone().any(|band| self.granule().calculated(band).is_some()) {
            return Ok(None);
        }
        let bands = bands.map(|band| {
            let missing = || vec![f64::NAN; self.granule().bands()[band].axis.wavenumbers().len()];
            let found = self.granule().calculated_clear(band, footprint..footprint + 1)?;
            Ok(self.in_both(band, found.unwrap_or_else(missing)))
        });
        Ok(Some(Spectrum { footprint, bands: bands.collect::<Result<_, GranuleError>>()? }))
    }

    /// The spectrum of a footprint: from memory, or from the file before everything else that is
    /// read.
    ///
    /// # Errors
    /// The file can't be read.
    pub fn read_spectrum(&self, footprint: usize) -> Result<Spectrum, GranuleError> {
        let bands = 0..self.granule().bands().len();
        let bands = bands.map(|band| {
            let values = self.granule().read_spectrum(band, footprint)?;
            Ok(self.in_both(band, values))
        });
        Ok(Spectrum { footprint, bands: bands.collect::<Result<_, GranuleError>>()? })
    }

    /// Values in a band's own quantity, in both.
    fn in_both(&self, band: usize, values: Vec<f64>) -> BandSpectrum {
        let band = &self.granule().bands()[band];
        match band.quantity {
            Quantity::Radiance(_) => BandSpectrum::of_radiances(band.axis.wavenumbers(), values),
            Quantity::BrightnessTemperature(_) => {
                let pairs = band.axis.wavenumbers().iter().zip(&values);
                let radiances = pairs.map(|(at, value)| planck(*at, *value)).collect();
                BandSpectrum { radiances, temperatures: values }
            }
        }
    }
}
