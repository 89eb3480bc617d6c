//! What is missing, guessed or odd in a file: told to the user, never a failure.

use std::fmt;

use crate::system::clean_text;

/// What sort of problem it is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum ProblemKind {
    /// Something useful is not in the file.
    Missing,
    /// The file does not say it outright; what was taken may be wrong.
    Guess,
    /// Something is odd, and how it was treated.
    Note,
    /// What the user asked for could not be done.
    Refused,
}

impl ProblemKind {
    /// One word for lists.
    pub fn label(self) -> &'static str {
        match self {
            Self::Missing => "missing",
            Self::Guess => "guess",
            Self::Note => "note",
            Self::Refused => "not done",
        }
    }
}

/// One problem of a file. All its text is safe to show.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Problem {
    /// What sort it is.
    pub kind: ProblemKind,
    /// What is wrong, or what was guessed.
    pub what: String,
    /// The variable, attribute or place it concerns; may be empty.
    pub where_: String,
    /// What follows from it, or what to do.
    pub advice: String,
}

impl Problem {
    fn new(kind: ProblemKind, what: &str, where_: &str, advice: &str) -> Self {
        Self {
            kind,
            what: clean_text(what),
            where_: clean_text(where_),
            advice: clean_text(advice),
        }
    }

    /// Something useful is not in the file.
    pub fn missing(what: &str, where_: &str, advice: &str) -> Self {
        Self::new(ProblemKind::Missing, what, where_, advice)
    }

    /// Something was taken that the file does not say outright.
    pub fn guess(what: &str, where_: &str, advice: &str) -> Self {
        Self::new(ProblemKind::Guess, what, where_, advice)
    }

    /// Something is odd.
    pub fn note(what: &str, where_: &str, advice: &str) -> Self {
        Self::new(ProblemKind::Note, what, where_, advice)
    }
}

impl Problem {
    /// What the user asked for could not be done with this file.
    pub fn refused(what: &str, where_: &str, advice: &str) -> Self {
        Self::new(ProblemKind::Refused, what, where_, advice)
    }
}

impl fmt::Display for Problem {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(formatter, "{}: {}", self.kind.label(), self.what)?;
        if !self.where_.is_empty() {
            write!(formatter, " ({})", self.where_)?;
        }
        if !self.advice.is_empty() {
            write!(formatter, "; {}", self.advice)?;
        }
        Ok(())
    }
}
