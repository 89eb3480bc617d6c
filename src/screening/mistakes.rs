//! What is wrong with a rulebook, and where.

use std::fmt;

/// One mistake.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct RuleMistake {
    /// Line of the file, from 1.
    pub line: usize,
    /// The way to the key, as in `tests "T01", threshold`; may be empty.
    pub key: String,
    /// What is wrong; may have lines that point into an expression.
    pub what: String,
}

/// All that is wrong with a rulebook.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct RulebookError {
    /// The file, or what else the text came from.
    pub file: String,
    /// At least one, in the order of the lines.
    pub mistakes: Vec<RuleMistake>,
}

impl fmt::Display for RulebookError {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        for (place, mistake) in self.mistakes.iter().enumerate() {
            let RuleMistake { line, key, what } = mistake;
            let (end, colon) =
                (if place > 0 { "\n" } else { "" }, if key.is_empty() { "" } else { ": " });
            write!(out, "{end}{}:{line}: {key}{colon}{what}", self.file)?;
        }
        Ok(())
    }
}

impl std::error::Error for RulebookError {}
