//! A selection in the making.

use crate::flags::FootprintSet;
use crate::ui::bench::Bench;
use crate::ui::overlay::Selection;
use crate::ui::side::Side;

use super::is_inside;

/// What is being drawn or typed; it follows the cursor until it is kept.
#[derive(Debug, Clone, PartialEq)]
pub enum Shape {
    /// From this footprint to the cursor.
    Box(usize),
    /// Over these footprints and the cursor.
    Polygon(Vec<usize>),
    /// All on one side of a value of the layer.
    Side(Side),
}

impl Shape {
    /// The footprints, and what they are in words.
    pub fn selection(&self, bench: &Bench) -> Selection {
        match self {
            Shape::Box(anchor) => {
                let between = bench.placement.footprints_between(*anchor, bench.cursor);
                let footprints: FootprintSet = between.into_iter().collect();
                let words = format!("box of {}", footprints.len());
                Selection { footprints, words }
            }
            Shape::Polygon(corners) => polygon(bench, corners),
            Shape::Side(side) => bench.side_selection(*side),
        }
    }
}

fn polygon(bench: &Bench, corners: &[usize]) -> Selection {
    let place = |footprint| {
        let (column, row) = bench.placement.place_of(footprint)?;
        Some((column as f64, row as f64))
    };
    let all = corners.iter().copied().chain([bench.cursor]);
    let corners: Vec<(f64, f64)> = all.filter_map(place).collect();
    let is_in = |one: &usize| place(*one).is_some_and(|place| is_inside(&corners, place));
    let footprints: FootprintSet = (0..bench.footprints()).filter(is_in).collect();
    let words = format!("polygon of {}", footprints.len());
    Selection { footprints, words }
}
