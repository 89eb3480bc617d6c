//! How alike two spectra are. Channels that are missing in either do not count.

/// Least share of the channels that both spectra must have.
const LEAST_COMMON: f64 = 0.5;

/// The root mean square of the differences: K for brightness temperatures. NaN where less than half
/// of the channels are common.
pub fn distance(one: &[f64], other: &[f64]) -> f64 {
    let (mut sum, mut count) = (0.0, 0usize);
    for (a, b) in common(one, other) {
        sum += (a - b) * (a - b);
        count += 1;
    }
    if enough(count, one.len()) { (sum / count as f64).sqrt() } else { f64::NAN }
}

/// The angle between two spectra as vectors, degrees: 0 for spectra of one shape, however bright
/// [Kruse et al. 1993]. NaN where less than half of the channels are common or a spectrum is zero.
pub fn spectral_angle(one: &[f64], other: &[f64]) -> f64 {
    let (mut product, mut first, mut second, mut count) = (0.0, 0.0, 0.0, 0usize);
    for (a, b) in common(one, other) {
        product += a * b;
        first += a * a;
        second += b * b;
        count += 1;
    }
    if !enough(count, one.len()) {
        return f64::NAN;
    }
    // Not by the arc cosine, which loses half of the digits of small angles.
    let across = (first * second - product * product).max(0.0).sqrt();
    if first * second > 0.0 { across.atan2(product).to_degrees() } else { f64::NAN }
}

fn common<'a>(one: &'a [f64], other: &'a [f64]) -> impl Iterator<Item = (f64, f64)> + 'a {
    let pairs = one.iter().copied().zip(other.iter().copied());
    pairs.filter(|(a, b)| a.is_finite() && b.is_finite())
}

fn enough(count: usize, all: usize) -> bool {
    count > 0 && count as f64 >= LEAST_COMMON * all as f64
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Closed forms: angles of the plane, and the theorem of Pythagoras.
    #[test]
    fn angles_and_distances_are_those_of_plane_geometry() {
        for (one, other, angle) in [
            ([1.0, 0.0], [1.0, 1.0], 45.0),
            ([1.0, 0.0], [0.0, 3.0], 90.0),
            ([1.0, 1.0], [-2.0, -2.0], 180.0),
            ([1.0, 0.0], [3f64.sqrt(), 1.0], 30.0),
        ] {
            // A few roundings of numbers of order 1, and a square root of their difference.
            assert!((spectral_angle(&one, &other) - angle).abs() < 1e-6, "{angle}");
        }
        assert_eq!(distance(&[3.0, 0.0], &[0.0, 4.0]), (25.0f64 / 2.0).sqrt());
    }

    #[test]
    fn brightness_changes_the_distance_and_not_the_angle() {
        let one = [60.0, 80.0, 100.0, 90.0];
        let brighter = one.map(|value| 1.25 * value);
        assert!(spectral_angle(&one, &brighter) < 1e-5);
        assert!(distance(&one, &brighter) > 10.0);
    }

    #[test]
    fn missing_channels_do_not_count_and_too_many_leave_no_answer() {
        let gap = [1.0, f64::NAN, 3.0, 4.0];
        assert_eq!(distance(&gap, &[1.0, 2.0, 3.0, 8.0]), (16.0f64 / 3.0).sqrt());
        let mostly = [f64::NAN, f64::NAN, f64::NAN, 4.0];
        assert!(distance(&mostly, &gap).is_nan() && spectral_angle(&mostly, &gap).is_nan());
        assert!(distance(&[], &[]).is_nan());
        assert!(spectral_angle(&[0.0, 0.0], &[1.0, 2.0]).is_nan());
    }
}
