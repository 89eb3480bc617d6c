//! House rules: who uses whom, one table per fact, documents in step.
