//! What a spot check found: how often the plain cases are wrong.

use serde::{Deserialize, Serialize};

use super::{FootprintSet, clopper_pearson};

/// A blind sample of footprints that the tests call plain, judged by a person.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct SpotCheck {
    /// The rulebook that was checked: its name and fingerprint.
    pub rulebook: String,
    /// What the sample was drawn with.
    pub seed: u64,
    /// The plain footprints with and without flag, each sampled by itself.
    pub strata: Vec<Stratum>,
}

/// A part of the plain footprints, and what the person said of those drawn from it.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Stratum {
    /// Whether the tests keep these footprints from the retrieval.
    pub flagged: bool,
    /// How many plain footprints there were of this kind.
    pub plain: usize,
    /// Of those drawn: where the person said the same.
    pub right: FootprintSet,
    /// Where the person said otherwise.
    pub wrong: FootprintSet,
    /// Where the person could not tell; these say nothing about the tests.
    pub untold: FootprintSet,
}

/// How often something is wrong, with the interval in which the true rate lies with 95 %
/// confidence.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ErrorRate {
    /// Judged wrong.
    pub wrong: usize,
    /// Judged at all.
    pub judged: usize,
    /// The lower limit of the true rate.
    pub low: f64,
    /// Its upper limit.
    pub high: f64,
}

/// The confidence of every interval.
pub const CONFIDENCE: f64 = 0.95;

impl ErrorRate {
    /// The rate of so many wrong ones among so many judged.
    pub fn of(wrong: usize, judged: usize) -> ErrorRate {
        let (low, high) = clopper_pearson(wrong, judged, CONFIDENCE);
        ErrorRate { wrong, judged, low, high }
    }

    /// In words: "2 of 40 wrong: 5.0 %, with 95 % confidence 0.6 % to 16.9 %".
    pub fn words(&self) -> String {
        if self.judged == 0 {
            return "none judged".to_owned();
        }
        let percent = |share: f64| format!("{:.1} %", 100.0 * share);
        format!(
            "{} of {} wrong: {}, with 95 % confidence {} to {}",
            self.wrong,
            self.judged,
            percent(self.wrong as f64 / self.judged as f64),
            percent(self.low),
            percent(self.high)
        )
    }
}

impl Stratum {
    /// How often it is wrong.
    pub fn error_rate(&self) -> ErrorRate {
        ErrorRate::of(self.wrong.len(), self.right.len().saturating_add(self.wrong.len()))
    }

    /// What it holds, in words.
    pub fn name(&self) -> &'static str {
        if self.flagged { "flagged" } else { "no flag" }
    }
}

impl SpotCheck {
    /// In words, one part for each stratum: "no flag: 0 of 10 wrong: …; flagged: …".
    pub fn words(&self) -> String {
        let parts = self.strata.iter();
        let parts = parts.map(|one| format!("{}: {}", one.name(), one.error_rate().words()));
        parts.collect::<Vec<_>>().join("; ")
    }

    /// All footprints that were judged wrong.
    pub fn wrong(&self) -> FootprintSet {
        self.strata.iter().fold(FootprintSet::empty(), |all, one| all.union(&one.wrong))
    }
}

/// Several spot checks of one rulebook added up, for one kind of stratum.
pub fn pooled<'a>(checks: impl IntoIterator<Item = &'a SpotCheck>, flagged: bool) -> ErrorRate {
    let strata = checks.into_iter().flat_map(|check| &check.strata);
    let (wrong, right) = strata
        .filter(|stratum| stratum.flagged == flagged)
        .fold((0, 0), |(wrong, right), one| (wrong + one.wrong.len(), right + one.right.len()));
    ErrorRate::of(wrong, wrong + right)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_could_not_be_told_says_nothing() {
        let stratum = Stratum {
            flagged: false,
            plain: 900,
            right: FootprintSet::all(18),
            wrong: FootprintSet::range(18..20),
            untold: FootprintSet::range(20..25),
        };
        let check =
            SpotCheck { rulebook: "lowen (0)".to_owned(), seed: 1, strata: vec![stratum.clone()] };
        assert_eq!(
            check.words(),
            "no flag: 2 of 20 wrong: 10.0 %, with 95 % confidence 1.2 % to 31.7 %"
        );
        assert_eq!(check.wrong().len(), 2);
        let twice = pooled([&check, &check], false);
        assert_eq!((twice.wrong, twice.judged), (4, 40));
        assert_eq!(pooled([&check], true).words(), "none judged");
    }
}
