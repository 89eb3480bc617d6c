//! From granule to granule.

use super::append_byte;
use crate::ui::event::Event;
use crate::ui::jobs::Job;
use crate::ui::trial::Place;

#[test]
fn it_opens_at_the_first_granule_that_is_not_signed_off_and_steps_over_broken_files() {
    let names = ["a.nc", "b.nc", "broken.nc", "c.nc"];
    let place = Place::with(&["a.nc", "b.nc", "c.nc"]);
    append_byte(&place.path("b.nc"));
    (0..2).for_each(|_| append_byte(&place.path("c.nc")));
    std::fs::write(place.path("broken.nc"), "no granule at all").unwrap();
    let mut trial = place.review(&names);
    assert_eq!(trial.granule(), "a.nc");
    trial.keys("S y N");
    assert_eq!(trial.granule(), "b.nc");
    trial.keys("n");
    assert_eq!(trial.granule(), "c.nc", "the broken file is stepped over");
    assert!(trial.message().starts_with("broken.nc: "), "and named: {}", trial.message());
    assert!(trial.app.tray.entry(2).unwrap().error.is_some());
    trial.keys("n");
    assert_eq!((trial.granule().as_str(), trial.message()), ("c.nc", "this is the last granule"));
    trial.keys("p");
    assert_eq!(trial.granule(), "b.nc");
    trial.leave();
    let mut again = place.review(&names);
    assert_eq!(again.granule(), "b.nc");
    again.keys("Shift-Tab Up Enter");
    assert_eq!(again.granule(), "a.nc", "the Tray opens what is chosen there");
}

#[test]
fn a_granule_renamed_since_is_known_by_its_content() {
    let place = Place::with(&["a.nc", "b.nc"]);
    append_byte(&place.path("b.nc"));
    let mut trial = place.review(&["a.nc", "b.nc"]);
    trial.keys("S y");
    trial.leave();
    std::fs::rename(place.path("a.nc"), place.path("moved.nc")).unwrap();
    let again = place.review(&["moved.nc", "b.nc"]);
    assert_eq!(again.granule(), "b.nc", "what is signed off is passed over");
    assert!(again.app.tray.entry(0).unwrap().is_signed_off());
}

#[test]
fn going_back_to_a_file_that_has_gone_comes_back_to_the_one_that_is_there() {
    let names = ["a.nc", "b.nc"];
    let place = Place::with(&names);
    append_byte(&place.path("b.nc"));
    let mut trial = place.review(&names);
    trial.keys("n");
    std::fs::remove_file(place.path("a.nc")).unwrap();
    trial.keys("p");
    assert_eq!(trial.granule(), "b.nc");
    assert!(trial.message().starts_with("a.nc: "), "{}", trial.message());
}

#[test]
fn what_others_decided_is_looked_for_once_at_a_time() {
    let place = Place::with(&["a.nc"]);
    let mut trial = place.review(&["a.nc"]);
    // The first look hangs on a disk.
    (0..3).for_each(|_| trial.event(Event::Quiet));
    assert_eq!(trial.jobs.len(), 1);
    trial.settle();
    trial.event(Event::Quiet);
    assert_eq!(trial.jobs.len(), 1);
}

#[test]
fn what_is_looked_for_in_a_granule_ends_with_it() {
    let place = Place::with(&["a.nc", "b.nc"]);
    append_byte(&place.path("b.nc"));
    let mut trial = place.review(&["a.nc", "b.nc"]);
    trial.types(":select bt(900) < 252.5");
    ["Enter", "Q", "n"].iter().for_each(|key| trial.press(key));
    let cancels = trial.jobs.iter().filter_map(|job| match job {
        Job::Select { cancel, .. } | Job::Trace { cancel, .. } => Some(cancel.is_cancelled()),
        _ => None,
    });
    assert_eq!(cancels.collect::<Vec<_>>(), [true, true]);
}

#[test]
fn opening_can_be_given_up_for_another_granule() {
    let names = ["lowen_001.nc", "pell_002.nc"];
    let place = Place::with(&names);
    append_byte(&place.path("pell_002.nc"));
    let mut trial = place.review_held(&names);
    trial.press("Esc");
    trial.press("n");
    trial.settle();
    assert_eq!(trial.granule(), "pell_002.nc", "the answer for the first one is dropped");
}

#[test]
fn without_any_granule_the_screen_says_so_and_leaves() {
    let place = Place::with(&[]);
    std::fs::write(place.path("broken.nc"), "no granule at all").unwrap();
    let mut trial = place.review(&["broken.nc", "absent.nc"]);
    assert!(trial.app.bench().is_none());
    assert!(trial.screen(80, 24).contains("none of the files can be used"));
    trial.keys("q");
    assert_eq!(trial.app.ended, Some(0));
}
