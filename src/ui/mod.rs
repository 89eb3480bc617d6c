//! The terminal.
//!
//! Uses: `system`, `units`, `spectral`, `netcdf_files`, `granule`, `layers`, `flags`, `review`, `tray`.
//!
//! **Never** computes physics.
