//! The Field: the footprint map of the granule in hand, coloured by a layer.

mod clusters;
mod placement;
mod view;

pub use placement::Placement;
pub use view::{FieldView, FlagSign, Pin};
