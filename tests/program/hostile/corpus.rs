//! More than a thousand damaged and odd files: each is read or refused with a clean word, in time.

mod damage;
mod odd;
mod sound;

use std::io::Write;
use std::path::{Path, PathBuf};
use std::process::Output;
use std::sync::Mutex;
use std::sync::atomic::{AtomicUsize, Ordering};
use std::time::Duration;

use super::wait_for_readers;
use radsieve::system::clean_text;

/// Ways to damage each sound file.
const DAMAGES: u64 = 116;

/// Seconds a reader has for one question about a damaged file. A machine too busy for that gives a
/// clean error as well, so the short limit costs little time and cannot make the test fail.
const SHORT_LIMIT: &str = "0.5";

/// A command that takes longer is one that hangs: its readers are given up long before.
const A_HANG: Duration = Duration::from_secs(600);

/// Bytes of address space for the program itself, in units of 1024; what a file declares must not
/// make it ask for more.
const MEMORY: &str = "4194304";

/// More than this, in bytes, is no description and no message that anyone reads.
const LONGEST_OUTPUT: usize = 100_000;

/// A layer that every sound file of the corpus has.
const LAYER: &str = "bt(900)";

/// How the files fared.
#[derive(Debug, Default)]
struct Tally {
    files: AtomicUsize,
    refused: AtomicUsize,
    given_up: AtomicUsize,
    values_refused: AtomicUsize,
    read: AtomicUsize,
    faults: Mutex<Vec<String>>,
}

/// What the program made of a file.
struct Answer {
    code: Option<i32>,
    text: String,
}

fn ask(command: &[&str], file: &Path) -> Answer {
    // The shell sets the limit of memory, which the program inherits as it would on a cluster.
    let limited = format!("ulimit -v {MEMORY}; exec \"$0\" \"$@\"");
    let output = assert_cmd::Command::new("/bin/sh")
        .env_clear()
        // Each thread takes address space of its own; the limit must mean the same on any machine.
        .env("RAYON_NUM_THREADS", "2")
        .args(["-c", &limited, env!("CARGO_BIN_EXE_radsieve")])
        .args(command)
        .arg(file)
        .timeout(A_HANG)
        .output();
    let Output { status, stdout, stderr } = output.unwrap();
    let mut bytes = stdout;
    bytes.extend(stderr);
    Answer { code: status.code(), text: String::from_utf8_lossy(&bytes).into_owned() }
}

/// What is wrong with an answer, if anything: a panic, a crash, a hang, a character that a terminal
/// would obey, a text without an end.
fn fault(answer: &Answer, codes: &[i32]) -> Option<String> {
    let Answer { code, text } = answer;
    let dirty = || text.lines().any(|line| clean_text(line) != line);
    let what = match code {
        None => "was killed: it crashed, or hung".to_owned(),
        Some(code) if !codes.contains(code) => format!("ended with {code}"),
        _ if text.contains("panicked") => "panicked".to_owned(),
        _ if dirty() => "printed what a terminal obeys".to_owned(),
        _ if text.len() > LONGEST_OUTPUT => format!("printed {} bytes", text.len()),
        Some(4) if !text.contains("radsieve: ") => "failed without a word".to_owned(),
        _ => return None,
    };
    let beginning: String = text.chars().take(300).collect();
    Some(format!("{what}: {beginning}"))
}

impl Tally {
    /// Describes a file and takes a layer out of it.
    fn try_file(&self, what: &str, file: &Path, limit: &str) -> [Answer; 2] {
        let count = |counter: &AtomicUsize| counter.fetch_add(1, Ordering::Relaxed);
        let note = |command: &str, answer: &Answer, codes: &[i32]| {
            if let Some(fault) = fault(answer, codes) {
                self.faults.lock().unwrap().push(format!("{what}: {command} {fault}"));
            }
            if answer.text.contains("was given up after") {
                count(&self.given_up);
            }
        };
        count(&self.files);
        let described = ask(&["describe", "--reader-limit", limit], file);
        note("describe", &described, &[0, 4]);
        if described.code != Some(0) {
            count(&self.refused);
            return [described, Answer { code: Some(4), text: String::new() }];
        }
        let tabulated = ask(&["tabulate", "--reader-limit", limit, "--layer", LAYER], file);
        // A damaged axis may have no such channel, which is an error in what was typed.
        note("tabulate", &tabulated, &[0, 2, 4]);
        count(if tabulated.code == Some(0) { &self.read } else { &self.values_refused });
        [described, tabulated]
    }

    /// The counts in words, past the test harness, which shows only what failed.
    #[allow(clippy::explicit_write)] // `eprintln!` would end up in the harness.
    fn tell(&self) {
        let of = |counter: &AtomicUsize| counter.load(Ordering::Relaxed);
        let line = format!(
            "corpus: {} files: {} refused, {} described but their values refused, {} read; {} times a \
             reader was given up; {} panics, hangs, escapes or crashes",
            of(&self.files),
            of(&self.refused),
            of(&self.values_refused),
            of(&self.read),
            of(&self.given_up),
            self.faults.lock().unwrap().len(),
        );
        writeln!(std::io::stderr(), "{line}").unwrap();
    }
}

/// Puts bytes into a file of their own, which is gone afterwards.
fn with_file<Outcome>(
    path: PathBuf,
    bytes: &[u8],
    use_it: impl FnOnce(&Path) -> Outcome,
) -> Outcome {
    std::fs::write(&path, bytes).unwrap();
    let outcome = use_it(&path);
    std::fs::remove_file(&path).unwrap();
    outcome
}

#[test]
fn a_thousand_damaged_and_odd_files_harm_nothing() {
    let folder = tempfile::tempdir().unwrap();
    let tally = Tally::default();
    for odd in odd::files(folder.path()) {
        let [described, tabulated] = tally.try_file(odd.what, &odd.path, "60");
        tally.faults.lock().unwrap().extend(odd.surprise(&described, &tabulated));
        std::fs::remove_file(&odd.path).unwrap();
    }
    let sound = sound::files(folder.path());
    for (name, bytes) in &sound {
        let path = folder.path().join("sound.nc");
        let [_, tabulated] = with_file(path, bytes, |file| tally.try_file(name, file, "60"));
        assert_eq!(tabulated.code, Some(0), "{name}: {}", tabulated.text);
    }
    try_damage(&sound, folder.path(), &tally);
    wait_for_readers(folder.path(), 0);
    tally.tell();
    let faults = tally.faults.into_inner().unwrap();
    assert!(faults.is_empty(), "{} faults:\n{}", faults.len(), faults.join("\n"));
    assert!(tally.files.into_inner() > 1000);
    assert!(tally.refused.into_inner() > 100, "the damage is met");
}

/// Every damage to every sound file, several at once.
fn try_damage(sound: &[(&str, Vec<u8>)], folder: &Path, tally: &Tally) {
    let next = AtomicUsize::new(0);
    let work = || loop {
        let number = next.fetch_add(1, Ordering::Relaxed);
        let (seed, which) = ((number / sound.len()) as u64, number % sound.len());
        if seed >= DAMAGES {
            return;
        }
        let (name, bytes) = &sound[which];
        let (how, damaged) = damage::damaged(bytes, seed);
        let path = folder.join(format!("damaged_{number}.nc"));
        let what = format!("{name}, {how}");
        with_file(path, &damaged, |file| tally.try_file(&what, file, SHORT_LIMIT));
    };
    std::thread::scope(|scope| (0..4).for_each(|_| drop(scope.spawn(work))));
}

#[test]
fn a_checksum_that_does_not_hold_is_named_with_its_chunk() {
    let folder = tempfile::tempdir().unwrap();
    let mut bytes = sound::with_checksums(&folder.path().join("sound.nc"));
    let middle = bytes.len() / 2;
    bytes[middle] ^= 1;
    let tally = Tally::default();
    let path = folder.path().join("damaged.nc");
    let [described, tabulated] =
        with_file(path, &bytes, |file| tally.try_file("checksums", file, "60"));
    assert_eq!((described.code, tabulated.code), (Some(0), Some(4)), "{}", tabulated.text);
    assert!(
        tabulated.text.contains("the chunk that begins at [4, 0, 0] is damaged"),
        "{}",
        tabulated.text
    );
}
