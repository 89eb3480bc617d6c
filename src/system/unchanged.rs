//! Whether a file is still the one that was looked at before.

use std::fs::Metadata;
use std::io;
use std::os::unix::fs::MetadataExt;
use std::path::Path;

use serde::{Deserialize, Serialize};

/// What tells two states of a file apart without reading it: device, inode, size, time of change.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
pub struct FileStamp {
    device: u64,
    inode: u64,
    size: u64,
    modified: (i64, i64),
}

impl FileStamp {
    /// The stamp of the file at `path`, symbolic links followed.
    pub fn of(path: &Path) -> io::Result<Self> {
        Ok(Self::from(&std::fs::metadata(path)?))
    }

    /// The file's size in bytes.
    pub fn size(&self) -> u64 {
        self.size
    }
}

impl From<&Metadata> for FileStamp {
    fn from(metadata: &Metadata) -> Self {
        Self {
            device: metadata.dev(),
            inode: metadata.ino(),
            size: metadata.size(),
            modified: (metadata.mtime(), metadata.mtime_nsec()),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_file_that_grows_has_another_stamp() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("file");
        std::fs::write(&path, b"one").unwrap();
        let before = FileStamp::of(&path).unwrap();
        assert_eq!(before, FileStamp::of(&path).unwrap());
        std::fs::write(&path, b"three").unwrap();
        assert_ne!(before, FileStamp::of(&path).unwrap());
    }
}
