//! From expressions and names to numbers.

mod definitions;
mod error;
mod evaluate;
mod gather;
mod layer;
mod leaves;
mod plan;
mod plan_ends;
mod program;

#[cfg(test)]
mod evaluate_tests;
#[cfg(test)]
mod fake_names;

pub use error::LayerError;
pub use evaluate::{channels_needed, evaluate, evaluate_all};
pub use layer::Layer;

#[cfg(test)]
pub use fake_names::FakeNames;
