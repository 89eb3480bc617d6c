//! What a person confirmed or withdrew stays decided, even when the test that said it takes it back.

use std::collections::HashMap;

use super::history::Ordered;
use super::{Act, DecisionId, FootprintSet};

/// What stays of tests' decisions that tests revoked: by position, the footprints that a person had
/// assessed in between, with the flag before their eyes.
pub(super) fn protected_parts(
    footprints: usize,
    ordered: &Ordered<'_>,
) -> HashMap<usize, FootprintSet> {
    let mut parts = HashMap::new();
    let mut revoked = revoked_by_tests(ordered);
    if revoked.is_empty() {
        return parts;
    }
    // Per footprint, one more than the position of its latest assessment so far.
    let mut assessed = vec![0usize; footprints];
    // The same for withdrawals of a flag: with the flag, what took it off stands, too.
    let mut withdrawn: HashMap<&str, Vec<usize>> = HashMap::new();
    for (at, decision) in ordered.standing_ones() {
        match &decision.act {
            Act::Assess { footprints: set }
            | Act::Judge { footprints: set, .. }
            | Act::SignOff { rest_assessed: set, .. }
                if decision.by_person() =>
            {
                set.clipped(footprints).iter().for_each(|place| assessed[place] = at + 1);
            }
            Act::Withdraw { flag, footprints: set, bands: None } if decision.by_person() => {
                let latest = withdrawn.entry(flag).or_insert_with(|| vec![0; footprints]);
                set.clipped(footprints).iter().for_each(|place| latest[place] = at + 1);
            }
            _ => {
                for taken_back in revoked.remove(&at).unwrap_or_default() {
                    let act = &ordered.decisions[taken_back].act;
                    let withdrawn = act.flag().and_then(|flag| withdrawn.get(flag));
                    let set = act.footprints();
                    let set = set.map(|set| set.clipped(footprints)).unwrap_or_default();
                    let kept = set.iter().filter(|&place| {
                        let latest = withdrawn.map_or(0, |latest| latest[place]);
                        assessed[place].max(latest) > taken_back
                    });
                    let part: FootprintSet = kept.collect();
                    if !part.is_empty() {
                        parts.insert(taken_back, part);
                    }
                }
            }
        }
    }
    parts
}

/// By the position of the first revocation that stands: the tests' decisions that only tests
/// revoked.
fn revoked_by_tests(ordered: &Ordered<'_>) -> HashMap<usize, Vec<usize>> {
    // Per name, the first revocation, unless a person is among those who revoked.
    let mut first: HashMap<&DecisionId, Option<usize>> = HashMap::new();
    for (at, decision) in ordered.standing_ones() {
        if let Act::Revoke { decision: target } = &decision.act {
            let entry = first.entry(target).or_insert(Some(at));
            if decision.by_person() {
                *entry = None;
            }
        }
    }
    let mut revoked: HashMap<usize, Vec<usize>> = HashMap::new();
    if first.values().all(Option::is_none) {
        return revoked;
    }
    for (at, decision) in ordered.decisions.iter().enumerate() {
        let by_test = !ordered.standing[at] && !decision.by_person();
        if let Some(Some(until)) = first.get(&decision.id).filter(|_| by_test) {
            revoked.entry(*until).or_default().push(at);
        }
    }
    revoked
}
