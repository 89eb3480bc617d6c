//! Start state, keys, expected.

use super::event::{Button, Ending, Event, Input, Mouse};
use super::keys::BINDINGS;
use super::overlay::Overlay;
use super::panes::Pane;
use super::trial::{LINES, POSITIONS, Place, Trial};
use crate::flags::{GranuleState, ReviewState};

const ALL: usize = LINES * POSITIONS;

fn one_granule() -> (Place, Trial) {
    let place = Place::with(&["lowen_001.nc"]);
    let trial = place.review(&["lowen_001.nc"]);
    (place, trial)
}

#[test]
fn arrows_and_letters_move_the_cursor_and_stop_at_the_edges() {
    let (_place, mut trial) = one_granule();
    for (keys, footprint) in [
        ("Right Right Down", POSITIONS + 2),
        ("h j", 2 * POSITIONS + 1),
        ("l k k k k", 2),
        ("Left Left Left Left", 0),
        ("End", POSITIONS - 1),
        ("G", ALL - 1),
        ("Home", ALL - POSITIONS),
        ("g", 0),
    ] {
        trial.keys(keys);
        assert_eq!(trial.bench().cursor, footprint, "{keys}");
        let spectrum = trial.bench().spectrum.as_ref().unwrap();
        assert_eq!(spectrum.footprint, footprint, "the spectrum follows the cursor");
    }
}

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
    assert_eq!(ada.message(), "2 decisions of others came in");
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
fn layers_by_key_by_command_and_by_channel() {
    let (_place, mut trial) = one_granule();
    let first = trial.bench().layer.text.clone();
    assert_eq!(first, "bt(900)");
    assert!((trial.bench().layer.values[4] - 254.0).abs() < 1e-6, "exact but for rounding");
    trial.keys("]");
    assert_ne!(trial.bench().layer.text, first);
    trial.keys("[");
    assert_eq!(trial.bench().layer.text, first);
    trial.types(":layer lat").keys("Enter");
    assert_eq!(trial.bench().layer.values[POSITIONS], 9.0);
    trial.types(":go 1231").keys("Enter c");
    assert_eq!(trial.bench().layer.text, "bt(1231)");
    trial.types(":layer bt(3000)").keys("Enter");
    assert!(trial.message().contains("no channel near 3000"), "{}", trial.message());
    trial.types(":layer bt(").keys("Enter");
    assert!(!trial.message().is_empty());
    assert_eq!(trial.bench().layer.text, "bt(1231)", "what was on show stays");
}

#[test]
fn a_command_that_makes_no_sense_stays_to_be_mended() {
    let (_place, mut trial) = one_granule();
    trial.types(":flga cloudy").keys("Enter");
    assert!(trial.screen(80, 24).contains("no command flga"));
    trial.keys("Ctrl-U").types("flag nothing").keys("Enter");
    assert!(trial.message().starts_with("no flag nothing; there are cloudy"));
    trial.types(":").keys("Up Enter");
    assert!(trial.message().starts_with("no flag nothing"), "the history brings it back");
}

#[test]
fn the_channel_in_hand_moves_across_bands_and_the_window_follows() {
    let (_place, mut trial) = one_granule();
    trial.types(":go 901").keys("Enter .");
    assert_eq!(trial.bench().channel_wavenumber(), Some(1230.0));
    trial.keys("+ + + + + + + + ,");
    let (low, high) = trial.bench().window.shown();
    assert!(low <= 901.0 && 901.0 <= high);
    trial.keys("> >");
    assert_eq!(trial.bench().channel_wavenumber(), Some(1231.0));
    trial.keys("0 b");
    assert!(trial.bench().window.is_whole() && trial.bench().radiance);
}

#[test]
fn pins_stay_with_their_footprint() {
    let (_place, mut trial) = one_granule();
    trial.keys("x Right x Right");
    let pins: Vec<_> = trial.bench().pins.iter().map(|pin| (pin.letter, pin.footprint)).collect();
    assert_eq!(pins, [('a', 0), ('b', 1)]);
    assert!(trial.bench().pins.iter().all(|pin| pin.spectrum.is_some()));
    trial.keys("Left x");
    assert_eq!(trial.bench().pins.len(), 1, "the second time takes the pin off");
    trial.keys("X");
    assert!(trial.bench().pins.is_empty());
}

#[test]
fn a_spectrum_is_there_before_all_others_are_read() {
    let place = Place::with(&["lowen_001.nc"]);
    let mut trial = place.review_held(&["lowen_001.nc"]);
    // What the ledgers say, then opening; of what follows only the spectrum is done.
    while trial.app.bench().is_none() {
        for answer in trial.answers_of_next() {
            trial.event(Event::Answer(answer));
        }
    }
    trial.jobs.retain(|job| matches!(job, super::jobs::Job::Spectrum { .. }));
    trial.press("Right");
    assert_eq!(trial.jobs.len(), 2, "the cursor moved before the first spectrum was there");
    let stale = trial.answers_of_next();
    for answer in stale {
        trial.event(Event::Answer(answer));
    }
    assert!(trial.bench().spectrum.is_none(), "the spectrum of where the cursor was is dropped");
    for answer in trial.answers_of_next() {
        trial.event(Event::Answer(answer));
    }
    assert_eq!(trial.bench().spectrum.as_ref().unwrap().footprint, 1);
    assert!(!trial.bench().filling.done);
}

#[test]
fn the_place_survives_leaving_and_turning_granules() {
    let names = ["lowen_001.nc", "pell_002.nc"];
    let place = Place::with(&names);
    // Two granules of the same content would be one granule.
    super::trial::write_granule(&place.path("pell_002.nc"));
    append_byte(&place.path("pell_002.nc"));
    let mut trial = place.review(&names);
    trial.keys("Right Down x").types(":layer lat").keys("Enter");
    trial.types(":go 1231").keys("Enter + Tab n");
    assert_eq!(trial.granule(), "pell_002.nc");
    assert_eq!(trial.bench().cursor, 0);
    trial.keys("p");
    let check = |trial: &Trial| {
        let bench = trial.bench();
        assert_eq!(bench.cursor, POSITIONS + 1);
        assert_eq!(bench.layer.text, "lat");
        assert_eq!(bench.channel_wavenumber(), Some(1231.0));
        assert_eq!(bench.pins.len(), 1);
        assert!(!bench.window.is_whole());
        assert_eq!(trial.app.focus, Pane::Evidence);
    };
    check(&trial);
    trial.leave();
    check(&place.review(&names));
}

/// Bytes behind the end of a netCDF-4 file do not matter to the library.
fn append_byte(path: &std::path::Path) {
    use std::io::Write;
    let mut file = std::fs::OpenOptions::new().append(true).open(path).unwrap();
    file.write_all(&[0]).unwrap();
}

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
fn a_channel_that_is_not_where_it_was_asked_for_is_told() {
    let (_place, mut trial) = one_granule();
    trial.types(":go 901").keys("Enter");
    assert_eq!(trial.message(), "channel at 901.00 cm-1");
    trial.types(":go 2500").keys("Enter");
    assert!(trial.message().starts_with("no channel at 2500.00 cm-1"), "{}", trial.message());
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
fn the_mouse_moves_the_cursor_only_where_it_is_wanted() {
    let (_place, mut trial) = one_granule();
    let area = trial.app.layout.unwrap().field.unwrap();
    let cells = area.positions().map(|cell| (cell.x, cell.y));
    let under = |(column, row)| super::views::footprint_under(&trial.app, column, row);
    let (column, row) = cells.filter(|cell| under(*cell) == Some(ALL - 1)).last().unwrap();
    let click = || Event::Input(Input::Mouse(Mouse { button: Button::Press, column, row }));
    trial.event(click());
    assert_eq!(trial.bench().cursor, 0);
    trial.keys("m");
    trial.event(click());
    assert_eq!(trial.bench().cursor, ALL - 1);
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
