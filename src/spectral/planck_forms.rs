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
