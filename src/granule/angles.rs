//! Angles that a file lacks, worked out from time, place and view; and the sense of those it has.

use super::footprints::FootprintGrid;
use super::geolocation::{Geolocation, GeolocationSource, Origin};
use super::globe::{bearing, sun_angles};
use super::problem::Problem;

/// A sun that is this far (degrees) from where it should stand: the equation of time moves it by 4,
/// an hour's error by up to 15.
const SUN_ASTRAY: f64 = 6.0;

/// Directions that differ by more than this (degrees) are meant the other way round.
const OTHER_WAY: f64 = 135.0;
/// Directions that differ by less than this (degrees) are meant alike.
const SAME_WAY: f64 = 45.0;

/// View zenith angles (degrees) from which a direction can be told, and up to which a scan line counts
/// as passing through the nadir.
const SLANTED: f64 = 15.0;
const NADIR: f64 = 5.0;

/// Adds the sun's angles where the file has none and time and place are known; checks those that it
/// has; turns azimuths that are meant the other way round.
pub fn complete(geolocation: &mut Geolocation, grid: &FootprintGrid, problems: &mut Vec<Problem>) {
    if let Some(sun) = Sun::of(geolocation) {
        sun.check(geolocation, problems);
        sun.add(geolocation, problems);
    }
    if let Some(towards_nadir) = towards_nadir(geolocation, grid) {
        check_view(geolocation, &towards_nadir, problems);
        add_view(geolocation, towards_nadir, problems);
    }
}

/// Where the sun stands by time and place, degrees.
struct Sun {
    zenith: Vec<f64>,
    azimuth: Vec<f64>,
}

impl Sun {
    fn of(geolocation: &Geolocation) -> Option<Self> {
        let times = geolocation.time.as_ref()?.iter();
        let places = geolocation.latitude.as_ref()?.iter().zip(geolocation.longitude.as_ref()?);
        let angles = times.zip(places).map(|(time, (lat, lon))| sun_angles(*time, *lat, *lon));
        let (zenith, azimuth) = angles.unzip();
        Some(Self { zenith, azimuth })
    }

    fn check(&self, geolocation: &mut Geolocation, problems: &mut Vec<Problem>) {
        if let Some(zenith) = &geolocation.solar_zenith {
            let apart = zenith.iter().zip(&self.zenith).map(|(own, sun)| own - sun);
            note_astray(median(apart.map(f64::abs)), "solar_zenith", problems);
        }
        let Some(azimuth) = &mut geolocation.solar_azimuth else { return };
        // Near the zenith, and around the poles of the sky, azimuths mean little.
        let telling = |zenith: f64| (10.0..=170.0).contains(&zenith);
        let apart = azimuth.iter().zip(&self.azimuth).zip(&self.zenith);
        let apart = apart.filter(|(_, zenith)| telling(**zenith));
        let apart = median(apart.map(|((own, sun), _)| between(*own, *sun)));
        match apart {
            Some(degrees) if degrees > OTHER_WAY => {
                turn(azimuth);
                note_turned("solar_azimuth", "the sun", problems);
            }
            apart => note_astray(apart, "solar_azimuth", problems),
        }
    }

    fn add(self, geolocation: &mut Geolocation, problems: &mut Vec<Problem>) {
        for (field, values) in [("solar_zenith", self.zenith), ("solar_azimuth", self.azimuth)] {
            if geolocation.field(field).is_none() {
                add(geolocation, field, values, "time, lat, lon");
                let what = format!("`{field}` is computed from time, latitude and longitude");
                problems.push(Problem::note(&what, "", "good to 0.02 degrees"));
            }
        }
    }
}

fn add(geolocation: &mut Geolocation, field: &'static str, values: Vec<f64>, from: &str) {
    let source = GeolocationSource {
        field,
        variable: from.to_owned(),
        units: "degree".to_owned(),
        origin: Origin::Computed,
        place: 0,
    };
    geolocation.set(values, source);
}

fn note_astray(apart: Option<f64>, field: &str, problems: &mut Vec<Problem>) {
    if let Some(degrees) = apart.filter(|degrees| *degrees > SUN_ASTRAY) {
        let what = format!(
            "`{field}` is off by {degrees:.0} degrees from where time and place put the sun"
        );
        let advice = "time, place or the angle is wrong or means something else; taken as it is";
        problems.push(Problem::note(&what, "", advice));
    }
}

fn note_turned(field: &str, whom: &str, problems: &mut Vec<Problem>) {
    let what = format!("`{field}` points away from {whom}; turned round by 180 degrees");
    let advice = "directions are meant as seen from the footprint, as in CF";
    problems.push(Problem::guess(&what, "", advice));
}

fn turn(azimuths: &mut [f64]) {
    azimuths.iter_mut().for_each(|azimuth| *azimuth = (*azimuth + 180.0).rem_euclid(360.0));
}

/// The angle between two directions, 0 to 180 degrees.
fn between(one: f64, other: f64) -> f64 {
    ((one - other + 180.0).rem_euclid(360.0) - 180.0).abs()
}

/// Of the finite values; the upper of two in the middle.
fn median(values: impl Iterator<Item = f64>) -> Option<f64> {
    let mut values: Vec<f64> = values.filter(|value| value.is_finite()).collect();
    if values.is_empty() {
        return None;
    }
    let middle = values.len() / 2;
    Some(*values.select_nth_unstable_by(middle, f64::total_cmp).1)
}

/// For each footprint the direction (degrees) of the place in its scan line that is looked at from
/// right above, over which the sensor stands. Missing for lines that do not pass near the nadir.
/// Nothing for a granule without scan lines.
fn towards_nadir(geolocation: &Geolocation, grid: &FootprintGrid) -> Option<Vec<f64>> {
    let zenith = geolocation.view_zenith.as_ref()?;
    let (latitudes, longitudes) = (geolocation.latitude.as_ref()?, geolocation.longitude.as_ref()?);
    if grid.lengths().len() < 2 {
        return None;
    }
    let place = |footprint: usize| (latitudes[footprint], longitudes[footprint]);
    let row = grid.row_length().max(1);
    let mut directions = Vec::with_capacity(zenith.len());
    for (line, angles) in zenith.chunks(row).enumerate() {
        let known = angles.iter().enumerate().filter(|(_, angle)| angle.is_finite());
        let lowest = known.min_by(|one, other| one.1.abs().total_cmp(&other.1.abs()));
        let nadir = lowest.filter(|(_, angle)| angle.abs() <= NADIR);
        let nadir = nadir.map(|(position, _)| place(line * row + position));
        directions.extend((0..angles.len()).map(|position| {
            nadir.map_or(f64::NAN, |nadir| bearing(place(line * row + position), nadir))
        }));
    }
    Some(directions)
}

fn check_view(geolocation: &mut Geolocation, towards: &[f64], problems: &mut Vec<Problem>) {
    let Some(zenith) = &geolocation.view_zenith else { return };
    let Some(azimuth) = &mut geolocation.view_azimuth else { return };
    let apart = azimuth.iter().zip(towards).zip(zenith);
    let apart = apart.filter(|(_, zenith)| zenith.abs() >= SLANTED);
    match median(apart.map(|((own, nadir), _)| between(*own, *nadir))) {
        Some(degrees) if degrees > OTHER_WAY => {
            turn(azimuth);
            note_turned("view_azimuth", "the sensor", problems);
        }
        Some(degrees) if degrees > SAME_WAY => {
            let what = format!(
                "`view_azimuth` is off by {degrees:.0} degrees from the direction in which the scan \
                 lines are looked at from"
            );
            problems.push(Problem::note(&what, "", "taken as it is; glint angles may be wrong"));
        }
        _ => {}
    }
}

fn add_view(geolocation: &mut Geolocation, towards: Vec<f64>, problems: &mut Vec<Problem>) {
    if geolocation.view_azimuth.is_some() || towards.iter().all(|direction| direction.is_nan()) {
        return;
    }
    // Right below the sensor every direction is as good: the glint angle does not depend on it.
    let nadir = geolocation.view_zenith.iter().flatten().map(|zenith| zenith.abs() <= NADIR);
    let known = |(direction, nadir): (f64, bool)| match direction.is_nan() && nadir {
        true => 0.0,
        false => direction,
    };
    let azimuth = towards.into_iter().zip(nadir).map(known).collect();
    add(geolocation, "view_azimuth", azimuth, "lat, lon, view_zenith");
    let what = "`view_azimuth` is computed as the direction of the nadir in the scan line";
    problems.push(Problem::guess(what, "", "good to some degrees for a scan across the track"));
}

#[cfg(test)]
mod tests {
    use super::*;

    /// One scan line eastwards along the equator, the nadir in the middle.
    fn line() -> (Geolocation, FootprintGrid) {
        let geolocation = Geolocation {
            latitude: Some(vec![0.0; 3]),
            longitude: Some(vec![-4.0, 0.0, 4.0]),
            view_zenith: Some(vec![40.0, 0.0, 40.0]),
            // The equinox of March 2000, as in the reference table.
            time: Some(vec![953_537_700.0; 3]),
            ..Geolocation::default()
        };
        let names = vec!["line".into(), "position".into()];
        (geolocation, FootprintGrid::new(names, vec![1, 3]))
    }

    fn completed(change: impl FnOnce(&mut Geolocation)) -> (Geolocation, Vec<String>) {
        let (mut geolocation, grid) = line();
        change(&mut geolocation);
        let mut problems = Vec::new();
        complete(&mut geolocation, &grid, &mut problems);
        (geolocation, problems.iter().map(ToString::to_string).collect())
    }

    #[test]
    fn what_is_missing_is_computed_and_marked() {
        let (geolocation, problems) = completed(|_| {});
        // Source: the row of the reference table for 0 N 0 E.
        assert!((geolocation.solar_zenith.unwrap()[1] - 68.1093).abs() < 0.02);
        assert!((geolocation.solar_azimuth.unwrap()[1] - 90.0).abs() < 0.02);
        let azimuth = geolocation.view_azimuth.unwrap();
        assert!((azimuth[0] - 90.0).abs() < 1e-9 && (azimuth[2] - 270.0).abs() < 1e-9);
        assert_eq!(azimuth[1], 0.0);
        assert!(geolocation.sources.iter().all(|source| source.origin == Origin::Computed));
        assert_eq!(problems.len(), 3, "{problems:?}");
    }

    #[test]
    fn azimuths_of_the_other_sense_are_turned() {
        let (geolocation, problems) = completed(|geolocation| {
            geolocation.solar_zenith = Some(vec![68.0; 3]);
            geolocation.solar_azimuth = Some(vec![-91.0; 3]);
            geolocation.view_azimuth = Some(vec![-95.0, 0.0, 85.0]);
        });
        assert_eq!(geolocation.solar_azimuth.unwrap(), [89.0; 3]);
        assert_eq!(geolocation.view_azimuth.unwrap(), [85.0, 180.0, 265.0]);
        assert_eq!(problems.len(), 2, "{problems:?}");
        assert!(problems[0].contains("away from the sun"), "{problems:?}");
        assert!(problems[1].contains("away from the sensor"), "{problems:?}");
    }

    #[test]
    fn angles_of_the_right_sense_stay_as_they_are() {
        let (geolocation, problems) = completed(|geolocation| {
            geolocation.solar_zenith = Some(vec![68.0; 3]);
            geolocation.solar_azimuth = Some(vec![89.0; 3]);
            geolocation.view_azimuth = Some(vec![85.0, 0.0, -95.0]);
        });
        assert_eq!(geolocation.view_azimuth.unwrap(), [85.0, 0.0, -95.0]);
        assert_eq!(problems, Vec::<String>::new());
    }

    #[test]
    fn a_sun_that_stands_elsewhere_is_told() {
        let (_, problems) = completed(|geolocation| {
            geolocation.solar_zenith = Some(vec![20.0; 3]);
            geolocation.solar_azimuth = Some(vec![0.0; 3]);
            geolocation.view_azimuth = Some(vec![0.0; 3]);
        });
        assert_eq!(problems.len(), 3, "{problems:?}");
        assert!(problems[0].contains("off by 48 degrees"), "{problems:?}");
        assert!(problems[1].contains("off by 90 degrees"), "{problems:?}");
        assert!(problems[2].contains("`view_azimuth` is off by 90"), "{problems:?}");
    }

    #[test]
    fn without_time_or_place_nothing_is_made_up() {
        let (geolocation, problems) = completed(|geolocation| {
            geolocation.time = None;
            geolocation.latitude = None;
        });
        assert_eq!(geolocation.solar_zenith, None);
        assert_eq!(geolocation.view_azimuth, None);
        assert!(problems.is_empty());
    }
}
