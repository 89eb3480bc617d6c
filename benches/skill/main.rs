//! How well the built-in rulebook does on synthetic granules, against their truth.
//!
//! `cargo bench --bench skill -- FILES…` prints the tables of `docs/skill.md` for granules that
//! `radsieve synth` made; without files it takes the sample granules. `--fit` prints starting points
//! and weights fitted to them in place of the tables: fit on some granules, measure on others.
//! Synthetic skill is not real skill.
#![allow(clippy::print_stdout)]

mod cases;
mod fit;
mod tables;

use std::path::{Path, PathBuf};

use radsieve::granule::Opening;
use radsieve::netcdf_files::ReaderProgram;
use radsieve::screening::builtin;

use cases::Granule;

fn main() -> Result<(), Box<dyn std::error::Error>> {
    let arguments: Vec<String> = std::env::args().skip(1).collect();
    let fitting = arguments.iter().any(|argument| argument == "--fit");
    let mut files: Vec<PathBuf> =
        arguments.iter().filter(|argument| !argument.starts_with("--")).map(Into::into).collect();
    if files.is_empty() {
        files = samples()?;
    }
    let opening = Opening::new(ReaderProgram::new(env!("CARGO_BIN_EXE_radsieve")));
    let rulebook = builtin()?;
    let mut granules = Vec::new();
    for file in &files {
        granules.push(Granule::screened(&opening, file, &rulebook)?);
    }
    if fitting {
        print!("{}", fit::weights(&rulebook, &granules));
    } else {
        print!("{}", tables::all(&rulebook, &granules));
    }
    Ok(())
}

fn samples() -> std::io::Result<Vec<PathBuf>> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("sample_granules");
    let mut files: Vec<PathBuf> =
        std::fs::read_dir(folder)?.filter_map(|entry| Some(entry.ok()?.path())).collect();
    files.retain(|file| file.extension().is_some_and(|ending| ending == "nc"));
    files.sort();
    Ok(files)
}
