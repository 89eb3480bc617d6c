//! What the next decision is about.

use super::{ALL, one_granule};
use crate::ui::event::{Button, Event, Input, Mouse};
use crate::ui::panes::Pane;
use crate::ui::trial::{POSITIONS, Trial};
use crate::ui::views;

fn selected(trial: &Trial) -> Vec<usize> {
    let kept = trial.bench().selecting.kept();
    kept.map_or_else(Vec::new, |kept| kept.footprints.iter().collect())
}

#[test]
fn one_footprint_a_box_and_a_side_are_flagged() {
    let (_place, mut trial) = one_granule();
    trial.keys("Right f c");
    assert_eq!(trial.flagged("cloudy"), [1]);
    trial.keys("Down v Right Down f d");
    assert_eq!(trial.flagged("dust_or_ash"), [7, 8, 13, 14]);
    assert!(!trial.bench().selecting.is_on(), "the box is let go");
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
    assert!(!trial.bench().selecting.is_on());
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
fn boxes_are_joined_and_the_count_is_always_there() {
    let (_place, mut trial) = one_granule();
    trial.keys("v Right Down");
    assert!(trial.screen(80, 24).contains("4 selected"));
    trial.keys("v g Right v Right");
    assert!(trial.screen(80, 24).contains("4 + 2: 5 selected"), "{}", trial.screen(80, 24));
    trial.keys("v");
    assert_eq!(selected(&trial), [0, 1, 2, 6, 7]);
    trial.keys("& g v Right v");
    assert_eq!(selected(&trial), [2, 6, 7], "taken away");
    trial.keys("~");
    assert_eq!(selected(&trial).len(), ALL - 3);
    trial.keys("Esc");
    assert!(!trial.bench().selecting.is_on());
    trial.keys("\" ~ f c");
    assert_eq!(trial.flagged("cloudy"), [2, 6, 7], "what was selected before comes back");
}

#[test]
fn nothing_is_left_of_nothing() {
    let (_place, mut trial) = one_granule();
    for _ in 0..2 {
        trial.keys("& v Right");
        assert!(trial.screen(80, 24).contains("0 selected"), "{}", trial.screen(80, 24));
        trial.keys("v");
        assert!(!trial.bench().selecting.is_on());
        assert!(trial.message().contains("nothing was there to take it from"));
    }
    trial.types(":select - bt(900) < 252.5").keys("Enter");
    assert!(!trial.bench().selecting.is_on(), "{}", trial.message());
}

#[test]
fn another_map_lets_go_of_a_box() {
    let (_place, mut trial) = one_granule();
    trial.keys("v Right Down M");
    assert!(trial.bench().selecting.shape.is_none());
}

#[test]
fn a_polygon_is_drawn_corner_by_corner() {
    let (_place, mut trial) = one_granule();
    // A triangle: three places in the first row, two in the second, one in the third.
    trial.keys("V Right Right V Home Down Down V");
    assert!(trial.screen(80, 24).contains("6 selected"), "{}", trial.screen(80, 24));
    trial.keys("f s");
    let second = POSITIONS;
    assert_eq!(trial.flagged("so2"), [0, 1, 2, second, second + 1, 2 * second]);
    trial.keys("V V");
    assert_eq!(selected(&trial), [2 * second], "a corner set twice keeps it");
}

#[test]
fn the_mouse_draws_boxes_and_polygons() {
    let (_place, mut trial) = one_granule();
    trial.keys("m");
    let cell_of = |trial: &Trial, footprint: usize| {
        let area = trial.app.area_of(Pane::Field).unwrap();
        let mut cells = area.positions();
        cells.find(|cell| views::footprint_under(&trial.app, cell.x, cell.y) == Some(footprint))
    };
    let send = |trial: &mut Trial, button: Button, footprint: usize| {
        let cell = cell_of(trial, footprint).unwrap();
        let mouse = Mouse { button, column: cell.x, row: cell.y };
        trial.event(Event::Input(Input::Mouse(mouse)));
        trial.settle();
    };
    send(&mut trial, Button::Press, 1);
    send(&mut trial, Button::Drag, 8);
    send(&mut trial, Button::Release, 8);
    assert_eq!(selected(&trial), [1, 2, 7, 8]);
    trial.keys("Esc g V");
    for footprint in [2, 14, 12] {
        send(&mut trial, Button::Drag, footprint);
    }
    trial.keys("v");
    assert_eq!(selected(&trial), [0, 1, 2, 6, 7, 8, 12, 13, 14]);
}

#[test]
fn a_box_ends_wherever_the_button_comes_up() {
    let (_place, mut trial) = one_granule();
    trial.keys("m");
    let area = trial.app.area_of(Pane::Field).unwrap();
    let cells: Vec<(u16, u16)> = area.positions().map(|cell| (cell.x, cell.y)).collect();
    let cell = |footprint: usize, trial: &Trial| {
        let under = |(x, y)| views::footprint_under(&trial.app, x, y) == Some(footprint);
        cells.iter().copied().find(|cell| under(*cell)).unwrap()
    };
    let strip = trial.app.area_of(Pane::Evidence).or(trial.app.area_of(Pane::Trace)).unwrap();
    for (button, (column, row)) in [
        (Button::Press, cell(1, &trial)),
        (Button::Drag, cell(8, &trial)),
        (Button::Release, (strip.x + 1, strip.y + 1)),
    ] {
        trial.event(Event::Input(Input::Mouse(Mouse { button, column, row })));
    }
    assert!(trial.bench().selecting.shape.is_none());
    assert_eq!(selected(&trial), [1, 2, 7, 8]);
}

#[test]
fn what_is_let_go_is_told_of_no_longer_and_small_values_are_offered_as_they_are() {
    let (_place, mut trial) = one_granule();
    trial.types(":select bt(900) < 252.5").keys("Enter");
    assert_eq!(trial.message(), "3 of 30 selected");
    trial.keys("Esc");
    assert_eq!(trial.message(), "");
    trial.types(":layer lat / 4000").keys("Enter t");
    assert!(trial.screen(80, 24).contains("< 0.0025"), "{}", trial.screen(80, 24));
}

#[test]
fn conditions_flags_and_tests_select() {
    let (_place, mut trial) = one_granule();
    for (typed, expected) in [
        ("bt(900) < 252.5", vec![0, 1, 2]),
        ("+ bt(900) > 278.5", vec![0, 1, 2, 29]),
        ("- bt(900) < 250.5", vec![1, 2, 29]),
        ("& bt(900) > 251.5", vec![2, 29]),
    ] {
        trial.types(&format!(":select {typed}")).keys("Enter");
        assert_eq!(selected(&trial), expected, "{typed}: {}", trial.message());
    }
    trial.keys("f c");
    trial.types(":select flag cloudy").keys("Enter");
    assert_eq!(selected(&trial), [2, 29]);
    trial.types(":select no flag").keys("Enter");
    assert_eq!(selected(&trial).len(), ALL - 2);
    trial.types(":select bt(900)").keys("Enter");
    assert!(trial.message().contains("is no condition"), "{}", trial.message());
    trial.types(":select test T99 for").keys("Enter");
    assert!(trial.message().starts_with("no test"), "{}", trial.message());
    let screened = trial.bench().tests.screened.clone().unwrap();
    let place = screened.tests.iter().position(|test| test.verdicts.iter().any(|v| v.is_result()));
    let test = &screened.rulebook.tests[place.unwrap()];
    let verdicts = &screened.tests[place.unwrap()].verdicts;
    let against: Vec<usize> = (0..ALL).filter(|one| verdicts[*one].name() == "against").collect();
    trial.types(&format!(":select test {} against", test.name)).keys("Enter");
    assert_eq!(selected(&trial), against, "{}: {}", test.name, trial.message());
}

#[test]
fn the_latest_decision_is_repeated_on_another_selection() {
    let (_place, mut trial) = one_granule();
    trial.types(":flag so2 plume").keys("Enter Right F");
    assert_eq!(trial.flagged("so2"), [0, 1]);
    assert_eq!(trial.record().decisions()[1].why.as_deref(), Some("plume"), "with its reason");
    trial.types(":comment looks odd").keys("Enter v Right F");
    let last = trial.record().decisions().last().unwrap();
    assert_eq!(last.why.as_deref(), Some("looks odd"));
    assert_eq!(last.act.footprints().unwrap().len(), 2);
    trial.keys("a Down F");
    assert_eq!(trial.record().counts().by_person, 2 + 2, "looked at, twice");
}

#[test]
fn several_tests_that_begin_alike_select_where_one_of_them_speaks() {
    let place = super::screening::place(&["a.nc"]);
    let mut trial = place.review(&["a.nc"]);
    // Of "cold window", below 260 K, and "no such channel" only the first speaks.
    trial.types(":select test cold for").keys("Enter");
    assert_eq!(selected(&trial).len(), 10);
    // All three have no name in common; the two windows are not asked for by one beginning.
    trial.types(":select test warm for").keys("Enter");
    assert_eq!(selected(&trial), [26, 27, 28, 29]);
    let rulebook = super::screening::RULEBOOK.replace("warm window", "cold or warm");
    std::fs::write(place.path("campaign/rulebook.toml"), rulebook).unwrap();
    let mut trial = place.review(&["a.nc"]);
    trial.types(":select test cold for").keys("Enter");
    assert_eq!(selected(&trial).len(), 14, "one of the two speaks: {}", trial.message());
    assert!(trial.bench().selection().words.contains("one of 2 tests cold speaks for"));
    trial.types(":select test cold missing").keys("Enter");
    assert!(!trial.bench().selecting.is_on(), "none of them is missing anywhere");
    trial.types(":select test hot for").keys("Enter");
    assert_eq!(trial.message(), "no test hot; Tab lists them");
}
