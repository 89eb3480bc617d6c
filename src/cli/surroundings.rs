//! What a command takes from its surroundings: who, where, when, and which program reads files.

use std::env;
use std::path::PathBuf;

use jiff::Timestamp;

use super::exit::UsageError;
use crate::flags::Author;
use crate::netcdf_files::ReaderProgram;

/// The campaign folder where none is named.
pub const DEFAULT_CAMPAIGN: &str = "radsieve-campaign";

/// The environment variable that names the person for ledgers and masks.
pub const PERSON: &str = "RADSIEVE_PERSON";
/// The environment variable that stops the clock, for runs that are to give the same bytes again.
pub const NOW: &str = "RADSIEVE_NOW";

/// Who decides and exports: RADSIEVE_PERSON, else the login name, else the user's number.
pub fn person() -> String {
    let named = [PERSON, "USER", "LOGNAME"].into_iter().find_map(|name| {
        env::var(name).ok().map(|value| value.trim().to_owned()).filter(|value| !value.is_empty())
    });
    named.unwrap_or_else(|| format!("uid{}", rustix::process::getuid().as_raw()))
}

/// Who writes ledgers, from where.
pub fn author() -> Author {
    let host = rustix::system::uname().nodename().to_string_lossy().into_owned();
    Author { person: person(), host, process: std::process::id() }
}

/// The time: RADSIEVE_NOW (as in `2026-01-31T12:00:00Z`), else the clock.
///
/// # Errors
/// RADSIEVE_NOW is no time.
pub fn now() -> Result<Timestamp, UsageError> {
    match env::var(NOW) {
        Err(_) => Ok(Timestamp::now()),
        Ok(text) => text.trim().parse().map_err(|_| {
            UsageError(format!("{NOW} is {text:?}, which is no time like 2026-01-31T12:00:00Z"))
        }),
    }
}

/// This program, which starts itself as the reader of each file.
///
/// # Errors
/// The system does not tell where the program lies.
pub fn reader_program() -> anyhow::Result<ReaderProgram> {
    let path: PathBuf = env::current_exe()
        .map_err(|error| anyhow::anyhow!("cannot find this program to read files with: {error}"))?;
    Ok(ReaderProgram::new(path))
}
