//! The command line and its completions.

/// Everything the command line shows.
#[derive(Clone, Debug)]
pub struct CommandView<'a> {
    /// What stands before the text: ":" as a rule.
    pub lead: &'a str,
    /// What was typed.
    pub text: &'a str,
    /// Where the cursor stands, in bytes of `text`.
    pub cursor: usize,
    /// What the text could become.
    pub completions: &'a [Completion],
    /// The completion in hand.
    pub chosen: Option<usize>,
    /// What is wrong with the text, or empty.
    pub problem: &'a str,
}

/// One thing the text could become.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Completion {
    /// The text.
    pub text: String,
    /// What it means, in a few words.
    pub help: String,
}
