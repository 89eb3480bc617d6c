//! How the spectra of many footprints lie, channel by channel.

use super::Review;
use super::spectrum::BandSpectrum;
use crate::flags::FootprintSet;
use crate::granule::{GranuleError, Quantity};
use crate::spectral::planck;
use crate::system::Cancel;

/// Quartiles of more footprints than this are those of so many, evenly taken: they would not differ
/// on any screen, and all values of all channels would have to be held at once.
const MOST_FOR_QUARTILES: usize = 512;

/// The spectra of many footprints in six.
#[derive(Debug, Clone, PartialEq)]
pub struct ManySpectra {
    /// How many footprints there are.
    pub footprints: usize,
    /// Of how many of them the quartiles are.
    pub sampled: usize,
    /// In each channel the lowest radiance, the lower quartile, the median, the upper quartile and
    /// the highest, band by band. Each quartile is a value that occurs (nearest rank), so that it is
    /// the quartile of the brightness temperatures too.
    pub levels: [Vec<BandSpectrum>; 5],
    /// The mean radiance, and the brightness temperature of it, band by band.
    pub mean: Vec<BandSpectrum>,
}

/// What is gathered of one band.
struct Gathered {
    lowest: Vec<f64>,
    highest: Vec<f64>,
    sum: Vec<f64>,
    count: Vec<f64>,
    /// The radiances of the sampled footprints, one after the other.
    sampled: Vec<f64>,
}

impl Review {
    /// How the spectra of these footprints lie. Missing values do not count; a channel without any is
    /// missing in all six.
    ///
    /// # Errors
    /// The file can't be read, or it was cancelled.
    pub fn many_spectra(
        &self,
        footprints: &FootprintSet,
        cancel: &Cancel,
    ) -> Result<ManySpectra, GranuleError> {
        let count = footprints.len();
        let step = count.div_ceil(MOST_FOR_QUARTILES).max(1);
        let mut levels: [Vec<BandSpectrum>; 5] = Default::default();
        let mut mean = Vec::new();
        for (number, band) in self.granule().bands().iter().enumerate() {
            let wavenumbers = band.axis.wavenumbers();
            let of = |radiances: Vec<f64>| BandSpectrum::of_radiances(wavenumbers, radiances);
            let gathered = self.gather(number, footprints, step, cancel)?;
            let [lower, median, upper] = quartiles(&gathered.sampled, wavenumbers.len());
            let five = [gathered.lowest, lower, median, upper, gathered.highest];
            for (level, radiances) in levels.iter_mut().zip(five) {
                level.push(of(radiances));
            }
            let means = gathered.sum.iter().zip(&gathered.count).map(|(sum, count)| sum / count);
            mean.push(of(means.collect()));
        }
        let sampled = count.div_ceil(step);
        Ok(ManySpectra { footprints: count, sampled, levels, mean })
    }

    fn gather(
        &self,
        band: usize,
        footprints: &FootprintSet,
        step: usize,
        cancel: &Cancel,
    ) -> Result<Gathered, GranuleError> {
        let here = &self.granule().bands()[band];
        let channels = here.axis.wavenumbers().len();
        let mut gathered = Gathered {
            lowest: vec![f64::NAN; channels],
            highest: vec![f64::NAN; channels],
            sum: vec![0.0; channels],
            count: vec![0.0; channels],
            sampled: Vec::new(),
        };
        let mut values = Vec::new();
        for (turn, footprint) in footprints.iter().enumerate() {
            if cancel.is_cancelled() {
                return Err(GranuleError::Cancelled);
            }
            // Read with those beside it where it is not in memory.
            self.granule().values(band, footprint, None, &mut values)?;
            if matches!(here.quantity, Quantity::BrightnessTemperature(_)) {
                for (value, wavenumber) in values.iter_mut().zip(here.axis.wavenumbers()) {
                    *value = planck(*wavenumber, *value);
                }
            }
            for (channel, value) in values.iter().enumerate().filter(|(_, value)| value.is_finite())
            {
                // `min` and `max` pass the missing value of an empty channel over.
                gathered.lowest[channel] = gathered.lowest[channel].min(*value);
                gathered.highest[channel] = gathered.highest[channel].max(*value);
                gathered.sum[channel] += value;
                gathered.count[channel] += 1.0;
            }
            if turn % step == 0 {
                gathered.sampled.extend_from_slice(&values);
            }
        }
        Ok(gathered)
    }
}

/// Lower quartile, median and upper quartile of each channel: of n values the one of rank
/// `ceil(p n)`, definition 1 of Hyndman and Fan (1996).
fn quartiles(sampled: &[f64], channels: usize) -> [Vec<f64>; 3] {
    let mut found: [Vec<f64>; 3] = Default::default();
    for channel in 0..channels {
        let values = sampled.iter().skip(channel).step_by(channels.max(1)).copied();
        let mut values: Vec<f64> = values.filter(|value| value.is_finite()).collect();
        values.sort_unstable_by(f64::total_cmp);
        for (quartile, found) in (1..).zip(found.iter_mut()) {
            let rank = (quartile * values.len()).div_ceil(4);
            found.push(rank.checked_sub(1).map_or(f64::NAN, |place| values[place]));
        }
    }
    found
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Worked by hand: of 5 values the ranks are 2, 3 and 4; of 4 they are 1, 2 and 3.
    #[test]
    fn quartiles_are_values_that_occur() {
        let sampled = [5.0, f64::NAN, 1.0, 8.0, 4.0, 2.0, 2.0, 4.0, 3.0, 6.0];
        let [lower, median, upper] = quartiles(&sampled, 2);
        assert_eq!((lower, median, upper), (vec![2.0, 2.0], vec![3.0, 4.0], vec![4.0, 6.0]));
        let [lower, ..] = quartiles(&[f64::NAN], 1);
        assert!(lower[0].is_nan());
    }
}
