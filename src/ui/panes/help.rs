//! The help: every key and what it does, over the panes.

/// Everything the help shows.
#[derive(Clone, Debug)]
pub struct HelpView<'a> {
    /// The title, such as "Keys of the Field".
    pub title: &'a str,
    /// The groups, in order.
    pub groups: &'a [HelpGroup],
    /// How many lines are scrolled away at the top; more than there are is the end.
    pub scroll: usize,
}

/// Keys that belong together.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct HelpGroup {
    /// What they have in common.
    pub title: String,
    /// Keys and what they do.
    pub rows: Vec<(String, String)>,
}
