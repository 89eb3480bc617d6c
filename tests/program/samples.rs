//! `samples` from outside.
