//! A set of footprints as sorted runs: compact in a ledger line, fast to fold.

use std::ops::Range;

use serde::{Deserialize, Deserializer, Serialize, Serializer};

/// Footprints by their row-major number over the granule's footprint dimensions.
///
/// Written as `[[start, length], …]`. The runs are sorted, and no two touch.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct FootprintSet {
    runs: Vec<Range<usize>>,
}

impl FootprintSet {
    /// No footprint at all.
    pub fn empty() -> Self {
        Self::default()
    }

    /// One footprint.
    pub fn single(footprint: usize) -> Self {
        Self::range(footprint..footprint.saturating_add(1))
    }

    /// The footprints of a granule that has `count` of them.
    pub fn all(count: usize) -> Self {
        Self::range(0..count)
    }

    /// The footprints of one range.
    pub fn range(range: Range<usize>) -> Self {
        Self::from_ranges(std::iter::once(range))
    }

    /// From ranges in any order; they may overlap or be empty.
    pub fn from_ranges(ranges: impl IntoIterator<Item = Range<usize>>) -> Self {
        let mut ranges: Vec<_> = ranges.into_iter().filter(|range| !range.is_empty()).collect();
        ranges.sort_by_key(|range| range.start);
        let mut runs: Vec<Range<usize>> = Vec::new();
        for range in ranges {
            match runs.last_mut() {
                Some(last) if range.start <= last.end => last.end = last.end.max(range.end),
                _ => runs.push(range),
            }
        }
        Self { runs }
    }

    /// The runs, sorted.
    pub fn runs(&self) -> &[Range<usize>] {
        &self.runs
    }

    /// How many footprints.
    pub fn len(&self) -> usize {
        // A line written by hand may claim more footprints than fit a number.
        self.runs.iter().fold(0, |sum, run| sum.saturating_add(run.len()))
    }

    /// Whether there is none.
    pub fn is_empty(&self) -> bool {
        self.runs.is_empty()
    }

    /// Whether a footprint is in the set.
    pub fn contains(&self, footprint: usize) -> bool {
        let at = self.runs.partition_point(|run| run.end <= footprint);
        self.runs.get(at).is_some_and(|run| run.start <= footprint)
    }

    /// The footprints in ascending order.
    pub fn iter(&self) -> impl Iterator<Item = usize> + '_ {
        self.runs.iter().flat_map(Clone::clone)
    }

    /// The footprints of either set.
    pub fn union(&self, other: &Self) -> Self {
        Self::from_ranges(self.runs.iter().chain(&other.runs).cloned())
    }

    /// The footprints of both sets.
    pub fn intersection(&self, other: &Self) -> Self {
        let (mut left, mut right) = (self.runs.iter().peekable(), other.runs.iter().peekable());
        let mut runs = Vec::new();
        while let (Some(a), Some(b)) = (left.peek(), right.peek()) {
            let common = a.start.max(b.start)..a.end.min(b.end);
            if !common.is_empty() {
                runs.push(common);
            }
            if a.end <= b.end {
                left.next()
            } else {
                right.next()
            };
        }
        Self { runs }
    }

    /// The footprints of this set that are not in the other.
    pub fn minus(&self, other: &Self) -> Self {
        let mut gaps = Vec::with_capacity(other.runs.len() + 1);
        let mut from = 0;
        for run in &other.runs {
            gaps.push(from..run.start);
            from = run.end;
        }
        gaps.push(from..usize::MAX);
        gaps.retain(|gap| !gap.is_empty());
        self.intersection(&Self { runs: gaps })
    }

    /// The footprints below `count`.
    pub fn clipped(&self, count: usize) -> Self {
        self.intersection(&Self::all(count))
    }
}

impl FromIterator<usize> for FootprintSet {
    fn from_iter<I: IntoIterator<Item = usize>>(footprints: I) -> Self {
        Self::from_ranges(footprints.into_iter().map(|one| one..one.saturating_add(1)))
    }
}

impl Serialize for FootprintSet {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.collect_seq(self.runs.iter().map(|run| [run.start, run.len()]))
    }
}

impl<'de> Deserialize<'de> for FootprintSet {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        let pairs = Vec::<[usize; 2]>::deserialize(deserializer)?;
        Ok(Self::from_ranges(
            pairs.into_iter().map(|[start, len]| start..start.saturating_add(len)),
        ))
    }
}

#[cfg(test)]
mod tests {
    use std::collections::BTreeSet;

    use proptest::prelude::*;

    use super::*;

    #[test]
    fn runs_are_sorted_and_joined() {
        let set: FootprintSet = [7, 3, 4, 5, 9, 8, 3].into_iter().collect();
        assert_eq!(set.runs(), [3..6, 7..10]);
        assert_eq!(serde_json::to_string(&set).unwrap(), "[[3,3],[7,3]]");
        assert_eq!(
            serde_json::from_str::<FootprintSet>("[[8,2],[3,3],[7,1],[20,0]]").unwrap(),
            set
        );
    }

    #[test]
    fn a_line_that_claims_too_much_does_no_harm() {
        let huge = format!("[[5,{}],[0,{}]]", usize::MAX, usize::MAX);
        let set: FootprintSet = serde_json::from_str(&huge).unwrap();
        assert_eq!(set.clipped(10), FootprintSet::all(10));
        assert!(serde_json::from_str::<FootprintSet>("[[-1,3]]").is_err());
        assert!(serde_json::from_str::<FootprintSet>("[[1]]").is_err());
    }

    proptest! {
        // A failure prints its seed; files beside the sources would clutter the house.
        #![proptest_config(ProptestConfig { failure_persistence: None, ..ProptestConfig::default() })]

        #[test]
        fn sets_of_runs_behave_as_sets(
            a in proptest::collection::btree_set(0usize..60, 0..40),
            b in proptest::collection::btree_set(0usize..60, 0..40),
        ) {
            let (x, y): (FootprintSet, FootprintSet) =
                (a.iter().copied().collect(), b.iter().copied().collect());
            let set = |runs: FootprintSet| runs.iter().collect::<BTreeSet<_>>();
            prop_assert_eq!(set(x.union(&y)), &a | &b);
            prop_assert_eq!(set(x.intersection(&y)), &a & &b);
            prop_assert_eq!(set(x.minus(&y)), &a - &b);
            prop_assert_eq!(x.len(), a.len());
            for footprint in 0..60 {
                prop_assert_eq!(x.contains(footprint), a.contains(&footprint));
            }
        }
    }
}
