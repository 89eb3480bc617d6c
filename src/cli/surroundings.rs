//! What a command takes from its surroundings: who, where, when.

use std::env;
use std::sync::Arc;

use jiff::Timestamp;

use super::exit::UsageError;
use crate::flags::Author;
use crate::system::remove_unfinished;

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

/// Whether the value of a locale variable names UTF-8 for its characters, in any spelling.
#[cfg(feature = "terminal")]
pub fn is_utf8(locale: &str) -> bool {
    let name = locale.to_ascii_lowercase();
    name.contains("utf-8") || name.contains("utf8")
}

/// Makes a write beyond the limit on file sizes (`ulimit -f`) fail with an error, which is told, in place
/// of ending the program.
pub fn outlive_the_limit_on_file_sizes() {
    // A handler that does nothing but set a flag; without it all is as it was.
    let _ = signal_hook::flag::register(signal_hook::consts::SIGXFSZ, Arc::default());
}

/// Ends the program on a signal as it would have ended, but removes what is half written before.
pub fn leave_nothing_half_written() {
    use signal_hook::consts::{SIGHUP, SIGINT, SIGTERM};
    use signal_hook::iterator::Signals;
    // One that whoever started the program wants ignored (`nohup`, `&` in a script) stays ignored.
    let ignored = ignored_signals();
    let heard = [SIGHUP, SIGINT, SIGTERM].into_iter().filter(|signal| !ignored.contains(signal));
    // Where the signals cannot be heard, they end the program all the same.
    let Ok(mut signals) = Signals::new(heard) else { return };
    std::thread::spawn(move || {
        for signal in signals.forever() {
            remove_unfinished();
            let _ = signal_hook::low_level::emulate_default_handler(signal);
        }
    });
}

/// The signals that this program was started to ignore; none where the system does not tell.
fn ignored_signals() -> Vec<i32> {
    let status = std::fs::read_to_string("/proc/self/status").unwrap_or_default();
    let mask = status.lines().find_map(|line| line.strip_prefix("SigIgn:"));
    let mask = mask.and_then(|mask| u64::from_str_radix(mask.trim(), 16).ok()).unwrap_or(0);
    (1..=64).filter(|signal| mask & (1 << (signal - 1)) != 0).collect()
}

/// Makes HDF5 write without locks. A file is written under a name of its own before it is moved into
/// place, so nobody else writes it; many shared file systems have no locks and would refuse; and a
/// reader that is started meanwhile would inherit the lock.
#[allow(unsafe_code)] // Setting a variable is unsafe beside other threads; see below.
pub fn write_without_file_locks() {
    const LOCKING: &str = "HDF5_USE_FILE_LOCKING";
    if env::var_os(LOCKING).is_none() {
        // SAFETY: called first of all in `main`, when no other thread runs that could read the
        // environment. The library has no other switch that netCDF hands through.
        unsafe { env::set_var(LOCKING, "FALSE") };
    }
}

#[cfg(all(test, feature = "terminal"))]
mod tests {
    #[test]
    fn utf8_is_known_in_its_spellings() {
        for (locale, is) in [
            ("en_GB.UTF-8", true),
            ("C.utf8", true),
            ("C", false),
            ("", false),
            ("de_DE@euro", false),
        ] {
            assert_eq!(super::is_utf8(locale), is, "{locale}");
        }
    }
}
