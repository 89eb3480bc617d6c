//! The detectors of a cluster unfolded into a block, so that neighbours on the ground are
//! neighbours on the map as far as a grid allows.

/// Clusters of footprints that are seen at one scan position.
pub(super) struct Clusters {
    lines: usize,
    positions: usize,
    detectors: usize,
    /// Detectors across a block.
    across: usize,
    /// Detectors down a block.
    down: usize,
    /// For each position and detector its place in the block, counted row by row.
    slots: Vec<usize>,
}

/// A vector in space.
type Vector = [f64; 3];

impl Clusters {
    /// Decides where each detector lies in its block: by the mean over all scan lines of its
    /// displacement from the cluster's centre where latitude and longitude (degrees) are known,
    /// otherwise in the file's order. One arrangement per position holds for the whole granule, so
    /// that a scan line with bad coordinates does not break the picture.
    pub(super) fn new(
        lines: usize,
        positions: usize,
        detectors: usize,
        coordinates: Option<(&[f64], &[f64])>,
    ) -> Self {
        let across = ((detectors as f64).sqrt().ceil() as usize).max(1);
        let down = detectors.div_ceil(across);
        let mut clusters = Self { lines, positions, detectors, across, down, slots: Vec::new() };
        clusters.slots = clusters.arrange(coordinates);
        clusters
    }

    /// Columns and rows of the whole map.
    pub(super) fn size(&self) -> (usize, usize) {
        (self.positions * self.across, self.lines * self.down)
    }

    /// The place of each footprint in turn, counted row by row over the whole map.
    pub(super) fn places(&self) -> impl Iterator<Item = u32> + '_ {
        let width = self.positions * self.across;
        (0..self.lines * self.positions * self.detectors).map(move |footprint| {
            let detector = footprint % self.detectors;
            let position = footprint / self.detectors % self.positions;
            let line = footprint / self.detectors / self.positions;
            let slot = self.slots[position * self.detectors + detector];
            let row = line * self.down + slot / self.across;
            (row * width + position * self.across + slot % self.across) as u32
        })
    }

    fn arrange(&self, coordinates: Option<(&[f64], &[f64])>) -> Vec<usize> {
        let count = self.lines * self.positions * self.detectors;
        let ground = coordinates
            .filter(|(lat, lon)| lat.len() == count && lon.len() == count)
            .map(|(lat, lon)| Ground::new(self, lat, lon));
        let mut slots = Vec::with_capacity(self.positions * self.detectors);
        for position in 0..self.positions {
            match ground.as_ref().and_then(|ground| ground.displacements(self, position)) {
                Some(displacements) => slots.extend(self.block(&displacements)),
                None => slots.extend(0..self.detectors),
            }
        }
        slots
    }

    /// The slots of detectors by their displacement to the right and down: sorted downwards into
    /// rows, each row sorted to the right.
    fn block(&self, displacements: &[(f64, f64)]) -> Vec<usize> {
        let mut order: Vec<usize> = (0..self.detectors).collect();
        order.sort_by(|a, b| displacements[*a].1.total_cmp(&displacements[*b].1));
        let mut slots = vec![0; self.detectors];
        for (row, detectors) in order.chunks_mut(self.across).enumerate() {
            detectors.sort_by(|a, b| displacements[*a].0.total_cmp(&displacements[*b].0));
            for (column, detector) in detectors.iter().enumerate() {
                slots[*detector] = row * self.across + column;
            }
        }
        slots
    }
}

/// Where the footprints and the clusters' centres lie, as unit vectors from the Earth's centre.
struct Ground {
    footprints: Vec<Option<Vector>>,
    centres: Vec<Option<Vector>>,
}

impl Ground {
    fn new(clusters: &Clusters, latitude: &[f64], longitude: &[f64]) -> Self {
        let footprints: Vec<Option<Vector>> =
            latitude.iter().zip(longitude).map(|(lat, lon)| direction(*lat, *lon)).collect();
        let centres = footprints
            .chunks(clusters.detectors.max(1))
            .map(|cluster| {
                let known: Option<Vec<Vector>> = cluster.iter().copied().collect();
                unit(known?.iter().fold([0.0; 3], |sum, vector| add(sum, *vector, 1.0)))
            })
            .collect();
        Self { footprints, centres }
    }

    /// Mean displacement of each detector of a position, to the right (towards the next position)
    /// and down (towards the next scan line), over the scan lines where all of it is known.
    fn displacements(&self, clusters: &Clusters, position: usize) -> Option<Vec<(f64, f64)>> {
        let mut sums = vec![(0.0, 0.0); clusters.detectors];
        let mut lines = 0;
        for line in 0..clusters.lines {
            let Some((centre, right, down)) = self.frame(clusters, line, position) else {
                continue;
            };
            let first = (line * clusters.positions + position) * clusters.detectors;
            for (sum, footprint) in sums.iter_mut().zip(&self.footprints[first..]) {
                let offset = add((*footprint)?, centre, -1.0);
                sum.0 += dot(offset, right);
                sum.1 += dot(offset, down);
            }
            lines += 1;
        }
        (lines > 0).then_some(sums)
    }

    /// A cluster's centre with the map's directions there; two directions at right angles, the
    /// scan's own as far as neighbouring clusters tell it.
    fn frame(
        &self,
        clusters: &Clusters,
        line: usize,
        position: usize,
    ) -> Option<(Vector, Vector, Vector)> {
        let centre = (*self.centres.get(line * clusters.positions + position)?)?;
        let at = |line: usize, position: usize| -> Option<Vector> {
            if line >= clusters.lines || position >= clusters.positions {
                return None;
            }
            self.centres[line * clusters.positions + position]
        };
        let span = |before: Option<Vector>, after: Option<Vector>| {
            unit(add(after.unwrap_or(centre), before.unwrap_or(centre), -1.0))
        };
        let before = |index: usize| index.checked_sub(1);
        let right =
            span(before(position).and_then(|position| at(line, position)), at(line, position + 1))
                .and_then(|right| across(right, centre));
        let down = span(before(line).and_then(|line| at(line, position)), at(line + 1, position));
        match (right, down) {
            (Some(right), Some(down)) => {
                Some((centre, right, across(across(down, centre)?, right)?))
            }
            (Some(right), None) => Some((centre, right, cross(right, centre))),
            (None, Some(down)) => {
                let down = across(down, centre)?;
                Some((centre, cross(centre, down), down))
            }
            (None, None) => None,
        }
    }
}

/// The part of a vector at right angles to a unit vector, as a unit vector.
fn across(vector: Vector, axis: Vector) -> Option<Vector> {
    unit(add(vector, axis, -dot(vector, axis)))
}

fn direction(latitude: f64, longitude: f64) -> Option<Vector> {
    if !(latitude.abs() <= 90.0 && longitude.is_finite()) {
        return None;
    }
    let (lat, lon) = (latitude.to_radians(), longitude.to_radians());
    Some([lat.cos() * lon.cos(), lat.cos() * lon.sin(), lat.sin()])
}

fn add(a: Vector, b: Vector, times: f64) -> Vector {
    [a[0] + times * b[0], a[1] + times * b[1], a[2] + times * b[2]]
}

fn dot(a: Vector, b: Vector) -> f64 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}

fn cross(a: Vector, b: Vector) -> Vector {
    [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]]
}

/// A vector of length one, unless it is too short (under a metre on the Earth) to have a direction.
fn unit(vector: Vector) -> Option<Vector> {
    let length = dot(vector, vector).sqrt();
    (length > 1e-7).then(|| add([0.0; 3], vector, 1.0 / length))
}

#[cfg(test)]
mod tests {
    use crate::ui::panes::field::Placement;

    /// A small swath flown south along the meridian 10 E, seen from west to east, with the
    /// detectors of each 2x2 cluster stored in a scrambled order.
    #[test]
    fn detectors_are_placed_where_they_lie_on_the_ground() {
        let (lines, positions) = (3, 4);
        // South-east, north-west, south-west, north-east of the centre.
        let offsets = [(-0.05, 0.05), (0.05, -0.05), (-0.05, -0.05), (0.05, 0.05)];
        let mut latitude = Vec::new();
        let mut longitude = Vec::new();
        for line in 0..lines {
            for position in 0..positions {
                for (north, east) in offsets {
                    latitude.push(40.0 - 0.2 * f64::from(line) + north);
                    longitude.push(10.0 + 0.2 * f64::from(position) + east);
                }
            }
        }
        let map = Placement::unfold(&[3, 4, 4], Some((&latitude, &longitude)));
        let cluster: Vec<_> = (0..4).map(|detector| map.place_of(detector)).collect();
        assert_eq!(
            cluster,
            vec![Some((1, 1)), Some((0, 0)), Some((0, 1)), Some((1, 0))],
            "the map runs south and east as the scan does"
        );
        // A scan line without coordinates takes the arrangement of the others.
        latitude[..16].fill(f64::NAN);
        let patchy = Placement::unfold(&[3, 4, 4], Some((&latitude, &longitude)));
        assert_eq!(patchy, map);
    }

    #[test]
    fn a_swath_across_the_date_line_keeps_its_order() {
        let longitude: Vec<f64> = [179.7, 179.9, -179.9, -179.7]
            .iter()
            .flat_map(|lon| [*lon + 0.04, lon - 0.04])
            .collect();
        let latitude = vec![0.0; 8];
        let map = Placement::unfold(&[1, 4, 2], Some((&latitude, &longitude)));
        assert_eq!(map.place_of(2), Some((3, 0)));
        assert_eq!(map.place_of(3), Some((2, 0)));
    }
}
