//! How well the built-in rulebook does on synthetic granules, against their truth.
//!
//! `cargo bench --bench skill` makes perturbed granules and prints the tables of `docs/skill.md`;
//! `-- --write` puts them there. `-- --fit` makes others and prints starting points and weights fitted
//! to them; `-- --validate` measures on a third set, to choose with. `--keep DIR` keeps the granules and takes those that are there, `--rules FILE` takes another
//! rulebook, and files in place of a set may be named. Synthetic skill is not real skill.
#![allow(clippy::print_stdout)]

mod cases;
mod fit;
mod limits;
mod sets;
mod tables;

use std::path::{Path, PathBuf};

use radsieve::granule::Opening;
use radsieve::netcdf_files::ReaderProgram;
use radsieve::screening::{Rulebook, builtin};

use cases::Granule;

type Mishap = Box<dyn std::error::Error>;

/// What was asked for.
#[derive(Default)]
struct Wish {
    fit: bool,
    validate: bool,
    write: bool,
    keep: Option<PathBuf>,
    rules: Option<PathBuf>,
    files: Vec<PathBuf>,
}

fn wish() -> Result<Wish, Mishap> {
    let mut wish = Wish::default();
    let mut arguments = std::env::args().skip(1);
    while let Some(argument) = arguments.next() {
        let mut value = || arguments.next().ok_or(format!("{argument} wants a value"));
        match argument.as_str() {
            "--fit" => wish.fit = true,
            "--validate" => wish.validate = true,
            "--write" => wish.write = true,
            "--keep" => wish.keep = Some(value()?.into()),
            "--rules" => wish.rules = Some(value()?.into()),
            // What cargo itself hands over.
            "--bench" => {}
            file => wish.files.push(file.into()),
        }
    }
    Ok(wish)
}

fn main() -> Result<(), Mishap> {
    let wish = wish()?;
    let rulebook = match &wish.rules {
        None => builtin()?,
        Some(path) => {
            Rulebook::parse(&std::fs::read_to_string(path)?, &path.display().to_string())?
        }
    };
    let granules = match wish.files.is_empty() {
        true => of_set(&wish, &rulebook)?,
        false => screened(&wish.files, &rulebook, wish.fit)?,
    };
    if wish.fit {
        print!("{}", fit::weights(&rulebook, &granules));
        return Ok(());
    }
    let samples = screened(&samples()?, &rulebook, false)?;
    let tables = tables::all(&rulebook, &granules, &samples);
    match wish.write {
        true => write(&tables),
        false => {
            print!("{tables}");
            Ok(())
        }
    }
}

/// Puts the tables in place of those of the document.
fn write(tables: &str) -> Result<(), Mishap> {
    const BEFORE: &str =
        "<!-- What follows is written by `cargo bench --bench skill -- --write`. -->";
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("docs/skill.md");
    let text = std::fs::read_to_string(&path)?;
    let (ours, _) = text.split_once(BEFORE).ok_or("docs/skill.md lacks the line before tables")?;
    Ok(std::fs::write(path, format!("{ours}{BEFORE}\n\n{tables}"))?)
}

/// The granules that come with the program.
fn samples() -> Result<Vec<PathBuf>, Mishap> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("sample_granules");
    let mut files = Vec::new();
    for entry in std::fs::read_dir(folder)? {
        files
            .extend(Some(entry?.path()).filter(|path| path.extension().is_some_and(|e| e == "nc")));
    }
    files.sort();
    Ok(files)
}

fn of_set(wish: &Wish, rulebook: &Rulebook) -> Result<Vec<Granule>, Mishap> {
    let set = match (wish.fit, wish.validate) {
        (true, _) => sets::CALIBRATION,
        (_, true) => sets::VALIDATION,
        _ => sets::SKILL,
    };
    let passing = tempfile::tempdir()?;
    let folder: &Path = wish.keep.as_deref().unwrap_or(passing.path());
    let mut granules = Vec::new();
    for recipe in set.recipes() {
        let file = sets::made(recipe, folder)?;
        granules.extend(screened(std::slice::from_ref(&file), rulebook, wish.fit)?);
        if wish.keep.is_none() {
            std::fs::remove_file(file)?;
        }
    }
    Ok(granules)
}

fn screened(files: &[PathBuf], rulebook: &Rulebook, fit: bool) -> Result<Vec<Granule>, Mishap> {
    let opening = Opening::new(ReaderProgram::new(env!("CARGO_BIN_EXE_radsieve")));
    let one = if fit { Granule::with_voices } else { Granule::screened };
    files.iter().map(|file| one(&opening, file, rulebook)).collect()
}
