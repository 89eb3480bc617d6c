//! The terminal from outside: a pseudo-terminal, keys, expected screens.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic)]

#[path = "../program/hostile/hanging_granule.rs"]
mod hanging_granule;

mod budget;
mod care;
mod killed;
mod main_job;
mod memory;
mod panes;
mod terminal;

use std::path::{Path, PathBuf};

/// A sample granule, by the last word of its scene.
fn sample(scene: &str) -> PathBuf {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("sample_granules");
    folder.join(format!("synthetic_brindle_{scene}.nc"))
}
