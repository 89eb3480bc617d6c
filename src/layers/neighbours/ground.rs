//! Neighbours by distance on the ground, measured in local spacings.
//!
//! Source of the rule: spatial coherence tests take the valid footprints of a 3x3 box; detector
//! clusters turn along the scan and leave gaps, so the box is laid on the ground, not on the array.

use rayon::prelude::*;

use super::lists::MOST;
use super::spacing::{Steps, steps};
use crate::granule::globe::KdTree;
use crate::granule::globe::{Vector, minus, point};

/// Neighbours lie within this many local spacings: the corners of a 3x3 box lie at 1.41, the next
/// row at 2.
pub const REACH: f64 = 1.6;

/// Positions that are crowded beyond this are no scan; the footprint gets no neighbourhood.
const CROWD: usize = 1000;

/// The nearest nine of each footprint, itself among them. Ties go to the lower number.
pub fn lists(lengths: &[usize], latitudes: &[f64], longitudes: &[f64]) -> Vec<Vec<u32>> {
    let points: Vec<Option<Vector>> = latitudes
        .iter()
        .zip(longitudes)
        .map(|(latitude, longitude)| point(*latitude, *longitude))
        .collect();
    let lines = lengths.first().copied().unwrap_or(0);
    let positions = lengths.get(1).copied().unwrap_or(1);
    let steps = steps(lines, positions, &points);
    let detectors = points.len() / steps.len().max(1);
    let present = (0..).zip(&points).filter_map(|(number, point)| Some((number, (*point)?)));
    let tree = KdTree::new(present.collect());
    points
        .par_iter()
        .enumerate()
        .map(|(footprint, point)| {
            let steps = steps.get(footprint / detectors.max(1)).copied().flatten();
            point.zip(steps).map_or_else(Vec::new, |(point, steps)| around(&tree, point, &steps))
        })
        .collect()
}

fn around(tree: &KdTree, centre: Vector, steps: &Steps) -> Vec<u32> {
    let mut found: Vec<(f64, u32)> = Vec::new();
    let mut crowd = 0;
    tree.within(centre, REACH * steps.longest(), &mut |number, point| {
        crowd += 1;
        let distance = steps.squared_distance(minus(point, centre));
        if distance <= REACH * REACH {
            found.push((distance, number));
        }
        crowd < CROWD
    });
    if crowd >= CROWD {
        return Vec::new();
    }
    found.sort_by(|(one, a), (other, b)| one.total_cmp(other).then(a.cmp(b)));
    found.into_iter().take(MOST).map(|(_, number)| number).collect()
}
