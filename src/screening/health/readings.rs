//! Radiances of one band out of the cube, whatever the file keeps.

use crate::granule::{Band, Cube, Granule, Quantity};
use crate::spectral::planck;

/// One band of a granule that has been read.
#[derive(Debug, Clone, Copy)]
pub struct BandReadings<'g> {
    /// The band.
    pub band: &'g Band,
    /// Its place in the granule.
    pub number: usize,
    cube: &'g Cube,
}

impl<'g> BandReadings<'g> {
    /// The bands of a granule of which everything has been read.
    pub fn of(granule: &'g Granule, cube: &'g Cube) -> Vec<Self> {
        let bands = granule.bands().iter().enumerate();
        bands
            .filter(|(number, _)| cube.is_complete(*number))
            .map(|(number, band)| Self { band, number, cube })
            .collect()
    }

    /// A footprint's radiances, mW m-2 sr-1 (cm-1)-1, in the order of the file; missing as NaN.
    pub fn radiances(&self, footprint: usize, out: &mut Vec<f64>) {
        self.cube.values(self.number, footprint, out);
        if self.in_kelvin() {
            for (value, wavenumber) in out.iter_mut().zip(self.band.axis.wavenumbers()) {
                *value = planck(*wavenumber, *value);
            }
        }
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
