//! Natural order of paths: `g2` before `g10`.

use std::os::unix::ffi::OsStrExt;
use std::path::{Path, PathBuf};

/// Numbers inside of names count as numbers.
pub fn sort_naturally(paths: &mut [PathBuf]) {
    paths.sort_by_cached_key(|path| (natural_key(path), path.clone()));
}

#[derive(Debug, PartialEq, Eq, PartialOrd, Ord)]
enum Part {
    /// Digits without leading zeros; a longer number is a larger one.
    Number(usize, Vec<u8>),
    Text(Vec<u8>),
}

fn natural_key(path: &Path) -> Vec<Part> {
    let bytes = path.as_os_str().as_bytes();
    let runs = bytes.chunk_by(|one, next| one.is_ascii_digit() == next.is_ascii_digit());
    runs.map(|run| match run.first().is_some_and(u8::is_ascii_digit) {
        true => {
            let zeros = run.iter().take_while(|&&digit| digit == b'0').count();
            Part::Number(run.len() - zeros, run[zeros..].to_vec())
        }
        false => Part::Text(run.to_vec()),
    })
    .collect()
}
