//! The Planck function per wavelength and per frequency, and their inverses, in SI units.

use super::constants::{BOLTZMANN, C1L, C2_METRE, LIGHT_SPEED, PLANCK};
use super::planck::{NoTemperature, inverted};

/// Spectral radiance of a black body per wavelength, W m-2 sr-1 m-1, at `wavelength` (m) and
/// `temperature` (K), both positive.
///
/// `B = 2 h c^2 lambda^-5 / (exp(h c / (lambda k T)) - 1)`. Source: Liou 2002, ch. 1.
pub fn planck_wavelength(wavelength: f64, temperature: f64) -> f64 {
    C1L / wavelength.powi(5) / (C2_METRE / (wavelength * temperature)).exp_m1()
}

/// The temperature (K) at which a black body has `radiance` (W m-2 sr-1 m-1) at `wavelength` (m).
///
/// `T = h c / (lambda k ln(1 + 2 h c^2 / (lambda^5 B)))`. Source: Liou 2002, ch. 1.
///
/// # Errors
/// A radiance that is zero, negative, missing or beyond the range of numbers.
pub fn temperature_wavelength(wavelength: f64, radiance: f64) -> Result<f64, NoTemperature> {
    inverted(C2_METRE / wavelength, C1L / wavelength.powi(5), radiance)
}

/// Spectral radiance of a black body per frequency, W m-2 sr-1 Hz-1, at `frequency` (Hz) and
/// `temperature` (K), both positive.
///
/// `B = 2 h f^3 c^-2 / (exp(h f / (k T)) - 1)`. Source: Liou 2002, ch. 1.
pub fn planck_frequency(frequency: f64, temperature: f64) -> f64 {
    frequency_scale(frequency) / (PLANCK * frequency / (BOLTZMANN * temperature)).exp_m1()
}

/// The temperature (K) at which a black body has `radiance` (W m-2 sr-1 Hz-1) at `frequency` (Hz).
///
/// `T = h f / (k ln(1 + 2 h f^3 / (c^2 B)))`. Source: Liou 2002, ch. 1.
///
/// # Errors
/// A radiance that is zero, negative, missing or beyond the range of numbers.
pub fn temperature_frequency(frequency: f64, radiance: f64) -> Result<f64, NoTemperature> {
    inverted(PLANCK * frequency / BOLTZMANN, frequency_scale(frequency), radiance)
}

/// `2 h f^3 / c^2`, W m-2 sr-1 Hz-1.
fn frequency_scale(frequency: f64) -> f64 {
    2.0 * PLANCK * frequency.powi(3) / (LIGHT_SPEED * LIGHT_SPEED)
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;

    use super::*;
    use crate::spectral::planck;

    #[test]
    fn one_radiance_in_three_forms() {
        // 900 cm-1, 280 K; worked with 50 digits, given to 12.
        let per_metre = planck_wavelength(0.01 / 900.0, 280.0);
        assert!((per_metre / 6.965_697_184_42e6 - 1.0).abs() < 2e-12, "{per_metre}");
        let per_hertz = planck_frequency(900.0 * 100.0 * LIGHT_SPEED, 280.0);
        assert!((per_hertz / 2.868_526_516_97e-12 - 1.0).abs() < 2e-12, "{per_hertz}");
    }

    #[test]
    fn peaks_lie_where_wien_says() {
        // lambda_max T = 2897.77195518 um K and f_max / T = 58.7892575765 GHz K-1, from the roots
        // of the transcendental equations. At a peak a step to either side goes down.
        let falls = |form: fn(f64, f64) -> f64, peak: f64| {
            [0.9999, 1.0001].iter().all(|factor| form(peak * factor, 300.0) < form(peak, 300.0))
        };
        assert!(falls(planck_wavelength, 2_897.771_955_18e-6 / 300.0));
        assert!(falls(planck_frequency, 58.789_257_576_5e9 * 300.0));
        // Away from it one of the two goes up.
        assert!(!falls(planck_wavelength, 2_897.771_955_18e-6 / 300.0 * 1.001));
        assert!(!falls(planck_frequency, 58.789_257_576_5e9 * 300.0 * 1.001));
    }

    #[test]
    fn no_form_invents_a_temperature() {
        for inverse in [temperature_wavelength, temperature_frequency] {
            assert_eq!(inverse(1e-5, 0.0), Err(NoTemperature::NotPositive));
            assert_eq!(inverse(1e-5, f64::NAN), Err(NoTemperature::Missing));
            assert_eq!(inverse(1e-5, f64::INFINITY), Err(NoTemperature::Overflow));
        }
    }

    proptest! {
        #[test]
        fn there_and_back(wavelength in 3e-6..20e-6f64, temperature in 150.0..400.0f64) {
            let radiance = planck_wavelength(wavelength, temperature);
            let back = temperature_wavelength(wavelength, radiance).unwrap();
            // A few roundings of f64.
            prop_assert!((back / temperature - 1.0).abs() < 2e-15);
            let frequency = LIGHT_SPEED / wavelength;
            let radiance = planck_frequency(frequency, temperature);
            let back = temperature_frequency(frequency, radiance).unwrap();
            prop_assert!((back / temperature - 1.0).abs() < 2e-15);
        }

        /// `B_lambda dlambda = B_nu dnu = B_f df`: the forms differ by their Jacobians alone.
        #[test]
        fn forms_differ_by_their_jacobians(
            wavenumber in 500.0..3000.0f64,
            temperature in 150.0..400.0f64,
        ) {
            let working = planck(wavenumber, temperature);
            let per_metre = planck_wavelength(0.01 / wavenumber, temperature);
            // 1 mW m-2 sr-1 (cm-1)-1 is nu^2 / 10 W m-2 sr-1 m-1. An error of 2e-16 in x of up to
            // 30 becomes 6e-15 in the exponential.
            prop_assert!((per_metre / (working * wavenumber * wavenumber * 0.1) - 1.0).abs() < 2e-14);
            let per_hertz = planck_frequency(wavenumber * 100.0 * LIGHT_SPEED, temperature);
            let expected = working * 1e-3 / (100.0 * LIGHT_SPEED);
            prop_assert!((per_hertz / expected - 1.0).abs() < 2e-14);
        }
    }
}
