//! `tabulate` of single channels over a full-size granule, against netCDF4 and numpy.

use std::path::Path;
use std::process::{Command, Stdio};
use std::time::Duration;

use crate::full_size::{FullSize, PROGRAM};
use crate::python::Python;
use crate::stopwatch;
use crate::table::Section;

/// Eight channels of each band, none of them beside another.
fn wavenumbers() -> Vec<f64> {
    let of_band = |first: f64, step: f64| (0..8).map(move |n| first + step * f64::from(n));
    of_band(661.25, 60.0).chain(of_band(1221.25, 70.0)).chain(of_band(2166.25, 50.0)).collect()
}

/// The section's table.
pub fn section(
    full: &FullSize,
    python: Option<&Python>,
) -> Result<Section, Box<dyn std::error::Error>> {
    let wavenumbers = wavenumbers();
    let table = full.folder().join("table.csv");
    let tabulate = || tabulate(&full.path, &table, &wavenumbers);
    tabulate()?;
    let rows_here = std::fs::read_to_string(&table)?;
    let mut rows: Vec<(&'static str, Duration)> = Vec::new();
    let mut notes = vec![format!(
        "{} channels, {} rows, {:.1} MB of text",
        wavenumbers.len(),
        rows_here.lines().count() - 1,
        rows_here.len() as f64 / 1e6
    )];
    match python {
        None => notes.push(crate::NO_PYTHON.to_owned()),
        Some(python) => {
            let other = full.folder().join("python.csv");
            let [whole, numbers] =
                python.tabulate(&full.path, &other, full.rounds, &wavenumbers)?;
            rows.push(("Python with netCDF4 and numpy", whole));
            rows.push(("the same without writing the table", numbers));
            notes.push(format!("greatest difference {:.1e} K", difference(&table, &other)?));
        }
    }
    let run = || drop(tabulate());
    rows.extend(stopwatch::shortest(
        full.rounds,
        vec![("radsieve tabulate, the process included", Box::new(run))],
    ));
    Ok(Section {
        title: "Tabulate 24 channels: shape (a), synthetic scene".to_owned(),
        rows,
        notes,
    })
}

fn tabulate(file: &Path, table: &Path, wavenumbers: &[f64]) -> Result<(), std::io::Error> {
    let mut command = Command::new(PROGRAM);
    command.arg("tabulate").arg(file).arg("--quiet").stdout(std::fs::File::create(table)?);
    for wavenumber in wavenumbers {
        command.args(["--layer", &format!("bt({wavenumber})")]);
    }
    match command.stdin(Stdio::null()).status()?.success() {
        true => Ok(()),
        false => Err(std::io::Error::other("tabulate failed")),
    }
}

/// The greatest difference of numbers in the last columns of both tables. What is measured is worth
/// nothing if it is not the same.
fn difference(one: &Path, other: &Path) -> Result<f64, Box<dyn std::error::Error>> {
    let (one, other) = (std::fs::read_to_string(one)?, std::fs::read_to_string(other)?);
    let mut greatest = 0.0_f64;
    if one.lines().count() != other.lines().count() {
        return Err("the tables differ in length".into());
    }
    for (one, other) in one.lines().zip(other.lines()).skip(1) {
        for (a, b) in one.rsplit(',').zip(other.rsplit(',')).take(24) {
            if let (Ok(a), Ok(b)) = (a.parse::<f64>(), b.parse::<f64>())
                && a.is_finite()
                && b.is_finite()
            {
                greatest = greatest.max((a - b).abs());
            }
        }
    }
    match greatest < 1e-3 {
        true => Ok(greatest),
        false => Err(format!("the tables differ by {greatest} K").into()),
    }
}
