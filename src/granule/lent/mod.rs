//! Files that lend fields to a granule: geolocation, the surface, calculated spectra, other
//! instruments.

mod calculated;
mod join;
mod lender;
mod pattern;
mod within;

pub use calculated::{Calculated, CalculatedSearch};
pub use join::Join;
pub use lender::Lender;
pub use pattern::LenderPattern;
pub use within::Within;

#[cfg(test)]
mod tests;
