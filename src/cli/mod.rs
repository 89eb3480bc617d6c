//! The command line: arguments, one file per command, exit codes, all printing.
//!
//! Uses: every room.
//!
//! **Never** judges.

// Printing is this room's job; nobody else may.
#![allow(clippy::print_stdout, clippy::print_stderr)]

#[macro_use]
mod output;

mod describe;
mod exit;
mod expand;
mod export;
mod footprint_at;
mod heights;
mod inputs;
mod instrument;
mod manual;
mod natural_order;
#[cfg(feature = "terminal")]
mod own_settings;
mod planck;
mod reader;
mod review;
mod rules;
mod screen;
mod spectrum;
mod spectrum_energy;
mod surroundings;
mod synth;
mod table;
mod tabulate;
mod train;

use std::process::ExitCode;

use clap::{Parser, Subcommand};

pub use exit::Exit;

/// Screen infrared-sounder granules: look at spectra, flag footprints, export CF flag masks.
///
/// A mask made here is a screening aid for retrieval runs, not a warning service. Decisions on
/// ash, dust or gas for aviation, health or civil protection belong to the responsible authorities.
#[derive(Debug, Parser)]
#[command(
    name = "radsieve",
    version,
    max_term_width = 100,
    after_help = "Exit codes: 0 done (problems found in the data are reported, and still done); 2 wrong \
        usage; 3 some of many inputs failed, each named; 4 nothing could be done; 128 + n ended by \
        signal n."
)]
pub struct Arguments {
    #[command(subcommand)]
    command: Command,
}

#[derive(Debug, Subcommand)]
enum Command {
    /// The terminal review: page through granules, look, flag, sign off.
    Review(review::Arguments),
    /// What was understood of a file, what was guessed and why.
    Describe(describe::Arguments),
    /// Layers per footprint as CSV or JSON lines.
    Tabulate(tabulate::Arguments),
    /// One footprint's spectrum as CSV or JSON.
    Spectrum(spectrum::Arguments),
    /// Run the screening tests over granules, write their decisions into ledgers.
    Screen(screen::Arguments),
    /// Find what the spectra of granules are made of, for the test of unusual ones.
    Train(train::Arguments),
    /// Print a rulebook with its sources, or find its mistakes.
    Rules(rules::Arguments),
    /// Write CF flag masks or footprint lists from the ledgers.
    Export(export::Arguments),
    /// Convert radiance to brightness temperature and back, at the prompt.
    Planck(planck::Arguments),
    /// Make physically based synthetic granules with their truth.
    Synth(synth::Arguments),
    /// Write a completion script for a shell to standard output.
    Completions(manual::CompletionArguments),
    /// Write manual pages into a folder.
    Man(manual::ManArguments),
    /// The reader process: started by the program itself.
    #[command(hide = true, name = reader::NAME)]
    Reader(reader::Arguments),
}

/// Parses the command line, runs the command, reports a failure on standard error.
pub fn main() -> ExitCode {
    surroundings::write_without_file_locks();
    surroundings::outlive_the_limit_on_file_sizes();
    let arguments = match Arguments::try_parse() {
        Ok(arguments) => arguments,
        Err(error) => {
            let wrong_usage = error.use_stderr();
            // Nothing sensible is left to do when standard error is gone.
            let _ = error.print();
            return if wrong_usage { Exit::Usage.into() } else { Exit::Done.into() };
        }
    };
    match run(arguments.command) {
        Ok(exit) => exit.into(),
        Err(error) => {
            if let Some(broken_pipe) = exit::quiet_end(&error) {
                return broken_pipe.into();
            }
            say!("radsieve: {}", output::clean_lines(&exit::words(&error)));
            exit::of_error(&error).into()
        }
    }
}

fn run(command: Command) -> anyhow::Result<Exit> {
    // The review has the terminal to give back and does so itself; a reader is ended by its parent.
    if !matches!(command, Command::Review(_) | Command::Reader(_)) {
        surroundings::leave_nothing_half_written();
    }
    match command {
        Command::Review(arguments) => review::run(arguments),
        Command::Describe(arguments) => describe::run(arguments),
        Command::Tabulate(arguments) => tabulate::run(arguments),
        Command::Spectrum(arguments) => spectrum::run(arguments),
        Command::Screen(arguments) => screen::run(arguments),
        Command::Train(arguments) => train::run(arguments),
        Command::Rules(arguments) => rules::run(arguments),
        Command::Export(arguments) => export::run(arguments),
        Command::Planck(arguments) => planck::run(arguments),
        Command::Synth(arguments) => synth::run(arguments),
        Command::Completions(arguments) => manual::completions(arguments),
        Command::Man(arguments) => manual::man(arguments),
        Command::Reader(arguments) => reader::run(arguments),
    }
}
