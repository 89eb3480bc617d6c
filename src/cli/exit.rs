//! Exit codes: the same for every command, so that scripts can rely on them.

use std::process::ExitCode;

/// How a command ended.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Exit {
    /// Done; problems found in the data are reported and are still "done".
    Done,
    /// The command line makes no sense.
    Usage,
    /// Some of many inputs failed, each named on standard error.
    SomeFailed,
    /// Nothing could be done: an input or output error.
    Failed,
    /// Ended by a signal: 128 and its number.
    Signal(u8),
}

impl Exit {
    /// How a command over many inputs ended, of which `failed` failed and were named.
    pub fn of_many(done: usize, failed: usize) -> Exit {
        match (done, failed) {
            (_, 0) => Exit::Done,
            (0, _) => Exit::Failed,
            _ => Exit::SomeFailed,
        }
    }
}

impl From<Exit> for ExitCode {
    fn from(exit: Exit) -> ExitCode {
        ExitCode::from(match exit {
            Exit::Done => 0,
            Exit::Usage => 2,
            Exit::SomeFailed => 3,
            Exit::Failed => 4,
            Exit::Signal(code) => code,
        })
    }
}

/// An error that is the fault of the command line rather than of a file.
#[derive(Debug, thiserror::Error)]
#[error("{0}")]
pub struct UsageError(pub String);

/// The exit code that belongs to an error.
pub fn of_error(error: &anyhow::Error) -> Exit {
    if error.downcast_ref::<UsageError>().is_some() { Exit::Usage } else { Exit::Failed }
}

/// An error with its causes, each said once: many of ours tell their cause already.
pub fn words(error: &anyhow::Error) -> String {
    let mut words = String::new();
    for cause in error.chain().map(ToString::to_string) {
        if cause.starts_with(&words) {
            words = cause;
        } else if !words.contains(&cause) {
            words = format!("{words}: {cause}");
        }
    }
    words
}

/// A reader of our output that has gone away (`| head`) ends the program silently.
pub fn quiet_end(error: &anyhow::Error) -> Option<Exit> {
    let gone = error.chain().any(|cause| {
        cause
            .downcast_ref::<std::io::Error>()
            .is_some_and(|error| error.kind() == std::io::ErrorKind::BrokenPipe)
    });
    gone.then_some(Exit::Done)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_cause_is_said_once() {
        let error = anyhow::anyhow!("no space left")
            .context("cannot write a.csv: no space left")
            .context("lowen.nc");
        assert_eq!(words(&error), "lowen.nc: cannot write a.csv: no space left");
        let error = anyhow::anyhow!("lowen.nc: is empty").context("lowen.nc");
        assert_eq!(words(&error), "lowen.nc: is empty");
    }
}
