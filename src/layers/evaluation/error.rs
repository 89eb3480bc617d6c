//! Why an expression has no numbers in a granule.

use std::fmt;

use crate::layers::names::NameError;
use crate::layers::syntax::{Mistake, Span};
use crate::system::{clean_text, near_names};

/// An expression that is well written but has no numbers here. Shown as a sentence, then the text
/// with carets under the place.
#[derive(Debug, Clone, PartialEq)]
pub struct LayerError {
    text: String,
    mistake: Mistake,
    cause: Cause,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Cause {
    /// This file does not have it.
    File,
    /// The name means nothing.
    UnknownName,
    /// The definitions are at fault.
    Definition,
}

impl LayerError {
    /// A name or place at `span` that has no numbers.
    pub fn of_name(text: &str, span: &Span, error: &NameError) -> Self {
        let what = error.to_string();
        let (mistake, cause) = match error {
            NameError::Unknown { name, known } => {
                (among(span, what, name, known), Cause::UnknownName)
            }
            NameError::NoVariable { name, known } => (among(span, what, name, known), Cause::File),
            _ => (Mistake::new(span.clone(), what, ""), Cause::File),
        };
        Self { text: text.to_owned(), mistake, cause }
    }

    /// A name at `span` whose definition leads back to itself.
    pub fn circular(text: &str, span: &Span, name: &str) -> Self {
        let what = format!("the definition of {name} leads back to {name}");
        let mistake = Mistake::new(span.clone(), what, "a definition by other names");
        Self { text: text.to_owned(), mistake, cause: Cause::Definition }
    }

    /// The text of the expression, or of the definition, in which the place lies.
    pub fn text(&self) -> &str {
        &self.text
    }

    /// What is missing, and where it is asked for.
    pub fn mistake(&self) -> &Mistake {
        &self.mistake
    }

    /// Whether the expression itself is at fault, and would be with any file of this shape: it uses
    /// a name that means nothing.
    pub fn is_unknown_name(&self) -> bool {
        self.cause == Cause::UnknownName
    }
}

/// A name that is none of those known: the nearest are offered, or some where none is near.
fn among(span: &Span, what: String, name: &str, known: &[String]) -> Mistake {
    let near = near_names(name, known.iter().map(String::as_str));
    let expected = if near.is_empty() { some_of(known) } else { String::new() };
    Mistake::new(span.clone(), what, clean_text(&expected))
        .near(near.iter().map(|name| clean_text(name)).collect())
}

/// As many names as fit a message.
fn some_of(known: &[String]) -> String {
    const SHOWN: usize = 12;
    let more = if known.len() > SHOWN { ", …" } else { "" };
    known.iter().take(SHOWN).cloned().collect::<Vec<_>>().join(", ") + more
}

impl fmt::Display for LayerError {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        self.mistake.show(&self.text, out)
    }
}

impl std::error::Error for LayerError {}
