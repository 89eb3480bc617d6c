//! The constants of radiation, one vintage: SI 2019, in which h, c and k are exact.
//!
//! Source: Tiesinga et al. 2021, Rev. Mod. Phys. 93, 025010; SI Brochure, 9th edition.

use std::f64::consts::PI;

/// Planck constant, J s (exact).
pub const PLANCK: f64 = 6.626_070_15e-34;
/// Speed of light in vacuum, m s-1 (exact).
pub const LIGHT_SPEED: f64 = 299_792_458.0;
/// Boltzmann constant, J K-1 (exact).
pub const BOLTZMANN: f64 = 1.380_649e-23;
/// First radiation constant for spectral radiance, 2 h c^2, W m2 sr-1.
pub const C1L: f64 = 2.0 * PLANCK * LIGHT_SPEED * LIGHT_SPEED;
/// The same in wavenumber form, mW m-2 sr-1 (cm-1)-4.
pub const C1: f64 = C1L * 1e11;
/// Second radiation constant, h c / k, m K.
pub const C2_METRE: f64 = PLANCK * LIGHT_SPEED / BOLTZMANN;
/// The same in wavenumber form, cm K.
pub const C2: f64 = C2_METRE * 100.0;
/// Stefan-Boltzmann constant, 2 pi^5 k^4 / (15 h^3 c^2), W m-2 K-4.
pub const STEFAN_BOLTZMANN: f64 =
    2.0 * PI * PI * PI * PI * PI * BOLTZMANN * BOLTZMANN * BOLTZMANN * BOLTZMANN
        / (15.0 * PLANCK * PLANCK * PLANCK * LIGHT_SPEED * LIGHT_SPEED);
