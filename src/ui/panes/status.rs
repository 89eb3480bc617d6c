//! The status line (what happened, what is pending, the counts) and the line of hints below it.

use crate::ui::colour::Tone;

/// Everything the status line shows, from the left; what does not fit is left away from the end of
/// each side, the message last.
#[derive(Clone, Debug, Default)]
pub struct StatusView<'a> {
    /// What happened last.
    pub message: &'a str,
    /// How the message is to be taken.
    pub tone: Tone,
    /// Short facts at the right: counts, pending decisions, progress. The most important first.
    pub facts: &'a [(String, Tone)],
}

/// A key and what it does, for the line of hints.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Hint<'a> {
    /// The key as it is written on the screen.
    pub key: &'a str,
    /// What it does, in a word or two.
    pub does: &'a str,
}
