//! What is selected, and how the next selection goes together with it.

use std::collections::{BTreeMap, BTreeSet};

use crate::flags::FootprintSet;
use crate::system::Cancel;
use crate::ui::overlay::Selection;

use super::Shape;

/// How a new selection goes together with the one that is there.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Join {
    /// The footprints of either.
    #[default]
    Add,
    /// The footprints of the old one that are not in the new one.
    Minus,
    /// The footprints of both.
    Common,
    /// The new one takes the place of the old one.
    Anew,
}

impl Join {
    /// All ways, in the order in which a key goes round.
    pub const ALL: [Join; 4] = [Join::Add, Join::Minus, Join::Common, Join::Anew];

    /// Its sign before what is typed; the new selection alone has none.
    pub fn sign(self) -> &'static str {
        match self {
            Join::Add => "+",
            Join::Minus => "-",
            Join::Common => "&",
            Join::Anew => "",
        }
    }

    /// In words, for the status line.
    pub fn words(self) -> &'static str {
        match self {
            Join::Add => "the next shape is added to the selection",
            Join::Minus => "the next shape is taken from the selection",
            Join::Common => "what the next shape and the selection have in common stays",
            Join::Anew => "the next shape takes the place of the selection",
        }
    }

    /// The next one.
    pub fn next(self) -> Join {
        let here = Join::ALL.iter().position(|join| *join == self).unwrap_or(0);
        Join::ALL[(here + 1) % Join::ALL.len()]
    }

    /// Whether it takes something away from what is selected, and gives nothing without that.
    pub fn takes_away(self) -> bool {
        matches!(self, Join::Minus | Join::Common)
    }

    fn of(self, old: &FootprintSet, new: &FootprintSet) -> FootprintSet {
        match self {
            Join::Add => old.union(new),
            Join::Minus => old.minus(new),
            Join::Common => old.intersection(new),
            Join::Anew => new.clone(),
        }
    }
}

/// The one selection of a granule.
#[derive(Debug, Clone, Default)]
pub struct Selecting {
    /// What is selected; never empty where it is there.
    kept: Option<Selection>,
    /// What was selected before.
    last: Option<Selection>,
    /// What is being drawn or typed.
    pub shape: Option<Shape>,
    /// How the next shape goes together with what is selected.
    pub join: Join,
    /// Ends the job that looks for footprints.
    pub seeking: Cancel,
}

impl Selecting {
    /// Whether anything is selected or being drawn.
    pub fn is_on(&self) -> bool {
        self.kept.is_some() || self.shape.is_some()
    }

    /// What is selected, without what is being drawn.
    pub fn kept(&self) -> Option<&Selection> {
        self.kept.as_ref()
    }

    /// What was selected before.
    pub fn last(&self) -> Option<&Selection> {
        self.last.as_ref()
    }

    /// What would be selected if `new` were joined to it.
    pub fn joined(&self, join: Join, new: Selection) -> Selection {
        let Some(kept) = &self.kept else {
            let nothing = Selection::of(FootprintSet::empty(), "selection of 0".to_owned());
            return if join.takes_away() { nothing } else { new };
        };
        if join == Join::Anew {
            return new;
        }
        let none = FootprintSet::empty();
        let entries: BTreeSet<usize> =
            kept.elsewhere.keys().chain(new.elsewhere.keys()).copied().collect();
        let at = |entry: usize| {
            let (old, new) = (kept.elsewhere.get(&entry), new.elsewhere.get(&entry));
            (entry, join.of(old.unwrap_or(&none), new.unwrap_or(&none)))
        };
        let elsewhere: BTreeMap<usize, FootprintSet> =
            entries.into_iter().map(at).filter(|(_, set)| !set.is_empty()).collect();
        let footprints = join.of(&kept.footprints, &new.footprints);
        let mut joined = Selection { footprints, words: String::new(), elsewhere };
        let several = if joined.elsewhere.is_empty() { "" } else { " in several granules" };
        joined.words = format!("selection of {}{several}", joined.count());
        joined
    }

    /// Selects; what was being drawn is let go. Nothing is selected where that leaves nothing.
    pub fn take(&mut self, join: Join, new: Selection) {
        let joined = self.joined(join, new);
        self.replace((joined.count() > 0).then_some(joined));
    }

    /// Selects all others of `count` footprints.
    pub fn invert(&mut self, count: usize) {
        let kept =
            self.kept.as_ref().map_or_else(FootprintSet::empty, |kept| kept.footprints.clone());
        let footprints = FootprintSet::all(count).minus(&kept);
        let words = format!("selection of {}", footprints.len());
        self.replace((!footprints.is_empty()).then_some(Selection::of(footprints, words)));
    }

    /// Lets go of the shape, or where there is none of the selection; false where there is neither.
    pub fn let_go(&mut self) -> bool {
        if self.shape.take().is_some() {
            return true;
        }
        let there = self.kept.is_some();
        self.clear();
        there
    }

    /// Lets go of what is being drawn on the map.
    pub fn drop_map_shape(&mut self) {
        if matches!(self.shape, Some(Shape::Box(_) | Shape::Polygon(_))) {
            self.shape = None;
        }
    }

    /// Lets go of what is being drawn on the Spread.
    pub fn drop_spread_shape(&mut self) {
        if matches!(
            self.shape,
            Some(Shape::Threshold | Shape::Range(_) | Shape::Rectangle(_) | Shape::Region(_))
        ) {
            self.shape = None;
        }
    }

    /// Lets go of everything, as after a decision.
    pub fn clear(&mut self) {
        self.replace(None);
        self.join = Join::default();
    }

    fn replace(&mut self, new: Option<Selection>) {
        self.shape = None;
        if let Some(old) = std::mem::replace(&mut self.kept, new) {
            self.last = Some(old);
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn some(range: std::ops::Range<usize>) -> Selection {
        Selection::of(FootprintSet::range(range), "some".to_owned())
    }

    fn kept(selecting: &Selecting) -> Vec<usize> {
        selecting.kept().map_or_else(Vec::new, |kept| kept.footprints.iter().collect())
    }

    #[test]
    fn selections_are_joined_in_four_ways() {
        for (join, expected) in [
            (Join::Add, vec![1, 2, 3, 4]),
            (Join::Minus, vec![1]),
            (Join::Common, vec![2]),
            (Join::Anew, vec![2, 3, 4]),
        ] {
            let mut selecting = Selecting::default();
            selecting.take(join, some(1..3));
            let first = if join.takes_away() { vec![] } else { vec![1, 2] };
            assert_eq!(kept(&selecting), first, "{join:?} the first one and nothing");
            selecting.take(Join::Anew, some(1..3));
            selecting.take(join, some(2..5));
            assert_eq!(kept(&selecting), expected, "{join:?}");
        }
    }

    #[test]
    fn inverting_twice_gives_the_same_again() {
        let mut selecting = Selecting::default();
        selecting.take(Join::Add, some(1..3));
        selecting.invert(5);
        assert_eq!(kept(&selecting), [0, 3, 4]);
        selecting.invert(5);
        assert_eq!(kept(&selecting), [1, 2]);
    }

    #[test]
    fn letting_go_takes_one_step_at_a_time_and_remembers() {
        let mut selecting = Selecting::default();
        selecting.take(Join::Add, some(1..3));
        selecting.shape = Some(Shape::Box(0));
        assert!(selecting.let_go() && selecting.kept().is_some());
        assert!(selecting.let_go() && !selecting.is_on());
        assert_eq!(selecting.last(), Some(&some(1..3)));
        assert!(!selecting.let_go());
    }

    #[test]
    fn an_empty_selection_is_none() {
        let mut selecting = Selecting::default();
        selecting.take(Join::Add, some(1..3));
        selecting.take(Join::Common, some(4..5));
        assert!(!selecting.is_on());
    }
}
