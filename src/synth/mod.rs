//! Synthetic granules with their truth: scenes, noise and defects on top of `forward`.
//!
//! Uses: `system`, `units`, `spectral`, `netcdf_files`, `forward`.
//!
//! **Never** is used by what it tests.
