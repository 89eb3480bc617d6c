//! Footprints like the one under the cursor that a person decided: start state, keys, expected.
//! Footprint n is a black body of 250 + n kelvins.

use super::append_byte;
use crate::ui::trial::Place;

#[test]
fn the_evidence_shows_the_most_alike_decided_footprints_and_goes_round_them() {
    let place = Place::with(&["a.nc"]);
    let mut trial = place.review(&["a.nc"]);
    trial.keys("6 z");
    let screen = trial.screen(200, 90);
    assert!(screen.contains("a person has decided none"), "{screen}");
    // Footprints 1 and 9 are decided; the cursor goes to 3.
    trial.keys("2 Right f c g Down Right Right Right f d g Right Right Right 6 z");
    let screen = trial.screen(200, 90);
    let at = |words: &str| screen.find(words).unwrap_or_else(|| panic!("{words}: {screen}"));
    assert!(at("(0, 1) cloudy") < at("(1, 3) dust_or_ash"), "the most alike comes first");
    // Two kelvins and six apart.
    assert!(screen.contains("2.0000 K") && screen.contains("6.0000 K"), "{screen}");
    let mut stops = Vec::new();
    for _ in 0..4 {
        trial.keys("Enter");
        stops.push(trial.bench().cursor);
    }
    assert_eq!(stops, [1, 9, 3, 1], "the nearest, the next, back, and round again");
    trial.keys("Right Enter");
    assert_eq!(trial.bench().cursor, 1, "from another footprint a new round begins");
}

#[test]
fn those_of_compared_granules_are_among_them_and_can_be_gone_to() {
    let place = Place::with(&["a.nc", "b.nc"]);
    append_byte(&place.path("b.nc"));
    let names = ["a.nc", "b.nc"];
    let mut trial = place.review(&names);
    trial.keys("n Right Right f s p");
    trial.keys("Right L W W Esc 6 z");
    let screen = trial.screen(200, 90);
    assert!(screen.contains("b.nc (0, 2) so2"), "{screen}");
    trial.keys("Enter");
    assert_eq!((trial.granule().as_str(), trial.bench().cursor), ("b.nc", 2));
    assert!(trial.message().starts_with("b.nc (0, 2): so2, 1.000 K away"), "{}", trial.message());
    trial.keys("Enter");
    assert_eq!((trial.granule().as_str(), trial.bench().cursor), ("a.nc", 1));
    assert_eq!(trial.message(), "back again");
}

#[test]
fn what_the_spectra_as_a_set_say_stands_there_and_what_they_could_not_be_asked() {
    let place = Place::with(&["a.nc"]);
    let mut trial = place.review(&["a.nc"]);
    trial.keys("6 z");
    let screen = trial.screen(200, 90);
    for words in ["Spectrum", "Most alike, decided", "Not applicable", "too few whole spectra"] {
        assert!(screen.contains(words), "{words}: {screen}");
    }
}
