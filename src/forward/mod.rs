//! The forward model: absorption, atmospheres, surfaces, clouds, instrument response.
//!
//! Uses: `units`, `spectral`.
//!
//! **Never** is truth for its own tests.
