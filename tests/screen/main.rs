//! The terminal from outside: a pseudo-terminal, keys, expected screens.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic)]

mod terminal;
