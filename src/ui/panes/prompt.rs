//! Questions over the panes: which flag, why, yes or no.

/// A question.
#[derive(Clone, Debug)]
pub enum PromptView<'a> {
    /// Which flag to give or withdraw.
    Flags {
        /// What is going to be flagged: "Flag 128 footprints as".
        title: &'a str,
        /// The flags to choose from.
        choices: &'a [FlagChoice],
        /// The choice under the cursor.
        cursor: usize,
    },
    /// A line of text.
    Text {
        /// What is asked.
        title: &'a str,
        /// What was typed.
        text: &'a str,
        /// Where the cursor stands, in bytes of `text`.
        cursor: usize,
        /// What may be said or left out: "Enter without words gives no reason".
        hint: &'a str,
    },
    /// Yes or no.
    YesNo {
        /// The question.
        title: &'a str,
        /// What has to be known to answer it, a line each.
        lines: &'a [String],
    },
}

/// One flag to choose.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct FlagChoice {
    /// The key that chooses it at once.
    pub key: char,
    /// Its sign on the map.
    pub glyph: char,
    /// Its colour, as a number into [`crate::ui::colour::Theme::flag_tint`].
    pub tint: u8,
    /// Its name in the vocabulary.
    pub name: String,
    /// What it means.
    pub meaning: String,
}
