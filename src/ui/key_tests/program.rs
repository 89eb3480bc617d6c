//! The program itself: ending, and keys in any order.

use super::{append_byte, one_granule};
use crate::ui::event::{Ending, Event};
use crate::ui::keys::BINDINGS;
use crate::ui::trial::Place;

#[test]
fn keys_are_lost_on_nobody_while_a_granule_is_opened() {
    let place = Place::with(&["lowen_001.nc"]);
    for binding in BINDINGS {
        let mut trial = place.review_held(&["lowen_001.nc"]);
        trial.jobs.truncate(1);
        for key in binding.keys {
            // Stopping to the shell would stop the test.
            if binding.name != "suspend" {
                trial.press(&key.to_string());
                trial.screen(80, 24);
            }
        }
    }
}

#[test]
fn a_signal_ends_with_its_code() {
    let (_place, mut trial) = one_granule();
    trial.event(Event::End(Ending::Signal(15)));
    assert_eq!(trial.app.ended, Some(143));
}

/// Whatever is pressed in whatever order: nothing panics, and every state can be drawn at any size.
#[test]
fn any_keys_in_any_order() {
    let place = Place::with(&["a.nc", "b.nc"]);
    append_byte(&place.path("b.nc"));
    let mut trial = place.review(&["a.nc", "b.nc"]);
    let names: Vec<String> = BINDINGS
        .iter()
        .filter(|binding| !matches!(binding.name, "suspend" | "quit" | "export"))
        .flat_map(|binding| binding.keys)
        .map(ToString::to_string)
        .chain(["y", "Backspace", "<", "5", "c"].map(str::to_owned))
        .collect();
    // A linear congruential sequence (Knuth's MMIX constants): the same on every machine.
    let mut seed: u64 = 2026;
    for _ in 0..1500 {
        seed = seed.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        trial.keys(&names[(seed >> 33) as usize % names.len()]);
        let (width, height) = [(80, 24), (200, 60), (79, 24), (1, 1)][(seed >> 60) as usize % 4];
        trial.screen(width, height);
        // A line being typed may end in leaving.
        if trial.app.ended.is_some() {
            break;
        }
    }
    assert!(trial.app.ended.is_none() || trial.app.pending() == 0);
}

#[test]
fn settings_change_the_keys_everywhere() {
    let place = Place::with(&["lowen_001.nc"]);
    std::fs::create_dir_all(place.path("campaign")).unwrap();
    let settings = "[keys]\nbox = 'F8'\nundo = 'F8'\nassess = 'F9'\n";
    std::fs::write(place.path("campaign/campaign.toml"), settings).unwrap();
    let mut trial = place.review(&["lowen_001.nc"]);
    assert_eq!(
        trial.message(),
        "campaign.toml, line 3: F8 is box already (campaign.toml, line 2); undo does not get it"
    );
    trial.keys("F8 Down F9");
    assert_eq!(trial.record().counts().not_assessed, 28);
    trial.keys("u");
    assert_eq!(trial.record().counts().not_assessed, 30, "the key that clashed stays as it was");
    trial.keys("v");
    assert_eq!(trial.message(), "no key v; ? shows the keys");
    assert!(trial.screen(80, 24).contains("F8 box"), "the hints");
    trial.keys("?");
    assert!(trial.screen(80, 90).contains("F9"), "the help");
}

#[test]
fn a_screen_too_small_takes_no_key_but_those_that_leave() {
    let (_place, mut trial) = one_granule();
    trial.keys(":");
    assert!(trial.screen(70, 20).contains("q leaves"));
    trial.keys("Esc a");
    assert!(trial.record().decisions().is_empty());
    assert!(trial.screen(80, 24).contains(':'), "the prompt is still open");
    trial.screen(70, 20);
    trial.keys("q");
    assert_eq!(trial.app.ended, Some(0));
}

#[test]
fn the_help_begins_with_the_pane_in_focus() {
    let (_place, mut trial) = one_granule();
    for (keys, title) in [("?", "Field: layers"), ("3 ?", "Trace: spectra"), ("5 ?", "Strip:")] {
        trial.keys(keys);
        let screen = trial.screen(80, 24);
        assert!(screen.lines().nth(1).unwrap().contains(title), "{screen}");
        trial.keys("Esc");
    }
}
