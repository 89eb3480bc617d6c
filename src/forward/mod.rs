//! The forward model: absorption, atmospheres, surfaces, clouds, instrument response.
//!
//! Uses: `units`, `spectral`.
//!
//! **Never** is truth for its own tests.

mod atmosphere;
mod columns;
mod continuum;
mod exponential;
mod footprint;
mod gas;
mod grid;
mod interpolate;
mod line;
mod linear_bands;
mod methane;
mod opacity;
mod particles;
mod pseudo_lines;
mod response;
mod surface;

pub use atmosphere::{Atmosphere, Changes, Level, Standard};
pub use columns::{Channel, Column, View, columns};
pub use footprint::{Cover, Footprint, Scenery};
pub use gas::Gas;
pub use particles::Particles;
pub use response::Response;
pub use surface::Surface;
