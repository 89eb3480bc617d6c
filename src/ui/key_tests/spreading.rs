//! The Spread: a threshold tried and taken over, and what is brushed there.

use super::{ALL, one_granule};
use crate::flags::Campaign;
use crate::ui::event::{Button, Event, Input, Mouse};
use crate::ui::panes::Pane;
use crate::ui::spreading::Source;
use crate::ui::trial::{POSITIONS, Trial};

fn selection(trial: &Trial) -> Vec<usize> {
    trial.bench().selection().footprints.iter().collect()
}

#[test]
fn a_threshold_moves_and_the_field_and_the_counts_follow() {
    let (_place, mut trial) = one_granule();
    trial.keys("4");
    let screen = trial.screen(80, 24);
    assert!(screen.contains("Spread bt(900)"), "{screen}");
    assert!(screen.contains("30 of 30 with a value, 0 without"), "{screen}");
    // Footprint n is at 250 + n kelvins, and a step is half a kelvin: the valley is in the middle.
    trial.keys("K");
    assert!(trial.message().contains("Otsu 1979"), "{}", trial.message());
    let valley = trial.bench().spread.x.unwrap();
    assert!((264.0..=265.0).contains(&valley), "{valley}");
    trial.keys("Left Left");
    let x = trial.bench().spread.x.unwrap();
    assert!((valley - x - 1.0).abs() < 1e-9, "{x}");
    assert_eq!(selection(&trial).len(), (x - 250.0).ceil() as usize);
    assert!(trial.screen(80, 24).contains(&format!("< {x}: ")));
    trial.keys("J");
    assert_eq!(selection(&trial).len(), ALL - (x - 250.0).floor() as usize - 1);
    trial.keys("J f c");
    assert_eq!(trial.flagged("cloudy").len(), (x - 250.0).ceil() as usize);
}

#[test]
fn a_threshold_is_measured_against_what_persons_said_about_its_flag() {
    let place = super::screening::place(&["a.nc"]);
    let mut trial = place.review(&["a.nc"]);
    // Below 260 K it is cloudy, says the test: footprints 0 to 9. By hand the first row is cloudy, the
    // second SO2; dust is withdrawn from nowhere; the last is cloudy against the test.
    trial.keys("v End f c Down Home v End f s G f c");
    trial.types(":try cold window").keys("Enter");
    let words = |trial: &mut Trial| trial.screen(200, 24);
    let screen = words(&mut trial);
    assert!(
        screen.contains("on cloudy persons agree at 6, oppose at 1 (1 missed, 0 false)"),
        "{screen}"
    );
    // Withdrawn where the test says cloudy: a false alarm. Only looked at: no word.
    trial.keys("Esc 2 Home g w c a 4");
    let screen = words(&mut trial);
    assert!(screen.contains("agree at 5, oppose at 2 (1 missed, 1 false)"), "{screen}");
    // What was accepted came from the test itself.
    trial.keys("Esc 2 Down Down y 4");
    let screen = words(&mut trial);
    assert!(
        screen.contains("agree at 5, oppose at 2 (1 missed, 1 false), 1 accepted not"),
        "{screen}"
    );
    // What was overruled did too, and was opposed.
    trial.keys("Esc 2 Up Right Right Right R 4");
    let screen = words(&mut trial);
    assert!(screen.contains("agree at 5, oppose at 3 (1 missed, 2 false)"), "{screen}");
}

#[test]
fn a_range_is_brushed_by_key_and_by_mouse() {
    let (_place, mut trial) = one_granule();
    trial.keys("4 K Left v PageUp");
    assert!(selection(&trial).len() > 2);
    trial.keys("v Esc Esc m");
    trial.screen(80, 24);
    let area = trial.app.area_of(Pane::Spread).unwrap();
    let mut send = |button: Button, column: u16| {
        let mouse = Mouse { button, column, row: area.y + 4 };
        trial.event(Event::Input(Input::Mouse(mouse)));
        trial.settle();
    };
    send(Button::Press, area.x + 1);
    send(Button::Drag, area.x + 20);
    send(Button::Release, area.x + 20);
    let kept = trial.bench().selecting.kept().unwrap().footprints.clone();
    assert!(kept.contains(1) && !kept.contains(ALL - 1), "{kept:?}");
    assert!(trial.screen(80, 24).contains("^"), "what is selected is marked");
}

#[test]
fn two_layers_lie_against_each_other_and_a_rectangle_selects() {
    let (_place, mut trial) = one_granule();
    trial.types(":against lon").keys("Enter");
    let screen = trial.screen(80, 24);
    assert!(screen.contains("Spread bt(900) against lon"), "{screen}");
    assert!(screen.contains("30 of 30 with both values"), "{screen}");
    trial.keys("Left v");
    (0..60).for_each(|_| {
        trial.keys("PageUp Up");
    });
    trial.keys("v");
    let kept = trial.bench().selecting.kept().unwrap().footprints.clone();
    // From the middle of both on: the warmer half, and the eastern one of it.
    assert!(kept.contains(ALL - 1) && !kept.contains(0), "{kept:?}");
    assert!(kept.iter().all(|one| one % POSITIONS >= 2 && one >= ALL / 2 - 1), "{kept:?}");
    trial.types(":against").keys("Enter");
    assert!(trial.bench().spread.against.is_none());
}

#[test]
fn a_threshold_of_a_test_becomes_the_campaigns() {
    let (place, mut trial) = one_granule();
    trial.keys("}");
    let Source::Test(number) = trial.bench().spread.source else {
        panic!("no test is in hand: {}", trial.message());
    };
    let screened = trial.bench().tests.screened.clone().unwrap();
    let test = screened.rulebook.tests[number].name.clone();
    let before = screened.rulebook.fingerprint.clone();
    assert!(trial.screen(120, 40).contains(&test));
    trial.keys("Right Right D").types("warmer than usual").keys("Enter");
    assert!(trial.message().contains("in the campaign's rulebook"), "{}", trial.message());
    let campaign = Campaign::open(&place.path("campaign")).unwrap();
    let (changes, problems) = campaign.rulebook_changes();
    assert!(problems.is_empty());
    assert_eq!((changes[0].test.as_str(), changes[0].person.as_str()), (test.as_str(), "ada"));
    assert_eq!(changes[0].why.as_deref(), Some("warmer than usual"));
    let after = trial.bench().tests.screened.clone().unwrap().rulebook.fingerprint.clone();
    assert_eq!(after, changes[0].after, "the tests ran anew");
    assert_ne!(after, before);
    trial.leave();
    let again = place.review(&["lowen_001.nc"]);
    let kept = again.bench().tests.screened.clone().unwrap().rulebook.fingerprint.clone();
    assert_eq!(kept, after, "and do so in the next session");
}

#[test]
fn tests_that_run_anew_leave_a_threshold_alone_that_was_let_go() {
    let (_place, mut trial) = one_granule();
    trial.keys("} Right Esc 2 T");
    assert!(matches!(trial.bench().spread.source, Source::Test(_)), "the test is still in hand");
    assert!(!trial.bench().selecting.is_on());
    trial.keys("v Right T");
    assert_eq!(selection(&trial), [0, 1], "a box being drawn is not joined with it");
    trial.keys("Esc } T");
    assert!(trial.bench().selecting.shape.is_some(), "what selected goes on selecting");
}

#[test]
fn what_is_found_late_takes_neither_the_keys_nor_the_selection() {
    let (_place, mut trial) = one_granule();
    trial.types(":like angle");
    ["Enter", "Down"].iter().for_each(|key| trial.press(key));
    trial.settle();
    assert!(trial.message().starts_with("compared by spectral angle"), "{}", trial.message());
    assert!(!trial.bench().selecting.is_on() && trial.app.focus() == Pane::Field);
    trial.types(":against lon");
    ["Enter", "Down"].iter().for_each(|key| trial.press(key));
    trial.settle();
    assert!(trial.bench().spread.against.is_some() && trial.app.focus() == Pane::Field);
}

#[test]
fn what_hangs_together_does_not_depend_on_the_map() {
    let (_place, mut trial) = one_granule();
    trial.keys("Down Down Right L");
    let grown = selection(&trial);
    trial.keys("M");
    assert!(trial.bench().geographic);
    assert_eq!(selection(&trial), grown);
}

#[test]
fn spectra_like_this_one_are_grown_from_here_or_found_everywhere() {
    let (_place, mut trial) = one_granule();
    // Black bodies of 250 + n kelvins: the distance in BT is the difference of the numbers.
    trial.keys("Down Down Right L");
    let here = 2 * POSITIONS + 1;
    let screen = trial.screen(120, 24);
    assert!(screen.contains("Spread distance in BT from (2, 1)"), "{screen}");
    let values = &trial.bench().spread.alike.as_ref().unwrap().values;
    // The inverse of a value that was kept in 64 bits is exact but for rounding.
    assert!((values[here + 5] - 5.0).abs() < 1e-6 && values[here].abs() < 1e-9);
    trial.keys("W");
    let (x, all) = (trial.bench().spread.x.unwrap(), selection(&trial));
    let expected: Vec<usize> =
        (0..ALL).filter(|one| (one.abs_diff(here) as f64) < x - 1e-6).collect();
    assert_eq!(all, expected);
    // Closer than three are two before and two behind; the one at the end of the line before does
    // not hang together with them.
    while trial.bench().spread.x.unwrap() > 2.6 {
        trial.keys("Left");
    }
    trial.keys("W");
    assert_eq!(selection(&trial), (here - 1..=here + 2).collect::<Vec<_>>());
    trial.keys("f c");
    assert_eq!(trial.flagged("cloudy").len(), 4);
    trial.types(":like angle").keys("Enter");
    assert!(trial.screen(120, 24).contains("spectral angle from"), "{}", trial.message());
}

#[test]
fn what_is_given_up_by_escape_ends() {
    use crate::ui::jobs::Job;
    let (_place, mut trial) = one_granule();
    for line in [":like angle", ":against lat"] {
        trial.types(line);
        trial.press("Enter");
        let cancel = match &trial.jobs[..] {
            [Job::Alike { cancel, .. } | Job::Against { cancel, .. }] => cancel.clone(),
            _ => panic!("{line} asks for one job"),
        };
        trial.press("Esc");
        assert_eq!(trial.message(), "given up");
        assert!(cancel.is_cancelled(), "{line}: not only its answer is dropped");
        trial.settle();
        assert!(trial.bench().spread.alike.is_none() && trial.bench().spread.against.is_none());
    }
}

#[test]
fn a_brush_begins_at_the_footprint_under_the_cursor() {
    let (_place, mut trial) = one_granule();
    trial.types(":against bt(1231)").keys("Enter 2 Down Down 4 v");
    let spread = &trial.bench().spread;
    assert!((spread.x.unwrap() - 262.0).abs() < 1e-6 && (spread.y.unwrap() - 262.0).abs() < 1e-6);
    trial.keys("PageUp Right Up Right Up v");
    assert!(selection(&trial).contains(&12), "{:?}", selection(&trial));
}
