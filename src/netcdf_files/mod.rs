//! Every call of the netCDF and HDF5 libraries, and the reader process they run in.
//!
//! Uses: `system`.
//!
//! **Never** knows what a radiance is.

#[cfg(any(test, fuzzing))]
pub mod any_bytes;
mod attribute;
mod block;
mod chunks;
mod confine;
mod door;
mod index;
mod library_file;
mod library_types;
mod link;
mod messages;
mod pipe;
mod read_error;
mod reader;
mod reader_program;
mod samples;
mod serve;
mod storage;
mod turns;
mod writer;

pub use attribute::{Attribute, AttributeValue};
pub use chunks::{AtWork, Demand};
pub use confine::confine;
pub use index::{Dimension, FileIndex, Group, Storage, Variable};
pub use read_error::ReadError;
pub use read_error::ReadFault;
pub use reader::FileReader;
pub use reader_program::{ReadLimits, ReaderProgram};
pub(crate) use samples::with_values;
pub use samples::{Samples, ValueKind};
pub use serve::serve;
pub use writer::{FileFormat, NetcdfWriter, VariableDraft, WriterError};
