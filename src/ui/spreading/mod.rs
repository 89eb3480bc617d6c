//! What the Spread is about, and a threshold tried on it.

mod acting;
mod alike;
mod reach;
mod spread;
mod trial;

pub use acting::{
    act, adopt, adopted, against, against_found, ask_to_adopt, click, step, take_test,
};
pub use alike::{ask, found, give_up};
pub use reach::{Known, compared, say_in_tray, switch};
pub use spread::{Against, Alike, Reach, Source, Spread};
