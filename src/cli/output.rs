//! What is printed, to streams that may be gone.

use std::fmt::Display;
use std::io::{self, ErrorKind, IsTerminal, Write};
use std::os::unix::ffi::OsStrExt;
use std::path::Path;

use super::Exit;
use crate::granule::{Granule, Problem, ProblemKind};
use crate::system::clean_text;

/// Writes a line to standard error; where that is closed or full, nothing is left to be done.
macro_rules! say {
    ($($words:tt)*) => {{
        use std::io::Write as _;
        let _ = writeln!(std::io::stderr(), $($words)*);
    }};
}

/// Standard output of a command whose work is done elsewhere, in ledgers and files: that goes on where
/// nobody reads any more.
#[derive(Debug, Default)]
pub struct Output {
    failure: Option<io::Error>,
}

impl Output {
    /// Writes a line.
    pub fn line(&mut self, words: impl Display) {
        if self.failure.is_none() {
            self.failure = writeln!(io::stdout(), "{words}").err();
        }
    }

    /// Writes a path on a line: its own bytes, so that a script can open it, but clean on a terminal.
    pub fn path(&mut self, path: &Path) {
        let bytes = path.as_os_str().as_bytes();
        if self.failure.is_some() {
        } else if io::stdout().is_terminal() {
            self.line(clean_text(&path.to_string_lossy()));
        } else {
            self.failure = io::stdout().write_all(&[bytes, b"\n"].concat()).err();
        }
    }

    /// How the command ends that would end with `exit`.
    ///
    /// # Errors
    /// Standard output could not be written to. That its reader went away is no failure.
    pub fn end(self, exit: Exit) -> anyhow::Result<Exit> {
        match self.failure {
            Some(error) if error.kind() != ErrorKind::BrokenPipe => {
                Err(anyhow::Error::new(error).context("cannot write to standard output"))
            }
            _ => Ok(exit),
        }
    }
}

/// Says on standard error what was asked for and could not be done with a granule.
pub fn tell_refused(granule: &Granule) {
    let refused = |problem: &&Problem| problem.kind == ProblemKind::Refused;
    for problem in granule.problems().iter().filter(refused) {
        say!("radsieve: {}: {problem}", clean_text(&granule.path().to_string_lossy()));
    }
}

/// Words of several lines, with nothing in them that a terminal would obey.
pub fn clean_lines(words: &str) -> String {
    words.lines().map(clean_text).collect::<Vec<_>>().join("\n")
}
