//! The Evidence: what is known of the footprint under the cursor.

use crate::ui::colour::Tone;

/// Everything the Evidence shows.
#[derive(Clone, Debug)]
pub struct EvidenceView<'a> {
    /// What follows the pane's name in the title.
    pub title: &'a str,
    /// The rows, in order.
    pub rows: &'a [EvidenceRow],
    /// How many rows are scrolled away at the top.
    pub scroll: usize,
    /// Whether the keys go to this pane.
    pub focused: bool,
}

/// One line of the Evidence.
#[derive(Clone, Debug, PartialEq)]
pub enum EvidenceRow {
    /// Begins a section.
    Section(String),
    /// A value with its name.
    Fact {
        /// What it is, such as `bt(900)-bt(831)` or "latitude".
        label: String,
        /// The value in words; empty where there is none (the note then says why).
        value: String,
        /// Its unit, or empty.
        unit: String,
        /// What is to be said about it, or empty.
        note: String,
        /// How it is to be taken.
        tone: Tone,
    },
    /// Running text, wrapped.
    Words(String, Tone),
}
