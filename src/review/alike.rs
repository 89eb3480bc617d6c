//! How alike the spectra of granules are.

use std::sync::Arc;

use rayon::prelude::*;

use super::Review;
use super::yardstick::{Axes, Measure, Yardstick};
use crate::granule::{GranuleError, Quantity};
use crate::layers::Layer;
use crate::screening::unusual::{Basis, instrument_shape};
use crate::spectral::planck;
use crate::system::Cancel;

/// All spectra of a granule as the numbers by which they are compared.
#[derive(Debug, Clone)]
pub struct Measured {
    yardstick: Arc<Yardstick>,
    width: usize,
    values: Vec<f64>,
}

impl Measured {
    /// What they are compared by.
    pub fn yardstick(&self) -> &Arc<Yardstick> {
        &self.yardstick
    }

    /// How many spectra there are.
    pub fn footprints(&self) -> usize {
        self.values.len() / self.width.max(1)
    }

    /// The numbers that stand for a footprint's spectrum; none where there is no such footprint.
    pub fn of(&self, footprint: usize) -> &[f64] {
        self.values.chunks_exact(self.width.max(1)).nth(footprint).unwrap_or_default()
    }

    /// How far every spectrum is from one; NaN where too much is missing.
    pub fn far_from(&self, one: &[f64]) -> Vec<f64> {
        let spectra = self.values.par_chunks_exact(self.width.max(1));
        spectra.map(|other| self.yardstick.far(one, other)).collect()
    }
}

impl Review {
    /// The numbers that stand for every spectrum. What has not been read is read.
    ///
    /// # Errors
    /// In one line: the granule lacks a channel, or is of another instrument than the components; the
    /// file can't be read, or it was cancelled.
    pub fn measured(
        &self,
        yardstick: &Arc<Yardstick>,
        cancel: &Cancel,
    ) -> Result<Measured, String> {
        let (width, values) = match &yardstick.axes {
            Axes::Channels(wavenumbers) => {
                (wavenumbers.len(), self.at_channels(yardstick.measure, wavenumbers, cancel)?)
            }
            Axes::Components { instrument, .. }
                if *instrument != instrument_shape(self.granule()) =>
            {
                return Err("of another instrument than the components".to_owned());
            }
            Axes::Components { bands, .. } => {
                let found = self.granule().at_work(|| self.along_components(bands, cancel));
                found.map_err(|error| error.to_string())?
            }
        };
        if cancel.is_cancelled() {
            return Err(GranuleError::Cancelled.to_string());
        }
        match width {
            0 => Err("no component stands out of the noise".to_owned()),
            width => Ok(Measured { yardstick: Arc::clone(yardstick), width, values }),
        }
    }

    /// Footprint by footprint the values at these wavenumbers.
    fn at_channels(
        &self,
        measure: Measure,
        wavenumbers: &[f64],
        cancel: &Cancel,
    ) -> Result<Vec<f64>, String> {
        let name = if measure == Measure::Angle { "rad" } else { "bt" };
        let texts: Vec<String> =
            wavenumbers.iter().map(|wavenumber| format!("{name}({wavenumber:.4})")).collect();
        let texts: Vec<&str> = texts.iter().map(String::as_str).collect();
        let layers = self.whole_layers(&texts, cancel)?;
        if let Some(Err(why)) = layers.first()
            && layers.iter().all(Result::is_err)
        {
            return Err(why.clone());
        }
        // A channel that is bad in this granule alone is missing in its spectra.
        let value = |layer: &Result<Layer, String>, at: usize| {
            layer.as_ref().ok().and_then(|layer| layer.values.get(at)).copied().unwrap_or(f64::NAN)
        };
        let count = self.granule().footprints().count();
        Ok((0..count).flat_map(|at| layers.iter().map(move |layer| value(layer, at))).collect())
    }

    /// How many components count, and footprint by footprint the places along them.
    fn along_components(
        &self,
        bands: &[(usize, Basis)],
        cancel: &Cancel,
    ) -> Result<(usize, Vec<f64>), GranuleError> {
        let count = self.granule().footprints().count();
        let together = self.granule().footprints_at_once();
        let (mut width, mut values) = (0, Vec::new());
        // Slab by slab, for what is not in memory is read so.
        for begin in (0..count).step_by(together) {
            let of = |footprint: usize| -> Result<Vec<f64>, GranuleError> {
                let mut places = Vec::new();
                for (band, basis) in bands {
                    places.extend(basis.coordinates(&self.radiances(*band, footprint, cancel)?));
                }
                Ok(places)
            };
            let block = (begin..count.min(begin + together)).into_par_iter().map(of);
            let block = block.collect::<Result<Vec<Vec<f64>>, GranuleError>>()?;
            width = block.first().map_or(width, Vec::len);
            values.extend(block.into_iter().flatten());
        }
        Ok((width, values))
    }

    /// A footprint's radiances in a band, mW m-2 sr-1 (cm-1)-1, whatever the file keeps.
    fn radiances(
        &self,
        band: usize,
        footprint: usize,
        cancel: &Cancel,
    ) -> Result<Vec<f64>, GranuleError> {
        let mut values = Vec::new();
        self.granule().values(band, footprint, Some(cancel), &mut values)?;
        let here = &self.granule().bands()[band];
        if matches!(here.quantity, Quantity::BrightnessTemperature(_)) {
            for (value, wavenumber) in values.iter_mut().zip(here.axis.wavenumbers()) {
                *value = planck(*wavenumber, *value);
            }
        }
        Ok(values)
    }
}
