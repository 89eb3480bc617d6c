//! One granule on the table: open, look, decide, withdraw, sign off.
//!
//! Uses: `system`, `units`, `spectral`, `netcdf_files`, `granule`, `layers`, `flags`, `export`.
//!
//! **Never** draws or prints.
