//! The terminal.
//!
//! One thread owns the screen. Whatever happens arrives as an event; `update` changes the state and
//! names the jobs to be run; `draw` only reads.
//!
//! Uses: `system`, `units`, `spectral`, `netcdf_files`, `granule`, `layers`,
//! `screening`, `flags`, `review`, `tray`.
//!
//! **Never** computes physics.

mod across;
mod answers;
pub mod app;
pub mod bench;
mod by_rule;
mod bench_parts;
mod channel_flags;
mod channels;
pub mod colour;
pub mod command;
mod completion;
mod deciding;
mod doubting;
mod draw;
pub mod event;
mod exporting;
mod input;
mod job_answers;
pub mod jobs;
pub mod key;
mod keyboard;
#[cfg(test)]
mod key_tests;
#[cfg(test)]
mod lost_file_tests;
pub mod keymap;
pub mod keys;
#[cfg(test)]
mod keys_document;
mod ledger;
mod line;
mod looking;
mod moving;
mod overlay;
mod owed;
pub mod panes;
mod picking;
mod place;
mod precedents;
mod prompts;
mod run;
mod runner;
mod screening;
mod selecting;
mod shown_layer;
mod side;
mod signing;
mod signals;
#[cfg(test)]
mod snapshots;
mod spectrum_window;
mod spreading;
mod strip;
mod spot;
mod terminal;
mod trace_look;
mod tracing;
#[cfg(test)]
mod trial;
mod turning;
mod typed_path;
mod typing;
mod undoing;
mod update;
mod views;
pub mod widgets;
mod work;
mod work_across;

pub use app::{App, Outside};
pub use draw::draw;
pub use run::{Ended, run};
pub use terminal::is_usable;
pub use update::update;
