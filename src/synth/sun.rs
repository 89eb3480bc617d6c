//! Where the sun stands: good to about a degree, which is enough for synthetic light.

use super::swath::Position;

/// Zenith and azimuth angle of the sun (degrees, azimuth clockwise from north) at a place and time.
///
/// `seconds` count from 2000-01-01 00:00 UTC. Mean sun on a round Earth: the equation of time (16
/// minutes at most) is left out.
pub fn sun_angles(seconds: f64, place: Position) -> (f64, f64) {
    let days = seconds / 86_400.0;
    let year_angle = 2.0 * std::f64::consts::PI * (days - 80.0) / 365.2422;
    let declination = (23.44f64.to_radians().sin() * year_angle.sin()).asin();
    let hours = days.rem_euclid(1.0) * 24.0;
    let hour_angle = ((hours - 12.0) * 15.0 + place.longitude).to_radians();
    let latitude = place.latitude.to_radians();
    let cosine =
        latitude.sin() * declination.sin() + latitude.cos() * declination.cos() * hour_angle.cos();
    let azimuth = (-hour_angle.sin() * declination.cos()).atan2(
        declination.sin() * latitude.cos() - declination.cos() * latitude.sin() * hour_angle.cos(),
    );
    (cosine.clamp(-1.0, 1.0).acos().to_degrees(), azimuth.to_degrees().rem_euclid(360.0))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn noon_and_midnight_at_the_june_solstice() {
        // Day 172 of 2000 (20 June): declination 23.4 degrees. At 50 N the sun culminates at
        // 90 - 50 + 23.4 = 63.4 degrees in the south, so its zenith angle is 26.6; 0.5 degrees for
        // the mean sun.
        let place = Position { latitude: 50.0, longitude: 0.0 };
        let (zenith, azimuth) = sun_angles(171.5 * 86_400.0, place);
        assert!((zenith - 26.6).abs() < 0.5, "{zenith}");
        assert!((azimuth - 180.0).abs() < 1.0, "{azimuth}");
        let (midnight, _) = sun_angles(171.0 * 86_400.0, place);
        assert!((midnight - (180.0 - 50.0 - 23.4)).abs() < 0.5, "{midnight}");
    }

    #[test]
    fn mornings_have_the_sun_in_the_east() {
        let (_, azimuth) = sun_angles(80.25 * 86_400.0, Position { latitude: 0.0, longitude: 0.0 });
        assert!((azimuth - 90.0).abs() < 2.0, "{azimuth}");
    }
}
