//! The terminal.
//!
//! One thread owns the screen. Whatever happens arrives as an event; `update` changes the state and
//! names the jobs to be run; `draw` only reads.
//!
//! Uses: `system`, `units`, `spectral`, `netcdf_files`, `granule`, `layers`, `flags`, `review`, `tray`.
//!
//! **Never** computes physics.

pub mod colour;
pub mod command;
pub mod event;
pub mod input;
pub mod key;
mod keyboard;
pub mod keys;
#[cfg(test)]
mod keys_document;
pub mod line;
pub mod panes;
mod signals;
pub mod terminal;
pub mod widgets;
