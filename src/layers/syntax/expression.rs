//! An expression: its text and its tree.

use std::fmt;

use super::grammar;
use super::mistake::Mistake;
use super::tree::{Judgement, Kind, Node};

/// A layer expression that has been read without mistakes.
#[derive(Debug, Clone)]
pub struct Expression {
    text: String,
    tree: Node,
}

impl Expression {
    /// Reads an expression.
    pub fn parse(text: &str) -> Result<Self, ExpressionError> {
        match grammar::parse(text) {
            Ok(tree) => Ok(Self { text: text.to_owned(), tree }),
            Err(mistake) => Err(ExpressionError { text: text.to_owned(), mistake }),
        }
    }

    /// The text exactly as typed.
    pub fn text(&self) -> &str {
        &self.text
    }

    /// The tree.
    pub fn tree(&self) -> &Node {
        &self.tree
    }

    /// Whether it asks what screening tests said.
    pub fn asks_tests(&self) -> bool {
        !self.judgements().is_empty()
    }

    /// What it asks of screening tests, and of which flag or test, in the order of the text.
    pub fn judgements(&self) -> Vec<(Judgement, Option<&str>)> {
        let mut judgements = Vec::new();
        self.tree().visit(&mut |node| {
            if let Kind::Judged(judgement, of) = &node.kind {
                judgements.push((*judgement, of.as_deref()));
            }
        });
        judgements
    }

    /// The bare names in it, in the order of the text, each once.
    pub fn names(&self) -> Vec<&str> {
        let mut names = Vec::new();
        self.tree.visit(&mut |node| {
            if let Kind::Name(name) = &node.kind
                && !names.contains(&name.as_str())
            {
                names.push(name.as_str());
            }
        });
        names
    }
}

/// Expressions are equal when they mean the same, however they are spaced.
impl PartialEq for Expression {
    fn eq(&self, other: &Self) -> bool {
        self.tree == other.tree
    }
}

/// The expression in its plain form: one way to write each meaning.
impl fmt::Display for Expression {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        self.tree.fmt(out)
    }
}

/// A text that is no expression. Shown as a sentence, then the text with carets under the place.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct ExpressionError {
    text: String,
    mistake: Mistake,
}

impl ExpressionError {
    /// The text that was to be read.
    pub fn text(&self) -> &str {
        &self.text
    }

    /// What is wrong, and where.
    pub fn mistake(&self) -> &Mistake {
        &self.mistake
    }
}

impl fmt::Display for ExpressionError {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        self.mistake.show(&self.text, out)
    }
}

impl std::error::Error for ExpressionError {}
