//! Many granules: their order and states.
//!
//! Uses: `system`, `netcdf_files`, `granule`, `flags`, `review`.
//!
//! **Never** draws.

mod entry;
mod list;

pub use entry::{Entry, Standing};
pub use list::Tray;
