//! Small drawing helpers that several panes share.
//!
//! **Never** knows what a pane shows.
