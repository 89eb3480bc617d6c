//! What the reader process may do: read one file, in little memory, and nothing else.

use std::path::Path;

use landlock::{
    ABI, Access, AccessFs, AccessNet, PathBeneath, PathFd, Ruleset, RulesetAttr, RulesetCreatedAttr,
};
use rlimit::Resource;

/// Limits this process to reading `path` in `memory` bytes of address space.
///
/// Must run before other threads are started, which inherit the limits. Each limit is set as far as
/// the kernel has it: an old kernel has no Landlock, and the other limits hold there all the same.
pub fn confine(path: &Path, memory: u64) {
    // A limit that cannot be set (a hard limit already below) is no reason to leave a file unread.
    let _ = Resource::AS.set(memory, memory);
    let _ = Resource::CORE.set(0, 0);
    let _ = Resource::FSIZE.set(0, 0);
    let _ = one_file_only(path);
}

fn one_file_only(path: &Path) -> Result<(), landlock::RulesetError> {
    let newest = ABI::V6;
    let ruleset = Ruleset::default()
        .handle_access(AccessFs::from_all(newest))?
        .handle_access(AccessNet::from_all(newest))?
        .create()?;
    match PathFd::new(path) {
        Ok(file) => {
            ruleset.add_rule(PathBeneath::new(file, AccessFs::ReadFile))?.restrict_self()?
        }
        // The library will say what is wrong with the file.
        Err(_) => ruleset.restrict_self()?,
    };
    Ok(())
}
