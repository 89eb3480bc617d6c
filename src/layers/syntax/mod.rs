//! The language: text to tree and back, with messages that point at the place.

mod expression;
mod grammar;
mod mistake;
mod pieces;
mod place;
mod print;
mod reading;
mod tree;
mod vocabulary;

#[cfg(test)]
mod grammar_tests;

pub use expression::{Expression, ExpressionError};
pub use mistake::Mistake;
pub use place::Place;
pub use tree::{
    Around, Function, Infix, Judgement, Kind, Node, OfCalculated, Prefix, Quantity, Span,
    Statistic, Where,
};
pub use vocabulary::{Callable, DERIVED_NAMES, FRIENDLY_NAMES, FriendlyName, functions, name_of};
