//! Noise of a channel: as radiance (NEdN) and as temperature (NEdT).

use super::planck::planck_slope;

/// The temperature noise, K, that a radiance noise `nedn` (mW m-2 sr-1 (cm-1)-1) makes at
/// `wavenumber` (cm-1) over a scene of `temperature` (K).
///
/// `NEdT = NEdN / (dB/dT)`, first-order propagation. Common practice.
pub fn nedt(wavenumber: f64, temperature: f64, nedn: f64) -> f64 {
    nedn / planck_slope(wavenumber, temperature)
}

/// A temperature noise `nedt` (K) given for a scene of `from` (K), over a scene of `to` (K), where
/// the radiance noise is the same.
///
/// `NEdT(T2) = NEdT(T1) dB/dT(T1) / dB/dT(T2)`. Common practice.
pub fn nedt_at(wavenumber: f64, nedt: f64, from: f64, to: f64) -> f64 {
    nedt * planck_slope(wavenumber, from) / planck_slope(wavenumber, to)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::spectral::{brightness_temperature, planck};

    #[test]
    fn noise_grows_over_cold_scenes() {
        // Worked with 50 digits: 0.1 K at 280 K near 2500 cm-1; they carry three and two digits.
        assert!((nedt_at(2500.0, 0.1, 280.0, 220.0) - 2.05).abs() < 0.005);
        assert!((nedt_at(2500.0, 0.1, 280.0, 200.0) - 8.7).abs() < 0.05);
    }

    #[test]
    fn a_small_step_in_radiance_is_a_small_step_in_temperature() {
        let (wavenumber, temperature, step) = (900.0, 280.0, 1e-4);
        let radiance = planck(wavenumber, temperature) + step;
        let moved = brightness_temperature(wavenumber, radiance).unwrap() - temperature;
        // First order: the next term is smaller by about step / radiance, 1e-6; rounding of T
        // itself (3e-14 K) over a step of 7e-5 K adds 1e-9.
        assert!((moved / nedt(wavenumber, temperature, step) - 1.0).abs() < 2e-6);
    }
}
