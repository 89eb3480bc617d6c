//! Where a mask comes from: who decided, how much, with which program.

use std::collections::BTreeSet;

use jiff::Timestamp;

use crate::flags::{
    Act, Decision, FlagState, GranuleState, Origin, PRODUCER, SpotCheck, Vocabulary,
};
use crate::system::clean_text;

/// Who exports, when, with what: passed in, so that the same decisions give the same bytes.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Provenance {
    /// The version of the program.
    pub program: String,
    /// The moment of the export.
    pub now: Timestamp,
    /// Who exports.
    pub person: String,
    /// The campaign's title, if it has one.
    pub campaign: Option<String>,
    /// Trouble with the ledgers, in words.
    pub ledger_problems: Vec<String>,
}

/// What the decisions of a granule amount to.
#[derive(Debug, Clone, PartialEq)]
pub struct Record<'a> {
    /// All decisions, standing or not.
    pub decisions: &'a [Decision],
    /// The flags they give.
    pub state: &'a FlagState,
    /// The flags there are.
    pub vocabulary: &'a Vocabulary,
}

impl Record<'_> {
    /// Whose words stand in the ledgers, sorted, fit to be shown.
    pub fn people(&self) -> Vec<String> {
        let persons = self.decisions.iter().filter(|decision| decision.by_person());
        let names: BTreeSet<_> = persons.map(|decision| clean_text(&decision.person)).collect();
        names.into_iter().collect()
    }

    /// What the producer's quality rejects, by the decisions that stand: the variable, the flag, and
    /// the meanings with their numbers of footprints.
    pub fn producer(&self) -> Vec<String> {
        let standing = crate::flags::standing(self.decisions);
        let standing = self.decisions.iter().zip(standing).filter(|(_, stands)| *stands);
        let mut words: Vec<String> = standing
            .filter_map(|(decision, _)| {
                let Origin::Test(test) = &decision.origin else { return None };
                let variable = test.strip_prefix(PRODUCER)?;
                let flag = decision.act.flag()?;
                let why = decision.why.as_deref().unwrap_or_default();
                Some(clean_text(&format!("{variable}: {why} as {flag}")))
            })
            .collect();
        // Several people may have opened the granule at the same moment.
        words.dedup();
        words
    }

    /// The moments of the first and the last decision.
    pub fn span(&self) -> Option<(Timestamp, Timestamp)> {
        let times = || self.decisions.iter().map(|decision| decision.at);
        Some((times().min()?, times().max()?))
    }

    /// The latest spot check that stands: how often the tests' plain verdicts were judged wrong.
    pub fn spot_check(&self) -> Option<&SpotCheck> {
        let standing = crate::flags::standing(self.decisions);
        let checks = self.decisions.iter().zip(standing).filter_map(|(decision, stands)| {
            match &decision.act {
                Act::SpotCheck(check) if stands && decision.by_person() => Some((decision, check)),
                _ => None,
            }
        });
        let last = checks.max_by(|(one, _), (other, _)| one.order().cmp(&other.order()));
        last.map(|(_, check)| check)
    }

    /// Who answers for the granule as it stands, if someone does.
    pub fn signed_off_by(&self) -> Option<String> {
        if self.state.granule != GranuleState::SignedOff {
            return None;
        }
        let standing = crate::flags::standing(self.decisions);
        let signed = self.decisions.iter().zip(standing).filter(|(decision, stands)| {
            *stands && decision.by_person() && matches!(decision.act, Act::SignOff { .. })
        });
        let last = signed.max_by(|(one, _), (other, _)| one.order().cmp(&other.order()));
        last.map(|(decision, _)| clean_text(&decision.person))
    }
}
