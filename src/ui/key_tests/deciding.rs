//! Flags, reasons, undo, sign-off, export.

use super::{ALL, one_granule};
use crate::flags::{GranuleState, ReviewState};
use crate::ui::event::Event;
use crate::ui::overlay::Overlay;
use crate::ui::trial::{POSITIONS, Place};

#[test]
fn a_decision_asked_for_too_early_is_asked_for_again() {
    let place = Place::with(&["lowen_001.nc"]);
    let mut trial = place.review_held(&["lowen_001.nc"]);
    while trial.app.bench().is_none() {
        for answer in trial.answers_of_next() {
            trial.event(Event::Answer(answer));
        }
    }
    trial.press("f");
    assert!(trial.message().starts_with("one moment"), "{}", trial.message());
    trial.settle();
    assert_eq!(trial.message(), "the ledgers are read: press the key again");
    assert_eq!(trial.record().decisions().len(), 0);
}

#[test]
fn a_reason_is_asked_for_and_kept() {
    let (_place, mut trial) = one_granule();
    trial.keys("f Tab c").types("cold top").keys("Enter");
    trial.types(":flag so2 plume").keys("Enter");
    let whys: Vec<_> = trial.record().decisions().iter().map(|one| one.why.clone()).collect();
    assert_eq!(whys, [Some("cold top".to_owned()), Some("plume".to_owned())]);
    assert!(trial.screen(200, 60).contains("(cold top)"), "the Evidence says why");
}

#[test]
fn a_flag_is_withdrawn_only_where_it_stands() {
    let (_place, mut trial) = one_granule();
    trial.keys("f c g v Right Right w");
    assert!(!trial.screen(80, 24).contains("dust_or_ash"), "only what is there is offered");
    trial.keys("c");
    assert!(trial.flagged("cloudy").is_empty());
    assert!(trial.message().ends_with("withdrawn from 1"), "{}", trial.message());
    trial.keys("w");
    assert!(matches!(trial.app.overlay, Overlay::None));
    trial.types(":withdraw cloudy").keys("Enter");
    assert_eq!(trial.message(), "none of them carries cloudy");
}

#[test]
fn undo_and_redo_go_all_the_way_and_survive_a_restart() {
    let (place, mut trial) = one_granule();
    trial.keys("f c Right f d Right a");
    assert_eq!(trial.record().counts().no_flag, 1);
    trial.keys("u u");
    assert_eq!(trial.flagged("cloudy"), [0]);
    assert!(trial.flagged("dust_or_ash").is_empty());
    trial.leave();
    let mut again = place.review(&["lowen_001.nc"]);
    again.keys("u");
    assert!(again.flagged("cloudy").is_empty());
    again.keys("u");
    assert_eq!(again.message(), "nothing of yours to undo here");
    again.keys("r r r");
    assert_eq!((again.flagged("cloudy"), again.flagged("dust_or_ash")), (vec![0], vec![1]));
    assert_eq!(again.record().counts().no_flag, 1);
    again.keys("Ctrl-R");
    assert_eq!(again.message(), "nothing to redo");
}

#[test]
fn two_people_see_each_other() {
    let (place, mut ada) = one_granule();
    let mut bo = place.review_by("bo", &["lowen_001.nc"]);
    bo.keys("f c Right f d");
    ada.keys("a");
    ada.event(Event::Quiet);
    ada.settle();
    assert_eq!(ada.message(), "2 decisions by bo came in");
    assert_eq!((ada.flagged("cloudy"), ada.flagged("dust_or_ash")), (vec![0], vec![1]));
    ada.keys("u");
    assert_eq!(ada.message(), "undone: looked at 1", "one's own decisions are undone");
    ada.event(Event::Quiet);
    ada.settle();
    assert_eq!(ada.message(), "undone: looked at 1", "nothing new is not worth a word");
}

#[test]
fn the_same_flag_once_more() {
    let (_place, mut trial) = one_granule();
    trial.keys("f b Down F");
    assert_eq!(trial.flagged("bad_spectrum"), [0, POSITIONS]);
}

#[test]
fn signing_off_asks_about_the_rest() {
    let (_place, mut trial) = one_granule();
    trial.keys("f c S Esc");
    assert_eq!(trial.record().state().granule, GranuleState::InHand);
    trial.keys("S n");
    assert_eq!(trial.record().state().granule, GranuleState::SignedOff);
    assert_eq!(trial.record().counts().not_assessed, ALL - 1);
    trial.keys("S");
    assert_eq!(trial.message(), "the granule is signed off already");
    trial.keys("O S y");
    assert_eq!(trial.record().counts().not_assessed, 0);
    assert_eq!(trial.record().counts().no_flag, ALL - 1);
    assert_eq!(trial.record().state().review[5], ReviewState::DecidedByPerson);
    trial.keys("u");
    assert_eq!(trial.record().state().granule, GranuleState::InHand);
}

#[test]
fn setting_aside_needs_a_reason() {
    let (_place, mut trial) = one_granule();
    trial.keys("A Enter");
    assert!(trial.message().contains("type some words"));
    trial.types("half of it is missing").keys("Enter");
    assert_eq!(trial.record().state().granule, GranuleState::SetAside);
    assert!(trial.screen(80, 24).contains("set aside"));
}

#[test]
fn decisions_that_cannot_be_written_are_said_and_asked_about() {
    let (place, mut trial) = one_granule();
    let ledgers = place.path("campaign/ledgers");
    std::fs::remove_dir_all(&ledgers).unwrap();
    std::fs::write(&ledgers, "in the way").unwrap();
    trial.keys("f c");
    assert!(trial.screen(120, 24).contains("1 NOT WRITTEN"));
    trial.keys("q");
    assert_eq!(trial.app.ended, None);
    assert!(trial.screen(80, 24).contains("could not be written"));
    trial.keys("n");
    std::fs::remove_file(&ledgers).unwrap();
    std::fs::create_dir(&ledgers).unwrap();
    trial.keys("q r");
    assert_eq!(trial.app.ended, Some(0), "once it is written, it leaves");
}

#[test]
fn the_mask_is_exported_once_all_is_kept() {
    let (place, mut trial) = one_granule();
    trial.keys("f c");
    trial.types(":export ");
    let folder = place.path("masks");
    trial.types(&folder.to_string_lossy()).keys("Enter");
    assert!(trial.message().starts_with("exported to"), "{}", trial.message());
    assert!(folder.join("lowen_001.mask.nc").exists());
}

#[test]
fn a_campaign_that_cannot_be_written_to_is_only_looked_at() {
    let mut place = Place::with(&["lowen_001.nc"]);
    place.review(&["lowen_001.nc"]).keys("f c");
    place.look_only = Some("cannot write to the campaign folder".to_owned());
    let mut trial = place.review(&["lowen_001.nc"]);
    assert_eq!(trial.flagged("cloudy"), [0], "what was decided is on show");
    assert!(trial.screen(120, 40).contains("looking only"));
    trial.keys("Right f c");
    assert_eq!(trial.message(), "looking only: cannot write to the campaign folder");
    trial.keys("u S y");
    assert_eq!(trial.flagged("cloudy"), [0]);
    assert_eq!((trial.record().decisions().len(), trial.app.pending()), (1, 0));
}
