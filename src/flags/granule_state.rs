//! How far a granule has come, from its decisions.

use super::history::{Ordered, standing_among};
use super::{Act, Decision, GranuleState};

/// How far the granule has come: what the latest standing sign-off, setting aside or reopening
/// says, unless a person changed flags since.
pub(super) fn granule_state(ordered: &Ordered<'_>) -> GranuleState {
    let mut last = None;
    for (at, decision) in ordered.standing_ones().filter(|(_, decision)| decision.by_person()) {
        match decision.act {
            Act::SignOff { .. } => last = Some((at, GranuleState::SignedOff)),
            Act::SetAside => last = Some((at, GranuleState::SetAside)),
            Act::Reopen => last = Some((at, GranuleState::InHand)),
            _ => {}
        }
    }
    match last {
        Some((at, _)) if changed_since(ordered, at) => GranuleState::InHand,
        Some((_, state)) => state,
        None if touched(ordered) => GranuleState::InHand,
        None => GranuleState::Untouched,
    }
}

/// How far a granule has come after one more decision, which takes none back.
pub(super) fn granule_state_after(before: GranuleState, decision: &Decision) -> GranuleState {
    if !decision.by_person() {
        return before;
    }
    match &decision.act {
        Act::SignOff { .. } => GranuleState::SignedOff,
        Act::SetAside => GranuleState::SetAside,
        Act::Reopen => GranuleState::InHand,
        act if act.changes_flags() => GranuleState::InHand,
        // Words alone, or an act of a newer version, begin a granule but undo no sign-off.
        _ if before == GranuleState::Untouched => GranuleState::InHand,
        _ => before,
    }
}

/// Whether a person has decided anything that stands. Undoing one's own decisions leaves a granule
/// as untouched as before; taking back a test's is a decision.
fn touched(ordered: &Ordered<'_>) -> bool {
    let mut persons = ordered.standing_ones().filter(|(_, decision)| decision.by_person());
    persons.any(|(_, decision)| match &decision.act {
        Act::Revoke { decision: target } => {
            ordered.decisions.iter().any(|one| one.id == *target && !one.by_person())
        }
        _ => true,
    })
}

/// Whether a person changed flags after the decision at `since`, by a new decision or by taking
/// back, or putting back, an old one.
fn changed_since(ordered: &Ordered<'_>, since: usize) -> bool {
    let changes = |at: usize| ordered.decisions[at].act.changes_flags();
    let by_person = |at: usize| ordered.decisions[at].by_person();
    let count = ordered.decisions.len();
    if (since + 1..count).any(|at| ordered.standing[at] && changes(at) && by_person(at)) {
        return true;
    }
    let mut revokers = (since + 1..count)
        .filter(|&at| by_person(at) && matches!(ordered.decisions[at].act, Act::Revoke { .. }));
    if revokers.next().is_none() {
        return false;
    }
    let before = standing_among(&ordered.decisions[..=since]);
    (0..since).any(|at| changes(at) && before[at] != ordered.standing[at])
}
