//! The panes and what is laid over them. Each is drawn from plain view data by a function
//! `draw(&view, &theme, area, buffer)`, so that it can be tested without a granule.
//!
//! **Never** reads a file, keeps state or changes what it draws from.

pub mod command;
pub mod evidence;
pub mod field;
pub mod help;
pub mod ledger;
pub mod margin_bar;
pub mod messages;
pub mod prompt;
pub mod spread;
pub mod status;
pub mod strip;
pub mod trace;
pub mod tray;

#[cfg(test)]
mod any_size;
mod arrangement;
mod layout;
mod pane;

pub use arrangement::Arrangement;
pub use layout::{SMALLEST, ScreenLayout, draw_too_small};
pub use pane::Pane;
