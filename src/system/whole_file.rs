//! Files that appear whole or not at all.

use std::collections::BTreeSet;
use std::fs::{File, Permissions};
use std::io;
use std::os::unix::fs::PermissionsExt;
use std::path::{Path, PathBuf};
use std::sync::{Mutex, PoisonError};

/// Files being written, under their temporary names.
static UNFINISHED: Mutex<BTreeSet<PathBuf>> = Mutex::new(BTreeSet::new());

/// Why a file was not written. Whatever stood at the target before stands there still.
#[derive(Debug, thiserror::Error)]
pub enum WriteError<E> {
    /// The folder does not let us make a file.
    #[error("cannot make a file in {}: {source}", folder.display())]
    Create {
        /// The folder of the target.
        folder: PathBuf,
        /// What the system said.
        source: io::Error,
    },
    /// The content could not be written.
    #[error("cannot write {}: {source}", target.display())]
    Content {
        /// The file that was to be written.
        target: PathBuf,
        /// What the writer said.
        source: E,
    },
    /// The content could not be written, and the file system has no space left.
    #[error(
        "cannot write {}: its file system is full ({free} bytes free); make room and run the command again",
        target.display()
    )]
    Full {
        /// The file that was to be written.
        target: PathBuf,
        /// Bytes that were free when the writing failed.
        free: u64,
        /// What the writer said.
        source: E,
    },
    /// Somebody else has put a file there meanwhile; it is left as it is.
    #[error("{} was made by somebody else meanwhile", target.display())]
    Taken {
        /// The file that was to be written.
        target: PathBuf,
    },
    /// The content was written, but could not be made permanent under its name.
    #[error("cannot put {} in its place: {source}", target.display())]
    Place {
        /// The file that was to be written.
        target: PathBuf,
        /// What the system said.
        source: io::Error,
    },
}

/// What is done with a file that stands at the target by the time the new one is there.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Placing {
    /// It is replaced.
    Over,
    /// It stays, and the new one is not placed.
    New,
}

/// Writes `target`, in the place of what stands there; see [`place_whole`].
///
/// # Errors
/// The file could not be written or put in its place.
pub fn write_whole<E>(
    target: &Path,
    write: impl FnOnce(&Path) -> Result<(), E>,
) -> Result<(), WriteError<E>> {
    place_whole(target, Placing::Over, write)
}

/// Removes the files that are just being written: for a program that is told to end at once.
pub fn remove_unfinished() {
    for path in std::mem::take(&mut *unfinished()) {
        // Nothing else can be done about one that stays.
        let _ = std::fs::remove_file(path);
    }
}

fn unfinished() -> std::sync::MutexGuard<'static, BTreeSet<PathBuf>> {
    // The set is whole after every change of it.
    UNFINISHED.lock().unwrap_or_else(PoisonError::into_inner)
}

/// Notes a temporary name for as long as it lives.
struct Noted(PathBuf);

impl Noted {
    fn new(path: &Path) -> Self {
        unfinished().insert(path.to_owned());
        Self(path.to_owned())
    }
}

impl Drop for Noted {
    fn drop(&mut self) {
        unfinished().remove(&self.0);
    }
}

/// Writes `target` through a temporary name in the same folder.
///
/// `write` gets the temporary path, where an empty file stands already; it writes and closes the
/// file. Then the file is synced, renamed over `target`, and the folder is synced. The mode is 0666
/// less the umask, so that a group's folder stays usable by the group. A failure leaves no file.
///
/// # Errors
/// The file could not be written or put in its place, or ([`Placing::New`]) one is there.
pub fn place_whole<E>(
    target: &Path,
    placing: Placing,
    write: impl FnOnce(&Path) -> Result<(), E>,
) -> Result<(), WriteError<E>> {
    let folder = folder_of(target);
    let temporary = tempfile::Builder::new()
        .prefix(".radsieve-")
        .suffix(".part")
        .permissions(Permissions::from_mode(0o666))
        .tempfile_in(folder)
        .map_err(|error| WriteError::Create { folder: folder.to_owned(), source: plain(error) })?;
    let _noted = Noted::new(temporary.path());
    write(temporary.path()).map_err(|source| content_error(target, folder, source))?;
    let place = |source| WriteError::Place { target: target.to_owned(), source };
    // The writer may have made the file anew, so it is opened by name to be synced.
    File::open(temporary.path()).and_then(|file| file.sync_all()).map_err(place)?;
    let placed = match placing {
        Placing::Over => temporary.persist(target),
        Placing::New => temporary.persist_noclobber(target),
    };
    placed.map_err(|error| match error.error.kind() {
        io::ErrorKind::AlreadyExists => WriteError::Taken { target: target.to_owned() },
        _ => place(error.error),
    })?;
    sync_folder(folder).map_err(place)
}

/// The system's own words, without the temporary name that nobody chose.
fn plain(error: io::Error) -> io::Error {
    let words = error.to_string();
    let plain = words.split(" at path ").next().unwrap_or_default();
    io::Error::new(error.kind(), plain)
}

fn folder_of(target: &Path) -> &Path {
    match target.parent() {
        Some(folder) if !folder.as_os_str().is_empty() => folder,
        _ => Path::new("."),
    }
}

/// Libraries call a full disk all sorts of things ("Permission denied" among them), so we look.
fn content_error<E>(target: &Path, folder: &Path, source: E) -> WriteError<E> {
    const AS_GOOD_AS_FULL: u64 = 64 * 1024;
    let target = target.to_owned();
    match rustix::fs::statvfs(folder).map(|state| state.f_bavail.saturating_mul(state.f_frsize)) {
        Ok(free) if free < AS_GOOD_AS_FULL => WriteError::Full { target, free, source },
        _ => WriteError::Content { target, source },
    }
}

/// Makes a folder and those above it that are missing, and waits until the disk has their names.
///
/// # Errors
/// What the system says.
pub fn make_folder(folder: &Path) -> io::Result<()> {
    let missing = folder.ancestors().take_while(|one| !one.as_os_str().is_empty() && !one.exists());
    let parents: Vec<&Path> = missing.map(folder_of).collect();
    std::fs::create_dir_all(folder)?;
    // A folder in which one may make but not look cannot be synced; the new ones are there all the same.
    let synced = |parent: &Path| match sync_folder(parent) {
        Err(error) if error.kind() == io::ErrorKind::PermissionDenied => Ok(()),
        result => result,
    };
    parents.into_iter().try_for_each(synced)
}

/// Waits until the disk has the names in `folder`: a new file is kept only when its name is.
pub fn sync_folder(folder: &Path) -> io::Result<()> {
    match File::open(folder)?.sync_all() {
        // Some network file systems cannot sync a folder; the file's own sync stands all the same.
        Err(error) if error.kind() == io::ErrorKind::InvalidInput => Ok(()),
        result => result,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn names(folder: &Path) -> Vec<String> {
        let entries = std::fs::read_dir(folder).unwrap();
        entries.map(|entry| entry.unwrap().file_name().into_string().unwrap()).collect()
    }

    #[test]
    fn the_file_appears_whole_and_alone() {
        let folder = tempfile::tempdir().unwrap();
        let target = folder.path().join("mask.nc");
        write_whole(&target, |path| std::fs::write(path, b"content")).unwrap();
        assert_eq!(std::fs::read(&target).unwrap(), b"content");
        assert_eq!(names(folder.path()), ["mask.nc"]);
    }

    #[test]
    fn a_new_file_leaves_what_somebody_put_there_meanwhile() {
        let folder = tempfile::tempdir().unwrap();
        let target = folder.path().join("mask.nc");
        let result = place_whole(&target, Placing::New, |path| {
            std::fs::write(&target, b"of somebody else").unwrap();
            std::fs::write(path, b"ours")
        });
        assert!(matches!(result, Err(WriteError::Taken { .. })), "{result:?}");
        assert_eq!(std::fs::read(&target).unwrap(), b"of somebody else");
        assert_eq!(names(folder.path()), ["mask.nc"]);
    }

    #[test]
    fn an_unfinished_file_is_known_until_it_is_done() {
        let folder = tempfile::tempdir().unwrap();
        let target = folder.path().join("mask.nc");
        let ours = |path: &PathBuf| path.starts_with(folder.path());
        write_whole(&target, |path| {
            assert!(unfinished().contains(path));
            std::fs::write(path, b"content")
        })
        .unwrap();
        assert!(!unfinished().iter().any(ours));
    }

    #[test]
    fn a_failure_leaves_what_was_there_and_nothing_else() {
        let folder = tempfile::tempdir().unwrap();
        let target = folder.path().join("mask.nc");
        std::fs::write(&target, b"before").unwrap();
        let result = write_whole(&target, |path| {
            std::fs::write(path, b"half").unwrap();
            Err::<(), _>(io::Error::other("the writer gave up"))
        });
        assert!(result.unwrap_err().to_string().contains("the writer gave up"));
        assert_eq!(std::fs::read(&target).unwrap(), b"before");
        assert_eq!(names(folder.path()), ["mask.nc"]);
    }

    #[test]
    fn a_folder_that_is_not_there_is_told_without_the_temporary_name() {
        let target = tempfile::tempdir().unwrap().path().join("gone/mask.nc");
        let error = write_whole(&target, |_| Ok::<(), io::Error>(())).unwrap_err().to_string();
        assert!(error.contains("gone") && !error.contains(".part"), "{error}");
    }

    #[test]
    fn the_mode_is_what_an_ordinary_new_file_has() {
        let folder = tempfile::tempdir().unwrap();
        let ordinary = folder.path().join("ordinary");
        let target = folder.path().join("target");
        std::fs::write(&ordinary, b"").unwrap();
        write_whole(&target, |path| std::fs::write(path, b"")).unwrap();
        let mode = |path: &Path| std::fs::metadata(path).unwrap().permissions().mode();
        assert_eq!(mode(&target), mode(&ordinary));
    }

    #[test]
    fn a_missing_folder_is_named() {
        let error = write_whole(Path::new("/no/such/folder/mask.nc"), |_| Ok::<(), io::Error>(()));
        assert!(error.unwrap_err().to_string().contains("/no/such/folder"));
    }
}
