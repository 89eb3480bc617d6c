//! Points within a distance: a k-d tree that lies in one array.

use super::positions::{Vector, dot, minus};

/// Ranges of this size are looked through one by one.
const LEAF: usize = 8;

/// Points sorted so that each range's middle element divides it along the axis noted for it.
pub struct KdTree {
    points: Vec<(u32, Vector)>,
    axes: Vec<u8>,
}

impl KdTree {
    /// A tree of points with their numbers; O(n log n).
    pub fn new(mut points: Vec<(u32, Vector)>) -> Self {
        let mut axes = vec![0; points.len()];
        arrange(&mut points, &mut axes);
        Self { points, axes }
    }

    /// Hands over the points within `radius` of `centre`, in no particular order, until `look`
    /// returns false.
    pub fn within(&self, centre: Vector, radius: f64, look: &mut dyn FnMut(u32, Vector) -> bool) {
        search(&self.points, &self.axes, centre, radius, look);
    }

    /// The nearest point within `radius` of `centre` that is accepted; of several as near, the one
    /// with the lowest number.
    pub fn nearest(
        &self,
        centre: Vector,
        radius: f64,
        accepts: &dyn Fn(u32) -> bool,
    ) -> Option<u32> {
        let mut best = Best { squared: radius * radius, number: None };
        approach(&self.points, &self.axes, centre, accepts, &mut best);
        best.number
    }
}

/// The nearest point so far, or the distance within which one is looked for.
struct Best {
    squared: f64,
    number: Option<u32>,
}

impl Best {
    fn offer(
        &mut self,
        (number, point): (u32, Vector),
        centre: Vector,
        accepts: &dyn Fn(u32) -> bool,
    ) {
        let offset = minus(point, centre);
        let squared = dot(offset, offset);
        let nearer = match self.number {
            None => squared <= self.squared,
            Some(best) => squared < self.squared || (squared == self.squared && number < best),
        };
        if nearer && accepts(number) {
            *self = Self { squared, number: Some(number) };
        }
    }
}

/// Goes first into the half in which the centre lies, and into the other only where it may hold
/// something nearer.
fn approach(
    points: &[(u32, Vector)],
    axes: &[u8],
    centre: Vector,
    accepts: &dyn Fn(u32) -> bool,
    best: &mut Best,
) {
    if points.len() <= LEAF {
        points.iter().for_each(|point| best.offer(*point, centre, accepts));
        return;
    }
    let middle = points.len() / 2;
    let axis = usize::from(axes[middle]);
    let beyond = centre[axis] - points[middle].1[axis];
    let low = (&points[..middle], &axes[..middle]);
    let high = (&points[middle + 1..], &axes[middle + 1..]);
    let (first, second) = if beyond < 0.0 { (low, high) } else { (high, low) };
    approach(first.0, first.1, centre, accepts, best);
    best.offer(points[middle], centre, accepts);
    if beyond * beyond <= best.squared {
        approach(second.0, second.1, centre, accepts, best);
    }
}

/// The axis along which the points are spread most.
fn widest_axis(points: &[(u32, Vector)]) -> u8 {
    let spread = |axis: usize| {
        let (low, high) = points.iter().fold((f64::MAX, f64::MIN), |(low, high), (_, point)| {
            (low.min(point[axis]), high.max(point[axis]))
        });
        high - low
    };
    let spreads = [spread(0), spread(1), spread(2)];
    if spreads[0] >= spreads[1] && spreads[0] >= spreads[2] {
        0
    } else if spreads[1] >= spreads[2] {
        1
    } else {
        2
    }
}

fn arrange(points: &mut [(u32, Vector)], axes: &mut [u8]) {
    if points.len() <= LEAF {
        return;
    }
    let axis = widest_axis(points);
    let middle = points.len() / 2;
    points.select_nth_unstable_by(middle, |(one, a), (other, b)| {
        a[usize::from(axis)].total_cmp(&b[usize::from(axis)]).then(one.cmp(other))
    });
    axes[middle] = axis;
    let (low, high) = points.split_at_mut(middle);
    let (low_axes, high_axes) = axes.split_at_mut(middle);
    arrange(low, low_axes);
    arrange(&mut high[1..], &mut high_axes[1..]);
}

/// False when `look` has had enough.
fn search(
    points: &[(u32, Vector)],
    axes: &[u8],
    centre: Vector,
    radius: f64,
    look: &mut dyn FnMut(u32, Vector) -> bool,
) -> bool {
    if points.len() <= LEAF {
        return points.iter().all(|point| offer(*point, centre, radius, look));
    }
    let middle = points.len() / 2;
    let axis = usize::from(axes[middle]);
    let beyond = centre[axis] - points[middle].1[axis];
    offer(points[middle], centre, radius, look)
        && (beyond > radius || search(&points[..middle], &axes[..middle], centre, radius, look))
        && (beyond < -radius
            || search(&points[middle + 1..], &axes[middle + 1..], centre, radius, look))
}

fn offer(
    (number, point): (u32, Vector),
    centre: Vector,
    radius: f64,
    look: &mut dyn FnMut(u32, Vector) -> bool,
) -> bool {
    let offset = minus(point, centre);
    dot(offset, offset) > radius * radius || look(number, point)
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn coordinate() -> impl Strategy<Value = f64> {
        // Few distinct values, so that many points share coordinates.
        prop_oneof![(-3i32..=3).prop_map(|step| f64::from(step) * 0.25), -1.0f64..1.0]
    }

    proptest! {
        #[test]
        fn finds_what_a_look_at_every_point_finds(
            points in prop::collection::vec([coordinate(), coordinate(), coordinate()], 0..300),
            centre in [coordinate(), coordinate(), coordinate()],
            radius in 0.0f64..1.0,
        ) {
            let numbered: Vec<(u32, Vector)> = (0..).zip(points).collect();
            let mut expected: Vec<u32> = numbered
                .iter()
                .filter(|(_, point)| {
                    let offset = minus(*point, centre);
                    dot(offset, offset) <= radius * radius
                })
                .map(|(number, _)| *number)
                .collect();
            let mut found = Vec::new();
            KdTree::new(numbered).within(centre, radius, &mut |number, _| {
                found.push(number);
                true
            });
            expected.sort_unstable();
            found.sort_unstable();
            prop_assert_eq!(found, expected);
        }
    }

    proptest! {
        #[test]
        fn the_nearest_is_that_of_a_look_at_every_point(
            points in prop::collection::vec([coordinate(), coordinate(), coordinate()], 0..300),
            centre in [coordinate(), coordinate(), coordinate()],
            radius in 0.0f64..1.5,
            modulus in 1u32..4,
        ) {
            let accepts = |number: u32| number.is_multiple_of(modulus);
            let numbered: Vec<(u32, Vector)> = (0..).zip(points).collect();
            let squared = |point: Vector| dot(minus(point, centre), minus(point, centre));
            let expected = numbered
                .iter()
                .filter(|(number, point)| accepts(*number) && squared(*point) <= radius * radius)
                .min_by(|(one, a), (other, b)| {
                    squared(*a).total_cmp(&squared(*b)).then(one.cmp(other))
                })
                .map(|(number, _)| *number);
            prop_assert_eq!(KdTree::new(numbered).nearest(centre, radius, &accepts), expected);
        }
    }

    #[test]
    fn stops_when_told_to() {
        let tree = KdTree::new((0..1000).map(|number| (number, [0.0; 3])).collect());
        let mut looked = 0;
        tree.within([0.0; 3], 1.0, &mut |_, _| {
            looked += 1;
            looked < 10
        });
        assert_eq!(looked, 10);
    }
}
