//! The written trial: a Tray of twelve synthetic granules reviewed by doubt through the keys.
//!
//! `cargo bench --bench trial` makes the granules, lets the tests of the built-in rulebook decide, and lets
//! a scripted reviewer go through the cases of doubt at a pseudo-terminal; it prints the tables of
//! `docs/trial.md`, and `-- --write` puts them there. `--keep DIR` keeps the granules and takes those that
//! are there. It is no trial by people: see `reviewer.rs` for what the script knows.
#![allow(clippy::print_stdout, clippy::unwrap_used, clippy::expect_used, clippy::panic)]

#[path = "../skill/cases.rs"]
#[allow(dead_code, reason = "only the truth is taken from there")]
mod cases;
#[path = "../skill/limits.rs"]
#[allow(dead_code, reason = "only the truth is taken from there")]
mod limits;
#[path = "../../tests/screen/terminal.rs"]
#[allow(dead_code, reason = "the trial needs less of it than the tests")]
mod terminal;

mod agreement;
mod desk;
mod hands;
mod review;
mod reviewer;
mod set;
mod tables;
mod truth;

use std::path::{Path, PathBuf};
use std::process::Command;

use radsieve::flags::Campaign;
use radsieve::screening::builtin;

use desk::Granule;

type Mishap = Box<dyn std::error::Error>;

fn main() -> Result<(), Mishap> {
    let mut arguments = std::env::args().skip(1);
    let (mut write, mut keep) = (false, None);
    while let Some(argument) = arguments.next() {
        match argument.as_str() {
            "--write" => write = true,
            "--keep" => {
                keep = Some(PathBuf::from(arguments.next().ok_or("--keep wants a folder")?))
            }
            // What cargo itself hands over.
            "--bench" => {}
            other => return Err(format!("{other}: no such argument").into()),
        }
    }
    let passing = tempfile::tempdir()?;
    let files = set::made(keep.as_deref().unwrap_or(passing.path()))?;
    let (tests, reviewed) = (passing.path().join("tests"), passing.path().join("reviewed"));
    screen(&files, &tests)?;
    copy(&tests, &reviewed)?;
    let rulebook = builtin()?;
    let granules: Result<Vec<Granule>, Mishap> =
        files.iter().map(|file| Granule::open(file, &rulebook)).collect();
    let granules = granules?;
    let came = review::done(&files, &reviewed, &granules)?;
    let campaigns = (Campaign::open(&tests)?, Campaign::open(&reviewed)?);
    let tables = tables::all(&granules, (&campaigns.0, &campaigns.1), &came);
    if write {
        return put(&tables);
    }
    print!("{tables}");
    Ok(())
}

/// The tests decide, as they do in a batch.
fn screen(files: &[PathBuf], campaign: &Path) -> Result<(), Mishap> {
    let mut command = Command::new(env!("CARGO_BIN_EXE_radsieve"));
    command.arg("screen").args(files).arg("--campaign").arg(campaign);
    let output = command.output()?;
    match output.status.success() {
        true => Ok(()),
        false => Err(String::from_utf8_lossy(&output.stderr).into()),
    }
}

/// Copies a campaign, so that both begin with the same words of the tests.
fn copy(from: &Path, to: &Path) -> Result<(), Mishap> {
    for entry in walkdir::WalkDir::new(from) {
        let entry = entry?;
        let target = to.join(entry.path().strip_prefix(from)?);
        match entry.file_type().is_dir() {
            true => std::fs::create_dir_all(target)?,
            false => std::fs::copy(entry.path(), target).map(|_| ())?,
        }
    }
    Ok(())
}

/// Puts the tables in place of those of the document.
fn put(tables: &str) -> Result<(), Mishap> {
    const BEFORE: &str =
        "<!-- What follows is written by `cargo bench --bench trial -- --write`. -->";
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("docs/trial.md");
    let text = std::fs::read_to_string(&path)?;
    let (ours, _) = text.split_once(BEFORE).ok_or("docs/trial.md lacks the line before tables")?;
    Ok(std::fs::write(path, format!("{ours}{BEFORE}\n\n{tables}"))?)
}
