//! Every call of the netCDF and HDF5 libraries, and the reader process they run in.
//!
//! Uses: `system`.
//!
//! **Never** knows what a radiance is.

mod attribute;
mod library_types;
mod samples;
mod writer;

pub use attribute::{Attribute, AttributeValue};
pub use samples::{Samples, ValueKind};
pub use writer::{FileFormat, NetcdfWriter, VariableDraft, WriterError};
