//! Which footprints lie beside which on the ground.

mod array;
mod ground;
mod lists;
mod spacing;
mod statistics;

#[cfg(test)]
mod ground_tests;

pub use lists::Neighbours;
pub use statistics::{cluster, neighbourhood};
