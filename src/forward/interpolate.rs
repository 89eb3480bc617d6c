//! Tables of a few points.

/// Linear interpolation between points ascending in x; flat beyond the ends.
pub(super) fn linear(points: &[(f64, f64)], x: f64) -> f64 {
    let above = points.partition_point(|point| point.0 < x);
    match (above.checked_sub(1).and_then(|below| points.get(below)), points.get(above)) {
        (Some(low), Some(high)) => low.1 + (x - low.0) / (high.0 - low.0) * (high.1 - low.1),
        (Some(end), None) | (None, Some(end)) => end.1,
        (None, None) => f64::NAN,
    }
}

#[cfg(test)]
mod tests {
    use super::linear;

    #[test]
    fn between_and_beyond() {
        let points = [(1.0, 10.0), (2.0, 20.0), (4.0, 0.0)];
        assert_eq!(linear(&points, 1.5), 15.0);
        assert_eq!(linear(&points, 3.0), 10.0);
        assert_eq!(linear(&points, 0.0), 10.0);
        assert_eq!(linear(&points, 9.0), 0.0);
    }
}
