//! How much is sent to the terminal, counted.

use std::path::Path;

use crate::sample;
use crate::terminal::Session;

fn start(folder: &Path, columns: u16, rows: u16, more: &[&str]) -> Session {
    let file = sample("ketter_desert");
    let mut arguments = vec!["review", file.to_str().unwrap(), "--campaign", "campaign"];
    arguments.extend(more);
    let session = Session::start_with(folder, columns, rows, &arguments, &[]);
    session.expect("doubt 0.");
    session.settle();
    session
}

/// The most bytes that any of these keys took, each once the screen had come to rest.
fn most(session: &mut Session, keys: &[&str]) -> usize {
    let mut most = 0;
    let mut before = session.settle();
    for key in keys {
        session.keys(key);
        let after = session.settle();
        most = most.max(after - before);
        before = after;
    }
    most
}

const RIGHT: &str = "\x1b[C";
const DOWN: &str = "\x1b[B";

#[test]
fn a_move_of_the_cursor_is_cheap() {
    for (more, budget) in [(&["--low-bandwidth"][..], 2_000), (&[], 4_000)] {
        let folder = tempfile::tempdir().unwrap();
        let mut session = start(folder.path(), 80, 24, more);
        let used = most(&mut session, &[RIGHT, RIGHT, DOWN, DOWN, RIGHT, DOWN, RIGHT, DOWN]);
        session.expect("Trace footprint (4, 4)");
        assert!((1..budget).contains(&used), "{used} bytes of {budget} with {more:?}");
    }
}

/// While the cursor runs only the Field and the status line follow; the spectrum waits for its rest.
#[test]
fn a_running_cursor_sends_little_where_little_is_wanted() {
    let folder = tempfile::tempdir().unwrap();
    let mut session = start(folder.path(), 80, 24, &["--low-bandwidth"]);
    let before = session.settle();
    session.keys(&RIGHT.repeat(10));
    let used = session.settle() - before;
    session.expect("Trace footprint (0, 10)");
    assert!((1..4_000).contains(&used), "{used} bytes for ten moves and a rest");
}

#[test]
fn a_map_is_recoloured_within_its_budget() {
    let folder = tempfile::tempdir().unwrap();
    let mut session = start(folder.path(), 160, 48, &[]);
    session.keys("z");
    session.settle();
    let used = most(&mut session, &["]", "]", "]", "%", "[", "["]);
    assert!((1_000..40_000).contains(&used), "{used} bytes");
}
