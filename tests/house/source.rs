//! Reading the source tree.

use std::fs;
use std::path::{Path, PathBuf};

/// One source file: its path below `src/`, and its text without comments.
pub struct Source {
    pub path: String,
    pub code: String,
}

impl Source {
    /// The room that the file belongs to; `None` for `lib.rs` and `main.rs`.
    pub fn room(&self) -> Option<&str> {
        self.path.split_once('/').map(|(room, _)| room)
    }
}

/// The top of the repository.
pub fn top() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
}

/// Text of a file below the top of the repository.
pub fn read(path: &str) -> String {
    fs::read_to_string(top().join(path)).unwrap_or_else(|error| panic!("{path}: {error}"))
}

/// All Rust files below `src/`, sorted by path.
pub fn sources() -> Vec<Source> {
    let src = top().join("src");
    let mut paths = Vec::new();
    collect(&src, &mut paths);
    paths.sort();
    assert!(paths.len() > 20, "the walk over src/ found almost nothing");
    paths
        .into_iter()
        .map(|path| Source {
            code: without_comments(&fs::read_to_string(&path).unwrap()),
            path: path.strip_prefix(&src).unwrap().to_string_lossy().replace('\\', "/"),
        })
        .collect()
}

fn collect(folder: &Path, found: &mut Vec<PathBuf>) {
    for entry in fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            collect(&path, found);
        } else if path.extension().is_some_and(|extension| extension == "rs") {
            found.push(path);
        }
    }
}

/// Line comments and documentation may name anything; only code counts.
fn without_comments(text: &str) -> String {
    text.lines()
        .map(|line| match line.find("//") {
            Some(at) if !line[..at].contains('"') => &line[..at],
            _ => line,
        })
        .collect::<Vec<_>>()
        .join("\n")
}
