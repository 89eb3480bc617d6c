//! `export` from outside.
