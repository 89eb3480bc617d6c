//! Radiances of one band, whatever the file keeps.

use std::sync::OnceLock;

use crate::granule::{Band, Granule, GranuleError, Quantity};
use crate::spectral::planck;
use crate::system::Cancel;

/// Reads the spectra of a granule: out of memory, or from the file where they do not fit into it.
#[derive(Debug)]
pub struct Spectra<'g> {
    granule: &'g Granule,
    left_out: &'g [bool],
    cancel: &'g Cancel,
    fault: OnceLock<GranuleError>,
}

impl<'g> Spectra<'g> {
    /// Reads until `cancel` is asked for. Footprints that are `left_out` (none where it is empty) have
    /// no values.
    pub fn new(granule: &'g Granule, left_out: &'g [bool], cancel: &'g Cancel) -> Self {
        Self { granule, left_out, cancel, fault: OnceLock::new() }
    }

    /// Whether a footprint is left out.
    pub fn leaves_out(&self, footprint: usize) -> bool {
        self.left_out.get(footprint).copied().unwrap_or(false)
    }

    /// Missing where they cannot be read, and from then on.
    fn values(&self, band: usize, footprint: usize, out: &mut Vec<f64>) {
        if self.leaves_out(footprint) {
            return self.nothing(band, out);
        }
        let read = match (self.fault.get(), self.cancel.is_cancelled()) {
            (None, false) => self.granule.values(band, footprint, Some(self.cancel), out),
            _ => Err(GranuleError::Cancelled),
        };
        if let Err(error) = read {
            // What could not be read first is told.
            let _ = self.fault.set(error);
            self.nothing(band, out);
        }
    }

    fn nothing(&self, band: usize, out: &mut Vec<f64>) {
        out.clear();
        out.resize(self.granule.bands()[band].channels(), f64::NAN);
    }

    /// What could not be read, if anything.
    pub fn fault(self) -> Result<(), GranuleError> {
        self.fault.into_inner().map_or(Ok(()), Err)
    }
}

/// One band of a granule.
#[derive(Debug, Clone, Copy)]
pub struct BandReadings<'g> {
    /// The band.
    pub band: &'g Band,
    /// Its place in the granule.
    pub number: usize,
    spectra: &'g Spectra<'g>,
}

impl<'g> BandReadings<'g> {
    /// The bands of a granule.
    pub fn of(spectra: &'g Spectra<'g>) -> Vec<Self> {
        let bands = spectra.granule.bands().iter().enumerate();
        bands.map(|(number, band)| Self { band, number, spectra }).collect()
    }

    /// A footprint's radiances, mW m-2 sr-1 (cm-1)-1, in the order of the file; missing as NaN.
    pub fn radiances(&self, footprint: usize, out: &mut Vec<f64>) {
        self.spectra.values(self.number, footprint, out);
        if self.in_kelvin() {
            for (value, wavenumber) in out.iter_mut().zip(self.band.axis.wavenumbers()) {
                *value = planck(*wavenumber, *value);
            }
        }
    }

    /// Tells whoever waits that a spectrum has been looked at.
    pub fn looked_at(&self) {
        self.spectra.cancel.did(1);
    }

    /// Whether the file keeps brightness temperatures; their noise is that of one scene.
    pub fn in_kelvin(&self) -> bool {
        matches!(self.band.quantity, Quantity::BrightnessTemperature(_))
    }

    /// The channels that may be used at all, by rising wavenumber, and for each whether the next one
    /// is its neighbour without a gap.
    pub fn channels(&self) -> (Vec<usize>, Vec<bool>) {
        let axis = &self.band.axis;
        let (mut channels, mut adjacent) = (Vec::new(), Vec::<bool>::new());
        for segment in axis.segments() {
            let mut last = None;
            for place in segment.clone() {
                let channel = axis.sorted()[place];
                if self.band.bad[channel] {
                    continue;
                }
                if let (Some(last), Some(adjacent)) = (last, adjacent.last_mut()) {
                    *adjacent = last + 1 == place;
                }
                channels.push(channel);
                adjacent.push(false);
                last = Some(place);
            }
        }
        (channels, adjacent)
    }
}
