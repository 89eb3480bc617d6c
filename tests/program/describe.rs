//! `describe` from outside.
