//! What is looked at before a file is handed to the libraries.

use std::fs::{File, FileType, Metadata};
use std::io::{self, Read, Seek, SeekFrom};
use std::os::unix::ffi::OsStrExt;
use std::os::unix::fs::FileTypeExt;
use std::path::Path;
use std::time::Duration;

use super::read_error::{ReadError, ReadFault};
use crate::system::{FileStamp, open_without_waiting, within};

const HDF5: &[u8] = b"\x89HDF\r\n\x1a\n";
const CLASSIC: [&[u8]; 3] = [b"CDF\x01", b"CDF\x02", b"CDF\x05"];

/// HDF5 may begin behind a user's block of 512 bytes, or twice, four times … that.
const LAST_HDF5_START: u64 = 1 << 24;

/// Lets a file through that is one, is readable and begins like netCDF or HDF5.
///
/// Nothing here can wait for another process: pipes and devices are refused before they are opened,
/// and a file system that does not answer within `limit` is given up.
pub fn check(path: &Path, limit: Duration) -> Result<FileStamp, ReadError> {
    let owned = path.to_owned();
    within(limit, move || look_at(&owned)).unwrap_or_else(|| {
        let what = "opening it".to_owned();
        Err(ReadError::new(path, ReadFault::TimedOut { what, limit }))
    })
}

fn look_at(path: &Path) -> Result<FileStamp, ReadError> {
    let refuse = |fault| Err(ReadError::new(path, fault));
    if looks_like_address(path) {
        return refuse(ReadFault::Address);
    }
    let metadata = std::fs::metadata(path).map_err(|error| ReadError::of_system(path, &error))?;
    if let Some(what) = other_than_file(metadata.file_type()) {
        return refuse(ReadFault::NotAFile(what));
    }
    if metadata.len() == 0 {
        return refuse(ReadFault::Empty);
    }
    match begins_like_netcdf(path, &metadata) {
        Ok(None) => Ok(FileStamp::from(&metadata)),
        Ok(Some(beginning)) => refuse(ReadFault::OtherFormat(beginning)),
        Err(error) => Err(ReadError::of_system(path, &error)),
    }
}

/// The netCDF library takes `scheme://…` and `…#mode=…` as addresses of other stores.
fn looks_like_address(path: &Path) -> bool {
    let bytes = path.as_os_str().as_bytes();
    let has = |part: &[u8]| bytes.windows(part.len()).any(|window| window == part);
    has(b"://") || has(b"#mode=")
}

fn other_than_file(kind: FileType) -> Option<&'static str> {
    if kind.is_file() {
        None
    } else if kind.is_dir() {
        Some("a folder")
    } else if kind.is_fifo() {
        Some("a pipe")
    } else if kind.is_socket() {
        Some("a socket")
    } else {
        Some("a device")
    }
}

/// Nothing where the file begins as it should, else its first bytes in words.
fn begins_like_netcdf(path: &Path, metadata: &Metadata) -> io::Result<Option<String>> {
    let mut file = open_without_waiting(path)?;
    let beginning = bytes_at(&mut file, 0)?;
    if CLASSIC.iter().any(|magic| beginning.starts_with(magic)) {
        return Ok(None);
    }
    let mut start = 0;
    while start < metadata.len().min(LAST_HDF5_START) {
        if bytes_at(&mut file, start)? == HDF5 {
            return Ok(None);
        }
        start = if start == 0 { 512 } else { start * 2 };
    }
    Ok(Some(beginning.escape_ascii().to_string()))
}

fn bytes_at(file: &mut File, start: u64) -> io::Result<Vec<u8>> {
    file.seek(SeekFrom::Start(start))?;
    let mut bytes = Vec::with_capacity(HDF5.len());
    file.take(HDF5.len() as u64).read_to_end(&mut bytes)?;
    Ok(bytes)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn refused(path: &Path) -> ReadFault {
        look_at(path).unwrap_err().fault
    }

    #[test]
    fn what_is_no_file_is_named() {
        let folder = tempfile::tempdir().unwrap();
        assert!(matches!(refused(folder.path()), ReadFault::NotAFile("a folder")));
        assert!(matches!(refused(Path::new("/dev/null")), ReadFault::NotAFile("a device")));
        assert!(matches!(refused(Path::new("/no/such/file")), ReadFault::Unreadable(_)));
        let socket = folder.path().join("socket");
        let _listener = std::os::unix::net::UnixListener::bind(&socket).unwrap();
        assert!(matches!(refused(&socket), ReadFault::NotAFile("a socket")));
    }

    #[test]
    fn addresses_are_refused_even_where_a_file_has_such_a_name() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("file.nc#mode=zarr");
        std::fs::write(&path, HDF5).unwrap();
        assert!(matches!(refused(&path), ReadFault::Address));
        assert!(matches!(refused(Path::new("https://somewhere/file.nc")), ReadFault::Address));
    }

    #[test]
    fn the_first_bytes_decide() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("file");
        let mut with_user_block = vec![0; 1024];
        with_user_block.extend(HDF5);
        for good in [HDF5.to_vec(), b"CDF\x01rest".to_vec(), b"CDF\x05".to_vec(), with_user_block] {
            std::fs::write(&path, good).unwrap();
            assert!(check(&path, Duration::from_secs(60)).is_ok());
        }
        std::fs::write(&path, b"").unwrap();
        assert!(matches!(refused(&path), ReadFault::Empty));
        std::fs::write(&path, b"\x1b[2Jtext").unwrap();
        let ReadFault::OtherFormat(beginning) = refused(&path) else { panic!("not refused") };
        assert_eq!(beginning, "\\x1b[2Jtext");
    }
}
