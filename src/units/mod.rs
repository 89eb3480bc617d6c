//! Wavenumbers, temperatures and radiances with their units, and the unit strings of CF files.
//!
//! Uses: no other room.
//!
//! **Never** guesses a unit.
