//! What one input file holds: which variable is what, and the cube of radiances.
//!
//! Uses: `system`, `units`, `spectral`, `netcdf_files`.
//!
//! **Never** judges the data.
