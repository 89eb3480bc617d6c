//! What every program needs of the machine: whole-file writes, cancellation, limits, clean text.
//!
//! Uses: no other room.
//!
//! **Never** knows what a granule is.
