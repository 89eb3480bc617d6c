//! CF flag masks and footprint lists, with their provenance.
//!
//! Uses: `system`, `units`, `spectral`, `netcdf_files`, `granule`, `flags`.
//!
//! **Never** asks why.

mod attributes;
mod channel_axes;
mod exporter;
mod mask;
mod mask_layout;
#[cfg(test)]
mod mask_tests;
mod mask_values;
mod of_granule;
mod provenance;
mod source;
mod target;
mod usable_list;

pub use attributes::CAUTIONS;
pub use exporter::{Exported, Exporter, Form, NotExported};
pub use mask::{ExportError, write_mask};
pub use of_granule::granule_identity;
pub use provenance::{Provenance, Record};
pub use source::{MaskBand, MaskSource};
pub use target::{Chosen, NoTarget, Owner, Targets, mask_owner};
pub use usable_list::{list_owner, write_usable_list};
