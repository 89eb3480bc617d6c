//! Small drawing helpers that several panes share.
//!
//! **Never** knows what a pane shows.

mod braille;
mod frame;
mod input;
mod number;
mod popup;
#[cfg(test)]
mod screen;
mod text;

pub(in crate::ui) use braille::Braille;
pub(in crate::ui) use frame::{Frame, draw_more};
pub(in crate::ui) use input::draw_input;
pub(in crate::ui) use number::{short, ticks};
pub(in crate::ui) use popup::Popup;
#[cfg(test)]
pub(in crate::ui) use screen::{Screen, THEME};
pub(in crate::ui) use text::{clip, cut, cut_front, first_shown, put, put_right, wrap};
