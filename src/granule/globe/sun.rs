//! Where the sun stands.

/// Seconds from 1970-01-01T00:00:00 to noon of 2000-01-01, the epoch of the formulae, UTC.
const EPOCH: f64 = 946_728_000.0;

/// Days around the epoch for which the formulae are meant: 1950 to 2050.
const DAYS: f64 = 18_263.0;

/// Zenith angle and azimuth of the sun's centre in degrees, the azimuth clockwise from north from 0
/// to 360, at `seconds` since 1970-01-01T00:00:00Z (leap seconds not counted) and a latitude and
/// longitude in degrees. Refraction is left out. Missing where anything is missing, and outside of
/// 1950 to 2050.
///
/// The low-precision formulae of the Astronomical Almanac as [Michalsky 1988] gives them: good to
/// 0.01 degrees. The sun is taken as seen from the Earth's centre (0.0024 degrees at the most), and
/// UT1 as UTC (0.004 degrees).
pub fn sun_angles(seconds: f64, latitude: f64, longitude: f64) -> (f64, f64) {
    let days = (seconds - EPOCH) / 86_400.0;
    let known = days.abs() <= DAYS && latitude.abs() <= 90.0 && longitude.is_finite();
    if !known {
        return (f64::NAN, f64::NAN);
    }
    let mean_longitude = 280.460 + 0.985_647_4 * days;
    let anomaly = (357.528 + 0.985_600_3 * days).to_radians();
    let ecliptic = mean_longitude + 1.915 * anomaly.sin() + 0.020 * (2.0 * anomaly).sin();
    let ecliptic = ecliptic.to_radians();
    let obliquity = (23.439 - 0.000_000_4 * days).to_radians();
    let right_ascension = (obliquity.cos() * ecliptic.sin()).atan2(ecliptic.cos());
    let declination = (obliquity.sin() * ecliptic.sin()).asin();
    // Hours since midnight; the constant is the sidereal time at Greenwich at the epoch's midnight.
    let hour = 24.0 * (days + 0.5).rem_euclid(1.0);
    let sidereal = 6.697_375 + 0.065_709_824_2 * days + hour;
    let hour_angle = (15.0 * sidereal + longitude).to_radians() - right_ascension;
    let latitude = latitude.to_radians();
    let cosine =
        latitude.sin() * declination.sin() + latitude.cos() * declination.cos() * hour_angle.cos();
    let east = -declination.cos() * hour_angle.sin();
    let north =
        declination.sin() * latitude.cos() - declination.cos() * latitude.sin() * hour_angle.cos();
    (cosine.clamp(-1.0, 1.0).acos().to_degrees(), turned(east.atan2(north).to_degrees()))
}

/// From 0 up to 360 degrees.
fn turned(degrees: f64) -> f64 {
    let turned = degrees.rem_euclid(360.0);
    // A tiny negative angle rounds to 360.
    if turned < 360.0 { turned } else { 0.0 }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn agrees_with_a_general_purpose_library() {
        let table = include_str!("../../../tests/reference_tables/sun_checks.csv");
        let mut reader =
            csv::ReaderBuilder::new().comment(Some(b'#')).from_reader(table.as_bytes());
        let mut count = 0;
        for row in reader.records() {
            let row = row.unwrap();
            let number = |column: usize| row[column].parse::<f64>().unwrap();
            let (zenith, azimuth) = sun_angles(number(1), number(2), number(3));
            // 0.01 degrees of the formulae, 0.0024 of the parallax, 0.004 of UT1 - UTC.
            let limit = 0.0164;
            assert!((zenith - number(4)).abs() < limit, "{row:?}: {zenith}");
            let apart = (azimuth - number(5) + 180.0).rem_euclid(360.0) - 180.0;
            // The same arc is a wider angle near the zenith.
            assert!(apart.abs() * zenith.to_radians().sin() < limit, "{row:?}: {azimuth}");
            count += 1;
        }
        assert_eq!(count, 60);
    }

    #[test]
    fn what_is_missing_stays_missing() {
        for (time, latitude, longitude) in [
            (f64::NAN, 0.0, 0.0),
            (0.0, f64::NAN, 0.0),
            (0.0, 0.0, f64::INFINITY),
            (1e10, 0.0, 0.0),
            (0.0, 91.0, 0.0),
        ] {
            let (zenith, azimuth) = sun_angles(time, latitude, longitude);
            assert!(zenith.is_nan() && azimuth.is_nan(), "{time} {latitude} {longitude}");
        }
    }
}
