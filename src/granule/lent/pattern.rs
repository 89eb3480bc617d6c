//! Which file lends to which granule: one for all, or one for each by its name.

use std::ffi::{OsStr, OsString};
use std::os::unix::ffi::{OsStrExt, OsStringExt};
use std::path::{Path, PathBuf};

/// What stands for the granule's name without its extension.
const STEM: &[u8] = b"{stem}";

/// A file that lends, or how the file for each granule is called.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct LenderPattern(PathBuf);

impl LenderPattern {
    /// From what the user wrote: a file, a folder, or a path with `{stem}` in it.
    pub fn new(path: impl Into<PathBuf>) -> Self {
        Self(path.into())
    }

    /// As it was written.
    pub fn path(&self) -> &Path {
        &self.0
    }

    /// Whether it names one file for all granules.
    pub fn is_one_file(&self) -> bool {
        !contains(self.0.as_os_str(), STEM) && !self.0.is_dir()
    }

    /// The file that lends to a granule; none where there is none for it. In a folder it is the one
    /// whose name begins with the granule's, up to an extension or a sign that is no letter or digit.
    ///
    /// # Errors
    /// In words: the folder cannot be listed, or several files in it may be meant.
    pub fn file_for(&self, granule: &Path) -> Result<Option<PathBuf>, String> {
        let stem = granule.file_stem().unwrap_or_default();
        if contains(self.0.as_os_str(), STEM) {
            let path = PathBuf::from(replaced(self.0.as_os_str(), STEM, stem.as_bytes()));
            return Ok(path.exists().then_some(path));
        }
        if !self.0.is_dir() {
            return Ok(Some(self.0.clone()));
        }
        let entries = std::fs::read_dir(&self.0).map_err(|error| error.to_string())?;
        let paths = entries.map(|entry| entry.map(|entry| entry.path()));
        let mut paths = paths.collect::<Result<Vec<_>, _>>().map_err(|error| error.to_string())?;
        paths.retain(|path| {
            let same = || path.canonicalize().ok() == granule.canonicalize().ok();
            begins_with(path, stem) && path.is_file() && !same()
        });
        // The order of a folder's listing is an accident.
        paths.sort();
        if let Some(exact) = paths.iter().find(|path| path.file_stem() == Some(stem)) {
            return Ok(Some(exact.clone()));
        }
        match paths.as_slice() {
            [] => Ok(None),
            [path] => Ok(Some(path.clone())),
            [first, second, ..] => {
                let name = |path: &Path| path.file_name().unwrap_or_default().display().to_string();
                Err(format!(
                    "{} and {} may both be meant; name one, as in {}/{{stem}}.aux.nc",
                    name(first),
                    name(second),
                    self.0.display()
                ))
            }
        }
    }
}

fn begins_with(path: &Path, stem: &OsStr) -> bool {
    let name = path.file_name().unwrap_or_default().as_bytes();
    let rest = name.strip_prefix(stem.as_bytes());
    rest.is_some_and(|rest| rest.first().is_none_or(|next| !next.is_ascii_alphanumeric()))
}

fn contains(text: &OsStr, part: &[u8]) -> bool {
    text.as_bytes().windows(part.len()).any(|window| window == part)
}

fn replaced(text: &OsStr, part: &[u8], by: &[u8]) -> OsString {
    let mut rest = text.as_bytes();
    let mut out = Vec::new();
    while let Some(at) = rest.windows(part.len()).position(|window| window == part) {
        out.extend_from_slice(&rest[..at]);
        out.extend_from_slice(by);
        rest = &rest[at + part.len()..];
    }
    out.extend_from_slice(rest);
    OsString::from_vec(out)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn folder(names: &[&str]) -> tempfile::TempDir {
        let folder = tempfile::tempdir().unwrap();
        for name in names {
            std::fs::write(folder.path().join(name), b"").unwrap();
        }
        folder
    }

    fn found(pattern: PathBuf, granule: &str) -> Result<Option<String>, String> {
        let file = LenderPattern::new(pattern).file_for(Path::new(granule))?;
        Ok(file.map(|file| file.file_name().unwrap().to_str().unwrap().to_owned()))
    }

    #[test]
    fn a_placeholder_stands_for_the_granules_name() {
        let folder = folder(&["lowen_001.aux.nc"]);
        let pattern = || folder.path().join("{stem}.aux.nc");
        assert_eq!(found(pattern(), "data/lowen_001.nc"), Ok(Some("lowen_001.aux.nc".into())));
        assert_eq!(found(pattern(), "data/lowen_002.nc"), Ok(None));
        assert!(!LenderPattern::new(pattern()).is_one_file());
    }

    #[test]
    fn in_a_folder_the_names_must_agree() {
        let folder =
            folder(&["lowen_001_sst.nc", "lowen_0012.nc", "lowen_002.nc", "lowen_002.x.nc"]);
        let path = || folder.path().to_owned();
        assert_eq!(found(path(), "lowen_001.nc"), Ok(Some("lowen_001_sst.nc".into())));
        assert_eq!(found(path(), "lowen_002.nc"), Ok(Some("lowen_002.nc".into())));
        assert_eq!(found(path(), "lowen_003.nc"), Ok(None));
        let unsure = found(path(), "lowen.nc").unwrap_err();
        assert!(unsure.contains("may both be meant"), "{unsure}");
    }

    #[test]
    fn one_file_is_for_all_granules() {
        assert_eq!(found("no/sst.nc".into(), "lowen_001.nc"), Ok(Some("sst.nc".into())));
        assert!(LenderPattern::new("no/sst.nc").is_one_file());
    }
}
