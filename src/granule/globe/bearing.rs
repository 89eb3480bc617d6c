//! Directions on the globe.

/// The direction in which a great circle leaves one place for another: degrees clockwise from north,
/// from 0 to 360. Missing where a place is, or where both are the same. Places in degrees.
///
/// tan b = sin dl cos f2 / (cos f1 sin f2 - sin f1 cos f2 cos dl). Source: spherical trigonometry.
pub fn bearing(from: (f64, f64), to: (f64, f64)) -> f64 {
    let (from_latitude, to_latitude) = (from.0.to_radians(), to.0.to_radians());
    let between = (to.1 - from.1).to_radians();
    let east = between.sin() * to_latitude.cos();
    let north = from_latitude.cos() * to_latitude.sin()
        - from_latitude.sin() * to_latitude.cos() * between.cos();
    // Below this (0.6 m) rounding decides.
    if east.hypot(north) < 1e-7 {
        f64::NAN
    } else {
        east.atan2(north).to_degrees().rem_euclid(360.0)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_directions_of_the_compass() {
        for (to, expected) in [((1.0, 0.0), 0.0), ((0.0, 1.0), 90.0), ((-1.0, 0.0), 180.0)] {
            assert!((bearing((0.0, 0.0), to) - expected).abs() < 1e-12, "{to:?}");
        }
        // Over the date line; from 60 N, a quarter around the globe eastwards lies due east.
        assert!((bearing((0.0, 179.0), (0.0, -179.0)) - 90.0).abs() < 1e-12);
        assert!((bearing((60.0, 0.0), (0.0, 90.0)) - 90.0).abs() < 1e-12);
        assert!(bearing((10.0, 20.0), (10.0, 20.0)).is_nan());
        assert!(bearing((f64::NAN, 20.0), (10.0, 20.0)).is_nan());
    }
}
