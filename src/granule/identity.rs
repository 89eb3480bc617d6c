//! What names a granule independently of its path: its content.

use std::io;
use std::path::Path;
use std::time::Duration;

use crate::system::PatientFile;

/// Size and content hash of a file.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Identity {
    /// Bytes.
    pub size: u64,
    /// BLAKE3 hash of the content, 64 hexadecimal digits.
    pub hash: String,
}

impl Identity {
    /// Reads the whole file, whose file system has `limit` for each part.
    ///
    /// # Errors
    /// As the system says; of the kind `TimedOut` where it did not answer.
    pub fn of(path: &Path, limit: Duration) -> io::Result<Self> {
        const BUFFER: usize = 1 << 20;
        let file = PatientFile::open(path, limit)?;
        let mut hasher = blake3::Hasher::new();
        let mut buffer = vec![0; BUFFER];
        loop {
            match file.read_at(&mut buffer, hasher.count())? {
                0 => break,
                read => hasher.update(&buffer[..read]),
            };
        }
        Ok(Self { size: hasher.count(), hash: hasher.finalize().to_hex().to_string() })
    }

    /// The first twelve digits of the hash: enough to tell files apart in names.
    pub fn short(&self) -> &str {
        self.hash.get(..12).unwrap_or(&self.hash)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    const LIMIT: Duration = Duration::from_secs(60);

    #[test]
    fn the_content_counts_and_the_path_does_not() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("a");
        std::fs::write(&path, b"abc").unwrap();
        let identity = Identity::of(&path, LIMIT).unwrap();
        // Source: the published BLAKE3 hash of the three bytes "abc".
        assert!(identity.hash.starts_with("6437b3ac38465133ffb63b75273a8db5"), "{}", identity.hash);
        assert_eq!((identity.size, identity.short()), (3, "6437b3ac3846"));
        let other = folder.path().join("b");
        std::fs::write(&other, b"abc").unwrap();
        assert_eq!(Identity::of(&other, LIMIT).unwrap(), identity);
    }
}
