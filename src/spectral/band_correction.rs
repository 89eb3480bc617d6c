//! Brightness temperature of a channel that is too wide to count as monochromatic.

use super::planck::{NoTemperature, brightness_temperature, planck};

/// Two coefficients that relate a wide channel's mean radiance to the Planck function at its centre:
/// `R = B(centre, a + b T)`, so `T = (T* - a) / b` with `T*` the temperature inverted at the centre.
///
/// Source: NOAA KLM User's Guide, section 7 and appendix D. Channels of 0.25 to 2.5 cm-1 need none:
/// there the correction is below 0.001 K.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct BandCorrection {
    /// Wavenumber of the channel's centre, cm-1.
    pub centre: f64,
    /// Offset, K.
    pub a: f64,
    /// Slope.
    pub b: f64,
}

impl BandCorrection {
    /// The least-squares line through pairs of a black body's temperature (K) and its mean radiance
    /// over the channel (mW m-2 sr-1 (cm-1)-1).
    ///
    /// # Errors
    /// A radiance without a temperature.
    pub fn fit(centre: f64, pairs: &[(f64, f64)]) -> Result<Self, NoTemperature> {
        let effective = pairs
            .iter()
            .map(|(_, radiance)| brightness_temperature(centre, *radiance))
            .collect::<Result<Vec<f64>, _>>()?;
        let count = pairs.len() as f64;
        let mean_true = pairs.iter().map(|(temperature, _)| temperature).sum::<f64>() / count;
        let mean_effective = effective.iter().sum::<f64>() / count;
        let (mut together, mut spread) = (0.0, 0.0);
        for ((temperature, _), effective) in pairs.iter().zip(&effective) {
            together += (temperature - mean_true) * (effective - mean_effective);
            spread += (temperature - mean_true).powi(2);
        }
        let b = together / spread;
        Ok(Self { centre, a: mean_effective - b * mean_true, b })
    }

    /// Mean radiance, mW m-2 sr-1 (cm-1)-1, of a black body of `temperature` (K) over the channel.
    pub fn radiance(&self, temperature: f64) -> f64 {
        planck(self.centre, self.a + self.b * temperature)
    }

    /// Temperature, K, of a black body with this mean `radiance` (mW m-2 sr-1 (cm-1)-1).
    ///
    /// # Errors
    /// A radiance that is zero, negative, missing or beyond the range of numbers.
    pub fn temperature(&self, radiance: f64) -> Result<f64, NoTemperature> {
        Ok((brightness_temperature(self.centre, radiance)? - self.a) / self.b)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::spectral::band_integral;

    /// Mean radiance over a box response, mW m-2 sr-1 (cm-1)-1.
    fn box_mean(low: f64, high: f64, temperature: f64) -> f64 {
        1e3 * band_integral(low, high, temperature) / (high - low)
    }

    fn fitted(low: f64, high: f64, centre: f64) -> BandCorrection {
        let pairs: Vec<(f64, f64)> = (40..=64)
            .map(|step| 5.0 * f64::from(step))
            .map(|temperature| (temperature, box_mean(low, high, temperature)))
            .collect();
        BandCorrection::fit(centre, &pairs).unwrap()
    }

    #[test]
    fn published_coefficients() {
        // NOAA KLM User's Guide, appendix D, for the coefficients; results worked with the SI 2019
        // constants to 10 digits, hence the tolerance.
        let channel = BandCorrection { centre: 917.2289, a: 0.332_380, b: 0.998_522 };
        for (radiance, effective, temperature) in
            [(60.0, 261.939_604_1, 261.994_451_9), (100.0, 291.217_240_2, 291.315_424_4)]
        {
            let inverted = brightness_temperature(channel.centre, radiance).unwrap();
            assert!((inverted - effective).abs() < 1e-7);
            assert!((channel.temperature(radiance).unwrap() - temperature).abs() < 1e-7);
            assert!((channel.radiance(temperature) - radiance).abs() < 1e-7);
        }
    }

    #[test]
    fn a_box_at_eleven_micrometres() {
        // Worked by quadrature over 870 to 950 cm-1, temperatures 200 to 320 K in steps of 5 K;
        // tolerances are the digits given.
        let channel = fitted(870.0, 950.0, 910.0);
        assert!((channel.a - 0.305_552).abs() < 1e-6, "{channel:?}");
        assert!((channel.b - 0.998_925_76).abs() < 1e-8, "{channel:?}");
        for (temperature, mean, effective, corrected) in [
            (250.0, 47.997_539_41, 250.034_681_2, 249.997_69),
            (280.0, 84.404_768_46, 280.003_049_7, 279.998_28),
        ] {
            let radiance = box_mean(870.0, 950.0, temperature);
            assert!((radiance - mean).abs() < 1e-8, "{radiance}");
            assert!((brightness_temperature(910.0, radiance).unwrap() - effective).abs() < 1e-7);
            assert!((channel.temperature(radiance).unwrap() - corrected).abs() < 1e-5);
        }
    }

    #[test]
    fn a_box_at_four_micrometres() {
        let channel = fitted(2450.0, 2700.0, 2575.0);
        assert!((channel.a - 1.382_315).abs() < 1e-6, "{channel:?}");
        assert!((channel.b - 0.998_062_04).abs() < 1e-8, "{channel:?}");
        let radiance = box_mean(2450.0, 2700.0, 280.0);
        assert!((radiance - 0.379_335_712_9).abs() < 1e-10, "{radiance}");
        assert!((brightness_temperature(2575.0, radiance).unwrap() - 280.839_548_6).abs() < 1e-7);
        assert!((channel.temperature(radiance).unwrap() - 279.999_86).abs() < 1e-5);
    }
}
