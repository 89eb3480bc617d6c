//! `planck` from outside.
