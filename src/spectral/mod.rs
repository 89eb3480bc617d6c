//! The physics of one spectrum: Planck function, channel axis, apodisation.
//!
//! Uses: `units`.
//!
//! **Never** opens a file.

pub mod constants;
mod absorption_bands;
mod apodisation;
mod band_correction;
mod band_integral;
mod channel_axis;
mod energy;
pub mod fast;
mod likeness;
mod noise;
mod noise_shape;
mod planck;
mod planck_forms;
#[cfg(test)]
mod reference_tables;
mod ringing;
mod robust;
mod segments;
mod shift;

pub use absorption_bands::{ABSORPTION_BANDS, AbsorptionBand};
pub use apodisation::{HAMMING_CENTRE, HAMMING_NOISE_FACTOR, HAMMING_SIDE, Hamming3, hamming3};
pub use band_correction::BandCorrection;
pub use band_integral::{band_integral, blackbody_fraction, total_radiance};
pub use channel_axis::{AxisError, ChannelAxis, Nearest};
pub use energy::{
    ENERGY_BANDS, Energy, EnergyBand, Stretch, absorption, energy_view, window_temperature,
};
pub use likeness::{distance, spectral_angle};
pub use noise::{nedt, nedt_at};
pub use noise_shape::NoiseShape;
pub use planck::{
    NoTemperature, brightness_temperature, brightness_temperature_or_nan, planck, planck_slope,
};
pub use planck_forms::{
    planck_frequency, planck_wavelength, temperature_frequency, temperature_wavelength,
};
pub use ringing::{Ringing, RingingWindows};
pub use robust::{centre_and_deviation, deviation_from_zero, median, running_median};
pub use shift::{ShiftReference, SpectralShift};
