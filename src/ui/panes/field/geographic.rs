//! Footprints placed by latitude and longitude: an equirectangular map.

use super::Placement;
use super::placement::Graticule;

/// The most places across and down; more than any terminal has dots.
const MOST: (usize, usize) = (1440, 720);
/// Towards the poles a degree of longitude shrinks; at the map's middle latitude, at most this one,
/// both directions have one scale.
const STEEPEST: f64 = 70.0;
/// A footprint covers so much of the distance to its neighbours, so that no gaps are left between
/// them where they lie askew.
const COVER: f64 = 0.75;

/// Where one footprint lies, and how far it reaches, in degrees.
#[derive(Clone, Copy)]
struct Spot {
    latitude: f64,
    /// East of the map's western edge.
    east: f64,
    reach: f64,
}

impl Placement {
    /// Lays footprints out by latitude and longitude (degrees). The map begins behind the widest gap
    /// of longitudes, so that the date line cuts no granule; near a pole a footprint takes the width
    /// that it has on such a map. A footprint without a position has no place. `None` where none has
    /// one.
    pub fn geographic(latitude: &[f64], longitude: &[f64]) -> Option<Self> {
        let spots = spots(latitude, longitude)?;
        let map = Map::of(&spots)?;
        let places = spots.iter().map(|spot| spot.and_then(|spot| map.place(&spot))).collect();
        let mut owners = vec![None; map.columns * map.rows];
        let mut nearest = vec![f64::INFINITY; owners.len()];
        for (footprint, spot) in spots.iter().enumerate() {
            let Some(spot) = spot else { continue };
            map.cover(spot, |place, distance| {
                if distance < nearest[place] {
                    nearest[place] = distance;
                    owners[place] = Some(footprint as u32);
                }
            });
        }
        Some(Placement::on_map(map.columns, owners, places, map.graticule(west(&spots, longitude))))
    }
}

/// The longitude of the map's western edge.
fn west(spots: &[Option<Spot>], longitude: &[f64]) -> f64 {
    let first = spots.iter().zip(longitude).find_map(|(spot, longitude)| {
        let spot = (*spot)?;
        Some(longitude - spot.east)
    });
    first.unwrap_or(0.0)
}

fn spots(latitude: &[f64], longitude: &[f64]) -> Option<Vec<Option<Spot>>> {
    let is_place = |(latitude, longitude): (&f64, &f64)| {
        (latitude.abs() <= 90.0 && longitude.is_finite())
            .then(|| (*latitude, longitude.rem_euclid(360.0)))
    };
    let points: Vec<Option<(f64, f64)>> = latitude.iter().zip(longitude).map(is_place).collect();
    let start = behind_widest_gap(points.iter().flatten().map(|point| point.1).collect())?;
    let reaches = reaches(&points);
    let spot = |(point, reach): (&Option<(f64, f64)>, f64)| {
        let (latitude, longitude) = (*point)?;
        Some(Spot { latitude, east: (longitude - start).rem_euclid(360.0), reach })
    };
    Some(points.iter().zip(reaches).map(spot).collect())
}

/// The longitude at which the map begins: the first one behind the widest gap.
fn behind_widest_gap(mut longitudes: Vec<f64>) -> Option<f64> {
    longitudes.sort_unstable_by(f64::total_cmp);
    let last = *longitudes.last()?;
    let mut before = last - 360.0;
    let mut widest = (f64::NEG_INFINITY, 0.0);
    for longitude in longitudes {
        if longitude - before > widest.0 {
            widest = (longitude - before, longitude);
        }
        before = longitude;
    }
    Some(widest.1)
}

/// How far each footprint reaches: a share of the distance to its nearer neighbour in the file, within
/// a few times the usual one, as rows end there.
fn reaches(points: &[Option<(f64, f64)>]) -> Vec<f64> {
    let steps: Vec<f64> = points
        .windows(2)
        .map(|pair| match pair {
            [Some(one), Some(next)] => distance(*one, *next),
            _ => f64::NAN,
        })
        .collect();
    let mut known: Vec<f64> = steps.iter().copied().filter(|step| *step > 0.0).collect();
    let middle = known.len() / 2;
    let usual = match known.is_empty() {
        // One footprint alone, or all at one place: a degree shows where.
        true => 1.0,
        false => *known.select_nth_unstable_by(middle, f64::total_cmp).1,
    };
    let step = |place: Option<usize>| {
        place.and_then(|place| steps.get(place)).copied().unwrap_or(f64::NAN)
    };
    let reach = |footprint: usize| {
        let nearer = step(footprint.checked_sub(1)).min(step(Some(footprint)));
        let nearer = if nearer.is_nan() { usual } else { nearer };
        COVER * nearer.clamp(0.5 * usual, 3.0 * usual)
    };
    (0..points.len()).map(reach).collect()
}

/// Degrees between two points along a great circle (haversine formula).
fn distance(one: (f64, f64), other: (f64, f64)) -> f64 {
    let [a, b] = [one.0.to_radians(), other.0.to_radians()];
    let half = |angle: f64| (angle / 2.0).sin().powi(2);
    let h = half(b - a) + a.cos() * b.cos() * half((other.1 - one.1).to_radians());
    2.0 * h.clamp(0.0, 1.0).sqrt().asin().to_degrees()
}

/// The grid of places.
struct Map {
    columns: usize,
    rows: usize,
    north: f64,
    /// Degrees of longitude and of latitude to a place.
    step: (f64, f64),
}

impl Map {
    fn of(spots: &[Option<Spot>]) -> Option<Self> {
        let known = || spots.iter().flatten();
        let lowest = |value: fn(&Spot) -> f64| known().map(value).fold(f64::INFINITY, f64::min);
        let highest =
            |value: fn(&Spot) -> f64| known().map(value).fold(f64::NEG_INFINITY, f64::max);
        let (south, north) = (lowest(|spot| spot.latitude), highest(|spot| spot.latitude));
        let width = highest(|spot| spot.east);
        let mut reaches: Vec<f64> = known().map(|spot| spot.reach).collect();
        let middle = reaches.len() / 2;
        let reach = *reaches.get_mut(..)?.select_nth_unstable_by(middle, f64::total_cmp).1;
        let shrink = (0.5 * (south + north)).abs().min(STEEPEST).to_radians().cos();
        // About two places to a footprint each way, so that their order survives the rounding.
        let down = (2.0 * reach / 3.0).max((north - south) / (MOST.1 - 1) as f64).max(1e-4);
        let across = (down / shrink).max(width / (MOST.0 - 1) as f64);
        let count = |length: f64, step: f64| (length / step).floor() as usize + 1;
        let columns = count(width, across).min(MOST.0);
        let rows = count(north - south, down).min(MOST.1);
        Some(Self { columns, rows, north, step: (across, down) })
    }

    fn place(&self, spot: &Spot) -> Option<u32> {
        let column = ((spot.east / self.step.0) as usize).min(self.columns - 1);
        let row = (((self.north - spot.latitude) / self.step.1) as usize).min(self.rows - 1);
        u32::try_from(row * self.columns + column).ok()
    }

    /// Tells every place that a footprint reaches, with its distance in degrees.
    fn cover(&self, spot: &Spot, mut tell: impl FnMut(usize, f64)) {
        let shrink = spot.latitude.to_radians().cos().max(1e-3);
        let wide = (spot.reach / shrink).min(360.0);
        let range = |centre: f64, reach: f64, step: f64, count: usize| {
            let at = |value: f64| ((value / step).max(0.0) as usize).min(count - 1);
            at(centre - reach)..=at(centre + reach)
        };
        let own = self.place(spot).map(|place| place as usize);
        for row in range(self.north - spot.latitude, spot.reach, self.step.1, self.rows) {
            for column in range(spot.east, wide, self.step.0, self.columns) {
                let east = (column as f64 + 0.5) * self.step.0 - spot.east;
                let south = (row as f64 + 0.5) * self.step.1 - (self.north - spot.latitude);
                let distance = (east * shrink).hypot(south);
                let place = row * self.columns + column;
                // Its own place it has before all others, so that none is lost.
                if own == Some(place) {
                    tell(place, distance - 360.0);
                } else if distance <= spot.reach {
                    tell(place, distance);
                }
            }
        }
    }

    fn graticule(&self, west: f64) -> Graticule {
        Graticule { west, north: self.north, step: self.step }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn north_is_up_and_east_is_right() {
        let latitude = [10.0, 10.0, 8.0, 8.0];
        let longitude = [20.0, 22.0, 20.0, 22.0];
        let map = Placement::geographic(&latitude, &longitude).unwrap();
        let place = |footprint| map.place_of(footprint).unwrap();
        assert!(place(0).0 < place(1).0 && place(0).1 < place(2).1);
        assert_eq!(map.moved(0, 1, 0), 1);
        assert_eq!(map.moved(0, 0, 1), 2);
        assert_eq!(map.moved(3, -1, 0), 2);
    }

    /// 0.2 degrees apart across the date line, not 359.8.
    #[test]
    fn the_date_line_cuts_no_granule() {
        let map = Placement::geographic(&[0.0; 4], &[179.7, 179.9, -179.9, -179.7]).unwrap();
        let columns: Vec<usize> = (0..4).map(|one| map.place_of(one).unwrap().0).collect();
        assert!(columns.is_sorted() && map.columns() < 20, "{columns:?} of {}", map.columns());
        assert_eq!(map.moved(1, 1, 0), 2);
        let graticule = map.graticule().unwrap();
        assert!((graticule.west - 179.7).abs() < 1e-9, "{graticule:?}");
    }

    #[test]
    fn a_ring_around_a_pole_fills_its_rows() {
        let longitude: Vec<f64> = (0..36).map(|step| f64::from(step) * 10.0).collect();
        let map = Placement::geographic(&[89.0; 36], &longitude).unwrap();
        let empty =
            (0..map.columns()).filter(|column| map.footprint_at(*column, 0).is_none()).count();
        assert!(empty * 20 <= map.columns(), "{empty} of {} are empty", map.columns());
    }

    #[test]
    fn a_footprint_without_a_position_has_no_place() {
        let map = Placement::geographic(&[5.0, f64::NAN, 6.0], &[5.0, 5.0, 5.0]).unwrap();
        assert_eq!(map.place_of(1), None);
        assert_eq!(map.footprints(), 3);
        // From there the keys go on in the file's order.
        assert_eq!((map.moved(1, 1, 0), map.moved(1, 0, -1)), (2, 0));
        assert!(Placement::geographic(&[f64::NAN], &[1.0]).is_none());
    }

    /// Distances on the sphere that are known: a quarter of a meridian and of the equator.
    #[test]
    fn distances_follow_great_circles() {
        assert!((distance((0.0, 0.0), (90.0, 0.0)) - 90.0).abs() < 1e-9);
        assert!((distance((0.0, 10.0), (0.0, 100.0)) - 90.0).abs() < 1e-9);
        assert!(distance((89.0, 0.0), (89.0, 180.0)) < 2.0 + 1e-9);
    }

    proptest! {
        #[test]
        fn any_coordinates_are_survived(
            points in prop::collection::vec((-91f64..91.0, -400f64..400.0), 0..200),
            steps in prop::collection::vec((0usize..200, -9isize..9, -9isize..9), 0..20),
        ) {
            let (latitude, longitude): (Vec<f64>, Vec<f64>) = points.into_iter().unzip();
            let Some(map) = Placement::geographic(&latitude, &longitude) else { return Ok(()) };
            for (footprint, latitude) in latitude.iter().enumerate() {
                prop_assert_eq!(map.place_of(footprint).is_some(), latitude.abs() <= 90.0);
                if let Some((column, row)) = map.place_of(footprint) {
                    prop_assert!(map.footprint_at(column, row).is_some());
                }
            }
            for (footprint, right, down) in steps {
                prop_assert!(map.moved(footprint, right, down) < latitude.len().max(footprint + 1));
            }
        }
    }
}
