//! The Strip: a layer along scan lines, positions, detectors or granules, to see drifts, stripes
//! and steps.

mod draw;
mod view;

pub use draw::{draw, group_at};
pub use view::{Group, StripView};
