//! The main job, to the end: open, look, flag, undo, sign off, leave, export, read the mask back.

use std::path::{Path, PathBuf};
use std::process::Command;
use std::time::Duration;

use radsieve::flags::{Author, Campaign, FootprintSet};
use radsieve::granule::Opening;
use radsieve::netcdf_files::ReaderProgram;
use radsieve::review::{ExportedBy, Record, Review};

use crate::sample;
use crate::terminal::Session;

/// The clock stands still, so that the same decisions give the same bytes.
const NOW: &str = "2026-03-01T12:00:00Z";

/// The bits of the flags that the test sets, as docs/flags.md has them.
const CLOUDY: i32 = 1;
const BAD_SPECTRUM: i32 = 1 << 4;

fn start(folder: &Path, columns: u16, rows: u16, file: &Path) -> Session {
    let file = file.to_str().unwrap();
    let arguments = ["review", file, "--campaign", "campaign", "--layer", "bt(900)"];
    Session::start_with(folder, columns, rows, &arguments, &[("RADSIEVE_NOW", NOW)])
}

/// Opens the granule and decides: the first footprint is cloudy, so is a box of 2 x 3; one more
/// flag is undone and redone, one is undone for good; the rest was looked at.
fn decide_on_screen(session: &mut Session) {
    session.expect("Field bt(900)");
    session.expect("0 flagged");
    session.keys("f");
    session.expect("bad_spectrum");
    session.keys("c");
    session.expect("kept · 1 flagged");
    // A box from the cursor at the third place of the first row: two down, one right.
    session.keys("ll");
    session.keys("v");
    session.expect("box");
    session.keys("jjl");
    session.keys("fc");
    session.expect("kept · 7 flagged");
    session.keys("u");
    session.expect("kept · 1 flagged");
    session.keys("r");
    session.expect("kept · 7 flagged");
    session.keys("G");
    session.keys("fb");
    session.expect("kept · 8 flagged");
    session.keys("u");
    session.expect("kept · 7 flagged");
    session.keys("g");
    session.keys("fb");
    session.expect("bad_spectrum");
    session.expect("kept · 7 flagged");
    session.keys("S");
    session.expect("was the rest looked at");
    session.keys("y");
    session.expect("signed off");
}

/// The same decisions through the library.
fn decide_in_library(review: &Review, campaign: &Campaign, author: &Author) {
    let now = NOW.parse().unwrap();
    let identity = review.identify().unwrap();
    let version = env!("CARGO_PKG_VERSION");
    let mut record = Record::open(campaign, identity, author, version, now).unwrap();
    let row = review.granule().footprints().lengths()[1];
    let last = review.granule().footprints().count() - 1;
    let one = |footprint: usize| FootprintSet::from_iter([footprint]);
    record.flag("cloudy", &one(0), None, now).unwrap();
    record.flag("cloudy", &boxed(row), None, now).unwrap();
    record.undo(now).unwrap();
    record.redo(now).unwrap();
    record.flag("bad_spectrum", &one(last), None, now).unwrap();
    record.undo(now).unwrap();
    record.flag("bad_spectrum", &one(0), None, now).unwrap();
    record.sign_off(true, now).unwrap();
    record.close(Duration::from_secs(60)).unwrap();
}

/// The box of [`decide_on_screen`] in a granule of scan lines of `row` positions.
fn boxed(row: usize) -> FootprintSet {
    [2, 3, row + 2, row + 3, 2 * row + 2, 2 * row + 3].into_iter().collect()
}

fn export(folder: &Path, file: &Path) -> PathBuf {
    let output = Command::new(env!("CARGO_BIN_EXE_radsieve"))
        .env_clear()
        .envs([("USER", "tester"), ("RADSIEVE_NOW", NOW)])
        .current_dir(folder)
        .args(["export", "--campaign", "campaign", "--out", "masks"])
        .arg(file)
        .output()
        .unwrap();
    assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
    let stem = file.file_stem().unwrap().to_str().unwrap();
    folder.join("masks").join(format!("{stem}.mask.nc"))
}

#[test]
fn from_the_first_look_to_the_mask() {
    let folder = tempfile::tempdir().unwrap();
    let file = sample("ketter_desert");
    let before = std::fs::read(&file).unwrap();
    let mut session = start(folder.path(), 80, 24, &file);
    decide_on_screen(&mut session);
    session.keys("q");
    assert!(session.end().success());
    session.assert_given_back();

    let mask = export(folder.path(), &file);
    let opened = netcdf::open(&mask).unwrap();
    let flags: Vec<i32> = opened.variable("footprint_flag").unwrap().get_values(..).unwrap();
    let state: Vec<i8> = opened.variable("review_state").unwrap().get_values(..).unwrap();
    let input = netcdf::open(&file).unwrap();
    let spectra = input.variables().find(|variable| variable.dimensions().len() == 3).unwrap();
    let dimensions: Vec<(String, usize)> =
        spectra.dimensions()[..2].iter().map(|one| (one.name(), one.len())).collect();
    let mask_dimensions: Vec<(String, usize)> = opened
        .variable("footprint_flag")
        .unwrap()
        .dimensions()
        .iter()
        .map(|one| (one.name(), one.len()))
        .collect();
    assert_eq!(mask_dimensions, dimensions, "the mask lines up with the radiances");

    let row = dimensions[1].1;
    let mut expected = vec![0; dimensions[0].1 * row];
    expected[0] = CLOUDY | BAD_SPECTRUM;
    boxed(row).iter().for_each(|footprint| expected[footprint] = CLOUDY);
    assert_eq!(flags, expected);
    let by_person = 2;
    assert!(state.iter().all(|&state| state == by_person), "the rest was looked at");
    assert!(opened.variable("channel_flag").is_some());
    assert_eq!(std::fs::read(&file).unwrap(), before, "the archive is never written to");
}

#[test]
fn the_screen_and_the_library_give_the_same_bytes() {
    let folder = tempfile::tempdir().unwrap();
    let file = sample("ketter_desert");
    let mut session = start(folder.path(), 120, 40, &file);
    decide_on_screen(&mut session);
    session.keys("q");
    assert!(session.end().success());
    let from_screen = std::fs::read(export(folder.path(), &file)).unwrap();

    let program = ReaderProgram::new(env!("CARGO_BIN_EXE_radsieve"));
    let campaign = Campaign::open_or_create(&folder.path().join("second campaign")).unwrap();
    let author = Author { person: "tester".into(), host: "somewhere".into(), process: 7 };
    let review = Review::open(&Opening::new(program.clone()), &file).unwrap();
    decide_in_library(&review, &campaign, &author);
    let by = ExportedBy {
        program: env!("CARGO_PKG_VERSION").into(),
        person: "tester".into(),
        now: NOW.parse().unwrap(),
    };
    let out = folder.path().join("masks of the library");
    let exported = review.export(&campaign, &program, &by, &out, &[]).unwrap();
    let from_library = std::fs::read(&exported.path).unwrap();
    assert!(from_screen == from_library, "the masks differ");
}

#[test]
fn what_was_decided_and_where_one_was_survives_leaving() {
    let folder = tempfile::tempdir().unwrap();
    let file = sample("ketter_desert");
    let mut session = start(folder.path(), 80, 24, &file);
    session.expect("0 flagged");
    session.keys("jjjll");
    session.expect("Evidence (3, 2)");
    session.keys("fc");
    session.expect("kept · 1 flagged");
    session.keys(":layer bt(1231)\r");
    session.expect("Field bt(1231)");
    session.keys("q");
    assert!(session.end().success());

    let arguments = ["review", file.to_str().unwrap(), "--campaign", "campaign"];
    let mut again = Session::start_with(folder.path(), 80, 24, &arguments, &[]);
    again.expect("Evidence (3, 2)");
    again.expect("Field bt(1231)");
    // Once the tests have run, how many cases are left comes before the counts; without the word about
    // the terminal there is room for both.
    again.expect("left · kept");
    again.keys("\x1b");
    again.expect("1 flagged");
    again.keys("u");
    again.expect("0 flagged");
    again.keys("q");
    assert!(again.end().success());
}

#[test]
fn a_whole_tray_goes_on_past_a_file_that_hangs_the_library() {
    let folder = tempfile::tempdir().unwrap();
    let granules = folder.path().join("granules");
    std::fs::create_dir(&granules).unwrap();
    let hanging = crate::hanging_granule::granule_that_hangs(&granules);
    std::fs::copy(sample("ketter_desert"), granules.join("z_synthetic.nc")).unwrap();
    assert!(hanging.exists());
    let arguments = ["review", "granules", "--campaign", "campaign", "--reader-limit", "2"];
    let mut session = Session::start_with(folder.path(), 120, 40, &arguments, &[]);
    // The first granule that can be used is opened; the other one is named as what it is.
    session.expect("Tray 2 of 2");
    session.expect("can't be used");
    session.expect("0 flagged");
    session.keys("fc");
    session.expect("kept · 1 flagged");
    session.keys("q");
    assert!(session.end().success());
    session.assert_given_back();
}
