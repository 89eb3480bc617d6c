//! The terminal.
//!
//! Uses: `system`, `units`, `spectral`, `netcdf_files`, `granule`, `layers`, `flags`, `review`, `tray`.
//!
//! **Never** computes physics.

pub mod colour;
pub mod panes;
pub mod widgets;
