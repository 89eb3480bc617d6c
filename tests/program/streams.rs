//! Streams that are closed or full, outputs that are something else, signals: nothing is lost and
//! nothing half written stays.

use std::os::unix::fs::symlink;
use std::os::unix::process::ExitStatusExt;
use std::path::Path;
use std::process::{Command, Output, Stdio};
use std::time::{Duration, Instant};

use crate::plain_granule::PlainGranule;

fn radsieve(folder: &Path, arguments: &[&str]) -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_radsieve"));
    command.env_clear().env("RADSIEVE_NOW", "2026-03-01T12:00:00Z").env("RADSIEVE_PERSON", "ada");
    command.current_dir(folder).args(arguments);
    command
}

fn output(folder: &Path, arguments: &[&str]) -> Output {
    radsieve(folder, arguments).output().unwrap()
}

/// Two granules that differ, under one name in two folders.
fn granules() -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    for (name, lengths) in [("a", [4, 5, 9]), ("b", [5, 4, 9])] {
        std::fs::create_dir(folder.path().join(name)).unwrap();
        let granule = PlainGranule { lengths, ..PlainGranule::new() };
        granule.write(&folder.path().join(name).join("g.nc"));
    }
    folder
}

#[test]
fn work_goes_on_where_nobody_reads_what_is_said_of_it() {
    let folder = granules();
    for command in [["screen", "--campaign"], ["export", "--out"]] {
        let mut begun = radsieve(folder.path(), &[command[0], "a/g.nc", "b/g.nc"]);
        if command[0] == "export" {
            begun.args(["--campaign", "screen-out"]);
        }
        begun.arg(command[1]).arg(format!("{}-out", command[0]));
        let mut child = begun.stdout(Stdio::piped()).stderr(Stdio::piped()).spawn().unwrap();
        drop(child.stdout.take());
        drop(child.stderr.take());
        assert_eq!(child.wait().unwrap().code(), Some(0), "{}", command[0]);
    }
    let count = |below: &str| std::fs::read_dir(folder.path().join(below)).unwrap().count();
    assert_eq!(count("screen-out/ledgers"), 2);
    assert_eq!(count("export-out"), 2);
}

#[test]
fn a_full_standard_error_is_no_panic() {
    let folder = granules();
    let full = std::fs::OpenOptions::new().write(true).open("/dev/full").unwrap();
    let mut command = radsieve(folder.path(), &["tabulate", "no.nc", "--layer", "bt(900)"]);
    assert_eq!(command.stderr(full).status().unwrap().code(), Some(4));
}

#[test]
fn a_table_never_takes_the_place_of_a_granule_or_a_link() {
    let folder = granules();
    let granule = folder.path().join("a/g.nc");
    let before = std::fs::read(&granule).unwrap();
    symlink("a/g.nc", folder.path().join("link.nc")).unwrap();
    for target in ["a/g.nc", "link.nc", "./a/../a/g.nc"] {
        let table = ["tabulate", "a/g.nc", "--layer", "lat", "-o", target];
        let refused = output(folder.path(), &table);
        assert_eq!(refused.status.code(), Some(2), "{target}");
        assert!(String::from_utf8_lossy(&refused.stderr).contains("is one of the inputs"));
    }
    assert!(std::fs::read(&granule).unwrap() == before);
    std::fs::write(folder.path().join("behind.csv"), "old").unwrap();
    symlink("behind.csv", folder.path().join("table.csv")).unwrap();
    let to = |target: &str| {
        output(folder.path(), &["tabulate", "a/g.nc", "--layer", "lat", "-o", target])
    };
    assert!(to("table.csv").status.success());
    assert!(folder.path().join("table.csv").is_symlink());
    let behind = std::fs::read(folder.path().join("behind.csv")).unwrap();
    assert!(behind.starts_with(b"scan_line"), "{}", String::from_utf8_lossy(&behind));
    assert!(to("-").stdout == behind && !folder.path().join("-").exists());
    assert!(to("/dev/null").status.success());
}

#[test]
fn exports_of_one_name_at_the_same_time_each_leave_a_mask() {
    let folder = granules();
    for round in 0..3 {
        let out = format!("masks{round}");
        let start = |granule: &str| {
            let mut command = radsieve(folder.path(), &["export", granule, "--out", &out]);
            command.args(["--campaign", "campaign"]).stdout(Stdio::piped()).spawn().unwrap()
        };
        std::fs::create_dir_all(folder.path().join("campaign")).unwrap();
        for child in [start("a/g.nc"), start("b/g.nc")] {
            assert!(child.wait_with_output().unwrap().status.success());
        }
        assert_eq!(std::fs::read_dir(folder.path().join(&out)).unwrap().count(), 2);
    }
}

#[test]
fn a_signal_ends_a_command_and_removes_what_is_half_written() {
    let folder = tempfile::tempdir().unwrap();
    let arguments =
        ["synth", "--scene", "sea-of-lowen", "--shape", "interferometer", "--out", "out"];
    let mut child = radsieve(folder.path(), &arguments).stderr(Stdio::null()).spawn().unwrap();
    let parts = || -> usize {
        let Ok(entries) = std::fs::read_dir(folder.path().join("out")) else { return 0 };
        entries.filter(|entry| entry.is_ok()).count()
    };
    let begun = Instant::now();
    while parts() == 0 && begun.elapsed() < Duration::from_secs(120) {
        std::thread::sleep(Duration::from_millis(10));
    }
    assert_eq!(parts(), 1, "a file is being written");
    let pid = rustix::process::Pid::from_raw(child.id() as i32).unwrap();
    rustix::process::kill_process(pid, rustix::process::Signal::TERM).unwrap();
    assert_eq!(child.wait().unwrap().signal(), Some(15));
    assert_eq!(parts(), 0);
}

#[test]
fn a_signal_that_is_to_be_ignored_ends_nothing() {
    let folder = tempfile::tempdir().unwrap();
    let mut shell = Command::new("sh");
    shell.args(["-c", r#"trap "" TERM HUP; exec "$0" synth --scene norrik-plateau --out out"#]);
    shell.arg(env!("CARGO_BIN_EXE_radsieve")).current_dir(folder.path());
    let mut child = shell.stdout(Stdio::null()).stderr(Stdio::null()).spawn().unwrap();
    let begun = Instant::now();
    while !folder.path().join("out").exists() && begun.elapsed() < Duration::from_secs(120) {
        std::thread::sleep(Duration::from_millis(5));
    }
    let pid = rustix::process::Pid::from_raw(child.id() as i32).unwrap();
    // It may be done already.
    let _ = rustix::process::kill_process(pid, rustix::process::Signal::TERM);
    let _ = rustix::process::kill_process(pid, rustix::process::Signal::HUP);
    assert_eq!(child.wait().unwrap().code(), Some(0));
    let names = std::fs::read_dir(folder.path().join("out")).unwrap();
    let names: Vec<String> =
        names.map(|one| one.unwrap().file_name().into_string().unwrap()).collect();
    assert!(names.len() == 1 && names[0].ends_with(".nc"), "{names:?}");
}
