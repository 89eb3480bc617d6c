//! From a path on the command line to files: folders and globs.

use std::ffi::OsStr;
use std::os::unix::ffi::OsStrExt;
use std::path::{Path, PathBuf};

use anyhow::Context;

use super::exit::UsageError;
use super::natural_order::sort_naturally;
use crate::system::clean_text;

/// Endings of the files that are taken out of a folder.
const ENDINGS: [&str; 5] = ["nc", "nc4", "cdf", "h5", "hdf5"];

/// Adds the files that a path stands for: itself, those of a folder, those that a glob matches.
///
/// # Errors
/// A glob makes no sense or matches nothing, a folder holds no such files or cannot be listed.
pub fn expand(path: &Path, files: &mut Vec<PathBuf>) -> anyhow::Result<()> {
    if path.is_dir() {
        let found = files_in(path)?;
        if found.is_empty() {
            let endings = ENDINGS.join(", .");
            let shown = clean_text(&path.to_string_lossy());
            return Err(UsageError(format!("{shown} holds no .{endings} files")).into());
        }
        files.extend(found);
    } else if path.exists() || !has_wildcard(path) {
        files.push(path.to_owned());
    } else {
        files.extend(matches_of(path)?);
    }
    Ok(())
}

fn has_wildcard(path: &Path) -> bool {
    path.as_os_str().as_bytes().iter().any(|byte| b"*?[{".contains(byte))
}

/// The files right in a folder; folders inside of it are not entered, hidden files are left out.
fn files_in(folder: &Path) -> anyhow::Result<Vec<PathBuf>> {
    let entries =
        std::fs::read_dir(folder).with_context(|| format!("cannot list {}", folder.display()))?;
    let mut found = Vec::new();
    for entry in entries {
        let path = entry.with_context(|| format!("cannot list {}", folder.display()))?.path();
        let ending = path.extension().map(OsStr::to_ascii_lowercase);
        let wanted = ending.is_some_and(|ending| ENDINGS.iter().any(|known| ending == *known));
        let hidden = path.file_name().is_some_and(|name| name.as_bytes().starts_with(b"."));
        // A link to nowhere is left for the reader to name: a granule that is missing must not pass
        // unseen.
        if wanted && !hidden && !path.is_dir() {
            found.push(path);
        }
    }
    sort_naturally(&mut found);
    Ok(found)
}

/// The files that a glob matches; it is walked from its last folder that is there by its name. Hidden
/// files are matched by parts with a leading dot only, as by shells.
fn matches_of(pattern: &Path) -> anyhow::Result<Vec<PathBuf>> {
    let mut root = PathBuf::new();
    let mut rest = PathBuf::new();
    // Components leave out `//` and `/./`.
    for part in pattern.components() {
        let is_plain = !has_wildcard(part.as_ref()) || root.join(part).is_dir();
        if rest.as_os_str().is_empty() && is_plain { root.push(part) } else { rest.push(part) }
    }
    let text = rest.to_string_lossy();
    let shown = || clean_text(&pattern.to_string_lossy());
    let glob = globset::GlobBuilder::new(&text)
        .literal_separator(true)
        .build()
        .map_err(|error| UsageError(clean_text(&format!("{text}: {error}"))))?;
    let matcher = glob.compile_matcher();
    // `**` may go as deep as it likes, other globs only as deep as they are long.
    let depth = if text.contains("**") { usize::MAX } else { rest.components().count() };
    let is_hidden = |part: &OsStr| part.as_bytes().starts_with(b".");
    let wants_hidden = rest.components().any(|part| is_hidden(part.as_ref()));
    let in_here = root.as_os_str().is_empty();
    let walk_root = if in_here { Path::new(".") } else { root.as_path() };
    let mut found = Vec::new();
    let walk = walkdir::WalkDir::new(walk_root).follow_links(true).max_depth(depth).into_iter();
    for entry in walk
        .filter_entry(|entry| entry.depth() == 0 || wants_hidden || !is_hidden(entry.file_name()))
    {
        let (path, is_file) = match &entry {
            Ok(entry) => (entry.path(), entry.file_type().is_file()),
            // A link to nowhere is left for the reader to name; a folder that cannot be looked into
            // may hold granules, so it is told.
            Err(error) => match error.path() {
                Some(path) if path.is_symlink() && !path.exists() => (path, true),
                _ if error.depth() == 0 => continue,
                _ => {
                    say!("radsieve: {}: {}", shown(), clean_text(&error.to_string()));
                    continue;
                }
            },
        };
        let below = path.strip_prefix(walk_root).unwrap_or(path);
        if is_file && matcher.is_match(below) {
            found.push(root.join(below));
        }
    }
    if found.is_empty() {
        return Err(UsageError(format!("{} matches no file", shown())).into());
    }
    sort_naturally(&mut found);
    Ok(found)
}
