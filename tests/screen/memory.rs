//! A granule larger than the memory that its values may take looks as it does in all memory.

use std::path::Path;
use std::thread;
use std::time::{Duration, Instant};

use crate::sample;
use crate::terminal::Session;

const PATIENCE: Duration = Duration::from_secs(120);

fn start(folder: &Path, memory: &str) -> Session {
    let file = sample("ketter_desert");
    let file = file.to_str().unwrap();
    let arguments =
        ["review", file, "--campaign", "campaign", "--layer", "bt(900)", "--memory", memory];
    let clock = ("RADSIEVE_NOW", "2026-03-01T12:00:00Z");
    Session::start_with(folder, 140, 44, &arguments, &[clock])
}

/// The screen without the blanks behind its lines, which depend on what stood there before.
fn shown(session: &Session) -> String {
    session.screen().lines().map(|line| line.trim_end().to_owned() + "\n").collect()
}

/// Waits until both screens are the same and stay so for a while.
fn expect_same(one: &Session, other: &Session) {
    let begun = Instant::now();
    let mut same = 0;
    while same < 6 {
        let (here, there) = (shown(one), shown(other));
        same = if here == there { same + 1 } else { 0 };
        assert!(begun.elapsed() < PATIENCE, "in all memory:\n{here}\nin little:\n{there}");
        thread::sleep(Duration::from_millis(150));
    }
}

#[test]
fn a_review_in_little_memory_looks_the_same() {
    let folders = [tempfile::tempdir().unwrap(), tempfile::tempdir().unwrap()];
    // The sample's values take 7 MB.
    let mut sessions = [start(folders[0].path(), "1G"), start(folders[1].path(), "700K")];
    sessions.iter().for_each(|session| session.expect("bt(900) = "));
    expect_same(&sessions[0], &sessions[1]);
    // Another footprint's spectrum, another layer, a pin, and one that leaves the pin behind.
    for (keys, shown) in
        [("jjll", "bt(900) = "), ("]", "bt(1231) = "), ("x", "a"), ("jjjlll", "bt")]
    {
        for session in &mut sessions {
            session.keys(keys);
            session.expect(shown);
        }
        expect_same(&sessions[0], &sessions[1]);
    }
    for session in &mut sessions {
        session.keys("q");
        assert!(session.end().success());
    }
}
