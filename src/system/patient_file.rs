//! Files that are read with a time limit, whatever their file system does.

use std::fs::{File, OpenOptions};
use std::io::{self, IoSliceMut};
use std::os::unix::fs::{FileExt, OpenOptionsExt};
use std::path::Path;
use std::sync::Arc;
use std::time::Duration;

use rustix::io::{ReadWriteFlags, preadv2};

use super::errand::within;
use super::unchanged::FileStamp;

/// An open file. Whatever takes longer than the limit is an error of the kind `TimedOut`.
#[derive(Debug, Clone)]
pub struct PatientFile {
    file: Arc<File>,
    limit: Duration,
}

impl PatientFile {
    /// Opens a file for reading. Does not wait for a writer if it has been replaced by a pipe.
    pub fn open(path: &Path, limit: Duration) -> io::Result<Self> {
        let owned = path.to_owned();
        let file = in_time(limit, move || open_without_waiting(&owned))?;
        Ok(Self { file: Arc::new(file), limit })
    }

    /// The stamp of the open file as it is now; that of the file at `path`, symbolic links followed,
    /// where that is another one or has changed since.
    ///
    /// # Errors
    /// There is no file any more at `path`, or the file system does not answer.
    pub fn stamp_if_still_at(&self, path: &Path) -> io::Result<FileStamp> {
        let (file, path) = (Arc::clone(&self.file), path.to_owned());
        in_time(self.limit, move || {
            let open = FileStamp::from(&file.metadata()?);
            let there = FileStamp::of(&path)?;
            Ok(if there == open { open } else { there })
        })
    }

    /// Fills `bytes` from the place `at` on.
    pub fn read_exact_at(&self, bytes: &mut Vec<u8>, at: u64) -> io::Result<()> {
        match self.read_at(bytes, at)? == bytes.len() {
            true => Ok(()),
            false => Err(io::ErrorKind::UnexpectedEof.into()),
        }
    }

    /// Fills `bytes` from the place `at` on as far as the file goes; tells how many there were.
    pub fn read_at(&self, bytes: &mut Vec<u8>, at: u64) -> io::Result<usize> {
        let here = self.read_at_once(bytes, at);
        if here == bytes.len() {
            return Ok(here);
        }
        let (file, mut rest) = (Arc::clone(&self.file), std::mem::take(bytes));
        let (rest, read) = in_time(self.limit, move || {
            let read = read_rest(&file, &mut rest, here, at);
            Ok((rest, read))
        })?;
        *bytes = rest;
        read
    }

    /// Reads what is in memory already, which cannot hang and needs no other thread; how much that
    /// was. Where the kernel or the file system cannot tell, it is nothing.
    fn read_at_once(&self, bytes: &mut [u8], at: u64) -> usize {
        let mut here = 0;
        while here < bytes.len() {
            let part = &mut [IoSliceMut::new(&mut bytes[here..])];
            match preadv2(&*self.file, part, at + here as u64, ReadWriteFlags::NOWAIT) {
                Ok(0) | Err(_) => break,
                Ok(read) => here += read,
            }
        }
        here
    }
}

/// The stamp of the file at a path, symbolic links followed.
pub fn stamp_in_time(path: &Path, limit: Duration) -> io::Result<FileStamp> {
    let path = path.to_owned();
    in_time(limit, move || FileStamp::of(&path))
}

fn in_time<Done: Send + 'static>(
    limit: Duration,
    work: impl FnOnce() -> io::Result<Done> + Send + 'static,
) -> io::Result<Done> {
    within(limit, work).unwrap_or_else(|| Err(io::ErrorKind::TimedOut.into()))
}

fn read_rest(file: &File, bytes: &mut [u8], mut here: usize, at: u64) -> io::Result<usize> {
    while here < bytes.len() {
        match file.read_at(&mut bytes[here..], at + here as u64) {
            Ok(0) => break,
            Ok(read) => here += read,
            Err(error) if error.kind() == io::ErrorKind::Interrupted => {}
            Err(error) => return Err(error),
        }
    }
    Ok(here)
}

/// Opens a file for reading without waiting, for the case that it is a pipe.
pub fn open_without_waiting(path: &Path) -> io::Result<File> {
    let wait_for_nobody = rustix::fs::OFlags::NONBLOCK.bits();
    let flags = i32::from_ne_bytes(wait_for_nobody.to_ne_bytes());
    OpenOptions::new().read(true).custom_flags(flags).open(path)
}

#[cfg(test)]
mod tests {
    use super::*;

    const LONG: Duration = Duration::from_secs(60);

    #[test]
    fn bytes_come_from_their_place_and_end_with_the_file() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("file");
        let content: Vec<u8> = (0..200_000_u32).map(|n| (n % 251) as u8).collect();
        std::fs::write(&path, &content).unwrap();
        let file = PatientFile::open(&path, LONG).unwrap();
        let mut bytes = vec![0; 1000];
        file.read_exact_at(&mut bytes, 70_000).unwrap();
        assert_eq!(bytes, content[70_000..71_000]);
        assert_eq!(file.read_at(&mut bytes, 199_900).unwrap(), 100);
        assert_eq!((bytes.len(), &bytes[..100]), (1000, &content[199_900..]));
        let cut = file.read_exact_at(&mut bytes, 199_900).unwrap_err();
        assert_eq!(cut.kind(), io::ErrorKind::UnexpectedEof);
        let stamp = file.stamp_if_still_at(&path).unwrap();
        assert_eq!(stamp, stamp_in_time(&path, LONG).unwrap());
        std::fs::rename(&path, folder.path().join("moved")).unwrap();
        assert!(file.stamp_if_still_at(&path).is_err());
        std::fs::write(&path, b"other").unwrap();
        assert_ne!(file.stamp_if_still_at(&path).unwrap(), stamp);
    }

    #[test]
    fn what_the_system_cannot_read_at_once_is_read_all_the_same() {
        // The kernel makes up what such files hold, and has no page of it in memory.
        let file = PatientFile::open(Path::new("/proc/self/status"), LONG).unwrap();
        let mut bytes = vec![0; 5];
        file.read_exact_at(&mut bytes, 0).unwrap();
        assert_eq!(&bytes, b"Name:");
    }

    #[test]
    fn what_takes_too_long_is_named_so() {
        let hangs = || -> io::Result<()> { loop_until_given_up() };
        let error = in_time(Duration::from_millis(1), hangs).unwrap_err();
        assert_eq!(error.kind(), io::ErrorKind::TimedOut);
    }

    /// Stands for a call into a file system that does not answer.
    fn loop_until_given_up() -> io::Result<()> {
        std::thread::sleep(Duration::from_secs(2));
        Ok(())
    }

    #[test]
    fn a_pipe_is_opened_without_a_writer_and_a_folder_is_not_read() {
        let folder = tempfile::tempdir().unwrap();
        let file = PatientFile::open(folder.path(), LONG).unwrap();
        assert!(file.read_exact_at(&mut vec![0; 4], 0).is_err());
        assert!(PatientFile::open(&folder.path().join("none"), LONG).is_err());
    }
}
