//! How often values fall between limits, and where two heaps part.

/// Counts of values in bins of equal width.
#[derive(Debug, Clone, PartialEq)]
pub struct Histogram {
    /// Where the first bin begins.
    pub low: f64,
    /// Where the last bin ends.
    pub high: f64,
    /// Values per bin; the last bin takes its upper end in.
    pub counts: Vec<usize>,
}

/// Bins that a valley is looked for in: fine enough for a threshold, coarse enough for a granule.
const BINS: usize = 128;
/// Share of the values at each end that may be strays: they would squeeze all others into few bins.
const STRAYS: f64 = 0.005;

impl Histogram {
    /// Counts values from `low` to `high`; values outside and missing ones do not count.
    pub fn of(values: impl Iterator<Item = f64>, low: f64, high: f64, bins: usize) -> Histogram {
        let mut counts = vec![0; bins];
        for value in values {
            if let Some(count) = bin_of(value, low, high, bins).and_then(|bin| counts.get_mut(bin))
            {
                *count += 1;
            }
        }
        Histogram { low, high, counts }
    }

    /// The threshold that parts two heaps: the edge between bins that makes the variance between the
    /// two classes largest [Otsu 1979]. `None` where all values lie in one bin.
    pub fn valley(&self) -> Option<f64> {
        let all: f64 = self.counts.iter().map(|count| *count as f64).sum();
        let moment = |(bin, count): (usize, &usize)| bin as f64 * *count as f64;
        let whole: f64 = self.counts.iter().enumerate().map(moment).sum();
        let (mut below, mut first) = (0.0, 0.0);
        let mut best: Option<(f64, usize)> = None;
        for (bin, count) in self.counts.iter().enumerate() {
            below += *count as f64;
            first += moment((bin, count));
            let above = all - below;
            if below == 0.0 || above == 0.0 {
                continue;
            }
            let apart = first / below - (whole - first) / above;
            let variance = below * above * apart * apart;
            if best.is_none_or(|(most, _)| variance > most) {
                best = Some((variance, bin));
            }
        }
        let (_, bin) = best?;
        let width = (self.high - self.low) / self.counts.len() as f64;
        Some(self.low + (bin + 1) as f64 * width)
    }
}

/// The bin of a value, if it lies within.
pub fn bin_of(value: f64, low: f64, high: f64, bins: usize) -> Option<usize> {
    let share = (value - low) / (high - low);
    let inside = (0.0..=1.0).contains(&share);
    inside.then(|| ((share * bins as f64) as usize).min(bins.saturating_sub(1)))
}

/// From where to where most values lie, without strays; `None` where no two values differ.
pub fn usual_range(values: &[f64]) -> Option<(f64, f64)> {
    let mut finite: Vec<f64> = values.iter().copied().filter(|value| value.is_finite()).collect();
    let last = finite.len().checked_sub(1)?;
    let tail = (finite.len() as f64 * STRAYS) as usize;
    let low = *finite.select_nth_unstable_by(tail, f64::total_cmp).1;
    let high = *finite.select_nth_unstable_by(last - tail, f64::total_cmp).1;
    if low < high {
        return Some((low, high));
    }
    let ends =
        finite.iter().fold((low, high), |(low, high), value| (low.min(*value), high.max(*value)));
    (ends.0 < ends.1).then_some(ends)
}

/// The valley between two heaps of values, strays left out of account.
pub fn proposed_threshold(values: &[f64]) -> Option<f64> {
    let (low, high) = usual_range(values)?;
    Histogram::of(values.iter().copied(), low, high, BINS).valley()
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The thresholds of a general-purpose image library for the same counts.
    #[test]
    fn valleys_agree_with_the_stored_table() {
        let table = include_str!("../../tests/reference_tables/otsu_thresholds.csv");
        let rows = table.lines().filter(|line| !line.starts_with('#')).skip(1);
        let mut seen = 0;
        for row in rows {
            let fields: Vec<&str> = row.split(',').collect();
            let number = |at: usize| fields[at].parse::<f64>().unwrap();
            let counts: Vec<usize> =
                fields[4].split_whitespace().map(|count| count.parse().unwrap()).collect();
            let histogram = Histogram { low: number(1), high: number(2), counts };
            let width = (number(2) - number(1)) / histogram.counts.len() as f64;
            // The table names the middle of the last bin of the lower class, we its upper edge.
            let expected = number(3) + width / 2.0;
            let found = histogram.valley().unwrap();
            // Both sides are a few roundings of the same sum.
            assert!((found - expected).abs() < 1e-9 * expected.abs().max(1.0), "{}", fields[0]);
            seen += 1;
        }
        assert!(seen >= 5);
    }

    #[test]
    fn two_heaps_are_parted_between_them() {
        let values = [1.0, 1.0, 2.0, 8.0, 9.0, 9.0];
        let histogram = Histogram::of(values.into_iter(), 1.0, 9.0, 8);
        assert_eq!(histogram.counts, [2, 1, 0, 0, 0, 0, 0, 3]);
        assert_eq!(histogram.valley(), Some(3.0), "the first edge behind the lower heap");
        assert_eq!(Histogram::of([5.0; 4].into_iter(), 1.0, 9.0, 8).valley(), None);
    }

    #[test]
    fn strays_and_missing_values_do_not_count() {
        let mut values: Vec<f64> = (0..1000).map(f64::from).collect();
        values.extend([f64::NAN, f64::INFINITY, 1e9]);
        assert_eq!(usual_range(&values), Some((5.0, 995.0)));
        assert_eq!(usual_range(&[3.0, 3.0, f64::NAN]), None);
        assert_eq!(usual_range(&[]), None);
    }
}
