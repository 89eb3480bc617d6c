//! Every call of the netCDF and HDF5 libraries, and the reader process they run in.
//!
//! Uses: `system`.
//!
//! **Never** knows what a radiance is.
