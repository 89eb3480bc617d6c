//! The terminal is always given back, and nothing decided is lost.

use std::path::Path;
use std::process::Command;

use crate::sample;
use crate::terminal::Session;

fn start(folder: &Path) -> Session {
    let file = sample("ketter_desert");
    let arguments = ["review", file.to_str().unwrap(), "--campaign", "campaign"];
    let session = Session::start_with(folder, 80, 24, &arguments, &[]);
    session.expect("untouched");
    session
}

fn send(signal: &str, process: u32) {
    let status = Command::new("kill").args([signal, &process.to_string()]).status().unwrap();
    assert!(status.success());
}

/// Decisions in the ledgers of the campaign in `folder`, counted as lines behind the heads.
fn decisions(folder: &Path) -> usize {
    let mut count = 0;
    for granule in std::fs::read_dir(folder.join("campaign/ledgers")).unwrap() {
        for ledger in std::fs::read_dir(granule.unwrap().path()).unwrap() {
            let text = std::fs::read_to_string(ledger.unwrap().path()).unwrap();
            count += text.lines().count() - 1;
        }
    }
    count
}

#[test]
fn signals_end_the_review_with_the_terminal_whole_and_the_decision_kept() {
    for (signal, code) in [("-TERM", 128 + 15), ("-HUP", 128 + 1), ("-INT", 128 + 2)] {
        let folder = tempfile::tempdir().unwrap();
        let mut session = start(folder.path());
        session.keys("fc");
        session.expect("1 flagged");
        send(signal, session.process());
        assert_eq!(session.end().exit_code(), code, "{signal}");
        session.assert_given_back();
        assert_eq!(decisions(folder.path()), 1, "{signal}");
    }
}

#[test]
fn a_vanished_terminal_ends_the_review() {
    let folder = tempfile::tempdir().unwrap();
    let mut session = start(folder.path());
    session.keys("fc");
    session.expect("kept · 1 flagged");
    session.hang_up();
    session.end();
    assert_eq!(decisions(folder.path()), 1);
}

#[test]
fn every_size_of_the_terminal_is_survived() {
    let folder = tempfile::tempdir().unwrap();
    let mut session = start(folder.path());
    for (columns, rows) in [(200, 60), (79, 23), (20, 5), (1, 1), (120, 40), (80, 24)] {
        session.resize(columns, rows);
        session.settle();
    }
    session.expect("Field bt(900)");
    session.expect("untouched");
    session.keys("q");
    assert!(session.end().success());
}

#[test]
fn an_idle_screen_sends_nothing() {
    let folder = tempfile::tempdir().unwrap();
    let session = start(folder.path());
    let before = session.settle();
    std::thread::sleep(std::time::Duration::from_secs(2));
    assert_eq!(session.settle(), before);
}

#[test]
fn help_and_the_command_line_open_and_close() {
    let folder = tempfile::tempdir().unwrap();
    let mut session = start(folder.path());
    session.keys("?");
    session.expect("cursor up");
    session.keys("\x1b");
    session.expect_gone("cursor up");
    session.keys(":no-such-command\r");
    session.expect("no-such-command");
    session.keys("\x1b");
    session.keys(":quit\r");
    assert!(session.end().success());
    session.assert_given_back();
}
