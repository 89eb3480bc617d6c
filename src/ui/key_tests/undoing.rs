//! Undo and redo across granules: start state, keys, expected.

use super::append_byte;
use crate::ui::event::Event;
use crate::ui::trial::Place;

fn two_granules() -> Place {
    let place = Place::with(&["a.nc", "b.nc"]);
    append_byte(&place.path("b.nc"));
    place
}

const NAMES: [&str; 2] = ["a.nc", "b.nc"];

#[test]
fn undo_goes_back_in_time_from_granule_to_granule_and_redo_comes_back() {
    let place = two_granules();
    let mut trial = place.review(&NAMES);
    trial.keys("Right f c n f d p Right f s");
    assert_eq!((trial.granule().as_str(), trial.flagged("so2")), ("a.nc", vec![2]));
    trial.keys("u");
    assert!(trial.flagged("so2").is_empty());
    trial.keys("u");
    assert_eq!(trial.granule(), "b.nc", "the decision before was about the other granule");
    assert!(trial.flagged("dust_or_ash").is_empty());
    assert!(trial.message().starts_with("b.nc: undone: dust_or_ash"), "{}", trial.message());
    trial.keys("u");
    assert_eq!((trial.granule().as_str(), trial.bench().cursor), ("a.nc", 1));
    assert!(trial.flagged("cloudy").is_empty());
    trial.keys("u");
    assert_eq!(trial.message(), "nothing of yours to undo here");
    trial.keys("r");
    assert_eq!(trial.flagged("cloudy"), [1]);
    trial.keys("r");
    assert_eq!((trial.granule().as_str(), trial.flagged("dust_or_ash")), ("b.nc", vec![0]));
    trial.keys("r");
    assert_eq!((trial.granule().as_str(), trial.flagged("so2")), ("a.nc", vec![2]));
    trial.keys("r");
    assert_eq!(trial.message(), "nothing to redo");
}

#[test]
fn the_ledger_shows_and_takes_back_any_decision() {
    let place = Place::with(&["a.nc"]);
    let mut bo = place.review_by("bo", &["a.nc"]);
    bo.keys("f c Right f s");
    let mut trial = place.review(&["a.nc"]);
    trial.types(":flag bad_spectrum spikes").keys("Enter 7");
    let screen = trial.screen(120, 40);
    for words in ["Ledger (0, 0) 2", "bo cloudy at 1", "ada bad_spectrum at 1 (spikes)"] {
        assert!(screen.contains(words), "{words}: {screen}");
    }
    assert!(!screen.contains("so2"), "that was about another footprint");
    trial.keys("Enter");
    assert!(trial.screen(120, 40).contains("bo so2 at 1"), "{}", trial.screen(120, 40));
    // The newest comes first: spikes, so2, cloudy.
    trial.keys("Down Down w");
    assert_eq!(trial.message(), "taken back: cloudy at 1 by bo");
    assert!(trial.flagged("cloudy").is_empty());
    assert!(trial.screen(120, 40).contains("x bo cloudy at 1"));
    trial.keys("Down w");
    assert_eq!(trial.message(), "put back: cloudy at 1 by bo");
    assert_eq!(trial.flagged("cloudy"), [0]);
    trial.keys("g w");
    assert_eq!(trial.message(), "taken back: what was done to cloudy at 1 by ada");
    assert!(trial.flagged("cloudy").is_empty(), "an undo or a redo is taken back like any other");
}

#[test]
fn after_a_restart_too() {
    let place = two_granules();
    let mut trial = place.review(&NAMES);
    trial.keys("f c n f d");
    trial.leave();
    let mut again = place.review(&NAMES);
    assert_eq!(again.granule(), "a.nc");
    again.keys("u");
    assert_eq!(again.granule(), "b.nc");
    assert!(again.flagged("dust_or_ash").is_empty());
    again.keys("u");
    assert_eq!(again.granule(), "a.nc");
    assert!(again.flagged("cloudy").is_empty());
}

#[test]
fn a_new_decision_about_another_granule_ends_redo() {
    let place = two_granules();
    let mut trial = place.review(&NAMES);
    trial.keys("f c u n f d p r");
    assert_eq!(trial.message(), "nothing to redo: something else was decided since");
    assert!(trial.flagged("cloudy").is_empty());
}

#[test]
fn a_granule_left_before_its_decisions_were_kept_shows_them_when_one_comes_back() {
    let place = two_granules();
    let mut trial = place.review(&NAMES);
    let folder = format!("campaign/ledgers/a-{}", trial.record().identity().short());
    let folder = place.path(&folder);
    std::fs::write(&folder, "in the way").unwrap();
    trial.keys("f c");
    assert_eq!(trial.app.pending(), 1);
    trial.keys("n p");
    assert_eq!((trial.granule().as_str(), trial.flagged("cloudy")), ("a.nc", vec![0]));
    assert_eq!(trial.app.pending(), 1, "still on its way, once");
    std::fs::remove_file(&folder).unwrap();
    trial.keys("Right f c");
    trial.event(Event::LedgerMoved);
    assert_eq!(trial.app.pending(), 0);
    trial.leave();
    assert_eq!(place.review(&NAMES).flagged("cloudy"), [0, 1]);
}

#[test]
fn the_ledger_shows_changes_of_the_rulebook_and_takes_them_back() {
    let place = super::screening::place(&["a.nc"]);
    let mut trial = place.review(&["a.nc"]);
    let before = trial.bench().tests.screened.clone().unwrap().rulebook.fingerprint.clone();
    trial.keys("f c");
    trial.types(":try cold window").keys("Enter Left Left D").types("warmer coast").keys("Enter");
    trial.keys("7");
    let screen = trial.screen(120, 40);
    assert!(screen.contains("ada rulebook: cold window 260 to 259"), "{screen}");
    assert!(screen.contains("(warmer coast)") && screen.contains("ada cloudy at 1"), "{screen}");
    trial.keys("w");
    assert!(trial.message().starts_with("cold window: 260 in place of 259"), "{}", trial.message());
    let after = trial.bench().tests.screened.clone().unwrap().rulebook.fingerprint.clone();
    assert_eq!(after, before, "the tests have run by the threshold of before");
    let screen = trial.screen(120, 40);
    assert!(screen.contains("x ada rulebook: cold window 260 to 259"), "{screen}");
    assert_eq!(trial.flagged("cloudy"), [0], "what was decided stays");
    // In the next session too, and by somebody else.
    trial.leave();
    let mut bo = place.review_by("bo", &["a.nc"]);
    bo.keys("7 Down w");
    assert_eq!(
        bo.message(),
        "the rulebook stays as it was: it was changed again since and is 260 now"
    );
    bo.keys("Up w");
    assert!(bo.message().starts_with("cold window: 259"), "{}", bo.message());
}
