//! One number per footprint: the expression grammar and its evaluation.
//!
//! Uses: `system`, `units`, `spectral`, `granule`.
//!
//! **Never** decides anything.

mod catalogue;
mod derived;
mod evaluation;
mod first_look;
mod granule_names;
mod indices;
mod kept;
mod names;
mod neighbours;
mod retrieval;
mod syntax;
mod unit;
mod whole_granule;

pub use catalogue::{Index, index, index_expression, indices_as_markdown};
pub use evaluation::{Layer, LayerError, channels_needed, evaluate, evaluate_all};
pub use first_look::{FIRST_LOOK, suggestions};
pub use granule_names::GranuleNames;
pub use indices::INDICES;
pub use kept::Kept;
pub use names::{Judgements, NameError, Names, Values};
pub use neighbours::Neighbours;
pub use retrieval::{Input, Retrieval, Retrieved};
pub use syntax::{
    DERIVED_NAMES, Expression, ExpressionError, FRIENDLY_NAMES, FriendlyName, Judgement, Mistake,
    functions,
};
pub use unit::LayerUnit;

#[cfg(test)]
pub(crate) use evaluation::FakeNames;
#[cfg(test)]
pub(crate) use neighbours::neighbourhood_spread;
