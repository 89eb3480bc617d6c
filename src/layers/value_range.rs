//! The range of a layer's numbers, for colour scales.

/// How a layer's numbers are spread.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ValueRange {
    /// The smallest.
    pub minimum: f64,
    /// The largest.
    pub maximum: f64,
    /// The value below which 2 % lie: a scale's lower end that single outliers don't stretch.
    pub low: f64,
    /// The value below which 98 % lie.
    pub high: f64,
    /// Footprints that have a number.
    pub present: usize,
}

impl ValueRange {
    /// Of the numbers that are not NaN; `None` when all are.
    pub fn of(values: &[f64]) -> Option<Self> {
        let mut present: Vec<f64> =
            values.iter().copied().filter(|value| !value.is_nan()).collect();
        let minimum = present.iter().copied().reduce(f64::min)?;
        let maximum = present.iter().copied().reduce(f64::max)?;
        Some(Self {
            minimum,
            maximum,
            low: quantile(&mut present, 0.02),
            high: quantile(&mut present, 0.98),
            present: present.len(),
        })
    }
}

/// The value of the nearest rank, in linear time; `values` is not empty.
fn quantile(values: &mut [f64], share: f64) -> f64 {
    let rank = (share * (values.len() - 1) as f64).round() as usize;
    *values.select_nth_unstable_by(rank, f64::total_cmp).1
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn outliers_are_outside_of_the_inner_range() {
        // 1 to 99 in a shuffled order, and two outliers.
        let mut values: Vec<f64> =
            (1..=99_u32).map(|number| f64::from(number * 37 % 100)).collect();
        values.extend([-1000.0, 5000.0, f64::NAN]);
        let range = ValueRange::of(&values).unwrap();
        assert_eq!((range.minimum, range.maximum, range.present), (-1000.0, 5000.0, 101));
        // Ranks 2 and 98 of 0 to 100, where rank 1 is the smallest of 1 to 99.
        assert_eq!((range.low, range.high), (2.0, 98.0));
    }

    #[test]
    fn nothing_has_no_range_and_one_number_is_all_of_it() {
        assert_eq!(ValueRange::of(&[f64::NAN]), None);
        assert_eq!(ValueRange::of(&[]), None);
        let one = ValueRange::of(&[3.0, f64::NAN]).unwrap();
        assert_eq!((one.minimum, one.low, one.high, one.maximum), (3.0, 3.0, 3.0, 3.0));
    }
}
