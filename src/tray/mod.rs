//! Many granules: their order and states.
//!
//! Uses: `system`, `netcdf_files`, `granule`, `flags`, `review`.
//!
//! **Never** draws.
