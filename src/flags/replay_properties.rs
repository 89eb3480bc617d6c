//! The fold over stories drawn at random: order, undo, and who beats whom.

use jiff::SignedDuration;
use proptest::prelude::*;

use super::ledger_tests::{judge, time};
use super::replay_tests::{FOOTPRINTS, Story, assess, revoke, set, sign_off};
use super::*;

fn any_act() -> impl Strategy<Value = Act> {
    let name = prop_oneof![Just("cloudy"), Just("thin_cloud"), Just("so2")];
    let footprints = proptest::collection::vec(0..FOOTPRINTS, 0..6);
    let bands = prop_oneof![Just(None), Just(Some(vec!["short_wave".to_owned()]))];
    let id = (prop_oneof![Just("anna"), Just("batch")], 1u64..30)
        .prop_map(|(writer, sequence)| DecisionId { writer: writer.to_owned(), sequence });
    prop_oneof![
        4 => (name.clone(), footprints.clone(), bands.clone()).prop_map(|(name, at, bands)| {
            Act::Flag { flag: name.to_owned(), footprints: set(&at), bands }
        }),
        2 => (name, footprints.clone(), bands).prop_map(|(name, at, bands)| {
            Act::Withdraw { flag: name.to_owned(), footprints: set(&at), bands }
        }),
        1 => footprints.clone().prop_map(|at| assess(&at)),
        1 => footprints.prop_map(|at| sign_off(&at)),
        1 => (0..4usize, 4..9usize).prop_map(|(from, to)| {
            judge(&[("cloudy", from..to)], &[("so2", from..6)], from..to)
        }),
        2 => id.prop_map(|decision| Act::Revoke { decision }),
        1 => Just(Act::SetAside),
        1 => Just(Act::Reopen),
    ]
}

fn any_story() -> impl Strategy<Value = Vec<Decision>> {
    proptest::collection::vec((any_act(), any::<bool>()), 0..30).prop_map(|acts| {
        let mut story = Story::default();
        for (act, person) in acts {
            if person {
                story.anna(act)
            } else {
                story.test(act)
            };
        }
        story.decisions
    })
}

proptest! {
    #![proptest_config(ProptestConfig { failure_persistence: None, ..ProptestConfig::default() })]

    /// Files are read in any order, and so may their decisions be.
    #[test]
    fn the_order_of_reading_does_not_matter(
        (decisions, shuffled) in any_story().prop_flat_map(|d| (Just(d.clone()), Just(d).prop_shuffle())),
    ) {
        let vocabulary = Vocabulary::released();
        prop_assert_eq!(
            FlagState::replay(FOOTPRINTS, &[], &decisions, &vocabulary),
            FlagState::replay(FOOTPRINTS, &[], &shuffled, &vocabulary)
        );
    }

    /// Whatever was decided before, deciding and undoing gives the same flags as before, and redo
    /// gives those of the decision.
    #[test]
    fn undo_and_redo_are_inverse(decisions in any_story(), act in any_act()) {
        prop_assume!(!matches!(act, Act::Revoke { .. }));
        let mut story = Story { decisions };
        let count = story.decisions.len() as u64;
        for decision in &mut story.decisions {
            // Nobody can have revoked what is not decided yet.
            if matches!(&decision.act, Act::Revoke { decision } if decision.sequence > count) {
                decision.act = Act::Reopen;
            }
        }
        // Whether the granule is in hand is a matter of its history; the flags are not.
        let flags = |story: &Story| FlagState { granule: GranuleState::InHand, ..story.state() };
        let before = flags(&story);
        let decision = story.anna(act);
        let after = flags(&story);
        let undo = story.anna(revoke(&decision));
        prop_assert_eq!(flags(&story), before);
        story.anna(revoke(&undo));
        prop_assert_eq!(flags(&story), after);
    }

    /// Decisions added one by one give what a replay of all of them gives.
    #[test]
    fn adding_is_replaying(mut decisions in any_story(), first in 0usize..30) {
        let vocabulary = Vocabulary::released();
        for decision in &mut decisions {
            // Nobody can have revoked what is not decided yet.
            let own = decision.id.sequence;
            if matches!(&decision.act, Act::Revoke { decision } if decision.sequence >= own) {
                decision.act = Act::Reopen;
            }
        }
        let (before, later) = decisions.split_at(first.min(decisions.len()));
        let mut replay = Replay::of(FOOTPRINTS, &[], before, &vocabulary);
        for (count, decision) in later.iter().enumerate() {
            let all = &decisions[..=before.len() + count];
            let added = replay.add(decision);
            prop_assert_eq!(added, !matches!(decision.act, Act::Revoke { .. }));
            if !added {
                replay = Replay::of(FOOTPRINTS, &[], all, &vocabulary);
            }
            prop_assert_eq!(replay.state(), FlagState::replay(FOOTPRINTS, &[], all, &vocabulary));
        }
    }

    /// A test's decisions never change what a person decided, wherever they come in time.
    #[test]
    fn tests_never_override_a_person(
        decisions in any_story(),
        act in any_act(),
        when in 0i64..40,
    ) {
        let mut story = Story { decisions };
        story.decisions.retain(Decision::by_person);
        let before = story.state();
        story.test(act);
        let last = story.decisions.len() - 1;
        story.decisions[last].at = time(when) + SignedDuration::from_millis(500);
        let after = story.state();
        for footprint in 0..FOOTPRINTS {
            if before.review[footprint] == ReviewState::DecidedByPerson {
                prop_assert_eq!(after.review[footprint], ReviewState::DecidedByPerson);
                prop_assert_eq!(
                    before.footprint_flags[footprint] & !after.footprint_flags[footprint], 0,
                    "a test took a flag away"
                );
            }
        }
    }
}
