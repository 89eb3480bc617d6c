//! The cursor, by key and by mouse, and the place that is kept.

use super::{ALL, append_byte, one_granule};
use crate::ui::event::{Button, Event, Input, Mouse};
use crate::ui::panes::Pane;
use crate::ui::strip::Along;
use crate::ui::trial::{POSITIONS, Place, Trial, write_granule};
use crate::ui::views;

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
fn the_mouse_moves_the_cursor_only_where_it_is_wanted() {
    let (_place, mut trial) = one_granule();
    let area = trial.app.area_of(Pane::Field).unwrap();
    let cells = area.positions().map(|cell| (cell.x, cell.y));
    let under = |(column, row)| views::footprint_under(&trial.app, column, row);
    let (column, row) = cells.filter(|cell| under(*cell) == Some(ALL - 1)).last().unwrap();
    let click = || Event::Input(Input::Mouse(Mouse { button: Button::Press, column, row }));
    trial.event(click());
    assert_eq!(trial.bench().cursor, 0);
    trial.keys("m");
    trial.event(click());
    assert_eq!(trial.bench().cursor, ALL - 1);
}

#[test]
fn the_place_survives_leaving_and_turning_granules() {
    let names = ["lowen_001.nc", "pell_002.nc"];
    let place = Place::with(&names);
    // Two granules of the same content would be one granule.
    write_granule(&place.path("pell_002.nc"));
    append_byte(&place.path("pell_002.nc"));
    let mut trial = place.review(&names);
    trial.keys("Right Down x").types(":layer lat").keys("Enter");
    trial.types(":go 1231").keys("Enter + 5 s 6 z n");
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
        assert_eq!(trial.app.strip.along, Along::Dimension(1));
        assert_eq!(trial.app.focus(), Pane::Evidence);
        assert!(trial.app.panes.is_zoomed());
    };
    check(&trial);
    trial.leave();
    check(&place.review(&names));
}

#[test]
fn a_kept_place_comes_back_but_for_what_keys_have_changed_by_then() {
    let place = Place::with(&["lowen_001.nc"]);
    let mut trial = place.review(&["lowen_001.nc"]);
    trial.keys("Right Down x").types(":layer lat").keys("Enter").types(":go 1231").keys("Enter");
    trial.leave();
    for (keys, cursor) in [("? Esc", POSITIONS + 1), ("Down Down", 2 * POSITIONS)] {
        let mut trial = place.review_held(&["lowen_001.nc"]);
        while trial.app.bench().is_none() {
            for answer in trial.answers_of_next() {
                trial.event(Event::Answer(answer));
            }
        }
        keys.split_whitespace().for_each(|key| trial.press(key));
        trial.settle();
        let bench = trial.bench();
        assert_eq!((bench.cursor, bench.layer.text.as_str()), (cursor, "lat"), "{keys}");
        assert_eq!((bench.channel_wavenumber(), bench.pins.len()), (Some(1231.0), 1), "{keys}");
    }
}

#[test]
fn digits_and_tab_reach_every_pane_and_one_can_have_the_screen() {
    let (_place, mut trial) = one_granule();
    assert!(trial.screen(80, 24).contains("Trace footprint"));
    for (keys, title) in [
        ("5", "= Strip bt(900) along"),
        ("s", "= Strip bt(900) along"),
        ("Tab", "= Evidence (0, 0)"),
        ("Tab Tab", "= Field bt(900)"),
        ("3", "= Trace footprint (0, 0)"),
        ("Shift-Tab", "= Field bt(900)"),
    ] {
        trial.keys(keys);
        let screen = trial.screen(80, 24);
        assert!(screen.contains(title), "{keys}: {screen}");
    }
    trial.keys("5 z");
    let screen = trial.screen(80, 24);
    assert!(!screen.contains("Field") && screen.contains("= Strip"), "{screen}");
    trial.keys("Esc");
    assert!(trial.screen(80, 24).contains("Field"));
}
