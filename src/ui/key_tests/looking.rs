//! Layers, channels, spectra, pins.

use ratatui::layout::Size;

use super::{append_byte, one_granule};
use crate::ui::event::{Button, Event, Input, Mouse};
use crate::ui::jobs::Job;
use crate::ui::panes::Pane;
use crate::ui::strip::Along;
use crate::ui::trace_look::Reference;
use crate::ui::trial::{POSITIONS, Place, Trial};
use crate::ui::views;

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
    assert!(
        trial.bench().window.is_whole()
            && trial.bench().look.quantity == crate::ui::trace_look::TraceQuantity::Radiance
    );
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
    trial.jobs.retain(|job| matches!(job, Job::Spectrum { .. }));
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
fn a_channel_that_is_not_where_it_was_asked_for_is_told() {
    let (_place, mut trial) = one_granule();
    trial.types(":go 901").keys("Enter");
    assert_eq!(trial.message(), "channel at 901.00 cm-1");
    trial.types(":go 2500").keys("Enter");
    assert!(trial.message().starts_with("no channel at 2500.00 cm-1"), "{}", trial.message());
}

#[test]
fn a_key_flicks_between_two_layers() {
    let (_place, mut trial) = one_granule();
    trial.keys(";");
    assert_eq!(trial.message(), "no other layer was on show yet");
    trial.types(":layer lat").keys("Enter");
    assert_eq!(trial.bench().layer.text, "lat");
    for layer in ["bt(900)", "lat", "bt(900)"] {
        trial.keys(";");
        assert_eq!(trial.bench().layer.text, layer);
        assert!(!trial.bench().layer.values.is_empty());
        assert!(trial.screen(80, 24).contains(&format!("Field {layer} = ")));
    }
}

#[test]
fn what_is_under_the_cursor_stands_in_words() {
    let (_place, mut trial) = one_granule();
    trial.keys("Right f c");
    assert!(trial.message().contains("cloudy"), "what was done is said first");
    trial.keys("Right Left");
    assert!(trial.screen(120, 40).contains(" (0, 1) - "), "{}", trial.screen(120, 40));
    assert!(trial.screen(120, 40).contains("cloudy"));
}

#[test]
fn signs_and_marks_can_be_taken_off_the_field() {
    let (_place, mut trial) = one_granule();
    trial.keys("f c Down Down");
    let field = |trial: &mut crate::ui::trial::Trial| -> String {
        let screen = trial.screen(80, 24);
        screen
            .lines()
            .skip(1)
            .take(11)
            .map(|line| line.chars().skip(18).take(30).collect::<String>())
            .collect()
    };
    assert!(field(&mut trial).contains('C') && field(&mut trial).contains('X'));
    trial.keys("# # # Y");
    assert_eq!(trial.message(), "no marks on the Field");
    assert!(!field(&mut trial).contains('C') && !field(&mut trial).contains('X'));
    trial.keys("# Y");
    assert!(field(&mut trial).contains('C') && field(&mut trial).contains('X'));
}

#[test]
fn spectra_are_shown_in_three_quantities_and_as_differences() {
    let (_place, mut trial) = one_granule();
    // Footprint n is a black body at 250 + n kelvins.
    trial.keys("Right Right x g");
    assert!(trial.screen(120, 40).contains("11.111 um  250.00 K"), "{}", trial.screen(120, 40));
    trial.keys("b b");
    // A black body absorbs nothing of its own window's radiation.
    assert!(trial.screen(120, 40).contains("absorption"));
    assert!(trial.screen(120, 40).contains("11.111 um  0.0000"), "{}", trial.screen(120, 40));
    trial.keys("b d");
    assert_eq!(trial.message(), "differences to the granule's mean");
    let screen = trial.screen(120, 40);
    assert!(screen.contains("(0, 0) less the granule's mean"), "{screen}");
    trial.keys("d");
    assert_eq!(trial.message(), "differences to pin a");
    assert!(trial.screen(120, 40).contains("11.111 um  -2.0000 K"), "{}", trial.screen(120, 40));
    trial.keys("d");
    assert_eq!(trial.message(), "spectra as they are");
}

#[test]
fn a_reference_comes_out_of_a_file() {
    let place = Place::with(&["lowen_001.nc"]);
    let mut trial = place.review(&["lowen_001.nc"]);
    let path = place.path("clear.csv");
    std::fs::write(&path, "wavenumber_cm-1,bt_K\n900,240\n831,241\n").unwrap();
    trial.types(&format!(":reference {}", path.display())).keys("Enter");
    assert_eq!(trial.message(), "differences to clear.csv");
    assert!(trial.screen(120, 40).contains("11.111 um  10.000 K"), "{}", trial.screen(120, 40));
    trial.types(":reference nowhere.csv").keys("Enter");
    assert!(trial.message().starts_with("nowhere.csv is no reference: "), "{}", trial.message());
}

#[test]
fn an_envelope_is_that_of_the_selection() {
    let (_place, mut trial) = one_granule();
    trial.keys("v Right Down Q");
    assert_eq!(trial.message(), "lowest, quartiles and highest of box of 4");
    let envelope = trial.bench().look.envelope.as_ref().unwrap();
    // Footprints 0, 1, 6 and 7, at 250, 251, 256 and 257 K.
    let at: Vec<f64> =
        envelope.spectra.levels.iter().map(|level| level[0].temperatures[0].round()).collect();
    assert_eq!(at, [250.0, 250.0, 251.0, 256.0, 257.0]);
    trial.keys("Q Esc Q");
    assert_eq!(trial.message(), "lowest, quartiles and highest of all footprints");
    trial.keys("P");
    assert_eq!(trial.message(), "Planck curves at 220, 240, 260, 280, 300 K");
    let screen = trial.screen(120, 40);
    assert!(screen.contains("300 K") && screen.contains("radiance"), "{screen}");
}

#[test]
fn the_field_goes_by_latitude_and_longitude_too() {
    let (_place, mut trial) = one_granule();
    trial.keys("M");
    assert_eq!(trial.message(), "by latitude and longitude, north is up");
    assert!(trial.bench().geographic);
    let screen = trial.screen(120, 40);
    assert!(screen.contains('N') && screen.contains('E'), "{screen}");
    trial.keys("M");
    assert_eq!(trial.message(), "in the order of the instrument");
    trial.keys("Right");
    assert_eq!(trial.bench().cursor, 1);
}

#[test]
fn the_strip_lies_along_dimensions_and_then_along_granules() {
    let names = ["lowen_001.nc", "pell_002.nc", "torn.nc"];
    let place = Place::with(&names[..2]);
    std::fs::write(place.path("torn.nc"), "no granule").unwrap();
    let mut trial = place.review(&names);
    trial.keys("s");
    assert_eq!(trial.message(), "Strip along position");
    trial.keys("s");
    assert_eq!(trial.message(), "Strip along the 3 granules of the Tray");
    let sums = |trial: &crate::ui::trial::Trial| -> Vec<Option<f64>> {
        let found = trial.app.strip.granules.iter();
        found.map(|one| one.clone()?.ok().map(|group| group.median.round())).collect()
    };
    // 30 black bodies from 250 to 279 K in both; the third is no granule.
    assert_eq!(sums(&trial), [Some(265.0), Some(265.0), None]);
    assert_eq!(trial.app.strip.left(), 0, "the torn file is not waited for");
    let screen = trial.screen(120, 40);
    assert!(screen.contains("Strip bt(900) along granules"), "{screen}");
    trial.types(":layer bt(900) - 100").keys("Enter");
    assert_eq!(sums(&trial), [Some(165.0), Some(165.0), None], "it follows the layer");
    trial.keys("n");
    assert_eq!(trial.granule(), "pell_002.nc");
    assert!(trial.screen(120, 40).contains("along granules"), "it stays from granule to granule");
    trial.keys("s");
    assert_eq!(trial.message(), "Strip along line");
}

#[test]
fn what_the_mouse_is_over_is_told_in_words_until_a_key_is_pressed() {
    let (_place, mut trial) = one_granule();
    trial.keys("m 4");
    trial.app.lay_out(Size::new(200, 60));
    let mut hover = |pane| {
        let area = trial.app.area_of(pane).unwrap();
        let (column, row) = (area.x + area.width / 2, area.y + area.height / 2);
        trial.event(Event::Input(Input::Mouse(Mouse { button: Button::Move, column, row })));
        trial.app.hovered.clone().unwrap_or_default()
    };
    let field = hover(Pane::Field);
    assert!(field.starts_with("(2, ") && field.contains(" K · "), "{field}");
    assert!(hover(Pane::Trace).contains("µm"), "{}", hover(Pane::Trace));
    let spread = hover(Pane::Spread);
    assert!(spread.contains(" below, ") && spread.ends_with(" above"), "{spread}");
    assert_eq!(hover(Pane::Evidence), "");
    assert_eq!(hover(Pane::Field), field);
    let value = field.split(" · ").nth(1).unwrap().to_owned();
    let mut status = || trial.screen(200, 60).lines().rev().nth(1).unwrap().to_owned();
    assert!(status().contains(&value), "{}", status());
    trial.keys("Right");
    assert!(trial.app.hovered.is_none());
    // Passing over the same words again changes nothing, so nothing is drawn.
    trial.keys("5");
    trial.app.lay_out(Size::new(200, 60));
    let area = trial.app.area_of(Pane::Strip).unwrap();
    let over = Mouse { button: Button::Move, column: area.x + 20, row: area.y + 4 };
    trial.event(Event::Input(Input::Mouse(over)));
    assert!(trial.app.hovered.as_deref().unwrap_or_default().contains("median"));
    trial.app.changed = false;
    trial.event(Event::Input(Input::Mouse(Mouse { row: area.y + 5, ..over })));
    assert!(!trial.app.changed);
}

#[test]
fn the_end_of_the_evidence_is_reached_and_left_at_once() {
    let (_place, mut trial) = one_granule();
    trial.screen(80, 24);
    trial.keys("6 z");
    trial.screen(80, 24);
    (0..60).for_each(|_| {
        trial.keys("PageDown");
    });
    let end = trial.screen(80, 24);
    assert!(end.contains("longitude") || end.contains("azimuth"), "{end}");
    trial.keys("PageUp");
    assert_ne!(trial.screen(80, 24), end);
}

#[test]
fn marks_that_are_off_leave_the_map_where_it_is() {
    let (_place, mut trial) = one_granule();
    trial.keys("2 z G i");
    trial.screen(80, 24);
    let area = trial.app.area_of(Pane::Field).unwrap();
    let under = |trial: &Trial| -> Vec<Option<usize>> {
        area.positions().map(|cell| views::footprint_under(&trial.app, cell.x, cell.y)).collect()
    };
    let before = under(&trial);
    trial.keys("Y");
    assert_eq!(under(&trial), before);
    trial.keys("#");
    assert!(trial.screen(80, 24).contains("signs: tests"), "{}", trial.screen(80, 24));
}

#[test]
fn what_is_known_beside_a_spectrum_is_not_replaced_by_what_comes_late() {
    let (_place, mut trial) = one_granule();
    trial.app.bench_mut().unwrap().look.reference = Some(Reference::Calculated);
    trial.keys("Right");
    ["Right", "Left"].iter().for_each(|key| trial.press(key));
    trial.settle();
    let beside = trial.bench().look.beside.as_ref().map(|beside| beside.footprint);
    assert_eq!((trial.bench().cursor, beside), (1, Some(1)));
}

#[test]
fn what_is_no_plain_file_is_no_reference() {
    let (_place, mut trial) = one_granule();
    trial.types(":reference /dev/zero").keys("Enter");
    assert!(trial.message().contains("it is not a file of text"), "{}", trial.message());
}

#[test]
fn the_strip_lies_along_a_dimension_that_is_there() {
    let place = Place::with(&["a.nc", "b.nc"]);
    append_byte(&place.path("b.nc"));
    let mut trial = place.review(&["a.nc", "b.nc"]);
    // As a granule of three dimensions leaves it.
    trial.app.strip.along = Along::Dimension(2);
    trial.keys("n");
    assert_eq!(trial.app.strip.along, Along::Dimension(1));
}

#[test]
fn differences_to_a_pin_end_with_it() {
    let (_place, mut trial) = one_granule();
    trial.keys("x Right d d");
    assert_eq!(trial.bench().look.reference, Some(Reference::Pin('a')));
    trial.keys("X");
    assert_eq!(trial.bench().look.reference, None);
}
