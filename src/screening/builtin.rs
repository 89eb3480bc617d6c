//! The rulebook that comes with the program.

use super::mistakes::RulebookError;
use super::rulebook::Rulebook;

/// Its text.
pub const BUILTIN_TEXT: &str = include_str!("builtin.toml");

/// The rulebook that is used where none is named.
///
/// # Errors
/// Never with an unchanged program; a test reads it.
pub fn builtin() -> Result<Rulebook, RulebookError> {
    Rulebook::parse(BUILTIN_TEXT, "built-in rulebook")
}
