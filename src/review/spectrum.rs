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

    /// The spectrum of a footprint: from memory, or from the file before everything else that is
    /// read.
    ///
    /// # Errors
    /// The file can't be read.
    pub fn read_spectrum(&self, footprint: usize) -> Result<Spectrum, GranuleError> {
        let bands = self.granule().bands().iter().enumerate().map(|(number, band)| {
            let values = self.granule().read_spectrum(number, footprint)?;
            let converted = |convert: fn(f64, f64) -> f64| {
                let wavenumbers = band.axis.wavenumbers().iter();
                wavenumbers.zip(&values).map(|(at, value)| convert(*at, *value)).collect()
            };
            Ok(match band.quantity {
                Quantity::Radiance(_) => BandSpectrum {
                    temperatures: converted(brightness_temperature_or_nan),
                    radiances: values,
                },
                Quantity::BrightnessTemperature(_) => {
                    BandSpectrum { radiances: converted(planck), temperatures: values }
                }
            })
        });
        Ok(Spectrum { footprint, bands: bands.collect::<Result<_, GranuleError>>()? })
    }
}
