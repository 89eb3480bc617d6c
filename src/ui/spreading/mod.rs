//! What the Spread is about, and a threshold tried on it.

mod acting;
mod spread;
mod trial;

pub use acting::{act, adopt, against, against_found, ask_to_adopt, click, step, take_test};
pub use spread::{Against, Source, Spread};
