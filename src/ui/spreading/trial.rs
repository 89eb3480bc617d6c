//! A threshold tried out, in words.

use crate::flags::{ReviewState, Scope};
use crate::screening::{Tried, try_threshold};
use crate::ui::bench::Bench;
use crate::ui::widgets::short;

/// The share of the range to both sides over which the steepness is taken.
const REACH: f64 = 0.02;

impl Bench {
    /// What the threshold on the Spread would do.
    pub fn tried(&self, values: &[f64], range: (f64, f64)) -> Option<Tried> {
        let threshold = self.spread.x?;
        let reach = REACH * (range.1 - range.0);
        let flags = self.tried_flags();
        let state = self.record.open().map(|record| record.state());
        let decided = |footprint: usize| {
            let state = state?;
            let person = state.review.get(footprint) == Some(&ReviewState::DecidedByPerson);
            person.then(|| state.any_flags(footprint) & flags != 0)
        };
        Some(try_threshold(values, self.spread_sense(), threshold, reach, decided))
    }

    /// The flags that the threshold is measured against: the test's own, else every one that keeps a
    /// footprint from the retrieval.
    fn tried_flags(&self) -> u32 {
        let Some(record) = self.record.open() else { return 0 };
        let vocabulary = record.vocabulary();
        if let Some((screened, place, _)) = self.spread_test() {
            let flag = screened.rulebook.tests.get(place).map(|test| test.flag.as_str());
            return flag.and_then(|flag| vocabulary.by_name(flag)).map_or(0, |kind| kind.mask());
        }
        let kinds = vocabulary.of_scope(Scope::Footprint);
        kinds.iter().filter(|kind| kind.excludes).fold(0, |all, kind| all | kind.mask())
    }

    /// `> 2.5: 120 of 1350, 4 without a value; decided 40: 12 hit, 2 missed, 1 false; changes by 31 per K`
    pub fn tried_words(&self, values: &[f64], range: (f64, f64)) -> String {
        let missing = values.iter().filter(|value| value.is_nan()).count();
        let all = values.len();
        let (Some(tried), Some(x)) = (self.tried(values, range), self.spread.x) else {
            return format!("{} of {all} with a value, {missing} without", all - missing);
        };
        let mut words = format!("{} {x}: {} of {all}", self.spread_sense().symbol(), tried.flagged);
        if missing > 0 {
            words += &format!(", {missing} without a value");
        }
        let agreement = tried.agreement;
        if agreement.decided() > 0 {
            words += &format!(
                "; decided {}: {} hit, {} missed, {} false",
                agreement.decided(),
                agreement.hit,
                agreement.missed,
                agreement.false_alarm
            );
        }
        let per = if self.spread_unit().is_empty() { "1" } else { self.spread_unit() };
        words + &format!("; changes by {} per {per}", short(tried.steepness))
    }
}
