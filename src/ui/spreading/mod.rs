//! What the Spread is about, and a threshold tried on it.

mod acting;
mod alike;
mod spread;
mod trial;

pub use acting::{act, adopt, against, against_found, ask_to_adopt, click, step, take_test};
pub use alike::{ask, found, give_up, switch_growing};
pub use spread::{Against, Alike, Source, Spread};
