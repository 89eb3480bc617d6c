//! `spectrum` from outside.
