//! Who writes, and names of people and hosts made safe for file names.

use serde::{Deserialize, Serialize};

/// Who writes a ledger, and from where.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Author {
    /// The person's name as the system or the user gives it.
    pub person: String,
    /// The host.
    pub host: String,
    /// The process number on that host.
    pub process: u32,
}

/// The longest part that a name may take of a file name, which file systems limit to 255 bytes.
const LONGEST: usize = 40;

/// A name as part of a file name: letters, digits, `_`, `.` and `-` stay, anything else becomes
/// `_`. Where that changes the name, a short hash keeps different names apart.
pub fn file_name_part(name: &str) -> String {
    let plain = |c: char| if c.is_ascii_alphanumeric() || "_.-".contains(c) { c } else { '_' };
    let mut part: String = name.chars().take(LONGEST).map(plain).collect();
    // A leading dot hides a file, a leading dash looks like an option.
    if part.is_empty() || part.starts_with(['.', '-']) {
        part.insert(0, '_');
    }
    if part != name {
        part.push('~');
        part.push_str(&blake3::hash(name.as_bytes()).to_hex()[..6]);
    }
    part
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_become_safe_and_stay_apart() {
        assert_eq!(file_name_part("anna.b"), "anna.b");
        for name in ["../../etc", "", ".hidden", "-rf", "a/b", "tab\tname", &"x".repeat(300)] {
            let part = file_name_part(name);
            assert!(part.len() <= LONGEST + 8, "{part}");
            assert!(!part.contains('/') && !part.starts_with(['.', '-']), "{part}");
        }
        assert_ne!(file_name_part("Zoë"), file_name_part("Zoé"));
    }
}
