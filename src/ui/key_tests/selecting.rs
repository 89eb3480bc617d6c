//! What the next decision is about.

use super::one_granule;

#[test]
fn one_footprint_a_box_and_a_side_are_flagged() {
    let (_place, mut trial) = one_granule();
    trial.keys("Right f c");
    assert_eq!(trial.flagged("cloudy"), [1]);
    trial.keys("Down v Right Down f d");
    assert_eq!(trial.flagged("dust_or_ash"), [7, 8, 13, 14]);
    assert_eq!(trial.bench().anchor, None, "the box is let go");
    // Footprint n is at 250 + n kelvins, so below 252.5 K lie 0, 1 and 2.
    trial.keys("t Ctrl-U").types("< 252.5");
    trial.press("Enter");
    assert!(trial.screen(80, 24).contains("3 where bt(900) < 252.5"));
    trial.keys("s");
    assert_eq!(trial.flagged("so2"), [0, 1, 2]);
    assert_eq!(trial.record().counts().flagged, 3 + 4);
}

#[test]
fn the_number_on_a_side_shows_while_its_value_is_typed() {
    let (_place, mut trial) = one_granule();
    trial.keys("t Ctrl-U").types(">= 270");
    assert!(trial.screen(80, 24).contains("10 of 30 footprints"));
    trial.keys("Esc");
    assert!(trial.bench().side.is_none());
    trial.types(":side > 1000").keys("Enter");
    assert_eq!(trial.message(), "no footprint lies on that side");
    assert_eq!(trial.record().decisions().len(), 0);
}

#[test]
fn what_is_typed_takes_the_place_of_the_value_offered() {
    let (_place, mut trial) = one_granule();
    for (typed, line) in [
        ("t", "bt(900) < 250.00"),
        ("t 2 5 3", "bt(900) < 253"),
        ("t Tab 2 5 3", "bt(900) >= 253"),
        ("t > 2 5 3", "bt(900) >253"),
        ("t Backspace 5", "bt(900) < 250.05"),
    ] {
        trial.keys(typed);
        assert!(trial.screen(80, 24).contains(line), "{typed}: {}", trial.screen(80, 24));
        trial.keys("Esc");
    }
}
