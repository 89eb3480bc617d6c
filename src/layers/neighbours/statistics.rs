//! Statistics of a layer over each footprint's neighbourhood.

use rayon::prelude::*;

use super::lists::{MOST, Neighbours};
use crate::layers::syntax::Statistic;

/// A neighbourhood needs this many valid values, its own among them.
pub const FEWEST: usize = 5;

/// Fewer footprints than this are done before other threads have woken up.
const PARALLEL_FROM: usize = 1 << 16;

/// The statistic of `values` over each neighbourhood. Missing where the footprint's own value is
/// missing, and where fewer than [`FEWEST`] values are there.
pub fn neighbourhood(statistic: Statistic, values: &[f64], neighbours: &Neighbours) -> Vec<f64> {
    let at = |footprint: usize| around(statistic, values, neighbours, footprint);
    if values.len() < PARALLEL_FROM {
        (0..values.len()).map(at).collect()
    } else {
        (0..values.len()).into_par_iter().map(at).collect()
    }
}

fn around(statistic: Statistic, values: &[f64], neighbours: &Neighbours, footprint: usize) -> f64 {
    if values[footprint].is_nan() {
        return f64::NAN;
    }
    let mut present = [0.0; MOST];
    let mut count = 0;
    for &beside in neighbours.of(footprint) {
        let value = values.get(beside as usize).copied().unwrap_or(f64::NAN);
        if !value.is_nan() {
            present[count] = value;
            count += 1;
        }
    }
    if count < FEWEST { f64::NAN } else { of(statistic, &present[..count]) }
}

/// The statistic of `values` over each cluster of `size` footprints in a row. Missing where the
/// footprint's own value is missing, and where half of the cluster or more is.
pub fn cluster(statistic: Statistic, values: &[f64], size: usize) -> Vec<f64> {
    let mut out = Vec::with_capacity(values.len());
    for cluster in values.chunks(size.max(1)) {
        let present: Vec<f64> = cluster.iter().copied().filter(|value| !value.is_nan()).collect();
        let enough = present.len() >= 2 && 2 * present.len() > size;
        let common = if enough { of(statistic, &present) } else { f64::NAN };
        out.extend(cluster.iter().map(|own| if own.is_nan() { f64::NAN } else { common }));
    }
    out
}

fn of(statistic: Statistic, values: &[f64]) -> f64 {
    let least = || values.iter().copied().fold(f64::INFINITY, f64::min);
    let most = || values.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    match statistic {
        Statistic::Mean => mean(values),
        Statistic::StandardDeviation => {
            let mean = mean(values);
            let squares: f64 = values.iter().map(|value| (value - mean) * (value - mean)).sum();
            (squares / values.len() as f64).sqrt()
        }
        Statistic::Minimum => least(),
        Statistic::Maximum => most(),
        Statistic::Range => most() - least(),
    }
}

fn mean(values: &[f64]) -> f64 {
    values.iter().sum::<f64>() / values.len() as f64
}

#[cfg(test)]
mod tests {
    use super::*;

    const NAN: f64 = f64::NAN;

    /// 3 x 3 footprints; the middle one has all nine around it, those at the edges six.
    fn at_the_middle(statistic: Statistic, values: [f64; 9]) -> f64 {
        neighbourhood(statistic, &values, &Neighbours::by_array(&[3, 3]))[4]
    }

    #[test]
    fn the_deviation_is_that_of_the_population() {
        // Worked by hand: the mean of 2,4,4,4,5,5,7,9,5 is 5, the squares sum to 32.
        let values = [2.0, 4.0, 4.0, 4.0, 5.0, 5.0, 7.0, 9.0, 5.0];
        let expected = (32.0_f64 / 9.0).sqrt();
        let found = at_the_middle(Statistic::StandardDeviation, values);
        assert!((found - expected).abs() < 1e-15, "one rounding apart at the most: {found}");
        assert_eq!(at_the_middle(Statistic::Mean, values), 5.0);
        assert_eq!(at_the_middle(Statistic::Minimum, values), 2.0);
        assert_eq!(at_the_middle(Statistic::Maximum, values), 9.0);
        assert_eq!(at_the_middle(Statistic::Range, values), 7.0);
    }

    #[test]
    fn only_valid_values_count_and_five_are_needed() {
        let five = [1.0, 1.0, 3.0, 3.0, 2.0, NAN, NAN, NAN, NAN];
        // Worked by hand: mean 2, squares 1 + 1 + 1 + 1 + 0 = 4, of five.
        let found = at_the_middle(Statistic::StandardDeviation, five);
        assert!((found - 0.8_f64.sqrt()).abs() < 1e-15, "{found}");
        let four = [1.0, 1.0, 3.0, NAN, 2.0, NAN, NAN, NAN, NAN];
        assert!(at_the_middle(Statistic::Mean, four).is_nan());
    }

    #[test]
    fn a_footprint_without_a_value_has_no_statistic() {
        let values = [1.0, 1.0, 1.0, 1.0, NAN, 1.0, 1.0, 1.0, 1.0];
        assert!(at_the_middle(Statistic::Mean, values).is_nan());
    }

    #[test]
    fn clusters_stand_apart_and_need_more_than_half() {
        // Worked by hand: 1, 3, 5, 7 have the mean 4 and squares of 9 + 1 + 1 + 9 = 20, of four.
        let values = [1.0, 3.0, 5.0, 7.0, 9.0, NAN, 9.0, 12.0, NAN, NAN, 8.0, 8.0];
        let spread = cluster(Statistic::StandardDeviation, &values, 4);
        assert_eq!(spread[..4], [5.0_f64.sqrt(); 4]);
        let range = cluster(Statistic::Range, &values, 4);
        assert_eq!((range[3], range[4], range[7]), (6.0, 3.0, 3.0));
        assert!(range[5].is_nan(), "no value of its own");
        assert!(range[8..].iter().all(|value| value.is_nan()), "half of the cluster is missing");
        assert!(cluster(Statistic::Range, &values, 1).iter().all(|value| value.is_nan()));
    }

    #[test]
    fn corners_have_four_and_so_nothing() {
        let all = neighbourhood(Statistic::Mean, &[1.0; 9], &Neighbours::by_array(&[3, 3]));
        assert!([0, 2, 6, 8].iter().all(|corner: &usize| all[*corner].is_nan()));
        assert!([1, 3, 5, 7].iter().all(|edge: &usize| all[*edge] == 1.0));
    }
}
