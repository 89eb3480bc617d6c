//! Reading from a pipe with a deadline.

use std::io::{self, PipeReader, Read};

use rustix::event::{PollFd, PollFlags, Timespec, poll};
use rustix::io::Errno;

use super::samples::{Samples, ValueKind};
use crate::system::Deadline;

/// The pipe from a reader; every read ends by the deadline, with `TimedOut` if nothing has come.
pub struct TimedPipe<'a> {
    /// The reading end.
    pub pipe: &'a mut PipeReader,
    /// When waiting ends.
    pub deadline: Deadline,
}

impl Read for TimedPipe<'_> {
    fn read(&mut self, bytes: &mut [u8]) -> io::Result<usize> {
        wait_for_bytes(self.pipe, &self.deadline)?;
        self.pipe.read(bytes)
    }
}

fn wait_for_bytes(pipe: &PipeReader, deadline: &Deadline) -> io::Result<()> {
    loop {
        let left = Timespec::try_from(deadline.left()).map_err(io::Error::other)?;
        match poll(&mut [PollFd::new(pipe, PollFlags::IN)], Some(&left)) {
            Ok(0) => return Err(io::ErrorKind::TimedOut.into()),
            Ok(_) => return Ok(()),
            Err(Errno::INTR) => {}
            Err(error) => return Err(error.into()),
        }
    }
}

/// Takes `count` values of a fixed size in the machine's byte order.
pub fn read_samples(input: &mut impl Read, kind: ValueKind, count: usize) -> io::Result<Samples> {
    macro_rules! by_kind {
        ($($kind:ident: $number:ty),*) => {
            match kind {
                $(ValueKind::$kind => {
                    read_numbers(input, count, <$number>::from_ne_bytes).map(Samples::$kind)
                })*
                ValueKind::Character => {
                    read_numbers(input, count, u8::from_ne_bytes).map(Samples::U8)
                }
                ValueKind::Text | ValueKind::Other => Err(io::ErrorKind::InvalidData.into()),
            }
        };
    }
    by_kind!(I8: i8, U8: u8, I16: i16, U16: u16, I32: i32, U32: u32, I64: i64, U64: u64,
             F32: f32, F64: f64)
}

/// Bytes pass through a buffer that stays in the processor's cache.
const BUFFER: usize = 256 << 10;

fn read_numbers<Number, const SIZE: usize>(
    input: &mut impl Read,
    count: usize,
    decode: fn([u8; SIZE]) -> Number,
) -> io::Result<Vec<Number>> {
    let mut numbers = Vec::with_capacity(count);
    let mut buffer = vec![0; BUFFER.min(count * SIZE)];
    while numbers.len() < count {
        let bytes = ((count - numbers.len()) * SIZE).min(buffer.len());
        input.read_exact(&mut buffer[..bytes])?;
        let (whole, _) = buffer[..bytes].as_chunks::<SIZE>();
        numbers.extend(whole.iter().map(|&bytes| decode(bytes)));
    }
    Ok(numbers)
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::io::Write;
    use std::time::Duration;

    #[test]
    fn a_silent_pipe_times_out_and_a_closed_one_ends() {
        let (mut reader, writer) = io::pipe().unwrap();
        let mut timed = TimedPipe { pipe: &mut reader, deadline: Deadline::after(Duration::ZERO) };
        assert_eq!(timed.read(&mut [0]).unwrap_err().kind(), io::ErrorKind::TimedOut);
        drop(writer);
        timed.deadline = Deadline::after(Duration::from_secs(10));
        assert_eq!(timed.read(&mut [0]).unwrap(), 0);
    }

    #[test]
    fn numbers_larger_than_the_buffer_come_through() {
        let numbers: Vec<u32> = (0..200_000).collect();
        let bytes: Vec<u8> = numbers.iter().flat_map(|number| number.to_ne_bytes()).collect();
        let samples = read_samples(&mut bytes.as_slice(), ValueKind::U32, numbers.len()).unwrap();
        assert_eq!(samples, Samples::U32(numbers));
        assert!(read_samples(&mut [0_u8; 3].as_slice(), ValueKind::F32, 1).is_err());
    }

    #[test]
    fn a_slow_writer_is_waited_for() {
        let (mut reader, mut writer) = io::pipe().unwrap();
        let sender = std::thread::spawn(move || {
            for byte in [1, 2, 3] {
                std::thread::yield_now();
                writer.write_all(&[byte]).unwrap();
            }
        });
        let deadline = Deadline::after(Duration::from_secs(60));
        let mut bytes = [0; 3];
        TimedPipe { pipe: &mut reader, deadline }.read_exact(&mut bytes).unwrap();
        assert_eq!(bytes, [1, 2, 3]);
        sender.join().unwrap();
    }
}
