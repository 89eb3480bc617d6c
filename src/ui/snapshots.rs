//! Whole screens and single panes as text, held against what was looked at once.
//!
//! Each picture is a file in `src/ui/snapshots`. To take a changed one over, delete its file and run
//! the test once: it writes the file anew and fails, so that nothing is taken over unseen.

use std::fmt::Write;
use std::path::Path;

use super::colour::{Background, ColourDepth, Theme};
use super::panes::Pane;
use super::trial::{Place, Trial};

/// Sizes of the whole screens.
const SIZES: [(u16, u16); 3] = [(80, 24), (120, 40), (200, 60)];

/// Pictures of one test; what is wrong with any is told at its end, so that all can be renewed in one
/// run.
#[derive(Default)]
struct Album {
    problems: Vec<String>,
}

impl Album {
    /// Compares a picture with its file.
    fn hold(&mut self, name: &str, found: &str) {
        let folder = concat!(env!("CARGO_MANIFEST_DIR"), "/src/ui/snapshots");
        let path = Path::new(folder).join(format!("{name}.txt"));
        let Ok(expected) = std::fs::read_to_string(&path) else {
            std::fs::create_dir_all(folder).unwrap();
            std::fs::write(&path, found).unwrap();
            let words = "was written anew: look at it, and run the test once more";
            self.problems.push(format!("{name}.txt {words}"));
            return;
        };
        if found == expected {
            return;
        }
        let mut differences =
            format!("{name}.txt differs; where that is meant, delete it and run the test twice:\n");
        let mut expected = expected.lines();
        for (number, line) in found.lines().enumerate() {
            let before = expected.next().unwrap_or_default();
            if line != before {
                writeln!(differences, "line {number}:\n  was {before}\n  is  {line}").unwrap();
            }
        }
        self.problems.push(differences);
    }

    fn close(self) {
        assert!(self.problems.is_empty(), "{}", self.problems.join("\n"));
    }
}

/// A granule with a flag, a pin and a cursor, seen with all characters.
fn looked_at(place: &Place) -> Trial {
    let mut trial = place.review(&["lowen_001.nc", "pell_002.nc"]);
    trial.app.theme =
        Theme { depth: ColourDepth::Indexed, ascii: false, background: Background::Dark };
    trial.keys("Right f c Down Right x Down Left");
    trial
}

fn two_granules() -> Place {
    Place::with(&["lowen_001.nc", "pell_002.nc"])
}

#[test]
fn whole_screens_at_three_sizes() {
    let place = two_granules();
    let mut trial = looked_at(&place);
    let mut album = Album::default();
    for (width, height) in SIZES {
        album.hold(&format!("screen_{width}x{height}"), &trial.screen(width, height));
    }
    album.close();
}

#[test]
fn each_pane_on_the_whole_screen() {
    let place = two_granules();
    let mut trial = looked_at(&place);
    let mut album = Album::default();
    trial.keys("z");
    for pane in Pane::all() {
        trial.app.panes.focus_on(pane);
        let name = format!("pane_{}", pane.name().to_lowercase());
        album.hold(&name, &trial.screen(80, 24));
    }
    album.close();
}

#[test]
fn panes_in_their_other_ways() {
    let place = two_granules();
    let mut trial = looked_at(&place);
    let mut album = Album::default();
    for (name, keys) in [
        ("field_geographic", "2 z M"),
        ("field_box", "M v Right Down"),
        ("trace_envelope", "3 Q"),
        ("trace_radiance_with_planck_curves", "Q Esc Esc z b P"),
        ("trace_difference", "P b b d"),
        ("strip_along_granules", "d d d s s z"),
    ] {
        trial.keys(keys);
        album.hold(name, &trial.screen(80, 24));
    }
    album.close();
}

/// The same with letters and signs of ASCII alone, and no colours.
#[test]
fn the_screen_in_ascii() {
    let place = two_granules();
    let mut trial = looked_at(&place);
    let mut album = Album::default();
    trial.app.theme = Theme { depth: ColourDepth::None, ascii: true, background: Background::Dark };
    let screen = trial.screen(80, 24);
    assert!(screen.is_ascii(), "{screen}");
    album.hold("screen_ascii_80x24", &screen);
    album.close();
}

#[test]
fn what_lies_over_the_panes() {
    let place = two_granules();
    let mut trial = looked_at(&place);
    let mut album = Album::default();
    for (name, keys) in [("help", "?"), ("choice_of_flags", "Esc f"), ("problems", "Esc !")] {
        trial.keys(keys);
        album.hold(&format!("over_{name}"), &trial.screen(80, 24));
    }
    album.close();
}
