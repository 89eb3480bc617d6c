//! One number per footprint: the expression grammar and its evaluation.
//!
//! Uses: `system`, `units`, `spectral`, `granule`.
//!
//! **Never** decides anything.
