//! Many granules: their order and states.
//!
//! Uses: `system`, `netcdf_files`, `granule`, `flags`, `review`.
//!
//! **Never** draws.

mod by_rule;
mod entry;
mod list;

pub use by_rule::{Offer, reason};
pub use entry::{Entry, Standing};
pub use list::Tray;
