//! One number per footprint: the expression grammar and its evaluation.
//!
//! Uses: `system`, `units`, `spectral`, `granule`.
//!
//! **Never** decides anything.

mod neighbours;
mod syntax;
mod unit;

pub use neighbours::Neighbours;
pub use syntax::{
    Expression, ExpressionError, FRIENDLY_NAMES, FriendlyName, Mistake, functions, near_names,
};
pub use unit::LayerUnit;
