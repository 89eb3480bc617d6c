//! A running reader process and the pipes to it.

use std::io::{self, PipeReader, PipeWriter, Write};
use std::os::unix::process::{CommandExt, ExitStatusExt};
use std::path::Path;
use std::process::{Child, Command, Stdio};
use std::thread::JoinHandle;
use std::time::Duration;

use super::messages::{self, LONGEST_MESSAGE, Reply, Request};
use super::pipe::TimedPipe;
use super::read_error::ReadFault;
use super::reader_program::{READER_COMMAND, ReadLimits, ReaderProgram};
use crate::system::{Deadline, clean_text};

/// A running reader and the pipes to it. Dropping it ends the reader.
#[derive(Debug)]
pub struct Link {
    /// Questions go in, answers come out; gone when the link ends.
    pipes: Option<(PipeWriter, PipeReader)>,
    child: Option<Child>,
    /// In place of a process, in unit tests.
    thread: Option<JoinHandle<()>>,
}

impl Link {
    /// Starts a reader for the file at `path`, which is absolute.
    pub fn start(
        program: &ReaderProgram,
        path: &Path,
        limits: &ReadLimits,
    ) -> Result<Self, ReadFault> {
        Self::try_start(program, path, limits)
            .map_err(|error| ReadFault::NoReader(error.to_string()))
    }

    fn try_start(program: &ReaderProgram, path: &Path, limits: &ReadLimits) -> io::Result<Self> {
        let (questions, requests) = io::pipe()?;
        let (replies, answers) = io::pipe()?;
        // A larger pipe saves switches between the two processes; the default works as well.
        let _ = rustix::pipe::fcntl_setpipe_size(&replies, 1 << 20);
        let mut link = Self { pipes: Some((requests, replies)), child: None, thread: None };
        match &program.0 {
            Some(program) => {
                link.child = Some(start_process(program, path, limits, questions, answers)?);
            }
            None => {
                let path = path.to_owned();
                let serve = move || super::serve(&path, questions, answers, || {});
                link.thread = Some(std::thread::spawn(serve));
            }
        }
        Ok(link)
    }

    /// Asks one question. The error tells whether the reader is still good for the next one.
    pub fn ask<Answer>(
        &mut self,
        request: &Request,
        what: &str,
        limits: &ReadLimits,
        take: impl FnOnce(Reply, &mut TimedPipe<'_>) -> io::Result<Answer>,
    ) -> Result<Answer, (ReadFault, bool)> {
        let what = what.to_owned();
        let deadline = Deadline::after(limits.per_request);
        match self.exchange(request, deadline, take) {
            Ok(Ok(answer)) => Ok(answer),
            Ok(Err(Reply::MissingFilter { filter })) => {
                Err((ReadFault::MissingFilter { what, filter: clean_text(&filter) }, true))
            }
            Ok(Err(Reply::TooLarge)) => {
                let why = format!(
                    "it is larger than {} MB, the most that is read at once",
                    LONGEST_MESSAGE >> 20
                );
                Err((ReadFault::BadRequest { what, why }, true))
            }
            Ok(Err(Reply::Failed { reason })) => {
                Err((ReadFault::Library { what, reason: clean_text(&reason) }, true))
            }
            Ok(Err(_)) => Err((ReadFault::Nonsense { what, how: "another answer".into() }, false)),
            Err(error) => {
                let late = error.kind() == io::ErrorKind::TimedOut;
                let how = self.end(late);
                let fault = match error.kind() {
                    io::ErrorKind::TimedOut => {
                        ReadFault::TimedOut { what, limit: limits.per_request }
                    }
                    io::ErrorKind::InvalidData => {
                        ReadFault::Nonsense { what, how: error.to_string() }
                    }
                    _ => ReadFault::Died { what, how },
                };
                Err((fault, false))
            }
        }
    }

    fn exchange<Answer>(
        &mut self,
        request: &Request,
        deadline: Deadline,
        take: impl FnOnce(Reply, &mut TimedPipe<'_>) -> io::Result<Answer>,
    ) -> io::Result<Result<Answer, Reply>> {
        // A question is far smaller than a pipe, so writing it never waits.
        let (requests, replies) = self.pipes.as_mut().ok_or(io::ErrorKind::BrokenPipe)?;
        messages::send(requests, request)?;
        requests.flush()?;
        let mut input = TimedPipe { pipe: replies, deadline };
        match messages::receive::<Reply>(&mut input)? {
            refusal @ (Reply::Failed { .. } | Reply::MissingFilter { .. } | Reply::TooLarge) => {
                Ok(Err(refusal))
            }
            reply => take(reply, &mut input).map(Ok),
        }
    }

    /// Ends the reader and everything it may have started; says how it ended if it had already.
    fn end(&mut self, kill_first: bool) -> String {
        let Some(mut child) = self.child.take() else { return "is gone".into() };
        if kill_first {
            kill_group(&child);
        }
        // One that died by itself closes its pipe a moment before it can be waited for.
        let ended = wait_briefly(&mut child);
        kill_group(&child);
        let how = match ended.and_then(|status| status.signal()) {
            Some(signal) => format!("died of signal {signal}"),
            None => "ended without an answer".into(),
        };
        if ended.is_none() && wait_briefly(&mut child).is_none() {
            // A process that waits for a dead file system cannot be killed now; we do not wait with it.
            std::thread::spawn(move || child.wait());
        }
        how
    }
}

impl Drop for Link {
    fn drop(&mut self) {
        self.end(true);
        self.pipes = None;
        if let Some(thread) = self.thread.take() {
            // It ends with the pipes. HDF5 knows open files by their inode, so one that is closed too
            // late can get in the way of a new file that has been given the same inode.
            let _ = thread.join();
        }
    }
}

/// The reader is the leader of its own group.
fn kill_group(child: &Child) {
    let group = i32::try_from(child.id()).ok().and_then(rustix::process::Pid::from_raw);
    if let Some(group) = group {
        // It may have ended already.
        let _ = rustix::process::kill_process_group(group, rustix::process::Signal::KILL);
    }
}

fn wait_briefly(child: &mut Child) -> Option<std::process::ExitStatus> {
    let deadline = Deadline::after(Duration::from_millis(100));
    loop {
        match child.try_wait() {
            Ok(Some(status)) => return Some(status),
            Ok(None) if !deadline.passed() => std::thread::sleep(Duration::from_micros(500)),
            _ => return None,
        }
    }
}

fn start_process(
    program: &Path,
    path: &Path,
    limits: &ReadLimits,
    questions: PipeReader,
    answers: PipeWriter,
) -> io::Result<Child> {
    Command::new(program)
        .arg(READER_COMMAND)
        .arg("--memory")
        .arg(limits.memory.to_string())
        .arg("--")
        .arg(path)
        // Settings and plug-in folders of the user's netCDF and HDF5 are not ours to follow; shared
        // file systems often have no locks, and reading needs none.
        .env_clear()
        .env("HDF5_USE_FILE_LOCKING", "FALSE")
        .current_dir("/")
        .process_group(0)
        .stdin(Stdio::from(questions))
        .stdout(Stdio::from(answers))
        // What the libraries say there is for nobody, least of all for a terminal with a screen on it.
        .stderr(Stdio::null())
        .spawn()
}
