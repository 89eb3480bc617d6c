//! Lists of messages over the panes: problems found in a file, what happened so far.

use crate::ui::colour::Tone;

/// Everything a list of messages shows.
#[derive(Clone, Debug)]
pub struct MessagesView<'a> {
    /// The title, such as "Problems found in lowen.nc".
    pub title: &'a str,
    /// The messages, in order.
    pub rows: &'a [MessageRow],
    /// How many lines are scrolled away at the top; more than there are is the end.
    pub scroll: usize,
    /// What stands where there is no message.
    pub empty: &'a str,
}

/// One message.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct MessageRow {
    /// How it is to be taken.
    pub tone: Tone,
    /// What it says.
    pub text: String,
    /// What to do about it, or empty.
    pub advice: String,
}
