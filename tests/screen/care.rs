//! The terminal is always given back, and nothing decided is lost.

use std::path::Path;
use std::process::Command;

use crate::sample;
use crate::terminal::Session;

fn start(folder: &Path) -> Session {
    let file = sample("ketter_desert");
    let arguments = ["review", file.to_str().unwrap(), "--campaign", "campaign"];
    let session = Session::start_with(folder, 80, 24, &arguments, &[]);
    session.expect("0 flagged");
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
    session.expect("0 flagged");
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
    // A lone Esc is told from the start of a sequence by the pause behind it.
    session.keys("\x1b");
    session.expect_gone("no-such-command");
    session.keys(":quit\r");
    assert!(session.end().success());
    session.assert_given_back();
}

/// Processes whose command line names a file below `folder`, the readers apart.
fn reviews_of(folder: &Path) -> Vec<u32> {
    let folder = folder.to_string_lossy();
    let process = |entry: std::fs::DirEntry| {
        let line = std::fs::read(entry.path().join("cmdline")).ok()?;
        let line = String::from_utf8_lossy(&line).into_owned();
        let found = line.contains(&*folder) && line.contains("\0review\0");
        found.then(|| entry.file_name().to_string_lossy().parse().ok()).flatten()
    };
    std::fs::read_dir("/proc").unwrap().filter_map(Result::ok).filter_map(process).collect()
}

#[test]
fn the_shell_is_there_while_the_review_is_stopped_and_the_review_comes_back_whole() {
    let folder = tempfile::tempdir().unwrap();
    let mut session = Session::shell(folder.path(), 80, 24);
    session.expect("shell>");
    let program = env!("CARGO_BIN_EXE_radsieve");
    let campaign = folder.path().join("campaign");
    let file = sample("ketter_desert");
    session.keys(&format!(
        "{program} review {} --campaign {}\r",
        file.display(),
        campaign.display()
    ));
    session.expect("0 flagged");
    let stop_by_key = |session: &mut Session| session.keys("\x1a");
    let stop_by_signal = |_: &mut Session| {
        let reviews = reviews_of(folder.path());
        assert_eq!(reviews.len(), 1, "{reviews:?}");
        send("-TSTP", reviews[0]);
    };
    let ways: [&dyn Fn(&mut Session); 2] = [&stop_by_key, &stop_by_signal];
    for stop in ways {
        stop(&mut session);
        session.expect("Stopped");
        session.assert_given_back_to_shell();
        session.keys("echo $((40 + 2)) is here\r");
        session.expect("42 is here");
        session.keys("fg\r");
        session.expect("Field bt(900)");
        session.expect("0 flagged");
    }
    session.keys("fc");
    session.expect("kept · 1 flagged");
    session.keys("q");
    session.expect_last("shell>");
    session.keys("exit\r");
    assert!(session.end().success());
    assert_eq!(decisions(folder.path()), 1);
}
