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
