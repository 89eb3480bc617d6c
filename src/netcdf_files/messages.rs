//! What a reader process and its parent say to each other.
//!
//! A frame is a length (four bytes, little-endian) and that many bytes of a message. Values of a
//! fixed size follow their message as plain bytes, in the machine's own order: both ends run on it.

use std::io::{self, Read, Write};

use serde::de::DeserializeOwned;
use serde::{Deserialize, Serialize};

use super::chunks::ChunkTable;
use super::index::FileIndex;
use super::samples::ValueKind;

/// The longest message taken, bytes. An index of 100,000 attributes stays well below.
pub const LONGEST_MESSAGE: usize = 64 << 20;

/// What the parent asks.
#[derive(Debug, Serialize, Deserialize)]
pub enum Request {
    /// Everything but the values.
    Index,
    /// A block of values.
    Read {
        /// The variable's path.
        path: String,
        /// First place along each dimension.
        start: Vec<usize>,
        /// How many places along each dimension.
        count: Vec<usize>,
    },
    /// Where the chunks of a variable lie.
    Chunks {
        /// The variable's path.
        path: String,
    },
}

/// What the reader answers.
#[derive(Debug, Serialize, Deserialize)]
pub enum Reply {
    /// Everything but the values.
    Index(Box<FileIndex>),
    /// Values of a fixed size follow as plain bytes.
    Values {
        /// Their type.
        kind: ValueKind,
        /// How many there are.
        count: usize,
    },
    /// Where the chunks of a variable lie.
    Chunks(Box<ChunkTable>),
    /// Strings.
    Texts(Vec<String>),
    /// The library refused.
    Failed {
        /// What it said.
        reason: String,
    },
    /// The values take more room than one answer has.
    TooLarge,
    /// The values need a filter that the program does not have.
    MissingFilter {
        /// The filter.
        filter: String,
    },
}

/// Sends a message as one frame; flushing is left to the caller. Of a message that is too long
/// (`FileTooLarge`) nothing is sent.
pub fn send(output: &mut impl Write, message: &impl Serialize) -> io::Result<()> {
    let bytes = postcard::to_stdvec(message).map_err(io::Error::other)?;
    let length = u32::try_from(bytes.len()).ok().filter(|_| bytes.len() <= LONGEST_MESSAGE);
    let length = length.ok_or(io::ErrorKind::FileTooLarge)?;
    output.write_all(&length.to_le_bytes())?;
    output.write_all(&bytes)
}

/// Takes one message; a length beyond the bound is an error before anything is allocated.
pub fn receive<Message: DeserializeOwned>(input: &mut impl Read) -> io::Result<Message> {
    let mut length = [0; 4];
    input.read_exact(&mut length)?;
    let length = u32::from_le_bytes(length) as usize;
    if length > LONGEST_MESSAGE {
        return Err(invalid(format!("a message of {length} bytes")));
    }
    let mut bytes = Vec::new();
    input.take(length as u64).read_to_end(&mut bytes)?;
    if bytes.len() < length {
        return Err(io::ErrorKind::UnexpectedEof.into());
    }
    postcard::from_bytes(&bytes).map_err(|error| invalid(error.to_string()))
}

fn invalid(what: String) -> io::Error {
    io::Error::new(io::ErrorKind::InvalidData, what)
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn a_message_comes_back() {
        let mut bytes = Vec::new();
        let request = Request::Read { path: "g/v".into(), start: vec![1], count: vec![2] };
        send(&mut bytes, &request).unwrap();
        let back: Request = receive(&mut bytes.as_slice()).unwrap();
        assert_eq!(format!("{back:?}"), format!("{request:?}"));
    }

    #[test]
    fn of_a_message_that_is_too_long_nothing_is_sent() {
        let mut bytes = Vec::new();
        let reply = Reply::Texts(vec!["x".repeat(LONGEST_MESSAGE)]);
        let error = send(&mut bytes, &reply).unwrap_err();
        assert_eq!((error.kind(), bytes.len()), (io::ErrorKind::FileTooLarge, 0));
    }

    #[test]
    fn a_monstrous_length_is_refused_unallocated() {
        let error = receive::<Reply>(&mut u32::MAX.to_le_bytes().as_slice()).unwrap_err();
        assert_eq!(error.kind(), io::ErrorKind::InvalidData);
    }

    proptest! {
        /// Whatever bytes come, the answer is a message or an error, and an index that is taken
        /// can be followed without leaving its lists.
        #[test]
        fn any_bytes_are_a_message_or_an_error(body in prop::collection::vec(any::<u8>(), 0..512)) {
            let mut bytes = (body.len() as u32).to_le_bytes().to_vec();
            bytes.extend(&body);
            if let Ok(Reply::Index(index)) = receive::<Reply>(&mut bytes.as_slice())
                && index.fault().is_none()
            {
                for variable in &index.variables {
                    prop_assert_eq!(index.lengths(variable).len(), variable.dimensions.len());
                }
            }
        }
    }
}
