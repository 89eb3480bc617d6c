//! Neighbours on the ground: against a look at every pair, and on shapes worked out by hand.

use super::Neighbours;
use super::ground::{REACH, lists};
use super::spacing::steps;
use crate::granule::globe::{minus, point};

/// A grid on the equator: `line` degrees from line to line, `position` degrees along the line.
fn grid(lines: usize, positions: usize, line: f64, position: f64) -> (Vec<f64>, Vec<f64>) {
    let place = |number: usize| (number / positions, number % positions);
    let all = 0..lines * positions;
    (
        all.clone().map(|number| place(number).0 as f64 * line).collect(),
        all.map(|number| place(number).1 as f64 * position).collect(),
    )
}

/// Clusters of nine, turned further from position to position, over a polar region.
fn turning_clusters(lines: usize, positions: usize) -> (Vec<f64>, Vec<f64>) {
    let (mut latitudes, mut longitudes) = (Vec::new(), Vec::new());
    for number in 0..lines * positions * 9 {
        let (line, position, detector) =
            (number / 9 / positions, number / 9 % positions, number % 9);
        let turn = 0.1 * position as f64;
        let (row, column) = ((detector / 3) as f64 - 1.0, (detector % 3) as f64 - 1.0);
        let north = 0.12 * (row * turn.cos() - column * turn.sin()) + 0.4 * line as f64;
        let east = 0.12 * (row * turn.sin() + column * turn.cos()) + 0.4 * position as f64;
        latitudes.push(70.0 + north);
        // Over the date line.
        longitudes
            .push((178.0 + east / 70f64.to_radians().cos() + 180.0).rem_euclid(360.0) - 180.0);
    }
    (latitudes, longitudes)
}

/// Looks at every pair.
fn by_looking_at_all(lengths: &[usize], latitudes: &[f64], longitudes: &[f64]) -> Vec<Vec<u32>> {
    let points: Vec<_> =
        latitudes.iter().zip(longitudes).map(|(lat, lon)| point(*lat, *lon)).collect();
    let steps = steps(lengths[0], lengths[1], &points);
    let detectors = points.len() / steps.len();
    (0..points.len())
        .map(|own| {
            let Some((centre, steps)) = points[own].zip(steps[own / detectors]) else {
                return Vec::new();
            };
            let mut near: Vec<(f64, u32)> = (0..points.len())
                .filter_map(|other| {
                    let distance = steps.squared_distance(minus(points[other]?, centre));
                    // Numbers of the tests fit.
                    (distance <= REACH * REACH).then_some((distance, other as u32))
                })
                .collect();
            near.sort_by(|one, other| one.partial_cmp(other).unwrap());
            near.into_iter().take(9).map(|(_, number)| number).collect()
        })
        .collect()
}

#[test]
fn the_tree_finds_what_a_look_at_all_pairs_finds() {
    let (latitudes, longitudes) = turning_clusters(7, 9);
    let lengths = [7, 9, 9];
    let expected = by_looking_at_all(&lengths, &latitudes, &longitudes);
    assert_eq!(lists(&lengths, &latitudes, &longitudes), expected);
    let inner = (3 * 9 + 4) * 9 + 4;
    assert_eq!(expected[inner].len(), 9, "inside the swath the neighbourhood is full");
}

#[test]
fn on_a_square_grid_it_is_the_box_of_three_by_three() {
    let (latitudes, longitudes) = grid(6, 5, 0.1, 0.1);
    let ground = Neighbours::by_ground(&[6, 5], &latitudes, &longitudes);
    let array = Neighbours::by_array(&[6, 5]);
    for footprint in 0..30 {
        assert_eq!(ground.of(footprint), array.of(footprint), "{footprint}");
    }
    assert_eq!(ground.note(), None);
    assert!(array.note().is_some());
}

#[test]
fn footprints_three_times_as_far_apart_along_the_line_still_have_a_box() {
    let (latitudes, longitudes) = grid(6, 5, 0.1, 0.3);
    let ground = Neighbours::by_ground(&[6, 5], &latitudes, &longitudes);
    assert_eq!(ground.of(12), Neighbours::by_array(&[6, 5]).of(12));
}

#[test]
fn the_end_of_a_line_is_not_beside_the_start_of_the_next() {
    let (latitudes, longitudes) = grid(4, 6, 0.1, 0.1);
    let ground = Neighbours::by_ground(&[4, 6], &latitudes, &longitudes);
    assert!(!ground.of(11).contains(&12));
    assert!(ground.of(11).contains(&5));
}

#[test]
fn across_a_pole_and_the_date_line_neighbours_are_neighbours() {
    // Five lines along a meridian that runs over the pole; three positions 0.1 degrees apart.
    let lengths = [5, 3];
    let (mut latitudes, mut longitudes) = (Vec::new(), Vec::new());
    for line in -2..=2 {
        for position in -1..=1 {
            let (x, y) = (0.1 * f64::from(line), 0.1 * f64::from(position));
            latitudes.push(90.0 - x.hypot(y));
            longitudes.push(y.atan2(x).to_degrees());
        }
    }
    let ground = Neighbours::by_ground(&lengths, &latitudes, &longitudes);
    assert_eq!(ground.of(7), Neighbours::by_array(&lengths).of(7));
}

#[test]
fn a_footprint_without_a_position_is_nobodys_neighbour() {
    let (mut latitudes, longitudes) = grid(4, 4, 0.1, 0.1);
    latitudes[5] = f64::NAN;
    let ground = Neighbours::by_ground(&[4, 4], &latitudes, &longitudes);
    assert!(ground.of(5).is_empty());
    assert!((0..16).all(|footprint| !ground.of(footprint).contains(&5)));
    assert_eq!(ground.of(6), [1, 2, 3, 6, 7, 9, 10, 11]);
}

#[test]
fn crowded_and_senseless_positions_give_no_neighbourhood() {
    let same = vec![10.0; 5000];
    let ground = Neighbours::by_ground(&[50, 100], &same, &same);
    assert!((0..5000).all(|footprint| ground.of(footprint).is_empty()));
    let wrong_shape = Neighbours::by_ground(&[50, 99], &same, &same);
    assert!(wrong_shape.note().is_some());
    for lengths in [&[][..], &[0], &[0, 3], &[1], &[1, 1], &[1, 1, 9]] {
        let count = lengths.iter().product();
        let ground = Neighbours::by_ground(lengths, &vec![0.0; count], &vec![0.0; count]);
        assert_eq!(ground.len(), count, "{lengths:?}");
    }
}

#[test]
fn the_number_of_threads_changes_nothing() {
    let (latitudes, longitudes) = turning_clusters(6, 8);
    let with = |threads: usize| {
        let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build().unwrap();
        pool.install(|| Neighbours::by_ground(&[6, 8, 9], &latitudes, &longitudes))
    };
    assert_eq!(with(1), with(4));
}
