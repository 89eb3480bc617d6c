//! The reader's side: answers questions about one file until nobody asks any more.

use std::io::{ErrorKind, Read, Write};
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::path::Path;
use std::sync::mpsc;

use super::library_file::{LibraryFile, Refusal};
use super::messages::{self, LONGEST_MESSAGE, Reply, Request};
use super::samples::ValueKind;

/// The most bytes of values in one answer.
pub const LARGEST_ANSWER: usize = 256 << 20;

/// Answers requests from `input` on `output` until `input` ends.
///
/// `hung_up` is called as soon as `input` ends, from another thread than the one that works, so that
/// a process stuck inside the libraries can still end itself when its parent is gone.
pub fn serve(
    path: &Path,
    mut input: impl Read + Send + 'static,
    mut output: impl Write,
    hung_up: impl FnOnce() + Send + 'static,
) {
    let (questions, asked) = mpsc::channel();
    std::thread::spawn(move || {
        while let Ok(request) = messages::receive::<Request>(&mut input) {
            if questions.send(request).is_err() {
                return;
            }
        }
        hung_up();
    });
    let mut desk = Desk { path, file: None, bytes: Vec::new() };
    for request in asked {
        if desk.answer(request, &mut output).and_then(|()| output.flush()).is_err() {
            // Nobody listens any more.
            return;
        }
    }
}

struct Desk<'a> {
    path: &'a Path,
    file: Option<LibraryFile>,
    bytes: Vec<u8>,
}

impl Desk<'_> {
    fn answer(&mut self, request: Request, output: &mut impl Write) -> std::io::Result<()> {
        let reply = catch_unwind(AssertUnwindSafe(|| self.work_out(&request)))
            .unwrap_or_else(|_| Err("the library stumbled over it".into()))
            .unwrap_or_else(|reason| self.refusal(&request, reason));
        match messages::send(output, &reply) {
            Err(error) if error.kind() == ErrorKind::FileTooLarge => {
                return messages::send(output, &Reply::TooLarge);
            }
            sent => sent?,
        }
        match reply {
            Reply::Values { .. } => output.write_all(&self.bytes),
            _ => Ok(()),
        }
    }

    fn work_out(&mut self, request: &Request) -> Result<Reply, Refusal> {
        let file = match self.file.take() {
            Some(file) => file,
            None => LibraryFile::open(self.path)?,
        };
        let file = self.file.insert(file);
        match request {
            Request::Index => Ok(Reply::Index(Box::new(file.index()?))),
            Request::Read { path, start, count } => {
                if file.kind(path)? == ValueKind::Text {
                    let texts = file.read_texts(path, start, count, LONGEST_MESSAGE)?;
                    return Ok(texts.map_or(Reply::TooLarge, Reply::Texts));
                }
                let kind = file.read_values(path, start, count, &mut self.bytes)?;
                let size = kind.size().unwrap_or(1);
                Ok(Reply::Values { kind, count: self.bytes.len() / size })
            }
            Request::Chunks { path } => Ok(Reply::Chunks(Box::new(file.chunks(path)?))),
        }
    }

    /// A refusal, or the missing filter behind it.
    fn refusal(&self, request: &Request, reason: Refusal) -> Reply {
        let missing = match (request, &self.file) {
            (Request::Read { path, .. }, Some(file)) => {
                catch_unwind(AssertUnwindSafe(|| file.missing_filter(path))).ok().flatten()
            }
            _ => None,
        };
        match missing {
            Some(filter) => Reply::MissingFilter { filter },
            None => Reply::Failed { reason },
        }
    }
}
