//! Leaving waits for what was begun: start state, keys, expected. Keys are pressed while their jobs
//! still wait.

use super::append_byte;
use super::by_rule::{spot_check, two_of_three_screened};
use super::one_granule;
use crate::flags::{Campaign, GranuleState};
use crate::ui::event::Event;
use crate::ui::overlay::Overlay;
use crate::ui::trial::{Place, Trial};

fn masks(place: &Place) -> usize {
    std::fs::read_dir(place.path("campaign/exports")).map_or(0, Iterator::count)
}

fn press(trial: &mut Trial, keys: &str) {
    keys.split_whitespace().for_each(|key| trial.press(key));
}

#[test]
fn an_export_is_finished_first() {
    let (place, mut trial) = one_granule();
    press(&mut trial, "E q");
    assert_eq!(trial.app.ended, None);
    assert!(trial.message().contains("the mask of lowen_001.nc"), "{}", trial.message());
    trial.settle();
    assert_eq!((trial.app.ended, masks(&place)), (Some(0), 1));
}

#[test]
fn an_export_waits_for_the_disk_whatever_is_on_the_table() {
    let place = Place::with(&["a.nc", "b.nc"]);
    append_byte(&place.path("b.nc"));
    let mut trial = place.review(&["a.nc", "b.nc"]);
    press(&mut trial, "f c E n");
    trial.settle();
    assert_eq!((trial.granule().as_str(), masks(&place)), ("b.nc", 1));
    assert!(trial.message().starts_with("exported to"), "{}", trial.message());
}

#[test]
fn what_came_of_an_export_is_told_in_another_granule_too_and_holds_whoever_leaves() {
    let place = Place::with(&["a.nc", "b.nc"]);
    append_byte(&place.path("b.nc"));
    std::fs::write(place.path("file"), "no folder").unwrap();
    let into = format!(":export {}", place.path("file/below").to_string_lossy());
    for (key, granule) in [("n", "b.nc"), ("q", "b.nc")] {
        let mut trial = place.review(&["a.nc", "b.nc"]);
        trial.types(&into);
        press(&mut trial, "Enter");
        press(&mut trial, key);
        trial.settle();
        assert!(trial.message().contains(".nc is not exported: "), "{}", trial.message());
        assert_eq!(trial.app.ended, None, "{key}: whoever leaves hears of it");
        assert!(key == "q" || trial.granule() == granule);
    }
}

#[test]
fn what_hangs_is_not_waited_for_against_ones_will() {
    let (_place, mut trial) = one_granule();
    press(&mut trial, "E q q");
    assert!(matches!(trial.app.overlay, Overlay::LeaveAnyway));
    assert!(trial.screen(80, 24).contains("still writing the mask"));
    press(&mut trial, "n");
    assert!(!trial.app.leaving && trial.app.ended.is_none());
    press(&mut trial, "q q y");
    assert_eq!(trial.app.ended, Some(0));
}

#[test]
fn a_threshold_taken_over_is_written_first_and_the_next_granule_goes_by_it() {
    let place = Place::with(&["a.nc", "b.nc"]);
    append_byte(&place.path("b.nc"));
    let changes = |place: &Place| {
        let campaign = Campaign::open(&place.path("campaign")).unwrap();
        campaign.rulebook_changes().0
    };
    let mut trial = place.review(&["a.nc", "b.nc"]);
    trial.keys("} Right Right D");
    press(&mut trial, "Enter n");
    trial.settle();
    let screened = trial.bench().tests.screened.clone().unwrap();
    assert_eq!(trial.granule(), "b.nc");
    assert_eq!(screened.rulebook.fingerprint, changes(&place)[0].after);
    trial.keys("} Right Right D");
    press(&mut trial, "Enter q");
    assert_eq!(trial.app.ended, None);
    trial.settle();
    assert_eq!((trial.app.ended, changes(&place).len()), (Some(0), 2));
}

#[test]
fn sign_offs_by_rule_are_written_first() {
    let place = two_of_three_screened("doubt = 0.2\nspot_error = 0.3");
    let names = ["a.nc", "b.nc", "c.nc"];
    let mut trial = place.review(&names);
    spot_check(&mut trial);
    trial.keys("*");
    press(&mut trial, "y q");
    // What was decided on the table is on the disk first.
    while trial.app.pending() > 0 {
        std::thread::sleep(std::time::Duration::from_millis(1));
        trial.event(Event::LedgerMoved);
    }
    assert_eq!(trial.app.ended, None);
    assert!(trial.app.owed.words().starts_with("writing the sign-off of"));
    trial.settle();
    assert_eq!(trial.app.ended, Some(0));
    let again = place.review(&names);
    let signed = |entry: &crate::tray::Entry| {
        entry.standing.as_ref().unwrap().state == GranuleState::SignedOff
    };
    assert_eq!(again.app.tray.entries().iter().filter(|entry| signed(entry)).count(), 2);
}
