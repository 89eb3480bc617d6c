//! What follows from the geolocation: day and night, sun glint, the time of the year.

/// Below this zenith angle of the sun, degrees, it is day; common practice of imager schemes.
const DAY_BELOW: f64 = 85.0;
/// Above this zenith angle of the sun, degrees, it is night; between the two is twilight.
const NIGHT_ABOVE: f64 = 90.0;

/// A field by name, if the file has it.
type Fields<'f> = dyn Fn(&str) -> Option<&'f [f64]> + 'f;

/// The values of a derived name over all footprints, NaN where a field is.
///
/// # Errors
/// The field that is needed and that the file does not give.
pub fn derive(name: &str, fields: &Fields<'_>) -> Result<Vec<f64>, &'static str> {
    let of_sun = |holds: fn(f64) -> bool| {
        let zenith = needed("solar_zenith", fields)?;
        Ok(zenith.iter().map(|zenith| truth(*zenith, holds)).collect())
    };
    match name {
        "day" => of_sun(|zenith| zenith < DAY_BELOW),
        "twilight" => of_sun(|zenith| (DAY_BELOW..=NIGHT_ABOVE).contains(&zenith)),
        "night" => of_sun(|zenith| zenith > NIGHT_ABOVE),
        "glint_angle" => glint_angles(fields),
        "season" => {
            let times = needed("time", fields)?.iter().zip(needed("lat", fields)?);
            Ok(times.map(|(time, latitude)| season(*time, *latitude)).collect())
        }
        _ => Ok(needed("time", fields)?.iter().map(|time| day_of_year(*time)).collect()),
    }
}

fn needed<'f>(name: &'static str, fields: &Fields<'f>) -> Result<&'f [f64], &'static str> {
    fields(name).ok_or(name)
}

fn truth(value: f64, holds: fn(f64) -> bool) -> f64 {
    if value.is_nan() { f64::NAN } else { f64::from(u8::from(holds(value))) }
}

fn glint_angles(fields: &Fields<'_>) -> Result<Vec<f64>, &'static str> {
    let view = needed("view_zenith", fields)?.iter().zip(needed("view_azimuth", fields)?);
    let sun = needed("solar_zenith", fields)?.iter().zip(needed("solar_azimuth", fields)?);
    Ok(view.zip(sun).map(|((vz, va), (sz, sa))| glint_angle(*vz, *va, *sz, *sa)).collect())
}

/// Angle between the line of sight and the mirror image of the sun in flat water, degrees.
///
/// cos g = cos v cos s - sin v sin s cos(a_v - a_s), v and s the zenith angles of view and sun. Both
/// azimuths are directions seen from the footprint, as CF defines them; the mirror image lies
/// opposite the sun. Source: geometry; the guard is that of [Ackerman et al. 2010].
fn glint_angle(view: f64, view_azimuth: f64, sun: f64, sun_azimuth: f64) -> f64 {
    let (view, sun) = (view.to_radians(), sun.to_radians());
    let between = (view_azimuth - sun_azimuth).to_radians();
    let cosine = view.cos() * sun.cos() - view.sin() * sun.sin() * between.cos();
    cosine.clamp(-1.0, 1.0).acos().to_degrees()
}

/// Days since the beginning of the year, UTC.
fn day_of_year(time: f64) -> f64 {
    // Beyond these seconds no calendar year is meant.
    if time.is_nan() || time.abs() > 1e11 {
        return f64::NAN;
    }
    let days = (time / 86_400.0).floor();
    let in_day = time / 86_400.0 - days;
    let year = year_of(days as i64);
    (days as i64 - days_before(year)) as f64 + in_day
}

/// From -1 in the depth of winter to 1 in the height of summer: the cosine of the year with its
/// peak on 22 July north of the equator, a month behind the sun as ground and air are, and half a
/// year later south of it. Source: common practice.
fn season(time: f64, latitude: f64) -> f64 {
    /// 22 July.
    const WARMEST: f64 = 202.0;
    let phase = (day_of_year(time) - WARMEST) / 365.25 * std::f64::consts::TAU;
    // The sign of a missing latitude is missing, too.
    phase.cos() * latitude.signum()
}

/// The year in which a day lies, counted from 1970-01-01.
fn year_of(day: i64) -> i64 {
    // A Gregorian cycle of 400 years has 146097 days; the guess is off by one at the most.
    let guess = 1970 + day.div_euclid(146_097) * 400 + day.rem_euclid(146_097) * 400 / 146_097;
    [guess + 1, guess].into_iter().find(|year| days_before(*year) <= day).unwrap_or(guess - 1)
}

/// Days from 1970-01-01 to the first of January of a year.
fn days_before(year: i64) -> i64 {
    let leap_days = |year: i64| year.div_euclid(4) - year.div_euclid(100) + year.div_euclid(400);
    (year - 1970) * 365 + leap_days(year - 1) - leap_days(1969)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_sun_mirrored_in_the_line_of_sight_is_glint() {
        // Sun in the south, 30 degrees off the zenith; the view is from the north at 30 degrees.
        assert!(glint_angle(30.0, 0.0, 30.0, 180.0).abs() < 1e-5);
        // Seen from the sun's own direction the mirror image is twice the angle away.
        assert!((glint_angle(30.0, 180.0, 30.0, 180.0) - 60.0).abs() < 1e-9);
        assert!((glint_angle(0.0, 77.0, 40.0, 10.0) - 40.0).abs() < 1e-9);
        assert!(glint_angle(30.0, f64::NAN, 30.0, 180.0).is_nan());
    }

    #[test]
    fn days_are_counted_as_the_calendar_does() {
        for (text, expected) in [
            ("1969-12-31T12:00:00Z", 364.5),
            ("1970-01-01T00:00:00Z", 0.0),
            // 31 days of January and 28 of February lie before.
            ("2000-02-29T06:00:00Z", 59.25),
            ("2024-12-31T18:00:00Z", 365.75),
            ("2026-09-14T12:00:00Z", 256.5),
            // No leap year.
            ("2100-03-01T00:00:00Z", 59.0),
        ] {
            let moment: jiff::Timestamp = text.parse().unwrap();
            assert_eq!(day_of_year(moment.as_second() as f64), expected, "{text}");
        }
        assert!(day_of_year(f64::NAN).is_nan());
    }

    #[test]
    fn seasons_turn_at_the_equator() {
        let at = |text: &str, latitude| {
            let moment: jiff::Timestamp = text.parse().unwrap();
            season(moment.as_second() as f64, latitude)
        };
        assert_eq!(at("2026-07-22T00:00:00Z", 50.0), 1.0);
        assert_eq!(at("2026-07-22T00:00:00Z", -50.0), -1.0);
        // Half a year on it is the other way round, to a day's change of the cosine near its peak.
        assert!(at("2027-01-21T00:00:00Z", 50.0) < -0.999);
        assert!(at("2027-01-21T00:00:00Z", -50.0) > 0.999);
        // A quarter of a year on: neither; a day moves it by 0.017.
        assert!(at("2026-10-21T00:00:00Z", 50.0).abs() < 0.02);
        assert!(at("2026-07-22T00:00:00Z", f64::NAN).is_nan());
    }

    #[test]
    fn what_the_file_lacks_is_named() {
        let zenith = [80.0, 87.0, 95.0, f64::NAN];
        let fields = |name: &str| (name == "solar_zenith").then_some(&zenith[..]);
        let as_text = |name| format!("{:?}", derive(name, &fields));
        assert_eq!(as_text("day"), "Ok([1.0, 0.0, 0.0, NaN])");
        assert_eq!(as_text("twilight"), "Ok([0.0, 1.0, 0.0, NaN])");
        assert_eq!(as_text("night"), "Ok([0.0, 0.0, 1.0, NaN])");
        assert_eq!(derive("glint_angle", &fields), Err("view_zenith"));
    }
}
