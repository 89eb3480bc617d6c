//! Points in a polygon.

/// Whether a point lies in a polygon or on its edge. The polygon is closed from its last corner to
/// its first; where it crosses itself, what is enclosed twice is outside (even-odd rule).
pub fn is_inside(corners: &[(f64, f64)], point: (f64, f64)) -> bool {
    let previous = corners.iter().cycle().skip(corners.len().saturating_sub(1));
    let mut inside = false;
    for (&from, &to) in previous.zip(corners) {
        if is_on_edge(from, to, point) {
            return true;
        }
        if (from.1 > point.1) != (to.1 > point.1) {
            let share = (point.1 - from.1) / (to.1 - from.1);
            inside ^= point.0 < from.0 + share * (to.0 - from.0);
        }
    }
    inside
}

/// Exact where the coordinates are small whole numbers, as places on the map are.
fn is_on_edge(from: (f64, f64), to: (f64, f64), point: (f64, f64)) -> bool {
    let cross = (to.0 - from.0) * (point.1 - from.1) - (to.1 - from.1) * (point.0 - from.0);
    let within = |a: f64, b: f64, at: f64| a.min(b) <= at && at <= a.max(b);
    cross == 0.0 && within(from.0, to.0, point.0) && within(from.1, to.1, point.1)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The places of a map of 5 by 5 that lie inside, row by row.
    fn places(corners: &[(f64, f64)]) -> String {
        let row = |y: u32| (0..5).map(move |x| (f64::from(x), f64::from(y)));
        let sign = |point| if is_inside(corners, point) { '#' } else { '.' };
        let rows: Vec<String> = (0..5).map(|y| row(y).map(sign).collect()).collect();
        rows.join(" ")
    }

    #[test]
    fn corners_and_edges_belong_to_it() {
        assert_eq!(places(&[]), "..... ..... ..... ..... .....");
        assert_eq!(places(&[(2.0, 1.0)]), "..... ..#.. ..... ..... .....");
        assert_eq!(places(&[(0.0, 2.0), (4.0, 2.0)]), "..... ..... ##### ..... .....");
        let triangle = [(0.0, 0.0), (4.0, 0.0), (0.0, 4.0)];
        assert_eq!(places(&triangle), "##### ####. ###.. ##... #....");
        let hollow = [(0.0, 0.0), (2.0, 2.0), (4.0, 0.0), (4.0, 4.0), (0.0, 4.0)];
        assert_eq!(places(&hollow), "#...# ##.## ##### ##### #####");
    }

    #[test]
    fn a_missing_coordinate_is_nowhere() {
        let square = [(0.0, 0.0), (4.0, 0.0), (4.0, 4.0), (0.0, 4.0)];
        assert!(!is_inside(&square, (f64::NAN, 2.0)) && !is_inside(&square, (2.0, f64::NAN)));
    }
}
