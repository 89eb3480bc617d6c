//! Wavenumbers, temperatures and radiances with their units, and the unit strings of CF files.
//!
//! Uses: no other room.
//!
//! **Never** guesses a unit.

mod angle;
mod decimal;
mod dimension;
mod error;
mod light_speed;
mod product;
mod quantities;
mod radiance;
mod spectral_position;
mod symbols;
mod temperature;

pub use angle::AngleUnit;
pub use error::UnitError;
pub use light_speed::LIGHT_SPEED;
pub use quantities::{Kelvin, Radiance, Wavenumber};
pub use radiance::{RadianceUnit, SpectralDensity};
pub use spectral_position::{SpectralUnit, wavenumber_from_text};
pub use temperature::TemperatureUnit;
