//! Angles that a file lacks, worked out from time, place and view; and the sense of those it has.

use rayon::prelude::*;

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

/// Footprints and scan lines that are looked at to check angles: a sense is plain from few.
const MOST_CHECKED: usize = 2000;

/// Adds the sun's angles where the file has none and time and place are known; checks those that it
/// has; turns azimuths that are meant the other way round.
pub fn complete(geolocation: &mut Geolocation, grid: &FootprintGrid, problems: &mut Vec<Problem>) {
    check_sun(geolocation, problems);
    add_sun(geolocation, problems);
    take_sign_from_view(geolocation, problems);
    check_view(geolocation, grid, problems);
    add_view(geolocation, grid, problems);
}

/// A view zenith angle with a sign tells the side of the track by it. Its size is taken; which way an
/// azimuth beside it points on the negative side is not known, so it is worked out anew.
fn take_sign_from_view(geolocation: &mut Geolocation, problems: &mut Vec<Problem>) {
    let Some(zenith) = &mut geolocation.view_zenith else { return };
    // A zero that was rounded or packed may come out below itself.
    const ROUNDED: f64 = 0.01;
    let has_sign = zenith.iter().any(|angle| *angle < -ROUNDED);
    zenith.iter_mut().for_each(|angle| *angle = angle.abs());
    if !has_sign {
        return;
    }
    geolocation.view_azimuth = None;
    geolocation.sources.retain(|source| source.field != "view_azimuth");
    let what =
        "`view_zenith` has a sign: its size is taken, and `view_azimuth` comes from the scan line";
    problems.push(Problem::guess(what, "", "give both without signs"));
}

/// Every so many of `count`, so that few enough are checked.
fn stride(count: usize) -> usize {
    count.div_ceil(MOST_CHECKED).max(1)
}

/// Zenith angle and azimuth of the sun at a footprint by time and place, degrees.
fn sun_at(geolocation: &Geolocation, footprint: usize) -> Option<(f64, f64)> {
    let value = |field: &Option<Vec<f64>>| field.as_ref()?.get(footprint).copied();
    let (latitude, longitude) = (value(&geolocation.latitude)?, value(&geolocation.longitude)?);
    Some(sun_angles(value(&geolocation.time)?, latitude, longitude))
}

fn check_sun(geolocation: &mut Geolocation, problems: &mut Vec<Problem>) {
    let count = geolocation.time.as_ref().map_or(0, Vec::len);
    let apart = |own: &Option<Vec<f64>>, of: &dyn Fn(f64, (f64, f64)) -> f64| {
        let own = own.as_ref()?;
        let checked = (0..count.min(own.len())).step_by(stride(count));
        median(checked.filter_map(|at| Some(of(own[at], sun_at(geolocation, at)?))))
    };
    let zenith = apart(&geolocation.solar_zenith, &|own, (zenith, _)| (own - zenith).abs());
    // Near the zenith and the nadir azimuths mean little.
    let azimuth = apart(&geolocation.solar_azimuth, &|own, (zenith, azimuth)| {
        if (10.0..=170.0).contains(&zenith) { between(own, azimuth) } else { f64::NAN }
    });
    note_astray(zenith, "solar_zenith", problems);
    match (azimuth, &mut geolocation.solar_azimuth) {
        (Some(degrees), Some(azimuth)) if degrees > OTHER_WAY => {
            turn(azimuth);
            note_turned("solar_azimuth", "the sun", problems);
        }
        (degrees, _) => note_astray(degrees, "solar_azimuth", problems),
    }
}

fn add_sun(geolocation: &mut Geolocation, problems: &mut Vec<Problem>) {
    let lacking = ["solar_zenith", "solar_azimuth"];
    let lacking = lacking.map(|field| geolocation.field(field).is_none());
    let count = geolocation.time.as_ref().map_or(0, Vec::len);
    if lacking == [false, false] || sun_at(geolocation, 0).is_none() {
        return;
    }
    let none = (f64::NAN, f64::NAN);
    let angles = (0..count).into_par_iter().map(|at| sun_at(geolocation, at).unwrap_or(none));
    let (zenith, azimuth): (Vec<f64>, Vec<f64>) = angles.unzip();
    let found = [("solar_zenith", zenith), ("solar_azimuth", azimuth)];
    for ((field, values), _) in found.into_iter().zip(lacking).filter(|(_, lacking)| *lacking) {
        add(geolocation, field, values, "time, lat, lon");
        let what = format!("`{field}` is computed from time, latitude and longitude");
        problems.push(Problem::note(&what, "", "good to 0.02 degrees"));
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

/// For each footprint of a scan line the direction (degrees) of the place in it that is looked at from
/// right above, over which the sensor stands. Nothing for a line that does not pass near the nadir, and
/// for a granule without scan lines.
fn towards_nadir(geolocation: &Geolocation, grid: &FootprintGrid, line: usize) -> Option<Vec<f64>> {
    let zenith = geolocation.view_zenith.as_ref()?;
    let (latitudes, longitudes) = (geolocation.latitude.as_ref()?, geolocation.longitude.as_ref()?);
    if grid.lengths().len() < 2 {
        return None;
    }
    let row = grid.row_length();
    let footprints = line * row..(line + 1) * row;
    let place = |footprint: usize| (latitudes[footprint], longitudes[footprint]);
    let known = footprints.clone().filter(|at| zenith[*at].abs() <= NADIR);
    let nadir = known.min_by(|one, other| zenith[*one].abs().total_cmp(&zenith[*other].abs()))?;
    Some(footprints.map(|footprint| bearing(place(footprint), place(nadir))).collect())
}

fn lines(grid: &FootprintGrid) -> usize {
    grid.lengths().first().copied().unwrap_or(0)
}

fn check_view(geolocation: &mut Geolocation, grid: &FootprintGrid, problems: &mut Vec<Problem>) {
    let (Some(zenith), Some(azimuth)) = (&geolocation.view_zenith, &geolocation.view_azimuth)
    else {
        return;
    };
    let row = grid.row_length().max(1);
    // At least every tenth line or so, however long the lines are.
    let every = stride(grid.count()).min(lines(grid).div_ceil(10).max(1));
    let checked = (0..lines(grid)).step_by(every);
    let apart = checked.flat_map(|line| {
        let towards = towards_nadir(geolocation, grid, line).unwrap_or_default();
        let apart = towards.into_iter().zip(line * row..).map(|(nadir, at)| {
            if zenith[at].abs() >= SLANTED { between(azimuth[at], nadir) } else { f64::NAN }
        });
        apart.collect::<Vec<f64>>()
    });
    match median(apart) {
        Some(degrees) if degrees > OTHER_WAY => {
            geolocation.view_azimuth.iter_mut().for_each(|azimuth| turn(azimuth));
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

fn add_view(geolocation: &mut Geolocation, grid: &FootprintGrid, problems: &mut Vec<Problem>) {
    let Some(zenith) = geolocation.view_zenith.as_ref() else { return };
    if geolocation.view_azimuth.is_some() {
        return;
    }
    let row = grid.row_length();
    let line = |line: usize| {
        let towards = towards_nadir(geolocation, grid, line);
        towards.unwrap_or_else(|| vec![f64::NAN; row])
    };
    let towards: Vec<f64> = (0..lines(grid)).into_par_iter().flat_map_iter(line).collect();
    if towards.iter().all(|direction| direction.is_nan()) {
        return;
    }
    // Right below the sensor every direction is as good: the glint angle does not depend on it.
    let known = |(direction, zenith): (f64, &f64)| match direction.is_nan() && zenith.abs() <= NADIR
    {
        true => 0.0,
        false => direction,
    };
    let azimuth = towards.into_iter().zip(zenith).map(known).collect();
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
