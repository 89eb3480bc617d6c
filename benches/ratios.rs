//! Ratios measured in one run: each fast path against the plain one it replaces.
fn main() {}
