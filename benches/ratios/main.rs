//! Ratios measured in one run: each fast path against the plain one that it replaces.
//!
//! `cargo bench --bench ratios` prints one table per section, `-- reading screening` those of some parts. Times of one machine say little about
//! another; ratios of one run do. To add a section, write a module with a function that returns a
//! [`table::Section`] and name it in `main`.
#![allow(clippy::print_stdout)]

mod full_size;
mod inversion;
mod picturing;
mod python;
mod reading;
mod screening;
mod reviewing;
mod stopwatch;
mod table;
mod tabulating;

use full_size::FullSize;
use python::Python;

/// What stands where Python is compared with.
const NO_PYTHON: &str = "no Python with netCDF4 and numpy was found: RADSIEVE_PYTHON may name one";

/// How large the measured cases are.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Size {
    /// A full-size granule.
    Full,
    /// A few values: shows that the sections still run.
    Small,
}

fn main() -> Result<(), Box<dyn std::error::Error>> {
    // Cargo says `--bench` when it measures; a test run of all targets does not.
    let measuring = std::env::args().any(|argument| argument == "--bench");
    let size = if measuring { Size::Full } else { Size::Small };
    // Names of parts, if only some are wanted.
    let named: Vec<String> =
        std::env::args().skip(1).filter(|argument| !argument.starts_with('-')).collect();
    let wants = |part: &str| named.is_empty() || named.iter().any(|name| name == part);
    if wants("inversion") {
        println!("{}", inversion::section(size));
    }
    let python = Python::find();
    let mut sections = Vec::new();
    if wants("reading") {
        sections = reading::sections(size, python.as_ref())?;
        sections.drain(..).for_each(|section| println!("{section}"));
    }
    let full = FullSize::make(size)?;
    if wants("tabulating") {
        println!("{}", tabulating::section(&full, python.as_ref())?);
    }
    if wants("picturing") {
        sections.extend(picturing::sections(&full)?);
    }
    if wants("reviewing") {
        sections.extend(reviewing::sections(&full)?);
    }
    sections.drain(..).for_each(|section| println!("{section}"));
    if wants("screening") {
        println!("{}", screening::section(&full)?);
        println!("{}", screening::section(&FullSize::make_grating(size)?)?);
    }
    Ok(())
}
