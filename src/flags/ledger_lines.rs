//! The lines of a file, each of bounded length, the last one perhaps cut off.

use std::fs::File;
use std::io::{self, BufRead, BufReader, Read};

/// A decision about a million footprints, every other one, is about 7 MB.
const LONGEST_LINE: u64 = 64 << 20;

pub(super) struct Line<'a> {
    pub(super) number: u64,
    /// Without its line break; or why there is none.
    pub(super) text: Result<&'a [u8], String>,
    /// It has no line break: its writer was stopped.
    pub(super) torn: bool,
}

pub(super) struct Lines {
    input: BufReader<File>,
    buffer: Vec<u8>,
    number: u64,
}

impl Lines {
    pub(super) fn new(file: File) -> Self {
        Self { input: BufReader::new(file), buffer: Vec::new(), number: 0 }
    }

    pub(super) fn next(&mut self) -> io::Result<Option<Line<'_>>> {
        self.buffer.clear();
        self.number += 1;
        let number = self.number;
        let mut limited = (&mut self.input).take(LONGEST_LINE);
        if limited.read_until(b'\n', &mut self.buffer)? == 0 {
            return Ok(None);
        }
        if self.buffer.last() == Some(&b'\n') {
            self.buffer.pop();
            return Ok(Some(Line { number, text: Ok(&self.buffer), torn: false }));
        }
        if (self.buffer.len() as u64) < LONGEST_LINE {
            return Ok(Some(Line { number, text: Ok(&self.buffer), torn: true }));
        }
        let torn = self.skip_rest()?;
        Ok(Some(Line { number, text: Err("it is far too long".to_owned()), torn }))
    }

    /// Skips to the next line; whether there is none.
    fn skip_rest(&mut self) -> io::Result<bool> {
        loop {
            let (found, used) = match self.input.fill_buf()? {
                [] => return Ok(true),
                some => match some.iter().position(|&byte| byte == b'\n') {
                    Some(at) => (true, at + 1),
                    None => (false, some.len()),
                },
            };
            self.input.consume(used);
            if found {
                return Ok(false);
            }
        }
    }
}
