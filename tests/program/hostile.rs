//! `hostile` from outside.
