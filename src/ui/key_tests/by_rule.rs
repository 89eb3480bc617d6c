//! Signing off by rule: start state, keys, expected. By the rulebook of the trial, four of thirty
//! footprints are in doubt.

use super::append_byte;
use super::screening::{place, screen};
use crate::flags::GranuleState;
use crate::ui::trial::{Place, Trial};

const NAMES: [&str; 3] = ["a.nc", "b.nc", "c.nc"];

/// Two granules are screened, the third is not.
pub fn two_of_three_screened(settings: &str) -> Place {
    let place = place(&NAMES);
    append_byte(&place.path("b.nc"));
    (0..2).for_each(|_| append_byte(&place.path("c.nc")));
    let text = format!("format = 1\n[sign_off]\n{settings}");
    std::fs::write(place.path("campaign/campaign.toml"), text).unwrap();
    screen(&place, "a.nc");
    screen(&place, "b.nc");
    place
}

pub fn spot_check(trial: &mut Trial) {
    trial.keys("@");
    while trial.bench().is_blind() {
        let kept_away = !(9..26).contains(&trial.bench().cursor);
        trial.keys(if kept_away { "n" } else { "y" });
    }
}

fn states(trial: &Trial) -> Vec<GranuleState> {
    let entries = trial.app.tray.entries().iter();
    entries.map(|entry| entry.standing.as_ref().unwrap().state).collect()
}

#[test]
fn granules_within_the_limits_are_signed_off_together() {
    let place = two_of_three_screened("doubt = 0.2\nspot_error = 0.3");
    let mut trial = place.review(&NAMES);
    trial.keys("*");
    let text = trial.screen(120, 40);
    assert!(text.contains("no spot check of this rulebook: 2: a.nc, b.nc"), "{text}");
    assert!(text.contains("not screened: 1: c.nc"), "{text}");
    trial.keys("y");
    assert!(trial.screen(120, 40).contains("nothing to be signed off"), "y has no meaning there");
    trial.keys("Esc");
    spot_check(&mut trial);
    trial.keys("*");
    let text = trial.screen(120, 40);
    assert!(text.contains("within: 2: a.nc, b.nc"), "{text}");
    assert!(text.contains("0 of 13 wrong"), "{text}");
    trial.keys("y");
    use GranuleState::{SignedOff, Untouched};
    assert_eq!(states(&trial), [SignedOff, SignedOff, Untouched]);
    trial.leave();
    let again = place.review(&NAMES);
    assert_eq!(again.granule(), "c.nc");
    assert_eq!(states(&again), [SignedOff, SignedOff, Untouched]);
}

#[test]
fn beyond_a_limit_nothing_is_offered() {
    for (settings, reason) in [
        ("doubt = 0.1\nspot_error = 0.3", "too much in doubt"),
        ("doubt = 0.2\nspot_error = 0.2", "too large an error possible"),
    ] {
        let place = two_of_three_screened(settings);
        let mut trial = place.review(&NAMES);
        spot_check(&mut trial);
        trial.keys("*");
        let text = trial.screen(120, 40);
        assert!(text.contains("within: none") && text.contains(reason), "{settings}: {text}");
        trial.keys("y Esc");
        assert!(!states(&trial).contains(&GranuleState::SignedOff));
    }
}

#[test]
fn limits_that_are_no_shares_are_refused() {
    let wrong = crate::flags::CampaignSettings::parse("[sign_off]\ndoubt = 2").unwrap_err();
    assert!(wrong.contains("[sign_off] doubt = 2"), "{wrong}");
    assert!(crate::flags::CampaignSettings::parse("[sign_off]\ndout = 0.1").is_err());
}

#[test]
fn granules_that_were_not_screened_are_screened_on_request_and_offered_anew() {
    let place = two_of_three_screened("doubt = 0.2\nspot_error = 0.3");
    let mut trial = place.review(&NAMES);
    spot_check(&mut trial);
    trial.keys("*");
    assert!(trial.screen(120, 40).contains("t: run the tests over the 1 not screened by them"));
    trial.press("t");
    assert!(trial.screen(120, 40).contains("tests in 1 of 1"), "{}", trial.screen(120, 40));
    trial.settle();
    assert!(trial.message().contains("* signs off by rule"), "{}", trial.message());
    trial.keys("y");
    assert!(states(&trial).iter().all(|state| *state != GranuleState::SignedOff), "not asked yet");
    trial.keys("u *");
    let text = trial.screen(120, 40);
    assert!(text.contains("within: 3: a.nc, b.nc, c.nc"), "{text}");
    trial.keys("y");
    assert_eq!(states(&trial), [GranuleState::SignedOff; 3]);
}

#[test]
fn the_tests_over_the_tray_end_with_esc() {
    let place = two_of_three_screened("doubt = 0.2\nspot_error = 0.3");
    let mut trial = place.review(&NAMES);
    trial.keys("*");
    trial.press("t");
    trial.press("Esc");
    trial.settle();
    assert!(trial.message().starts_with("ended: done in 0 of 1"), "{}", trial.message());
    trial.keys("*");
    assert!(trial.screen(120, 40).contains("not screened: 1: c.nc"), "nothing was written");
}
