//! Which footprints lie beside which on the ground.

mod array;
mod ground;
mod kd_tree;
mod lists;
mod positions;
mod spacing;
mod statistics;

#[cfg(test)]
mod ground_tests;

pub use lists::Neighbours;
pub use statistics::{cluster, neighbourhood};
