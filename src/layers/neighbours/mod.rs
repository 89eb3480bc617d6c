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

/// The standard deviation over each neighbourhood, for tests of what takes it as an input.
#[cfg(test)]
pub fn neighbourhood_spread(values: &[f64], neighbours: &Neighbours) -> Vec<f64> {
    neighbourhood(crate::layers::syntax::Statistic::StandardDeviation, values, neighbours)
}
