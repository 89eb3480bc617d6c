//! CF flag masks and footprint lists, with their provenance.
//!
//! Uses: `system`, `units`, `spectral`, `netcdf_files`, `granule`, `flags`.
//!
//! **Never** asks why.
