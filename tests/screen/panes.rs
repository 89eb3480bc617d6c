//! Every pane in a terminal: sizes, mouse, the shell in between, a dropped link, bytes.

use std::path::Path;

use crate::sample;
use crate::terminal::Session;

/// The key of each pane and how its title begins.
const PANES: [(&str, &str); 7] = [
    ("1", "Tray"),
    ("2", "Field"),
    ("3", "Trace"),
    ("4", "Spread"),
    ("5", "Strip"),
    ("6", "Evidence"),
    ("7", "Ledger"),
];
const RIGHT: &str = "\x1b[C";
const DOWN: &str = "\x1b[B";

fn start(folder: &Path, more: &[&str]) -> Session {
    let file = sample("ketter_desert");
    let mut arguments = vec!["review", file.to_str().unwrap(), "--campaign", "campaign"];
    arguments.extend(more);
    let session = Session::start_with(folder, 80, 24, &arguments, &[]);
    session.expect("left");
    session.settle();
    session
}

#[test]
fn each_pane_survives_every_size_of_the_terminal() {
    let folder = tempfile::tempdir().unwrap();
    let mut session = start(folder.path(), &[]);
    for (key, title) in PANES {
        session.keys(key);
        session.expect(&format!("{title} "));
        for (columns, rows) in [(200, 60), (20, 5), (1, 1), (40, 12), (120, 40), (80, 24)] {
            session.resize(columns, rows);
            session.settle();
        }
        session.expect(&format!("{title} "));
        // The same alone on the screen.
        session.keys("z");
        for (columns, rows) in [(20, 5), (200, 60), (80, 24)] {
            session.resize(columns, rows);
            session.settle();
        }
        session.expect(title);
        session.keys("z");
    }
    session.keys("q");
    assert!(session.end().success());
    session.assert_given_back();
}

#[test]
fn a_move_of_the_cursor_is_cheap_whatever_pane_is_open() {
    for (more, budget) in [(&["--low-bandwidth"][..], 2_000), (&[], 4_000)] {
        let folder = tempfile::tempdir().unwrap();
        let mut session = start(folder.path(), more);
        for (key, title) in PANES {
            // In the Tray the arrows choose a granule, in the Spread they move the threshold.
            if matches!(title, "Tray" | "Spread") {
                continue;
            }
            session.keys(key);
            let mut before = session.settle();
            for step in [RIGHT, DOWN, RIGHT, DOWN] {
                session.keys(step);
                let after = session.settle();
                let used = after - before;
                assert!(used < budget, "{used} bytes of {budget}: {title}, {more:?}");
                before = after;
            }
        }
        let before = session.settle();
        std::thread::sleep(std::time::Duration::from_secs(1));
        assert_eq!(session.settle(), before, "an idle screen sends nothing");
    }
}

#[test]
fn the_mouse_tells_what_it_is_over_and_sends_nothing_twice() {
    let folder = tempfile::tempdir().unwrap();
    let mut session = start(folder.path(), &[]);
    session.keys("m");
    session.expect("the mouse moves the cursor");
    // In the middle of the Field.
    session.keys("\x1b[<35;40;8M");
    session.expect("°E · ");
    session.expect_gone("the mouse moves the cursor");
    let before = session.settle();
    session.keys("\x1b[<35;40;8M\x1b[<35;40;8M");
    assert_eq!(session.settle(), before, "the same words are not sent again");
    session.keys("\x1b[<35;20;19M");
    let status = |screen: &str| screen.lines().rev().nth(1).unwrap_or_default().to_owned();
    session.wait("the channel in the status line", |screen| status(screen).contains("µm · "));
    let over = session.settle();
    assert!(over - before < 1_000, "{} bytes for a look", over - before);
    // A click goes there, the wheel zooms, and another key gives the mouse back.
    session.keys("\x1b[<0;40;8M\x1b[<0;40;8m");
    session.expect("Trace footprint (22, 26)");
    assert!(!status(&session.screen()).contains("µm"));
    session.keys("\x1b[<64;40;19M");
    session.keys("m");
    session.expect("the mouse is the terminal's");
    session.keys("q");
    assert!(session.end().success());
    session.assert_given_back();
}

#[test]
fn no_movement_is_asked_for_where_little_is_to_be_sent() {
    let folder = tempfile::tempdir().unwrap();
    let mut session = start(folder.path(), &["--low-bandwidth"]);
    session.keys("m");
    session.expect("the mouse moves the cursor");
    assert!(!session.tells_of_every_movement());
    session.keys("q");
    assert!(session.end().success());
}

#[test]
fn panes_come_back_after_the_shell_and_a_dropped_link_loses_nothing() {
    for (key, title) in [("4", "Spread"), ("5", "Strip"), ("7", "Ledger")] {
        let folder = tempfile::tempdir().unwrap();
        let mut session = Session::shell(folder.path(), 80, 24);
        session.expect("shell>");
        let (program, file) = (env!("CARGO_BIN_EXE_radsieve"), sample("ketter_desert"));
        session.keys(&format!("{program} review {} --campaign campaign\r", file.display()));
        session.expect("left");
        session.keys(key);
        session.expect(&format!("━ {title}"));
        session.keys("\x1a");
        session.expect("Stopped");
        session.assert_given_back_to_shell();
        session.keys("fg\r");
        session.expect(&format!("━ {title}"));
        session.keys("2fc");
        session.expect("kept");
        session.keys(key);
        session.hang_up();
        session.end();
        // The next one finds the decision, and the pane that was open.
        let arguments = ["review", file.to_str().unwrap(), "--campaign", "campaign"];
        let mut again = Session::start_with(folder.path(), 80, 24, &arguments, &[]);
        again.expect("left · kept");
        // Without the word about the terminal there is room for the counts.
        again.keys("\x1b");
        again.expect("1 flagged");
        again.keys("q");
        assert!(again.end().success());
    }
}
