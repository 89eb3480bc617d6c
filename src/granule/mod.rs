//! What one input file holds: which variable is what, and the cube of radiances.
//!
//! Uses: `system`, `units`, `spectral`, `netcdf_files`.
//!
//! **Never** judges the data.

mod angles;
mod apodisation;
mod apodise;
mod axis_rows;
mod axis_steps;
mod band;
mod channel_quality;
mod channels;
mod choose_bands;
mod conversion;
mod cube;
mod decoder;
mod error;
mod find_bands;
mod footprint_dimensions;
mod footprint_variables;
mod footprints;
mod geolocation;
mod geolocation_fields;
pub mod globe;
mod granule_file;
mod identity;
mod layout;
mod layout_file;
mod layout_text;
mod lending;
mod lent;
mod memory_plan;
mod named_variable;
mod noise;
mod noise_values;
mod open;
mod opening;
mod passing;
mod problem;
mod reading;
mod said_axis;
mod side_by_side;
mod slabs;
mod spectral_axis;
mod time;
mod truth;

pub use band::{Apodisation, AxisSteps, Band, Channel, Quantity};
pub use channels::{NoChannel, channel_near, channels_between};
pub use cube::{Cube, Presence};
pub use decoder::Decoder;
pub use error::GranuleError;
pub use footprint_variables::{FlagMeaning, FootprintVariable, VariableRole};
pub use footprints::FootprintGrid;
pub use geolocation::{Geolocation, GeolocationSource, Origin};
pub use granule_file::Granule;
pub use identity::Identity;
pub use layout_file::{ApodiseBy, BandEntry, LayoutFile, LayoutOrigin};
pub use layout_text::layout_text;
pub use lent::{Calculated, Join, Lender, LenderPattern, Within};
pub use noise::Noise;
pub use opening::Opening;
pub use problem::{Problem, ProblemKind};
pub use reading::Progress;
pub use time::{TimeScale, TimeUnit};

#[cfg(test)]
mod filling_tests;
#[cfg(test)]
mod found_tests;
#[cfg(test)]
mod layout_tests;
#[cfg(test)]
mod memory_tests;
#[cfg(test)]
mod tests;
