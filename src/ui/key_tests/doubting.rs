//! Doubt first: start state, keys, expected. By the rulebook of the trial, footprints 9, 10 and 11
//! are in doubt, and so is 25; for 9 a flag is suggested, for the others none.

use super::append_byte;
use super::screening::{place, screen};
use crate::flags::{Act, GranuleState, ReviewState, Ruling};
use crate::review::OnRecord;
use crate::ui::overlay::Overlay;
use crate::ui::trial::{Place, Trial};

fn one_granule() -> (Place, Trial) {
    let place = place(&["lowen_001.nc"]);
    let trial = place.review(&["lowen_001.nc"]);
    (place, trial)
}

fn selected(trial: &Trial) -> Vec<usize> {
    trial.bench().selection().footprints.iter().collect()
}

#[test]
fn a_key_goes_to_the_most_doubtful_case_and_selects_all_of_it() {
    let (_place, mut trial) = one_granule();
    assert!(trial.screen(160, 48).contains("3 cases left"));
    trial.keys("Space");
    assert_eq!((trial.bench().cursor, selected(&trial)), (10, vec![10, 11]));
    assert_eq!(trial.message(), "2 in doubt to 1.00: no flag");
    trial.keys("Space");
    assert_eq!((trial.bench().cursor, selected(&trial)), (25, vec![25]));
    trial.keys("Space");
    assert_eq!((trial.bench().cursor, selected(&trial)), (9, vec![9]));
    trial.keys("Space");
    assert!(trial.message().starts_with("3 cases left as they are"), "{}", trial.message());
    trial.keys("Backspace");
    assert_eq!(selected(&trial), [25]);
    trial.keys("Space Space Space Space");
    assert_eq!(selected(&trial), [10, 11], "with no other granule it goes round again");
}

#[test]
fn how_many_are_left_is_in_view_at_any_width() {
    let (_place, mut trial) = one_granule();
    for keys in ["Space", "y", "v Down", "Esc"] {
        trial.keys(keys);
        let screen = trial.screen(80, 24);
        let status = screen.lines().rev().nth(1).unwrap();
        assert!(status.contains("cases left"), "{status}");
    }
}

#[test]
fn accepting_takes_the_suggestion_over_and_goes_on_to_the_next_case() {
    let (_place, mut trial) = one_granule();
    // At 10, of 260 K, the odds are even: no flag. Below that it is cloudy: footprint 9.
    trial.keys("Space y");
    assert_eq!(selected(&trial), [25], "the next case is shown by itself");
    let message = "1 in doubt to 0.85: no flag. Before: case of 2 accepted: no flag 2";
    assert_eq!(trial.message(), message);
    trial.keys("Space y");
    assert_eq!(trial.flagged("cloudy"), [9]);
    let review = &trial.record().state().review;
    assert!((9..12).all(|at| review[at] == ReviewState::DecidedByPerson));
    let decision = trial.record().decisions().last().unwrap();
    assert!(decision.by_person());
    assert_eq!(decision.why.as_deref(), Some("cold window (1)"));
    let Act::Judge { ruling: Ruling::Accepted, rulebook, .. } = &decision.act else {
        panic!("{decision:?}");
    };
    assert!(rulebook.starts_with("lowen ("), "{rulebook}");
    assert_eq!(trial.bench().doubt.cases.len(), 1);
}

#[test]
fn an_undo_among_the_cases_goes_back_to_the_one_that_is_open_again() {
    let (_place, mut trial) = one_granule();
    trial.keys("Space y y");
    assert_eq!(selected(&trial), [9]);
    trial.keys("u");
    assert_eq!((selected(&trial), trial.bench().doubt.cases.len()), (vec![25], 2));
    assert!(trial.message().contains("undone: suggestion accepted"), "{}", trial.message());
    trial.keys("y y");
    assert!(trial.message().starts_with("nothing is left in doubt"), "{}", trial.message());
    assert_eq!(trial.flagged("cloudy"), [9]);
    trial.keys("u");
    assert!(trial.flagged("cloudy").is_empty(), "one undo takes all of it back");
    assert_eq!(selected(&trial), [9], "behind the last one, too");
}

#[test]
fn any_way_of_deciding_a_case_goes_on_and_letting_go_does_not() {
    let (_place, mut trial) = one_granule();
    trial.keys("Space f d");
    assert_eq!((trial.flagged("dust_or_ash"), selected(&trial)), (vec![10, 11], vec![25]));
    trial.keys("C").types("looked twice").keys("Enter");
    assert_eq!(trial.bench().doubt.cases.len(), 2, "a remark decides nothing");
    trial.keys("Space Esc");
    assert!(!trial.bench().selecting.is_on());
    trial.keys("a");
    assert!(!trial.bench().selecting.is_on(), "no case was in hand any more");
}

#[test]
fn overruling_withdraws_what_is_suggested_also_later() {
    let place = place(&["lowen_001.nc"]);
    screen(&place, "lowen_001.nc");
    let mut trial = place.review(&["lowen_001.nc"]);
    assert_eq!(trial.flagged("doubtful"), [9, 10, 11, 25]);
    trial.keys("Space Space Space R");
    // Only the case in hand; the others stay in doubt.
    assert!(!trial.flagged("cloudy").contains(&9));
    assert_eq!(trial.flagged("doubtful"), [10, 11, 25]);
    trial.leave();
    // The tests change their mind in between, and are sure now.
    let campaign = place.path("campaign/rulebook.toml");
    let surer = std::fs::read_to_string(&campaign).unwrap().replace("260", "290");
    std::fs::write(campaign, surer).unwrap();
    screen(&place, "lowen_001.nc");
    let again = place.review(&["lowen_001.nc"]);
    assert!(!again.flagged("cloudy").contains(&9), "a person's word survives a re-screen");
    assert!(again.flagged("cloudy").contains(&11));
}

#[test]
fn where_no_flag_is_suggested_overruling_asks_which_one_it_is() {
    let (_place, mut trial) = one_granule();
    trial.keys("Space Space R");
    assert!(matches!(trial.app.overlay, Overlay::Flags(_)));
    trial.keys("d");
    assert_eq!(trial.flagged("dust_or_ash"), [25]);
    assert_eq!(trial.bench().doubt.cases.len(), 2, "flagged is decided");
}

#[test]
fn a_selection_is_accepted_where_no_person_has_decided() {
    let (_place, mut trial) = one_granule();
    trial.keys("f s v Down Down End y");
    assert_eq!(trial.flagged("so2"), [0]);
    assert_eq!(trial.flagged("cloudy"), (1..=9).collect::<Vec<_>>());
    assert!(trial.message().contains("1 left as they were"), "{}", trial.message());
    assert!(trial.bench().doubt.cases.iter().all(|case| case.worst == 25));
    // A single footprint that is decided already is decided anew.
    trial.keys("Home g y");
    assert_eq!(trial.flagged("cloudy"), (0..=9).collect::<Vec<_>>());
}

#[test]
fn behind_the_last_case_the_next_granule_in_doubt_is_opened() {
    let names = ["a.nc", "b.nc", "c.nc"];
    let place = place(&names);
    append_byte(&place.path("b.nc"));
    (0..2).for_each(|_| append_byte(&place.path("c.nc")));
    let mut trial = place.review(&names);
    trial.keys("Space y y y");
    assert!(
        trial.message().starts_with("nothing is left in doubt: S signs off"),
        "{}",
        trial.message()
    );
    assert!(trial.message().contains("Space goes on to b.nc"), "{}", trial.message());
    trial.keys("Space");
    assert_eq!((trial.granule().as_str(), selected(&trial)), ("b.nc", vec![10, 11]));
    // Left as they are; in a.nc nothing is left.
    trial.keys("Space Space Space Space");
    assert_eq!(trial.granule(), "c.nc");
    trial.keys("y y S t Space");
    assert_eq!(trial.granule(), "b.nc", "a signed-off granule is done, whatever is left");
    assert!(trial.screen(120, 40).contains("doubt"));
}

#[test]
fn signing_off_with_the_tests_leaves_them_the_rest() {
    let (_place, mut trial) = one_granule();
    trial.keys("Space y Space y S");
    let screen = trial.screen(120, 40);
    assert!(screen.contains("left in doubt: 1, in 1 cases"), "{screen}");
    assert!(screen.contains("t: the tests answer for 27 of them"), "{screen}");
    assert!(screen.contains("also the 13 that the tests would flag"), "{screen}");
    trial.keys("t");
    assert_eq!(trial.record().state().granule, GranuleState::SignedOff);
    let counts = trial.record().counts();
    assert_eq!((counts.by_person, counts.by_test, counts.not_assessed), (3, 27, 0));
    assert_eq!(trial.flagged("cloudy"), (0..10).collect::<Vec<_>>());
    assert_eq!(trial.flagged("doubtful"), [25], "what a person settled is not in doubt");
    let tests = trial.record().decisions().iter().filter(|one| !one.by_person()).count();
    assert!(tests > 0 && trial.bench().tests.on_record == OnRecord::Same);
}

/// A granule is on the table, and jobs wait.
fn tests_still_run(place: &Place) -> Trial {
    let mut trial = place.review_held(&["lowen_001.nc"]);
    while trial.app.bench().is_none() {
        for answer in trial.answers_of_next() {
            trial.event(crate::ui::event::Event::Answer(answer));
        }
    }
    trial
}

#[test]
fn the_key_may_be_pressed_before_the_tests_have_run() {
    let place = place(&["lowen_001.nc"]);
    let mut trial = tests_still_run(&place);
    trial.press("Space");
    assert!(trial.message().contains("as soon as the tests have run"));
    trial.settle();
    assert_eq!(selected(&trial), [10, 11]);
}

#[test]
fn the_first_case_does_not_break_into_what_was_begun_meanwhile() {
    let place = place(&["lowen_001.nc"]);
    let mut trial = tests_still_run(&place);
    trial.press("Space");
    assert!(trial.message().starts_with("the first case is shown"), "{}", trial.message());
    trial.press("v");
    trial.settle();
    assert!(trial.bench().tests.screened.is_some());
    assert_eq!(trial.bench().selection().words, "box of 1", "what was begun is still in hand");
    trial.keys("Esc Space");
    assert!(trial.bench().selection().words.starts_with("case of"));
}

#[test]
fn a_case_waited_for_does_not_break_into_what_came_since() {
    let place = place(&["lowen_001.nc"]);
    for (keys, says) in [("Space v Right", "Space shows the first case"), ("Space Esc", "")] {
        let mut trial = tests_still_run(&place);
        keys.split_whitespace().for_each(|key| trial.press(key));
        let box_drawn = trial.bench().selecting.is_on();
        trial.settle();
        assert_eq!(trial.bench().selecting.is_on(), box_drawn, "{keys}");
        assert!(trial.message().contains(says) && !selected(&trial).contains(&10), "{keys}");
    }
}

#[test]
fn only_deciding_a_case_goes_on_and_only_its_undo_goes_back() {
    let names = ["a.nc", "b.nc"];
    let place = place(&names);
    append_byte(&place.path("b.nc"));
    let mut trial = place.review(&names);
    trial.keys("Space Space H n u");
    assert_eq!(selected(&trial), [25], "the undo was about a channel");
    trial.keys("S y Esc");
    assert_eq!(trial.granule(), "a.nc", "what was signed off stays on the table");
}
