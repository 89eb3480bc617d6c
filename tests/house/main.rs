//! House rules: who uses whom, what belongs where, documents in step with the code.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic)]

mod documents;
mod rooms;
mod source;
