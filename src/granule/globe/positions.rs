//! Footprints as points on the unit sphere.

/// A vector in three dimensions.
pub type Vector = [f64; 3];

/// The point at a latitude and longitude in degrees; `None` where either is missing or the
/// latitude lies beyond a pole.
pub fn point(latitude: f64, longitude: f64) -> Option<Vector> {
    if !longitude.is_finite() || latitude.is_nan() || latitude.abs() > 90.0 {
        return None;
    }
    let (latitude, longitude) = (latitude.to_radians(), longitude.to_radians());
    Some([latitude.cos() * longitude.cos(), latitude.cos() * longitude.sin(), latitude.sin()])
}

/// `one - other`.
pub fn minus(one: Vector, other: Vector) -> Vector {
    [one[0] - other[0], one[1] - other[1], one[2] - other[2]]
}

/// `factor * vector`.
pub fn times(factor: f64, vector: Vector) -> Vector {
    vector.map(|component| factor * component)
}

/// The scalar product.
pub fn dot(one: Vector, other: Vector) -> f64 {
    one[0] * other[0] + one[1] * other[1] + one[2] * other[2]
}

/// The vector product.
pub fn cross(one: Vector, other: Vector) -> Vector {
    [
        one[1] * other[2] - one[2] * other[1],
        one[2] * other[0] - one[0] * other[2],
        one[0] * other[1] - one[1] * other[0],
    ]
}

/// The mean of the points that are there.
pub fn mean(points: &[Option<Vector>]) -> Option<Vector> {
    let (mut sum, mut count) = ([0.0; 3], 0.0);
    for point in points.iter().flatten() {
        sum = [sum[0] + point[0], sum[1] + point[1], sum[2] + point[2]];
        count += 1.0;
    }
    (count > 0.0).then(|| times(1.0 / count, sum))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_date_line_and_the_poles_are_ordinary_places() {
        let apart = |one: Vector, other: Vector| dot(minus(one, other), minus(one, other)).sqrt();
        let one = point(0.0, 179.99).unwrap();
        let other = point(0.0, -179.99).unwrap();
        // An arc of 0.02 degrees; arc and chord differ by less than 1e-11 here.
        assert!((apart(one, other) - 0.02_f64.to_radians()).abs() < 1e-10);
        // cos(90 degrees) is 6e-17 in floating point.
        assert!(apart(point(90.0, 10.0).unwrap(), point(90.0, 200.0).unwrap()) < 1e-15);
    }

    #[test]
    fn what_is_no_place_is_none() {
        assert_eq!(point(f64::NAN, 0.0), None);
        assert_eq!(point(0.0, f64::INFINITY), None);
        assert_eq!(point(-90.1, 0.0), None);
    }
}
