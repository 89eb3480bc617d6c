//! Spectral axes that a file gives once more for each detector or scan line.

/// Rows that differ by less than this share of the distance between channels are the same: lines are
/// far wider, and what is stored in single precision is far finer.
const SAME: f64 = 0.01;

/// What became of an axis over several dimensions.
#[derive(Debug, PartialEq)]
pub enum Rows {
    /// All rows agree; this is the first that is whole.
    Same(Vec<f64>),
    /// They differ by as much, in the axis's unit.
    Differ(f64),
    /// Its values change less along the dimension than across it: another one is spectral.
    Across,
}

/// Takes an axis apart: row-major `values` over `lengths`, with the channels along `along`.
pub fn rows(values: &[f64], lengths: &[usize], along: usize) -> Rows {
    let channels = lengths[along];
    let inner: usize = lengths[along + 1..].iter().product();
    let outer: usize = lengths[..along].iter().product();
    let at = |row: usize, channel: usize| {
        let (before, behind) = (row / inner.max(1), row % inner.max(1));
        values[(before * channels + channel) * inner + behind]
    };
    let row = |row: usize| (0..channels).map(|channel| at(row, channel)).collect::<Vec<f64>>();
    let all = 0..outer * inner;
    let Some(first) = all.clone().map(row).find(|row| row.iter().all(|value| value.is_finite()))
    else {
        return Rows::Across;
    };
    let apart = |row: usize| {
        let apart = (0..channels).map(|channel| (at(row, channel) - first[channel]).abs());
        // Rows without values, as of a detector that is not there, say nothing.
        apart.filter(|apart| apart.is_finite()).fold(0.0, f64::max)
    };
    let widest = all.map(apart).fold(0.0, f64::max);
    let spacing = first.windows(2).map(|pair| (pair[1] - pair[0]).abs()).fold(f64::MAX, f64::min);
    let range = (first[channels - 1] - first[0]).abs();
    match widest {
        widest if channels > 1 && widest <= SAME * spacing => Rows::Same(first),
        widest if widest < range => Rows::Differ(widest),
        _ => Rows::Across,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn equal_rows_are_one_axis_whichever_way_they_lie() {
        let nan = f64::NAN;
        let by_detector = [nan, nan, nan, 900.0, 901.0, 902.0, 900.0, 901.001, 902.0];
        assert_eq!(rows(&by_detector, &[3, 3], 1), Rows::Same(vec![900.0, 901.0, 902.0]));
        let channels_first = [900.0, 900.0, 901.0, 901.0, 902.0, 902.0];
        assert_eq!(rows(&channels_first, &[3, 2], 0), Rows::Same(vec![900.0, 901.0, 902.0]));
        assert_eq!(rows(&channels_first, &[3, 2], 1), Rows::Across);
    }

    #[test]
    fn rows_that_differ_are_told_with_how_much() {
        let shifted = [900.0, 901.0, 902.0, 900.25, 901.25, 902.25];
        assert_eq!(rows(&shifted, &[2, 3], 1), Rows::Differ(0.25));
        assert_eq!(rows(&[f64::NAN; 6], &[2, 3], 1), Rows::Across);
    }
}
