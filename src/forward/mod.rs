//! The forward model: absorption, atmospheres, surfaces, clouds, instrument response.
//!
//! Uses: `units`, `spectral`.
//!
//! **Never** is truth for its own tests.

mod atmosphere;
mod changes;
mod columns;
mod continuum;
mod exponential;
mod footprint;
mod gas;
mod given_levels;
mod grid;
mod interpolate;
mod line;
mod linear_bands;
mod methane;
mod opacity;
mod particles;
mod pseudo_lines;
mod response;
mod standard;
mod surface;

pub use atmosphere::{Atmosphere, Level};
pub use changes::Changes;
pub use columns::{Channel, Column, View, columns};
pub use footprint::{Cover, Footprint, Scenery};
pub use gas::Gas;
pub use given_levels::GivenLevel;
pub use particles::Particles;
pub use response::Response;
pub use standard::Standard;
pub use surface::Surface;
