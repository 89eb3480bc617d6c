//! The Spread: how the values of a layer lie, or two layers against each other.

mod density;
mod draw;
mod heaps;
mod view;

pub use draw::{draw, value_at};
pub use view::{Density, Heaps, Kind, Picture, SpreadView};
