//! A selection in the making.

use std::collections::BTreeMap;

use crate::flags::FootprintSet;
use crate::ui::bench::Bench;
use crate::ui::overlay::Selection;
use crate::ui::side::Side;
use crate::ui::spreading::{Alike, Reach};

use super::{connected, is_inside};

/// What is being drawn or typed; it follows the cursor until it is kept.
#[derive(Debug, Clone, PartialEq)]
pub enum Shape {
    /// From this footprint to the cursor.
    Box(usize),
    /// Over these footprints and the cursor.
    Polygon(Vec<usize>),
    /// All on one side of a value of the layer.
    Side(Side),
    /// All beyond the threshold on the Spread.
    Threshold,
    /// From this value on the Spread to the place that the keys move.
    Range(f64),
    /// From this place on the picture of two layers to the one that the keys move.
    Rectangle((f64, f64)),
    /// Over these places on the picture of two layers and the one that the keys move.
    Region(Vec<(f64, f64)>),
}

impl Shape {
    /// The footprints, and what they are in words.
    pub fn selection(&self, bench: &Bench) -> Selection {
        match self {
            Shape::Box(anchor) => {
                let between = bench.placement.footprints_between(*anchor, bench.cursor);
                let footprints: FootprintSet = between.into_iter().collect();
                let words = format!("box of {}", footprints.len());
                Selection::of(footprints, words)
            }
            Shape::Polygon(corners) => polygon(bench, corners),
            Shape::Side(side) => bench.side_selection(*side),
            Shape::Threshold | Shape::Range(_) => on_one_layer(self, bench),
            Shape::Rectangle(from) => {
                let to = (bench.spread.x.unwrap_or(from.0), bench.spread.y.unwrap_or(from.1));
                let corners = [*from, (to.0, from.1), to, (from.0, to.1)];
                on_two_layers(bench, &corners)
            }
            Shape::Region(corners) => {
                let last = bench.spread.x.zip(bench.spread.y);
                let corners: Vec<(f64, f64)> = corners.iter().copied().chain(last).collect();
                on_two_layers(bench, &corners)
            }
        }
    }
}

/// The footprints beyond the threshold or in a range of the Spread's values.
fn on_one_layer(shape: &Shape, bench: &Bench) -> Selection {
    let values = bench.spread_values();
    let x = bench.spread.x.unwrap_or(f64::NAN);
    let is_in = |value: f64| match shape {
        Shape::Range(from) => from.min(x) <= value && value <= from.max(x),
        _ => bench.spread_sense().margin(value, x, 1.0) > 0.0,
    };
    let all = values.iter().enumerate();
    let footprints: FootprintSet =
        all.filter(|(_, value)| is_in(**value)).map(|(one, _)| one).collect();
    let footprints = match (bench.spread_alike(), shape) {
        (Some(alike), Shape::Threshold) if bench.spread.reach == Reach::Grown => {
            connected(&footprints, alike.footprint, &bench.order)
        }
        _ => footprints,
    };
    let (name, count) = (bench.spread_name(), footprints.len());
    let words = match shape {
        Shape::Range(from) => format!("{count} where {name} is {} to {}", from.min(x), from.max(x)),
        _ => format!("{count} where {name} {} {x}", bench.spread_sense().symbol()),
    };
    match (bench.spread_alike(), shape) {
        (Some(alike), Shape::Threshold) if bench.spread.reach == Reach::Tray => {
            in_tray(footprints, alike, x, bench)
        }
        _ => Selection::of(footprints, words),
    }
}

/// The footprints of all granules that lie on the side of `x` that is meant.
fn in_tray(footprints: FootprintSet, alike: &Alike, x: f64, bench: &Bench) -> Selection {
    let sense = bench.spread_sense();
    let meant = |values: &Vec<f64>| -> FootprintSet {
        let all = values.iter().enumerate();
        all.filter(|(_, value)| sense.margin(**value, x, 1.0) > 0.0).map(|(one, _)| one).collect()
    };
    let sets = alike.elsewhere.iter().map(|(entry, values)| (*entry, meant(values)));
    let elsewhere: BTreeMap<usize, FootprintSet> =
        sets.filter(|(_, set)| !set.is_empty()).collect();
    let granules = elsewhere.len() + usize::from(!footprints.is_empty());
    let mut selection = Selection { footprints, words: String::new(), elsewhere };
    let (count, name) = (selection.count(), bench.spread_name());
    selection.words = format!("{count} in {granules} granules where {name} {} {x}", sense.symbol());
    selection
}

/// The footprints whose two values lie in a polygon.
fn on_two_layers(bench: &Bench, corners: &[(f64, f64)]) -> Selection {
    let across = bench.spread_values();
    let upwards = bench.spread.against.as_ref().map_or(&[][..], |against| &against.values);
    let pairs = across.iter().copied().zip(upwards.iter().copied()).enumerate();
    let footprints: FootprintSet =
        pairs.filter(|(_, pair)| is_inside(corners, *pair)).map(|(one, _)| one).collect();
    let words = format!("{} on the Spread", footprints.len());
    Selection::of(footprints, words)
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
    Selection::of(footprints, words)
}
