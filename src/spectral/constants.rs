//! The constants of radiation, one vintage: SI 2019, in which h, c and k are exact.
//!
//! Source: Tiesinga et al. 2021, Rev. Mod. Phys. 93, 025010; SI Brochure, 9th edition.

use std::f64::consts::PI;

pub use crate::units::LIGHT_SPEED;

/// Planck constant, J s (exact).
pub const PLANCK: f64 = 6.626_070_15e-34;
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

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn derived_constants() {
        // Worked with 50 digits from the exact h, c and k (CODATA 2018 lists the same to 10
        // digits); a few roundings of f64 are allowed.
        for (computed, expected) in [
            (C1L, 1.191_042_972_397_188e-16),
            (C1, 1.191_042_972_397_188_4e-5),
            (C2, 1.438_776_877_503_933_8),
            (STEFAN_BOLTZMANN, 5.670_374_419_184_429e-8),
        ] {
            assert!((computed / expected - 1.0).abs() < 2e-15, "{computed} {expected}");
        }
    }
}
