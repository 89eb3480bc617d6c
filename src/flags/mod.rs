//! Flag vocabulary, decisions, the ledger files and their replay into the current flags.
//!
//! Uses: `system`.
//!
//! **Never** changes a written line.
