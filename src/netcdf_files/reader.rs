//! The parent's side: asks a reader process about one file, and gives up on it in time.

use std::io::{self, PipeReader, PipeWriter, Write};
use std::os::unix::process::{CommandExt, ExitStatusExt};
use std::path::{Path, PathBuf};
use std::process::{Child, Command, Stdio};
use std::sync::{Mutex, PoisonError};
use std::time::Duration;

use super::door;
use super::index::{FileIndex, Variable};
use super::messages::{self, Reply, Request};
use super::pipe::{TimedPipe, read_samples};
use super::read_error::{ReadError, ReadFault};
use super::samples::{Samples, ValueKind};
use super::serve::LARGEST_ANSWER;
use super::turns::Turns;
use crate::system::{Deadline, FileStamp};

/// The hidden command of the program that makes it a reader.
pub const READER_COMMAND: &str = "reader-process";

/// The program that is started as a reader: this one, by its path.
#[derive(Debug, Clone)]
pub struct ReaderProgram(Option<PathBuf>);

impl ReaderProgram {
    /// The program at `path` (`current_exe` in `main`), which knows the hidden command.
    pub fn new(path: impl Into<PathBuf>) -> Self {
        Self(Some(path.into()))
    }

    /// A thread of this process instead of a process of its own, for unit tests: no limits hold.
    #[cfg(test)]
    pub fn in_process() -> Self {
        Self(None)
    }
}

/// What a reader may use.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ReadLimits {
    /// How long one question may take; opening is one question.
    pub per_request: Duration,
    /// Bytes of address space.
    pub memory: u64,
}

impl Default for ReadLimits {
    /// Ten seconds a question and 2 GiB.
    fn default() -> Self {
        Self { per_request: Duration::from_secs(10), memory: 2 << 30 }
    }
}

/// A file that a reader process has open. Many threads may ask; their questions take turns.
///
/// A reader that dies or takes too long is killed, and the question gets an error that names the
/// file. The next question starts a new reader.
#[derive(Debug)]
pub struct FileReader {
    program: ReaderProgram,
    path: PathBuf,
    absolute: PathBuf,
    limits: ReadLimits,
    stamp: FileStamp,
    index: FileIndex,
    turns: Turns,
    link: Mutex<Option<Link>>,
}

impl FileReader {
    /// Starts a reader for the file at `path` and asks for its index. No values are read.
    pub fn open(
        program: &ReaderProgram,
        path: &Path,
        limits: &ReadLimits,
    ) -> Result<Self, ReadError> {
        let stamp = door::check(path)?;
        let absolute =
            std::path::absolute(path).map_err(|error| ReadError::of_system(path, &error))?;
        let started =
            Link::start(program, &absolute, limits).map_err(|fault| ReadError::new(path, fault));
        let mut link = started?;
        let index =
            ask_for_index(&mut link, limits).map_err(|fault| ReadError::new(path, fault))?;
        Ok(Self {
            program: program.clone(),
            path: path.to_owned(),
            absolute,
            limits: *limits,
            stamp,
            index,
            turns: Turns::default(),
            link: Mutex::new(Some(link)),
        })
    }

    /// Everything of the file but its values.
    pub fn index(&self) -> &FileIndex {
        &self.index
    }

    /// The file as it was named.
    pub fn path(&self) -> &Path {
        &self.path
    }

    /// The file's stamp when it was opened.
    pub fn stamp(&self) -> FileStamp {
        self.stamp
    }

    /// An error if the file is not the one that was opened, by device, inode, size and time.
    pub fn check_unchanged(&self) -> Result<(), ReadError> {
        match FileStamp::of(&self.absolute) {
            Ok(stamp) if stamp == self.stamp => Ok(()),
            Ok(_) => Err(self.error(ReadFault::Changed)),
            Err(error) => Err(ReadError::of_system(&self.path, &error)),
        }
    }

    /// Reads a block of a variable: `count` values along each dimension from `start`, row-major.
    pub fn read(
        &self,
        variable: &Variable,
        start: &[usize],
        count: &[usize],
    ) -> Result<Samples, ReadError> {
        self.read_in_turn(variable, start, count, false)
    }

    /// The same, before all questions that wait and are not urgent.
    pub fn read_urgently(
        &self,
        variable: &Variable,
        start: &[usize],
        count: &[usize],
    ) -> Result<Samples, ReadError> {
        self.read_in_turn(variable, start, count, true)
    }

    /// Reads all values of a variable, row-major.
    pub fn read_all(&self, variable: &Variable) -> Result<Samples, ReadError> {
        let lengths = self.index.lengths(variable);
        self.read(variable, &vec![0; lengths.len()], &lengths)
    }

    fn read_in_turn(
        &self,
        variable: &Variable,
        start: &[usize],
        count: &[usize],
        urgent: bool,
    ) -> Result<Samples, ReadError> {
        let what = format!("variable `{}`", crate::system::clean_text(&variable.path));
        let fits = self.fits(variable, start, count);
        let values = fits.map_err(|why| {
            self.error(ReadFault::BadRequest { what: what.clone(), why: why.to_owned() })
        })?;
        let request = Request::Read {
            path: variable.path.clone(),
            start: start.to_vec(),
            count: count.to_vec(),
        };
        let _turn = self.turns.take(urgent);
        // A link is taken out while it is used, so that a panic leaves none behind half-way.
        let mut place = self.link.lock().unwrap_or_else(PoisonError::into_inner);
        let mut link = match place.take() {
            Some(link) => link,
            None => self.start_again()?,
        };
        let samples = link
            .ask(&request, &what, &self.limits, |reply, input| {
                take_values(reply, input, variable.kind, values)
            })
            .map_err(|(fault, still_good)| (self.error(fault), still_good));
        match samples {
            Ok(samples) => {
                *place = Some(link);
                Ok(samples)
            }
            Err((error, still_good)) => {
                *place = Some(link).filter(|_| still_good);
                Err(error)
            }
        }
    }

    fn start_again(&self) -> Result<Link, ReadError> {
        self.check_unchanged()?;
        Link::start(&self.program, &self.absolute, &self.limits).map_err(|fault| self.error(fault))
    }

    /// The number of values in a block, if it lies inside the variable and fits into one answer.
    fn fits(
        &self,
        variable: &Variable,
        start: &[usize],
        count: &[usize],
    ) -> Result<usize, &'static str> {
        let lengths = self.index.lengths(variable);
        if start.len() != lengths.len() || count.len() != lengths.len() {
            return Err("the block has another number of dimensions");
        }
        let inside = |axis: usize| {
            start[axis].checked_add(count[axis]).is_some_and(|end| end <= lengths[axis])
        };
        if !(0..lengths.len()).all(inside) {
            return Err("the block reaches beyond the variable");
        }
        let size = variable.kind.size().unwrap_or(16);
        let values = count.iter().try_fold(1_usize, |product, &count| product.checked_mul(count));
        values
            .filter(|values| values.checked_mul(size).is_some_and(|bytes| bytes <= LARGEST_ANSWER))
            .ok_or("the block is too large to be read at once")
    }

    fn error(&self, fault: ReadFault) -> ReadError {
        ReadError::new(&self.path, fault)
    }
}

fn ask_for_index(link: &mut Link, limits: &ReadLimits) -> Result<FileIndex, ReadFault> {
    let index = link.ask(&Request::Index, "opening it", limits, |reply, _| match reply {
        Reply::Index(index) => match index.fault() {
            None => Ok(*index),
            Some(fault) => Err(io::Error::new(io::ErrorKind::InvalidData, fault)),
        },
        _ => Err(io::ErrorKind::InvalidData.into()),
    });
    index.map_err(|(fault, _)| fault)
}

fn take_values(
    reply: Reply,
    input: &mut TimedPipe<'_>,
    expected: ValueKind,
    values: usize,
) -> io::Result<Samples> {
    match reply {
        Reply::Values { kind, count } if kind == expected && count == values => {
            read_samples(input, kind, count)
        }
        Reply::Texts(texts) if expected == ValueKind::Text && texts.len() == values => {
            Ok(Samples::Text(texts))
        }
        _ => Err(io::Error::new(io::ErrorKind::InvalidData, "other values than those asked for")),
    }
}

/// A running reader and the pipes to it.
#[derive(Debug)]
struct Link {
    requests: PipeWriter,
    replies: PipeReader,
    child: Option<Child>,
}

impl Link {
    fn start(program: &ReaderProgram, path: &Path, limits: &ReadLimits) -> Result<Self, ReadFault> {
        Self::try_start(program, path, limits)
            .map_err(|error| ReadFault::NoReader(error.to_string()))
    }

    fn try_start(program: &ReaderProgram, path: &Path, limits: &ReadLimits) -> io::Result<Self> {
        let (questions, requests) = io::pipe()?;
        let (replies, answers) = io::pipe()?;
        // A larger pipe saves switches between the two processes; the default works as well.
        let _ = rustix::pipe::fcntl_setpipe_size(&replies, 1 << 20);
        let child = match &program.0 {
            Some(program) => Some(start_process(program, path, limits, questions, answers)?),
            None => {
                let path = path.to_owned();
                std::thread::spawn(move || super::serve(&path, questions, answers, || {}));
                None
            }
        };
        Ok(Self { requests, replies, child })
    }

    /// Asks one question. The error tells whether the reader is still good for the next one.
    fn ask<Answer>(
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
            Ok(Err(Reply::MissingFilter { filter })) => Err((
                ReadFault::MissingFilter { what, filter: crate::system::clean_text(&filter) },
                true,
            )),
            Ok(Err(Reply::Failed { reason })) => {
                Err((ReadFault::Library { what, reason: crate::system::clean_text(&reason) }, true))
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
        messages::send(&mut self.requests, request)?;
        self.requests.flush()?;
        let mut input = TimedPipe { pipe: &mut self.replies, deadline };
        match messages::receive::<Reply>(&mut input)? {
            refusal @ (Reply::Failed { .. } | Reply::MissingFilter { .. }) => Ok(Err(refusal)),
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

#[cfg(test)]
mod tests;
