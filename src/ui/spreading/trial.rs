//! A threshold tried out, in words.

use crate::flags::{PersonsWord, Scope, persons_words};
use crate::screening::{Tried, try_threshold};
use crate::ui::bench::Bench;
use crate::ui::widgets::short;

/// The share of the range to both sides over which the steepness is taken.
const REACH: f64 = 0.02;

impl Bench {
    /// What the threshold on the Spread would do, and how many footprints it is not measured on because
    /// persons only accepted there what the tests suggest.
    pub fn tried(&self, values: &[f64], range: (f64, f64)) -> Option<(Tried, usize)> {
        let threshold = self.spread.x?;
        let reach = REACH * (range.1 - range.0);
        let words = self.persons_words();
        let word = |footprint: usize| words.get(footprint).copied().flatten();
        let decided = |footprint: usize| match word(footprint)? {
            PersonsWord::Holds => Some(true),
            PersonsWord::HoldsNot => Some(false),
            PersonsWord::Accepted => None,
        };
        let accepted = words.iter().filter(|word| **word == Some(PersonsWord::Accepted)).count();
        Some((try_threshold(values, self.spread_sense(), threshold, reach, decided), accepted))
    }

    /// What persons said about the test's flag; where a layer is on show, about any flag that keeps a
    /// footprint from the retrieval.
    fn persons_words(&self) -> Vec<Option<PersonsWord>> {
        // How alike spectra are says nothing about a flag.
        let record = self.record.open().filter(|_| self.spread_alike().is_none());
        let Some(record) = record else { return Vec::new() };
        let kinds = record.vocabulary().of_scope(Scope::Footprint);
        let excluding = kinds.iter().filter(|kind| kind.excludes).map(|kind| kind.name.as_str());
        let flags = match self.tried_flag() {
            Some(flag) => vec![flag],
            None => excluding.collect(),
        };
        persons_words(self.footprints(), record.decisions(), record.standing(), &flags)
    }

    /// The flag of the test in hand.
    fn tried_flag(&self) -> Option<&str> {
        let (screened, place, _) = self.spread_test()?;
        screened.rulebook.tests.get(place).map(|test| test.flag.as_str())
    }

    /// `> 2.5: 120 of 1350, 4 without a value; on cloudy persons agree at 40, oppose at 3 (2 missed, 1
    /// false), 12 accepted not counted; changes by 31 per K`
    pub fn tried_words(&self, values: &[f64], range: (f64, f64)) -> String {
        let missing = values.iter().filter(|value| value.is_nan()).count();
        let all = values.len();
        let (Some((tried, accepted)), Some(x)) = (self.tried(values, range), self.spread.x) else {
            return format!("{} of {all} with a value, {missing} without", all - missing);
        };
        let mut words = format!("{} {x}: {} of {all}", self.spread_sense().symbol(), tried.flagged);
        if missing > 0 {
            words += &format!(", {missing} without a value");
        }
        let agreement = tried.agreement;
        let about = self.tried_flag().unwrap_or("flags");
        if agreement.decided() > 0 {
            let (agree, oppose) =
                (agreement.hit + agreement.quiet, agreement.missed + agreement.false_alarm);
            words += &format!("; on {about} persons agree at {agree}, oppose at {oppose}");
            if oppose > 0 {
                let (missed, wrong) = (agreement.missed, agreement.false_alarm);
                words += &format!(" ({missed} missed, {wrong} false)");
            }
        }
        if accepted > 0 {
            words += &format!(", {accepted} accepted not counted");
        }
        let per = if self.spread_unit().is_empty() { "1" } else { self.spread_unit() };
        words + &format!("; changes by {} per {per}", short(tried.steepness))
    }
}
