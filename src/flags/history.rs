//! Which decisions stand, and what undo and redo would name.

use std::collections::{BTreeSet, HashMap};

use jiff::Timestamp;

use super::{Act, Decision, DecisionId, SpotCheck};

/// Decisions in the one order in which everybody folds them, and which of them stand.
pub(super) struct Ordered<'a> {
    pub(super) decisions: Vec<&'a Decision>,
    pub(super) standing: Vec<bool>,
}

impl<'a> Ordered<'a> {
    pub(super) fn new(decisions: &'a [Decision]) -> Self {
        let mut decisions: Vec<&Decision> = decisions.iter().collect();
        decisions.sort_by(|one, other| one.order().cmp(&other.order()));
        let standing = standing_among(&decisions);
        Self { decisions, standing }
    }

    /// Position and decision of those that stand, in order.
    pub(super) fn standing_ones(&self) -> impl DoubleEndedIterator<Item = (usize, &'a Decision)> {
        let stands = |at: &usize| self.standing[*at];
        (0..self.decisions.len()).filter(stands).map(|at| (at, self.decisions[at]))
    }
}

/// For each decision, whether it stands: not revoked by a decision that stands itself.
///
/// Revocations count wherever they are in the list. A test never revokes what a person decided.
/// Decisions that revoke each other in a ring, which only a damaged ledger can hold, revoke nothing.
pub fn standing(decisions: &[Decision]) -> Vec<bool> {
    standing_among(&decisions.iter().collect::<Vec<_>>())
}

pub(super) fn standing_among(decisions: &[&Decision]) -> Vec<bool> {
    let places = places(decisions);
    let targets: Vec<Vec<usize>> =
        decisions.iter().map(|decision| targets(decision, decisions, &places)).collect();
    // How many revocations of a decision are not settled yet.
    let mut open = vec![0usize; decisions.len()];
    for target in targets.iter().flatten() {
        open[*target] += 1;
    }
    let mut standing = vec![true; decisions.len()];
    let mut settled: Vec<usize> = (0..decisions.len()).filter(|&at| open[at] == 0).collect();
    while let Some(at) = settled.pop() {
        for &target in &targets[at] {
            if standing[at] {
                standing[target] = false;
            }
            open[target] -= 1;
            if open[target] == 0 {
                settled.push(target);
            }
        }
    }
    standing
}

/// Positions by name; two lines of one name (a damaged ledger) are both meant by it.
type Places<'a> = HashMap<&'a DecisionId, Vec<usize>>;

fn places<'a>(decisions: &[&'a Decision]) -> Places<'a> {
    let mut places = Places::new();
    for (at, decision) in decisions.iter().enumerate() {
        places.entry(&decision.id).or_default().push(at);
    }
    places
}

fn targets(revoker: &Decision, decisions: &[&Decision], places: &Places<'_>) -> Vec<usize> {
    let Act::Revoke { decision } = &revoker.act else { return Vec::new() };
    let may = |&at: &usize| revoker.by_person() || !decisions[at].by_person();
    places.get(decision).map_or(Vec::new(), |found| found.iter().copied().filter(may).collect())
}

/// The decision that undo would revoke: the person's latest one that stands.
pub fn undo_target(decisions: &[Decision], person: &str) -> Option<DecisionId> {
    let ordered = Ordered::new(decisions);
    let mut latest_first = ordered.standing_ones().rev();
    let found =
        latest_first.find(|(_, decision)| own(decision, person) && !is_revocation(decision));
    found.map(|(_, decision)| decision.id.clone())
}

/// The revocation that redo would revoke: the person's latest undo that stands and that no new
/// decision of theirs has followed.
pub fn redo_target(decisions: &[Decision], person: &str) -> Option<DecisionId> {
    let ordered = Ordered::new(decisions);
    let places = places(&ordered.decisions);
    let is_undo = |decision: &Decision| match &decision.act {
        Act::Revoke { decision } => places
            .get(decision)
            .is_some_and(|found| found.iter().all(|&at| !is_revocation(ordered.decisions[at]))),
        _ => false,
    };
    let own_ones = (0..ordered.decisions.len()).filter(|&at| own(ordered.decisions[at], person));
    for at in own_ones.rev() {
        let decision = ordered.decisions[at];
        if !is_revocation(decision) {
            return None;
        }
        if ordered.standing[at] && is_undo(decision) {
            return Some(decision.id.clone());
        }
    }
    None
}

/// The spot checks that stand, in any order of the decisions.
pub fn spot_checks(decisions: &[Decision]) -> Vec<&SpotCheck> {
    let ordered = Ordered::new(decisions);
    let checks = ordered.standing_ones().filter_map(|(_, decision)| match &decision.act {
        Act::SpotCheck(check) if decision.by_person() => Some(check),
        _ => None,
    });
    checks.collect()
}

/// The rulebook whose tests' word stands as the latest: its name and fingerprint.
pub fn screened_by(decisions: &[Decision]) -> Option<String> {
    let ordered = Ordered::new(decisions);
    let mut latest_first = ordered.standing_ones().rev();
    latest_first.find_map(|(_, decision)| match (&decision.act, decision.by_person()) {
        (Act::Assess { .. }, false) => {
            decision.why.as_deref()?.strip_prefix(SCREENED_BY).map(str::to_owned)
        }
        _ => None,
    })
}

/// What the reason of a test's assessment begins with, before the rulebook.
pub const SCREENED_BY: &str = "rulebook ";

/// When a person last decided about a granule, for undo and redo across granules.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub struct OwnTimes {
    /// Of the decision that undo would take back.
    pub undo: Option<Timestamp>,
    /// Of the undo that redo would take back, by this granule alone: a decision about another one
    /// that came later ends it.
    pub redo: Option<Timestamp>,
    /// Of the latest decision that is neither undo nor redo.
    pub decided: Option<Timestamp>,
}

/// When a person last decided about the granule that these decisions are about.
pub fn own_times(decisions: &[Decision], person: &str) -> OwnTimes {
    let at = |id: DecisionId| decisions.iter().find(|one| one.id == id).map(|one| one.at);
    let new = decisions.iter().filter(|one| own(one, person) && !is_revocation(one));
    OwnTimes {
        undo: undo_target(decisions, person).and_then(at),
        redo: redo_target(decisions, person).and_then(at),
        decided: new.map(|one| one.at).max(),
    }
}

/// The steps over several granules that a person's decisions about this one are parts of.
pub fn own_steps(decisions: &[Decision], person: &str) -> BTreeSet<String> {
    let own_ones = decisions.iter().filter(|one| own(one, person));
    own_ones.filter_map(|decision| decision.step.clone()).collect()
}

/// What a person decided in a step, undo and redo apart, and whether it stands.
pub fn of_step(decisions: &[Decision], person: &str, step: &str) -> Vec<(DecisionId, bool)> {
    let standing = standing(decisions);
    let all = decisions.iter().zip(standing);
    let parts = all.filter(|(one, _)| {
        own(one, person) && !is_revocation(one) && one.step.as_deref() == Some(step)
    });
    parts.map(|(one, stands)| (one.id.clone(), stands)).collect()
}

fn is_revocation(decision: &Decision) -> bool {
    matches!(decision.act, Act::Revoke { .. })
}

fn own(decision: &Decision, person: &str) -> bool {
    decision.by_person() && decision.person == person
}
