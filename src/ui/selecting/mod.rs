//! The footprints that the next decision is about: what is selected, what is being drawn, and how
//! the two go together.

mod condition;
mod grow;
mod polygon;
mod kept;
mod shape;
mod wanted;

pub use condition::{Found, where_holds};
pub use grow::connected;
pub use kept::{Join, Selecting};
pub use polygon::is_inside;
pub use shape::Shape;
pub use wanted::{Says, Wanted};
