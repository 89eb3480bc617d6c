//! The speed of light, by which the SI defines the metre.

/// Speed of light in vacuum, m s-1 (exact).
pub const LIGHT_SPEED: f64 = 299_792_458.0;

/// The same in cm s-1: a wavenumber in cm-1 times this is a frequency in Hz.
pub const LIGHT_SPEED_CENTIMETRES: f64 = LIGHT_SPEED * 100.0;
