//! How far apart footprints lie, along the scan lines and across them.
//!
//! Towards the ends of a scan line footprints lie up to three times as far apart along the line as
//! from line to line, so one spacing for both directions would leave a neighbourhood of one line.

use crate::granule::globe::{Vector, cross, dot, mean, minus, times};

/// Steps shorter than this fraction of the earth's radius (about 6 m) are no steps: several
/// footprints were given one position.
const SHORTEST: f64 = 1e-6;

/// The steps from a footprint to the next in two directions.
#[derive(Debug, Clone, Copy)]
pub struct Steps {
    line: Vector,
    position: Vector,
    /// The inverse of the matrix of the steps' scalar products.
    inverse: [f64; 3],
}

impl Steps {
    /// `None` where the steps are too short or run in one direction.
    fn new(line: Vector, position: Vector) -> Option<Self> {
        let (ll, lp, pp) = (dot(line, line), dot(line, position), dot(position, position));
        let determinant = ll * pp - lp * lp;
        let long_enough = ll.min(pp) > SHORTEST * SHORTEST;
        // The sine of the angle between the steps must exceed 0.1.
        (long_enough && determinant > 0.01 * ll * pp).then(|| Self {
            line,
            position,
            inverse: [pp / determinant, -lp / determinant, ll / determinant],
        })
    }

    /// The square of a distance on the ground in local spacings.
    pub fn squared_distance(&self, offset: Vector) -> f64 {
        let (l, p) = (dot(self.line, offset), dot(self.position, offset));
        let lines = self.inverse[0] * l + self.inverse[1] * p;
        let positions = self.inverse[1] * l + self.inverse[2] * p;
        lines * lines + positions * positions
    }

    /// No offset longer than this is nearer than one spacing.
    pub fn longest(&self) -> f64 {
        (dot(self.line, self.line) + dot(self.position, self.position)).sqrt()
    }
}

/// The steps at every line and position, from the differences between the middles of the
/// detectors there. Detectors stand closer together by the square root of their number.
pub fn steps(lines: usize, positions: usize, points: &[Option<Vector>]) -> Vec<Option<Steps>> {
    let places = lines * positions;
    if places == 0 {
        return Vec::new();
    }
    let detectors = points.len() / places;
    let middles: Vec<Option<Vector>> = points.chunks(detectors).map(mean).collect();
    let closer = 1.0 / (detectors as f64).sqrt();
    (0..places)
        .map(|place| {
            let (line, position) = (place / positions, place % positions);
            let along = step(&middles, place, line, lines, positions);
            let across = step(&middles, place, position, positions, 1);
            let (along, across) = match (along, across) {
                (Some(along), Some(across)) => (along, across),
                // A single line, or a single position: equally far to the side.
                (Some(along), None) if positions == 1 => (along, aside(along, middles[place]?)),
                (None, Some(across)) if lines == 1 => (aside(across, middles[place]?), across),
                _ => return None,
            };
            Steps::new(times(closer, along), times(closer, across))
        })
        .collect()
}

/// The mean step at `place`, which is the `at`-th of `count` that stand `stride` apart.
fn step(
    middles: &[Option<Vector>],
    place: usize,
    at: usize,
    count: usize,
    stride: usize,
) -> Option<Vector> {
    let here = middles[place];
    let before = if at > 0 { middles[place - stride] } else { None };
    let after = if at + 1 < count { middles[place + stride] } else { None };
    match (before, here, after) {
        (Some(before), _, Some(after)) => Some(times(0.5, minus(after, before))),
        (None, Some(here), Some(after)) => Some(minus(after, here)),
        (Some(before), Some(here), None) => Some(minus(here, before)),
        _ => None,
    }
}

/// A step of the same length at a right angle, along the ground.
fn aside(step: Vector, place: Vector) -> Vector {
    cross(times(1.0 / dot(place, place).sqrt(), place), step)
}
