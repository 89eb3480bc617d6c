//! The Planck function of wavenumber and its inverse, in f64: the path that decides.

use super::constants::{C1, C2};

/// Why a radiance has no brightness temperature.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, thiserror::Error)]
pub enum NoTemperature {
    /// Zero or less: noise around a faint scene. The radiance is valid data, its BT does not exist.
    #[error("radiance not positive")]
    NotPositive,
    /// There is no radiance.
    #[error("radiance missing")]
    Missing,
    /// So small or so large that the arithmetic leaves the range of numbers.
    #[error("radiance outside the range of numbers")]
    Overflow,
}

/// Spectral radiance of a black body, mW m-2 sr-1 (cm-1)-1, at `wavenumber` (cm-1) and
/// `temperature` (K), both positive.
///
/// `B = c1 nu^3 / (exp(c2 nu / T) - 1)`. Source: Liou 2002, ch. 1.
pub fn planck(wavenumber: f64, temperature: f64) -> f64 {
    cubed(wavenumber) / (C2 * wavenumber / temperature).exp_m1()
}

/// Change of a black body's spectral radiance with temperature, mW m-2 sr-1 (cm-1)-1 K-1, at
/// `wavenumber` (cm-1) and `temperature` (K), both positive.
///
/// `dB/dT = c1 nu^3 x e^x / (T (e^x - 1)^2)` with `x = c2 nu / T`; the derivative of [`planck`].
/// It is computed as `c1 nu^3 x / (T (e^x - 1) (1 - e^-x))`, which does not overflow sooner than B.
pub fn planck_slope(wavenumber: f64, temperature: f64) -> f64 {
    let x = C2 * wavenumber / temperature;
    cubed(wavenumber) * x / (temperature * x.exp_m1() * -(-x).exp_m1())
}

/// Brightness temperature, K, of a spectral `radiance` (mW m-2 sr-1 (cm-1)-1) at `wavenumber`
/// (cm-1, positive): the temperature at which a black body has that radiance.
///
/// `T = c2 nu / ln(1 + c1 nu^3 / B)`, the inverse of [`planck`]. Source: Liou 2002, ch. 1.
///
/// # Errors
/// A radiance that is zero, negative, missing or beyond the range of numbers.
pub fn brightness_temperature(wavenumber: f64, radiance: f64) -> Result<f64, NoTemperature> {
    inverted(C2 * wavenumber, cubed(wavenumber), radiance)
}

/// As [`brightness_temperature`], with NaN where there is none.
pub fn brightness_temperature_or_nan(wavenumber: f64, radiance: f64) -> f64 {
    brightness_temperature(wavenumber, radiance).unwrap_or(f64::NAN)
}

/// `c1 nu^3`, mW m-2 sr-1 (cm-1)-1.
pub(super) fn cubed(wavenumber: f64) -> f64 {
    C1 * wavenumber * wavenumber * wavenumber
}

/// The inverse that the wavenumber, wavelength and frequency forms share:
/// `T = theta / ln(1 + scale / B)`.
pub(super) fn inverted(theta: f64, scale: f64, radiance: f64) -> Result<f64, NoTemperature> {
    if radiance.is_nan() {
        return Err(NoTemperature::Missing);
    }
    // Caught before the logarithm, which is negative or undefined there.
    if radiance <= 0.0 {
        return Err(NoTemperature::NotPositive);
    }
    let ratio = scale / radiance;
    let temperature = theta / ratio.ln_1p();
    if ratio.is_finite() && temperature.is_finite() {
        Ok(temperature)
    } else {
        Err(NoTemperature::Overflow)
    }
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;

    use super::*;
    use crate::spectral::constants::C2;

    #[test]
    fn radiances_that_have_no_temperature_say_why() {
        for (radiance, reason) in [
            (0.0, NoTemperature::NotPositive),
            (-0.002, NoTemperature::NotPositive),
            // Here the logarithm of the formula would exist and be negative or undefined.
            (-1e9, NoTemperature::NotPositive),
            (f64::NEG_INFINITY, NoTemperature::NotPositive),
            (f64::NAN, NoTemperature::Missing),
            (f64::INFINITY, NoTemperature::Overflow),
            (f64::MIN_POSITIVE, NoTemperature::Overflow),
        ] {
            assert_eq!(brightness_temperature(2616.5, radiance), Err(reason), "{radiance}");
            assert!(brightness_temperature_or_nan(2616.5, radiance).is_nan());
        }
    }

    #[test]
    fn slopes_from_the_table_of_noise() {
        // dB/dT worked with 50 digits, given to six.
        for (wavenumber, temperature, slope) in [
            (650.0, 200.0, 0.725_892),
            (900.0, 280.0, 1.434_43),
            (1231.33, 250.0, 0.528_038),
            (1700.0, 300.0, 0.458_027),
            (2500.0, 220.0, 0.001_097_07),
            (2616.5, 200.0, 0.000_134_309),
        ] {
            let relative = planck_slope(wavenumber, temperature) / slope - 1.0;
            assert!(relative.abs() < 5e-6, "{wavenumber} {temperature}");
        }
    }

    #[test]
    fn the_peak_lies_where_wien_says() {
        // nu_max / T = 1.96099855109 cm-1 K-1, from the root of the transcendental equation.
        let (temperature, peak) = (288.0, 1.960_998_551_09 * 288.0);
        let step = 0.01;
        let rise = planck(peak, temperature) - planck(peak - step, temperature);
        let fall = planck(peak, temperature) - planck(peak + step, temperature);
        // Equally high on both sides to third order in step / peak, that is 2e-5 of the drop.
        assert!(rise > 0.0 && fall > 0.0);
        assert!((rise / fall - 1.0).abs() < 1e-3, "{rise} {fall}");
    }

    #[test]
    fn mixed_scenes_are_warmer_in_the_short_wave() {
        // Surface 295 K, cloud 230 K, cloud cover f: worked with 50 digits, given to 0.001 K.
        for (cover, long_wave, short_wave) in
            [(0.1, 290.188, 292.653), (0.3, 279.877, 287.232), (0.5, 268.393, 280.360)]
        {
            for (wavenumber, expected) in [(909.0, long_wave), (2616.5, short_wave)] {
                let mixed =
                    (1.0 - cover) * planck(wavenumber, 295.0) + cover * planck(wavenumber, 230.0);
                let temperature = brightness_temperature(wavenumber, mixed).unwrap();
                assert!((temperature - expected).abs() < 6e-4, "{cover}: {temperature}");
            }
        }
    }

    proptest! {
        #[test]
        fn temperature_to_radiance_and_back(
            wavenumber in 500.0..3000.0f64,
            temperature in 120.0..400.0f64,
        ) {
            let radiance = planck(wavenumber, temperature);
            let back = brightness_temperature(wavenumber, radiance).unwrap();
            // An error of 2e-16 x in the exponential becomes 2e-16 in T; a few roundings more.
            prop_assert!((back / temperature - 1.0).abs() < 2e-15, "{back}");
        }

        #[test]
        fn the_slope_is_the_derivative(
            wavenumber in 500.0..3000.0f64,
            temperature in 150.0..350.0f64,
        ) {
            let step = 1e-3;
            let difference = planck(wavenumber, temperature + step)
                - planck(wavenumber, temperature - step);
            let slope = planck_slope(wavenumber, temperature);
            // Central difference: (x step / T)^2 / 6 < 1e-8 off; rounding of B over the step adds
            // 1e-15 / (x step / T) < 1e-10.
            prop_assert!((difference / (2.0 * step) / slope - 1.0).abs() < 3e-8);
        }

        /// Wien's limit `B = c1 nu^3 exp(-x)` for large x: off by exp(-x).
        #[test]
        fn wien_limit(temperature in 60.0..120.0f64) {
            let wavenumber = 2800.0;
            let x = C2 * wavenumber / temperature;
            let wien = cubed(wavenumber) * (-x).exp();
            // x is 33 to 67: exp(-x) is below 3e-15, rounding of x makes 1e-14.
            prop_assert!((planck(wavenumber, temperature) / wien - 1.0).abs() < 3e-14);
        }

        /// The limit of Rayleigh and Jeans, `B = c1 / c2 nu^2 T` for small x: off by x / 2.
        #[test]
        fn rayleigh_jeans_limit(wavenumber in 1e-3..1e-2f64) {
            let temperature = 300.0;
            let x = C2 * wavenumber / temperature;
            let limit = cubed(wavenumber) / x;
            let relative = planck(wavenumber, temperature) / limit - 1.0;
            // The next term, x^2 / 12, is below 2e-10; rounding adds a few 1e-16.
            prop_assert!((relative + x / 2.0).abs() < x * x / 10.0 + 1e-15);
        }
    }
}
