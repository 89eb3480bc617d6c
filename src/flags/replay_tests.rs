//! The fold: who beats whom, and that order and undo behave.

use super::ledger_tests::{judge, time};
use super::*;

pub(super) const FOOTPRINTS: usize = 12;

/// Builds decisions of several writers, one second apart.
#[derive(Default)]
pub(super) struct Story {
    pub(super) decisions: Vec<Decision>,
}

impl Story {
    pub(super) fn add(&mut self, person: &str, origin: Origin, act: Act) -> DecisionId {
        let sequence = self.decisions.len() as u64 + 1;
        let id = DecisionId { writer: person.to_owned(), sequence };
        self.decisions.push(Decision {
            id: id.clone(),
            at: time(sequence as i64),
            clock: None,
            person: person.to_owned(),
            origin,
            act,
            why: None,
            step: None,
        });
        id
    }

    pub(super) fn anna(&mut self, act: Act) -> DecisionId {
        self.add("anna", Origin::Person, act)
    }

    pub(super) fn test(&mut self, act: Act) -> DecisionId {
        self.add("batch", Origin::Test("window_bt".to_owned()), act)
    }

    pub(super) fn state(&self) -> FlagState {
        FlagState::replay(FOOTPRINTS, &[], &self.decisions, &Vocabulary::released())
    }
}

pub(super) fn set(footprints: &[usize]) -> FootprintSet {
    footprints.iter().copied().collect()
}

fn flag(name: &str, footprints: &[usize]) -> Act {
    Act::Flag { flag: name.to_owned(), footprints: set(footprints), bands: None }
}

fn withdraw(name: &str, footprints: &[usize]) -> Act {
    Act::Withdraw { flag: name.to_owned(), footprints: set(footprints), bands: None }
}

pub(super) fn assess(footprints: &[usize]) -> Act {
    Act::Assess { footprints: set(footprints) }
}

pub(super) fn revoke(decision: &DecisionId) -> Act {
    Act::Revoke { decision: decision.clone() }
}

pub(super) fn sign_off(rest: &[usize]) -> Act {
    Act::SignOff { rest_assessed: set(rest), summary: String::new() }
}

fn channels(name: &str, index: usize) -> Act {
    let channel = ChannelName { band: "long_wave".to_owned(), index, wavenumber: 900.0 };
    Act::FlagChannels { flag: name.to_owned(), channels: vec![channel] }
}

#[test]
fn nothing_assessed_is_nothing_usable() {
    let counts = Story::default().state().counts(&Vocabulary::released());
    assert_eq!((counts.not_assessed, counts.usable), (FOOTPRINTS, 0));
}

#[test]
fn a_ruling_gives_withdraws_and_settles_in_one_step() {
    let mut story = Story::default();
    story.test(flag("doubtful", &[2, 3, 4, 5]));
    story.test(assess(&[2, 3, 4, 5]));
    assert_eq!(story.state().counts(&Vocabulary::released()).in_doubt, 4);
    let ruling = story.anna(judge(&[("cloudy", 2..4)], &[("doubtful", 2..5)], 2..5));
    let state = story.state();
    assert_eq!(state.footprint_flags[2..6], [1, 1, 0, 1 << 8]);
    assert!(state.review[2..5].iter().all(|one| *one == ReviewState::DecidedByPerson));
    assert_eq!(state.granule, GranuleState::InHand);
    // Screened again, the tests say otherwise: the ruling stands.
    story.test(flag("so2", &[2, 3, 4, 5]));
    story.test(flag("doubtful", &[2, 3, 4, 5]));
    let state = story.state();
    assert_eq!(state.footprint_flags[2..6], [1, 1, 0, 1 << 8 | 1 << 3]);
    assert_eq!(state.counts(&Vocabulary::released()).in_doubt, 1);
    story.anna(revoke(&ruling));
    assert_eq!(story.state().footprint_flags[2], 1 << 8 | 1 << 3, "one undo takes all of it back");
    // Only a person can rule.
    let before = story.state();
    story.test(judge(&[("cloudy", 0..9)], &[], 0..9));
    assert_eq!(story.state(), before);
}

#[test]
fn a_flag_and_its_withdrawal() {
    let mut story = Story::default();
    story.anna(flag("cloudy", &[1, 2]));
    story.anna(flag("unusual", &[2]));
    assert_eq!(story.state().footprint_flags[..4], [0, 1, 1 | 1 << 7, 0]);
    story.anna(withdraw("cloudy", &[2, 3]));
    let state = story.state();
    assert_eq!(state.footprint_flags[..4], [0, 1, 1 << 7, 0]);
    assert_eq!(state.review[2], ReviewState::DecidedByPerson);
    assert_eq!(state.review[3], ReviewState::NotAssessed, "nothing stood there to be judged");
    let counts = state.counts(&Vocabulary::released());
    assert_eq!((counts.flagged, counts.not_assessed, counts.usable), (2, 10, 1));
    assert_eq!(counts.per_flag["unusual"], 1);
}

#[test]
fn a_person_beats_a_test_before_and_after() {
    let mut story = Story::default();
    story.test(flag("cloudy", &[0, 1]));
    story.anna(withdraw("cloudy", &[1]));
    story.anna(flag("dust_or_ash", &[2]));
    story.test(flag("cloudy", &[1, 3]));
    story.test(withdraw("dust_or_ash", &[2]));
    let state = story.state();
    assert_eq!(state.footprint_flags[..4], [1, 0, 4, 1]);
    use ReviewState::{DecidedByPerson, NotAssessed};
    assert_eq!(state.review[..4], [NotAssessed, DecidedByPerson, DecidedByPerson, NotAssessed]);
}

#[test]
fn after_a_person_assessed_no_later_test_changes_anything() {
    let mut story = Story::default();
    let first = story.test(flag("cloudy", &[0]));
    story.anna(assess(&[0, 1]));
    story.test(flag("so2", &[0, 1, 2]));
    story.test(withdraw("cloudy", &[0]));
    assert_eq!(story.state().footprint_flags[..3], [1, 0, 8]);
    // Taking back what a person has seen and confirmed would make it usable behind their back.
    story.test(revoke(&first));
    assert_eq!(story.state().footprint_flags[..3], [1, 0, 8]);
    // The person can.
    story.anna(revoke(&first));
    assert_eq!(story.state().footprint_flags[..3], [0, 0, 8]);
}

#[test]
fn a_withdrawal_stays_a_decision_when_the_test_takes_back_what_was_withdrawn() {
    let mut story = Story::default();
    let by_test = story.test(flag("cloudy", &[0, 1]));
    story.anna(withdraw("cloudy", &[0]));
    story.test(revoke(&by_test));
    let state = story.state();
    assert_eq!(state.footprint_flags[..2], [0, 0]);
    use ReviewState::{DecidedByPerson, NotAssessed};
    assert_eq!(state.review[..2], [DecidedByPerson, NotAssessed]);
}

#[test]
fn a_test_takes_back_its_own_and_never_a_persons() {
    let mut story = Story::default();
    let by_test = story.test(flag("cloudy", &[0]));
    let by_anna = story.anna(flag("cloudy", &[1]));
    story.test(revoke(&by_test));
    story.test(revoke(&by_anna));
    assert_eq!(story.state().footprint_flags[..2], [0, 1]);
    assert_eq!(story.state().review[0], ReviewState::NotAssessed);
}

#[test]
fn the_rest_is_assessed_only_where_a_sign_off_says_so() {
    let mut story = Story::default();
    story.anna(flag("cloudy", &[0]));
    let rest = story.state().rest(&Vocabulary::released());
    assert_eq!(rest, FootprintSet::range(1..FOOTPRINTS));
    let bare = story.anna(sign_off(&[]));
    assert_eq!(story.state().counts(&Vocabulary::released()).usable, 0);
    assert_eq!(story.state().granule, GranuleState::SignedOff);
    story.anna(revoke(&bare));
    assert_eq!(story.state().granule, GranuleState::InHand);
    story.anna(Act::SignOff { rest_assessed: rest, summary: String::new() });
    let counts = story.state().counts(&Vocabulary::released());
    assert_eq!((counts.usable, counts.by_person), (FOOTPRINTS - 1, FOOTPRINTS));
}

#[test]
fn a_flag_alone_makes_nothing_usable() {
    let limited = |name: &str| Act::Flag {
        flag: name.to_owned(),
        footprints: set(&[4]),
        bands: Some(vec!["short_wave".to_owned()]),
    };
    let mut story = Story::default();
    story.test(flag("unusual", &[0]));
    story.test(limited("bad_spectrum"));
    story.anna(flag("surface_anomaly", &[1]));
    story.anna(limited("bad_spectrum"));
    story.anna(flag("cloudy", &[2]));
    let state = story.state();
    let usable = |state: &FlagState| state.counts(&Vocabulary::released()).usable;
    use ReviewState::{AssessedByTest, DecidedByPerson, NotAssessed};
    let expected = [NotAssessed, NotAssessed, DecidedByPerson, NotAssessed, NotAssessed];
    assert_eq!(state.review[..5], expected);
    assert_eq!(usable(&state), 0);
    // Once tests have assessed them, before or after, they can be used.
    story.test(assess(&[0, 1, 4]));
    let state = story.state();
    assert_eq!(state.review[..2], [AssessedByTest, DecidedByPerson]);
    assert_eq!(state.review[4], DecidedByPerson);
    assert_eq!(usable(&state), 3);
}

#[test]
fn a_persons_word_about_the_whole_holds_in_bands_that_tests_name_later() {
    let mut story = Story::default();
    story.anna(assess(&[0]));
    story.test(flag("bad_spectrum", &[1]));
    story.anna(withdraw("bad_spectrum", &[1]));
    story.test(Act::Flag {
        flag: "bad_spectrum".to_owned(),
        footprints: set(&[0, 1, 2]),
        bands: Some(vec!["short_wave".to_owned()]),
    });
    assert_eq!(story.state().band_flags["short_wave"][..3], [0, 0, 1 << 4]);
}

#[test]
fn a_flag_in_every_band_is_one_of_the_whole_footprint() {
    let mut story = Story::default();
    let lost = |band: &str, footprints: &[usize]| Act::Flag {
        flag: "bad_spectrum".to_owned(),
        footprints: set(footprints),
        bands: Some(vec![band.to_owned()]),
    };
    story.test(assess(&[0, 1, 2]));
    story.test(lost("long_wave", &[0, 1]));
    story.anna(lost("short_wave", &[1, 2]));
    let bands = ["long_wave".to_owned(), "short_wave".to_owned()];
    let vocabulary = Vocabulary::released();
    let state = FlagState::replay(FOOTPRINTS, &bands, &story.decisions, &vocabulary);
    assert_eq!(state.footprint_flags[..3], [0, 1 << 4, 0]);
    assert!(state.usable(0, &vocabulary) && !state.usable(1, &vocabulary));
    // With a third band, or where nobody knows the bands, one is left to be used.
    let three = [&bands[..], &["middle".to_owned()]].concat();
    for bands in [&three[..], &[]] {
        let state = FlagState::replay(FOOTPRINTS, bands, &story.decisions, &vocabulary);
        assert_eq!(state.footprint_flags[..3], [0, 0, 0]);
    }
    let one = FlagState::replay(FOOTPRINTS, &bands[..1], &story.decisions, &vocabulary);
    assert_eq!(one.footprint_flags[..3], [1 << 4, 1 << 4, 0], "the only band");
}

#[test]
fn a_band_can_be_lost_alone() {
    let mut story = Story::default();
    let lost = |footprints: &[usize]| Act::Flag {
        flag: "bad_spectrum".to_owned(),
        footprints: set(footprints),
        bands: Some(vec!["short_wave".to_owned()]),
    };
    story.anna(lost(&[4, 5]));
    let state = story.state();
    assert_eq!(state.footprint_flags[4], 0);
    assert_eq!(state.band_flags["short_wave"][3..6], [0, 1 << 4, 1 << 4]);
    assert_eq!(state.any_flags(4), 1 << 4);
    assert_eq!(state.counts(&Vocabulary::released()).flagged, 2);
    story.anna(withdraw("bad_spectrum", &[4]));
    assert_eq!(story.state().band_flags["short_wave"][3..6], [0, 0, 1 << 4]);
}

#[test]
fn channels_have_flags_of_their_own() {
    let mut story = Story::default();
    story.test(channels("noisy", 3));
    story.anna(channels("dead", 3));
    let state = story.state();
    assert_eq!(state.channel_flags["long_wave"][&3].flags, 0b11);
    assert_eq!(state.footprint_flags, vec![0; FOOTPRINTS]);
    story.anna(Act::WithdrawChannels {
        flag: "noisy".to_owned(),
        channels: vec![ChannelName { band: "long_wave".to_owned(), index: 3, wavenumber: 900.0 }],
    });
    story.test(channels("noisy", 3));
    assert_eq!(story.state().channel_flags["long_wave"][&3].flags, 0b10);
}

#[test]
fn a_granule_is_in_hand_again_after_a_change() {
    let mut story = Story::default();
    assert_eq!(story.state().granule, GranuleState::Untouched);
    story.test(flag("cloudy", &[0]));
    assert_eq!(story.state().granule, GranuleState::Untouched, "tests are nobody's hands");
    let first = story.anna(flag("cloudy", &[1]));
    assert_eq!(story.state().granule, GranuleState::InHand);
    story.anna(sign_off(&[]));
    story.test(flag("so2", &[0]));
    story.anna(Act::Comment { footprints: set(&[]) });
    assert_eq!(story.state().granule, GranuleState::SignedOff);
    let undone = story.anna(revoke(&first));
    assert_eq!(story.state().granule, GranuleState::InHand);
    story.anna(revoke(&undone));
    assert_eq!(story.state().granule, GranuleState::SignedOff, "as it was when signed");
    story.anna(flag("cloudy", &[2]));
    assert_eq!(story.state().granule, GranuleState::InHand);
    story.anna(Act::SetAside);
    assert_eq!(story.state().granule, GranuleState::SetAside);
    story.anna(Act::Reopen);
    assert_eq!(story.state().granule, GranuleState::InHand);
}

#[test]
fn undoing_everything_leaves_it_untouched() {
    let mut story = Story::default();
    let first = story.anna(flag("cloudy", &[1]));
    story.anna(revoke(&first));
    let state = story.state();
    assert_eq!(state, FlagState::untouched(FOOTPRINTS));
}

#[test]
fn unknown_flags_and_footprints_are_reported_and_do_no_harm() {
    let mut story = Story::default();
    story.anna(flag("foggy\u{1b}[2J", &[1]));
    story.anna(flag("noisy", &[1]));
    story.anna(flag("cloudy", &[3, FOOTPRINTS + 5]));
    story.anna(channels("dead", usize::MAX));
    let state = story.state();
    assert_eq!(state.footprint_flags[1], 0);
    assert_eq!(state.footprint_flags[3], 1);
    assert_eq!(state.problems.len(), 4, "{:?}", state.problems);
    assert!(state.problems.iter().all(|problem| !problem.contains('\u{1b}')));
}

#[test]
fn decisions_that_revoke_each_other_in_a_ring_do_no_harm() {
    let mut story = Story::default();
    story.anna(flag("cloudy", &[1]));
    let name = |sequence| DecisionId { writer: "anna".to_owned(), sequence };
    story.anna(revoke(&name(3)));
    story.anna(revoke(&name(2)));
    story.anna(revoke(&name(4)));
    story.anna(revoke(&name(99)));
    assert_eq!(story.state().footprint_flags[1], 1);
}

#[test]
fn undo_and_redo_go_back_and_forth_without_limit() {
    let mut story = Story::default();
    let mut states = vec![story.state().footprint_flags];
    for footprint in 0..5 {
        story.anna(flag("cloudy", &[footprint]));
        states.push(story.state().footprint_flags);
        story.add("bert", Origin::Person, Act::Comment { footprints: set(&[]) });
    }
    for round in 0..3 {
        for expected in states.iter().rev().skip(1) {
            let target = undo_target(&story.decisions, "anna").unwrap();
            story.anna(revoke(&target));
            assert_eq!(&story.state().footprint_flags, expected, "undo, round {round}");
        }
        assert_eq!(undo_target(&story.decisions, "anna"), None);
        for expected in states.iter().skip(1) {
            let target = redo_target(&story.decisions, "anna").unwrap();
            story.anna(revoke(&target));
            assert_eq!(&story.state().footprint_flags, expected, "redo, round {round}");
        }
        assert_eq!(redo_target(&story.decisions, "anna"), None);
    }
    let target = undo_target(&story.decisions, "anna").unwrap();
    story.anna(revoke(&target));
    story.anna(flag("so2", &[9]));
    assert_eq!(redo_target(&story.decisions, "anna"), None, "a new decision ends redo");
}

/// A long chain of undo and redo of one decision must not exhaust the stack.
#[test]
fn a_long_chain_of_revocations_is_followed() {
    let mut story = Story::default();
    let mut target = story.anna(flag("cloudy", &[1]));
    for _ in 0..100_000 {
        target = story.anna(revoke(&target));
    }
    assert_eq!(story.state().footprint_flags[1], 1, "an even number of revocations");
}
