//! The Field: the footprint map of the granule in hand, coloured by a layer.

mod clusters;
mod draw;
mod geographic;
mod graticule;
mod geometry;
mod legend;
mod marks;
mod pixels;
mod placement;
mod view;

pub use draw::{draw, geometry};
pub use geometry::Geometry;
pub use placement::{Graticule, Placement};
pub use view::{FieldView, FlagSign, Pin};
