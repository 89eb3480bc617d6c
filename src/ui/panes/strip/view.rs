//! What the Strip is drawn from.

/// Everything the Strip shows.
#[derive(Clone, Copy, Debug)]
pub struct StripView<'a> {
    /// What follows the pane's name in the title: the layer, and along what.
    pub title: &'a str,
    /// The unit of the values; empty for a bare number.
    pub unit: &'a str,
    /// What the groups are, written below them.
    pub along: &'a str,
    /// The groups, from the left; `None` where a group has no value.
    pub groups: &'a [Option<Group>],
    /// The group under the cursor.
    pub cursor: Option<usize>,
    /// That group in words, at the right of the title.
    pub words: &'a str,
    /// Why there is nothing to show, where there is nothing.
    pub empty: &'a str,
    /// Whether the keys go to this pane.
    pub focused: bool,
}

/// How the values of one group lie: a scan line, a detector, a granule.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Group {
    /// The lowest value.
    pub lowest: f64,
    /// A quarter of the values is lower.
    pub lower: f64,
    /// The middle one.
    pub median: f64,
    /// A quarter of the values is higher.
    pub upper: f64,
    /// The highest value.
    pub highest: f64,
    /// The mean.
    pub mean: f64,
    /// How many values there are.
    pub count: usize,
}

impl Group {
    /// The group of these values, of which missing ones do not count; `None` where all are missing.
    /// Quantiles between two values lie on the straight line between them (type 7 of Hyndman and
    /// Fan 1996).
    pub fn of(values: impl Iterator<Item = f64>) -> Option<Self> {
        let mut sorted: Vec<f64> = values.filter(|value| value.is_finite()).collect();
        sorted.sort_unstable_by(f64::total_cmp);
        let (lowest, highest) = (*sorted.first()?, *sorted.last()?);
        let quantile = |share: f64| {
            let place = share * (sorted.len() - 1) as f64;
            let below = place.floor() as usize;
            let above = (below + 1).min(sorted.len() - 1);
            sorted[below] + (place - below as f64) * (sorted[above] - sorted[below])
        };
        Some(Self {
            lowest,
            lower: quantile(0.25),
            median: quantile(0.5),
            upper: quantile(0.75),
            highest,
            mean: sorted.iter().sum::<f64>() / sorted.len() as f64,
            count: sorted.len(),
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_group_is_its_five_numbers_and_its_mean() {
        // Checked by hand: of 1 2 4 8 the quartiles of type 7 lie at the places 0.75, 1.5 and 2.25.
        let group = Group::of([8.0, f64::NAN, 1.0, 4.0, 2.0].into_iter()).unwrap();
        let five = [group.lowest, group.lower, group.median, group.upper, group.highest];
        assert_eq!(five, [1.0, 1.75, 3.0, 5.0, 8.0]);
        assert_eq!((group.mean, group.count), (3.75, 4));
        assert_eq!(Group::of([f64::NAN].into_iter()), None);
    }
}
