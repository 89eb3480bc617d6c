//! Start state, keys, expected.

mod across;
mod channel_flags;
mod by_rule;
mod deciding;
mod doubting;
mod leaving;
mod looking;
mod moving;
mod precedents;
mod program;
mod screening;
mod spot;
mod selecting;
mod spreading;
mod turning;
mod undoing;

use super::trial::{LINES, POSITIONS, Place, Trial};

const ALL: usize = LINES * POSITIONS;

fn one_granule() -> (Place, Trial) {
    let place = Place::with(&["lowen_001.nc"]);
    let trial = place.review(&["lowen_001.nc"]);
    (place, trial)
}

/// Bytes behind the end of a netCDF-4 file do not matter to the library.
fn append_byte(path: &std::path::Path) {
    use std::io::Write;
    let mut file = std::fs::OpenOptions::new().append(true).open(path).unwrap();
    file.write_all(&[0]).unwrap();
}
