//! What goes through all granules of the Tray: start state, keys, expected. Footprint n of each
//! granule is a black body of 250 + n kelvins.

use super::{ALL, append_byte};
use crate::ui::spreading::Reach;
use crate::ui::trial::{POSITIONS, Place, Trial};

const NAMES: [&str; 3] = ["a.nc", "b.nc", "c.nc"];

fn three_granules() -> Place {
    let place = Place::with(&NAMES);
    append_byte(&place.path("b.nc"));
    (0..2).for_each(|_| append_byte(&place.path("c.nc")));
    place
}

/// Like the footprint of 257 K up to two kelvins, in all granules: five in each.
fn like_in_tray(place: &Place) -> Trial {
    let mut trial = place.review(&NAMES);
    trial.keys("Down Right L W W");
    assert_eq!(trial.bench().spread.reach, Reach::Tray);
    trial.app.bench_mut().unwrap().spread.x = Some(2.5);
    trial
}

#[test]
fn spectra_are_compared_across_the_tray_and_flagged_in_one_step() {
    let place = three_granules();
    let mut trial = like_in_tray(&place);
    let screen = trial.screen(120, 40);
    assert!(screen.contains("15 selected"), "{screen}");
    assert!(screen.contains("5 alike"), "each granule says how many: {screen}");
    trial.keys("f");
    let prompt = trial.screen(120, 40);
    assert!(prompt.contains("15 in 3 granules where distance in BT"), "{prompt}");
    trial.keys("d");
    assert_eq!(trial.flagged("dust_or_ash"), [5, 6, 7, 8, 9]);
    assert!(
        trial.message().contains("dust_or_ash at 10 more in 2 granules"),
        "{}",
        trial.message()
    );
    trial.keys("n");
    assert_eq!(
        (trial.granule().as_str(), trial.flagged("dust_or_ash")),
        ("b.nc", vec![5, 6, 7, 8, 9])
    );
}

#[test]
fn what_is_selected_already_is_joined_with_those_of_all_granules() {
    let place = three_granules();
    let mut trial = place.review(&NAMES);
    // Footprint 29 first, then those like 7.
    trial.keys("G v v 2 g Down Right L W W");
    trial.app.bench_mut().unwrap().spread.x = Some(2.5);
    assert!(trial.screen(120, 40).contains("1 + 15: 16 selected"), "{}", trial.screen(120, 40));
    trial.keys("f d");
    assert_eq!(trial.flagged("dust_or_ash"), [5, 6, 7, 8, 9, 29]);
    trial.keys("n");
    assert_eq!(trial.flagged("dust_or_ash"), [5, 6, 7, 8, 9]);
}

#[test]
fn one_undo_takes_it_back_everywhere_and_one_redo_puts_it_back_after_a_restart_too() {
    let place = three_granules();
    let mut trial = like_in_tray(&place);
    trial.keys("f d u");
    assert!(trial.flagged("dust_or_ash").is_empty());
    assert!(trial.message().ends_with("taken back in 2 more granules"), "{}", trial.message());
    trial.keys("n");
    assert!(trial.flagged("dust_or_ash").is_empty(), "taken back in the other granules too");
    trial.keys("r");
    assert_eq!(trial.flagged("dust_or_ash"), [5, 6, 7, 8, 9]);
    trial.leave();
    let mut again = place.review(&NAMES);
    assert_eq!(again.flagged("dust_or_ash"), [5, 6, 7, 8, 9]);
    again.keys("u");
    for granule in NAMES {
        assert_eq!(again.granule(), granule);
        assert!(again.flagged("dust_or_ash").is_empty(), "{granule}");
        again.keys("n");
    }
}

#[test]
fn a_comparison_ends_with_esc_and_its_answers_come_too_late() {
    let place = three_granules();
    let mut trial = place.review(&NAMES);
    trial.keys("L W");
    trial.press("W");
    assert!(trial.app.is_working() && trial.screen(120, 40).contains("comparing 1 of 2"));
    trial.press("Esc");
    trial.settle();
    assert_eq!(trial.bench().spread.reach, Reach::Here);
    assert!(trial.bench().spread.alike.as_ref().unwrap().elsewhere.is_empty());
    assert!(trial.app.across.is_none());
}

#[test]
fn what_comes_of_an_old_comparison_does_not_stand_for_a_new_one() {
    let place = three_granules();
    let mut trial = place.review(&NAMES);
    trial.keys("L W");
    trial.press("W");
    // Measured already, so the other footprint is compared at once.
    ["2", "Down", "L"].iter().for_each(|key| trial.press(key));
    trial.settle();
    assert!(trial.bench().spread.alike.as_ref().unwrap().elsewhere.is_empty());
    trial.keys("W W");
    let elsewhere = &trial.bench().spread.alike.as_ref().unwrap().elsewhere;
    let here = POSITIONS;
    assert!(elsewhere.len() == 2 && elsewhere.values().all(|far| far[here].abs() < 1e-9));
}

#[test]
fn the_side_that_is_meant_is_the_same_in_all_granules() {
    let place = three_granules();
    let mut trial = like_in_tray(&place);
    trial.keys("J");
    let selection = trial.bench().selection();
    assert_eq!(selection.footprints.len(), ALL - 5);
    assert!(selection.elsewhere.values().all(|set| *set == selection.footprints));
    assert!(selection.words.contains("> 2.5"), "{}", selection.words);
}

#[test]
fn what_the_tests_suggest_is_accepted_here_alone_and_says_so() {
    let place = three_granules();
    let mut trial = like_in_tray(&place);
    trial.keys("y");
    assert!(
        trial.message().starts_with("5 in this granule, none in others"),
        "{}",
        trial.message()
    );
}

#[test]
fn a_flag_is_withdrawn_across_the_tray_from_those_that_carry_it() {
    let place = three_granules();
    let mut trial = place.review(&NAMES);
    trial.keys("n Down Right f d p Down Right L W W");
    trial.app.bench_mut().unwrap().spread.x = Some(2.5);
    trial.keys("w d");
    assert!(
        trial.message().starts_with("dust_or_ash withdrawn in 2 granules"),
        "{}",
        trial.message()
    );
    trial.keys("n");
    assert!(trial.flagged("dust_or_ash").is_empty() && trial.granule() == "b.nc");
}

#[test]
fn pressing_it_again_compares_by_the_next_measure() {
    let place = three_granules();
    let mut trial = place.review(&NAMES);
    let mut measures = Vec::new();
    for _ in 0..3 {
        trial.keys("L");
        measures.push(trial.bench().spread_name());
    }
    assert!(measures[0].starts_with("distance in BT") && measures[1].starts_with("spectral angle"));
    // Thirty spectra of eight channels have no components.
    assert!(trial.message().contains("components"), "{}", trial.message());
}

#[test]
fn a_granule_that_cannot_be_read_any_more_is_named_and_the_others_are_flagged() {
    let place = three_granules();
    let mut trial = like_in_tray(&place);
    std::fs::remove_file(place.path("b.nc")).unwrap();
    trial.keys("f d");
    assert!(trial.message().contains("not in b.nc:"), "{}", trial.message());
    assert!(trial.message().starts_with("dust_or_ash at 5 more in 1 "), "{}", trial.message());
    assert_eq!(trial.flagged("dust_or_ash").len(), 5);
    trial.keys("Tab 1 Down Down Enter");
    assert_eq!((trial.granule().as_str(), trial.flagged("dust_or_ash").len()), ("c.nc", 5));
}
