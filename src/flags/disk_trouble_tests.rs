//! Ledgers on a disk that does not take them.

use super::ledger_tests::{Fixture, PATIENCE, cloudy, time};
use super::*;

#[test]
fn a_folder_that_went_away_keeps_decisions_pending_until_it_is_back() {
    let fixture = Fixture::new();
    let mut writer = fixture.writer("anna");
    let ledgers = fixture.dir.path().join("ledgers");
    std::fs::remove_dir(&ledgers).unwrap();
    std::fs::write(&ledgers, "in the way").unwrap();
    let decision = writer.append(Origin::Person, cloudy(0..2), None, time(1));
    let Some(LedgerEvent::Failed { pending, message }) = writer.wait_event(PATIENCE) else {
        panic!("the failure is reported");
    };
    assert_eq!(pending, std::slice::from_ref(&decision.id));
    assert!(message.contains("try again") && message.contains("stay pending"), "{message}");
    assert_eq!(writer.pending().len(), 1);
    std::fs::remove_file(&ledgers).unwrap();
    writer.retry();
    assert_eq!(writer.wait_event(PATIENCE), Some(LedgerEvent::Kept(decision.id.clone())));
    assert_eq!(writer.pending(), []);
    assert_eq!(fixture.read().decisions, [decision]);
}

#[test]
fn closing_tells_what_is_not_on_the_disk() {
    let fixture = Fixture::new();
    let mut writer = fixture.writer("anna");
    let ledgers = fixture.dir.path().join("ledgers");
    std::fs::remove_dir(&ledgers).unwrap();
    std::fs::write(&ledgers, "in the way").unwrap();
    writer.append(Origin::Person, cloudy(0..2), None, time(1));
    writer.append(Origin::Person, cloudy(2..3), None, time(2));
    let not_kept = writer.close(PATIENCE).unwrap_err();
    assert_eq!(not_kept.pending, 2);
    assert!(not_kept.to_string().contains("2 decisions are not on the disk"), "{not_kept}");
}

/// A limit on file sizes stops a write in the middle of a line, as a full disk does. The limit is
/// the process's, so the test runs in a child of its own.
#[test]
fn a_write_that_stops_half_way_is_taken_up_in_a_new_file() {
    let program = std::env::current_exe().unwrap();
    let output = std::process::Command::new(program)
        .args(["--exact", "flags::disk_trouble_tests::child_with_little_space", "--ignored"])
        .output()
        .unwrap();
    let text = String::from_utf8_lossy(&output.stdout).into_owned();
    assert!(output.status.success() && text.contains("1 passed"), "{text}");
}

#[test]
#[ignore = "limits its whole process; run by a_write_that_stops_half_way_is_taken_up_in_a_new_file"]
fn child_with_little_space() {
    // The signal would end the process; handled, the write fails instead.
    let seen = std::sync::Arc::new(std::sync::atomic::AtomicBool::new(false));
    signal_hook::flag::register(signal_hook::consts::SIGXFSZ, seen).unwrap();
    let fixture = Fixture::new();
    let mut writer = fixture.writer("anna");
    let first = writer.append(Origin::Person, cloudy(0..1), None, time(1));
    assert_eq!(writer.wait_event(PATIENCE), Some(LedgerEvent::Kept(first.id.clone())));
    let size = std::fs::metadata(&fixture.files()[0]).unwrap().len();
    let (_, hard) = rlimit::Resource::FSIZE.get().unwrap();
    // Room for a part of the next line, and for no header of a second file.
    rlimit::Resource::FSIZE.set(size + 20, hard).unwrap();
    let second = writer.append(Origin::Person, cloudy(1..2), None, time(2));
    let event = writer.wait_event(PATIENCE);
    let Some(LedgerEvent::Failed { message, .. }) = event else { panic!("{event:?}") };
    assert!(message.contains("stay pending"), "{message}");
    assert_eq!(std::fs::metadata(&fixture.files()[0]).unwrap().len(), size + 20);
    rlimit::Resource::FSIZE.set(hard, hard).unwrap();
    writer.retry();
    assert_eq!(writer.wait_event(PATIENCE), Some(LedgerEvent::Kept(second.id.clone())));
    writer.close(PATIENCE).unwrap();
    let reading = fixture.read();
    assert_eq!(reading.decisions, [first, second]);
    assert_eq!(reading.problems.len(), 1, "the torn line is reported");
    assert_eq!(fixture.files().len(), 2);
}
