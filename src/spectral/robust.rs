//! Middle and width of a set of numbers that outliers do not move.

/// From the median absolute deviation to the standard deviation of normal numbers: 1 / 0.67449.
const NORMAL: f64 = 1.482_602_218_505_602;

/// The median: of an even count the mean of the two in the middle. NaN without numbers; what is not a
/// number must not be there. The order of `values` changes.
pub fn median(values: &mut [f64]) -> f64 {
    let count = values.len();
    if count == 0 {
        return f64::NAN;
    }
    let (below, middle, _) = values.select_nth_unstable_by(count / 2, f64::total_cmp);
    match count % 2 {
        1 => *middle,
        _ => 0.5 * (*middle + below.iter().copied().fold(f64::NEG_INFINITY, f64::max)),
    }
}

/// The standard deviation of numbers around zero, from the median of their sizes
/// [Rousseeuw & Croux 1993]. For normal numbers it is as large as the standard deviation; up to half
/// of the numbers may be outliers. The order of `values` changes, and so do their signs.
pub fn deviation_from_zero(values: &mut [f64]) -> f64 {
    values.iter_mut().for_each(|value| *value = value.abs());
    NORMAL * median(values)
}

/// Median and standard deviation of numbers around it, from the median absolute deviation. The
/// order of `values` changes, and the median is taken off.
pub fn centre_and_deviation(values: &mut [f64]) -> (f64, f64) {
    let centre = median(values);
    values.iter_mut().for_each(|value| *value -= centre);
    (centre, deviation_from_zero(values))
}

/// The median of each number and its neighbours, up to `reach` places to either side; what is not a
/// number is passed over. NaN where nothing is there.
pub fn running_median(values: &[f64], reach: usize) -> Vec<f64> {
    let around = |place: usize| {
        let range = place.saturating_sub(reach)..(place + reach + 1).min(values.len());
        let mut there: Vec<f64> =
            values[range].iter().copied().filter(|one| !one.is_nan()).collect();
        median(&mut there)
    };
    (0..values.len()).map(around).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn medians_of_few() {
        assert_eq!(median(&mut [3.0, 1.0, 2.0]), 2.0);
        assert_eq!(median(&mut [4.0, 1.0, 3.0, 2.0]), 2.5);
        assert!(median(&mut []).is_nan());
    }

    #[test]
    fn normal_numbers_have_their_standard_deviation_and_outliers_change_little() {
        // Quantiles of the normal distribution stand for normal numbers (Abramowitz & Stegun 26.2.23,
        // good to 4.5e-4).
        let quantile = |p: f64| {
            let t = (-2.0 * p.min(1.0 - p).ln()).sqrt();
            let top = 2.515517 + t * (0.802853 + t * 0.010328);
            let x = t - top / (1.0 + t * (1.432788 + t * (0.189269 + t * 0.001308)));
            if p < 0.5 { -x } else { x }
        };
        let mut values: Vec<f64> =
            (0..999).map(|at| 5.0 + 2.0 * quantile((at as f64 + 0.5) / 999.0)).collect();
        let (centre, deviation) = centre_and_deviation(&mut values.clone());
        assert!((centre - 5.0).abs() < 2e-3 && (deviation - 2.0).abs() < 5e-3, "{deviation}");
        values.extend([1e6; 50]);
        let (_, deviation) = centre_and_deviation(&mut values);
        // A twentieth of outliers moves the quantile from 0.5 to 0.525.
        assert!((deviation - 2.0).abs() < 0.2, "{deviation}");
    }

    #[test]
    fn one_that_stands_out_does_not_move_its_neighbours() {
        let medians = running_median(&[1.0, 1.1, 9.0, f64::NAN, 1.2], 1);
        assert_eq!(medians[..2], [1.05, 1.1]);
        assert_eq!(running_median(&[f64::NAN], 3)[0].to_bits(), f64::NAN.to_bits());
    }
}
