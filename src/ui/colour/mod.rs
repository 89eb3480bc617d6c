//! Colours: how many the terminal has, the maps of the Field, and what each tone of text looks like.
//!
//! Settings and environment variables are passed in.
//!
//! **Never** carries a meaning alone: whatever a colour says, a glyph or a word says too.

mod depth;
mod indexed;
mod palette;
mod scale;
mod tables;
mod theme;

pub use depth::{ColourDepth, ColourRequest, ColourSettings};
pub use palette::Palette;
pub use scale::Scale;
pub use tables::LEVELS;
pub use theme::{Background, Theme, Tone};
