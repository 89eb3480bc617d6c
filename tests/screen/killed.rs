//! Killed in the middle of a thousand decisions: what the screen showed as kept is on the disk.

use std::path::Path;
use std::time::{Duration, Instant};

use crate::sample;
use crate::terminal::Session;

/// Decisions that are typed; the program is killed before they are all made.
const TYPED: usize = 1000;
/// Decisions in a row of the map, which has forty rows.
const IN_A_ROW: usize = 25;
/// Decisions typed in one go, as a held key types them: many are drawn at once, which is what makes
/// a thousand of them quick.
const BURST: usize = 40;
/// Decisions typed before the screen shows them.
const AHEAD: usize = 160;
const PATIENCE: Duration = Duration::from_secs(60);
/// As many have to be shown as kept before it is killed.
const MIDDLE: usize = TYPED / 2;

/// The number before a word on the last lines of the screen.
fn number_before(screen: &str, word: &str) -> Option<usize> {
    let line = screen.lines().rev().find(|line| line.contains(&format!(" {word}")))?;
    let before = line.split(&format!(" {word}")).next()?;
    before.rsplit(|letter: char| !letter.is_ascii_digit()).next()?.parse().ok()
}

/// Footprints flagged by lines that end whole, in all ledgers below a folder.
fn flagged_on_disk(folder: &Path) -> usize {
    let mut flagged = std::collections::BTreeSet::new();
    for granule in std::fs::read_dir(folder.join("campaign/ledgers")).unwrap() {
        for ledger in std::fs::read_dir(granule.unwrap().path()).unwrap() {
            let text = std::fs::read_to_string(ledger.unwrap().path()).unwrap();
            for line in text.split_inclusive('\n').skip(1).filter(|line| line.ends_with('\n')) {
                let decision: serde_json::Value = serde_json::from_str(line).unwrap();
                flagged.insert(decision["footprints"][0][0].as_u64().unwrap());
            }
        }
    }
    flagged.len()
}

#[test]
fn what_the_screen_showed_as_kept_is_on_the_disk_after_a_kill() {
    let folder = tempfile::tempdir().unwrap();
    let file = sample("ketter_desert");
    let arguments = ["review", file.to_str().unwrap(), "--campaign", "campaign"];
    let mut session = Session::start_with(folder.path(), 160, 48, &arguments, &[]);
    session.expect("0 flagged");
    // Along the rows, there and back.
    let mut keys = String::new();
    for number in 0..TYPED {
        keys.push_str("fc");
        let (row, place) = (number / IN_A_ROW, number % IN_A_ROW);
        keys.push(match (place, row % 2) {
            (last, _) if last + 1 == IN_A_ROW => 'j',
            (_, 0) => 'l',
            _ => 'h',
        });
    }
    let (mut kept, mut typed, mut shown) = (0, 0, 0);
    let start = Instant::now();
    while kept < MIDDLE {
        assert!(start.elapsed() < PATIENCE, "too slow:\n{}", session.screen());
        let screen = session.screen();
        if let Some(flagged) = number_before(&screen, "flagged") {
            let pending = number_before(&screen, "pending").unwrap_or(0);
            kept = kept.max(flagged.saturating_sub(pending));
            shown = flagged;
        }
        // Some are always on their way, so that the kill comes in the middle.
        if typed < TYPED && typed < shown + AHEAD {
            session.keys(&keys[3 * typed..3 * (typed + BURST)]);
            typed += BURST;
        } else {
            std::thread::sleep(Duration::from_millis(1));
        }
    }
    session.kill();
    let on_disk = flagged_on_disk(folder.path());
    assert!(typed < TYPED, "it was to be killed before all was typed");
    assert!(on_disk >= kept, "{kept} shown as kept, {on_disk} on the disk");
    assert!(on_disk < TYPED, "some were still on their way");
    // And it comes back, with the line that was cut off, if any, left out.
    let again = Session::start_with(folder.path(), 160, 48, &arguments, &[]);
    again.expect(&format!(" {on_disk} flagged"));
}
