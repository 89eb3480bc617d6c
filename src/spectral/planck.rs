//! The Planck function of wavenumber and its inverse, in f64: the path that decides.

use super::constants::{C1, C2};

/// Spectral radiance of a black body, mW m-2 sr-1 (cm-1)-1, at `wavenumber` (cm-1) and `temperature` (K).
///
/// `B = c1 nu^3 / (exp(c2 nu / T) - 1)`. Source: Liou 2002, ch. 1.
pub fn planck(wavenumber: f64, temperature: f64) -> f64 {
    C1 * wavenumber.powi(3) / (C2 * wavenumber / temperature).exp_m1()
}
