//! How much memory this process may still take.

use std::fs::read_to_string;
use std::path::{Path, PathBuf};

/// Bytes of memory that can still be had: what the machine, the process's control groups and its own
/// limit of address space leave, whichever is least. None where none of them tells.
pub fn free_memory() -> Option<u64> {
    let groups = read_to_string("/proc/self/cgroup").unwrap_or_default();
    let in_groups = group_folders(Path::new("/sys/fs/cgroup"), &groups);
    let left = in_groups.iter().filter_map(|(folder, files)| left_in_group(folder, files));
    let free = kilobytes("/proc/meminfo", "MemAvailable:");
    left.chain(free).chain(left_of_address_space()).min()
}

/// The names of a control group's files: its limit, what it uses, and the entry of its statistics for
/// pages of files that are given back when they are needed.
type GroupFiles = [&'static str; 3];

const SECOND_VERSION: GroupFiles = ["memory.max", "memory.current", "inactive_file "];
const FIRST_VERSION: GroupFiles =
    ["memory.limit_in_bytes", "memory.usage_in_bytes", "total_inactive_file "];

/// The folders of the control groups that bound the process's memory, from the innermost outwards;
/// `groups` is what `/proc/self/cgroup` says (cgroups(7)).
fn group_folders(root: &Path, groups: &str) -> Vec<(PathBuf, GroupFiles)> {
    let mut folders = Vec::new();
    for line in groups.lines() {
        let mut parts = line.splitn(3, ':').skip(1);
        let (Some(controllers), Some(group)) = (parts.next(), parts.next()) else { continue };
        let (root, files) = match controllers {
            "" => (root.to_owned(), SECOND_VERSION),
            _ if controllers.split(',').any(|name| name == "memory") => {
                (root.join("memory"), FIRST_VERSION)
            }
            _ => continue,
        };
        // Inside a container the group's own folder may stand where the root is looked for.
        let inside = Path::new(group.trim_start_matches('/'));
        folders.extend(inside.ancestors().map(|part| (root.join(part), files)));
    }
    folders
}

fn left_in_group(folder: &Path, [limit, usage, given_back]: &GroupFiles) -> Option<u64> {
    let number = |name: &str| read_to_string(folder.join(name)).ok()?.trim().parse::<u64>().ok();
    let limit = number(limit)?;
    let statistics = read_to_string(folder.join("memory.stat")).unwrap_or_default();
    let given_back =
        statistics.lines().find_map(|line| line.strip_prefix(given_back)?.parse().ok());
    let used = number(usage)?.saturating_sub(given_back.unwrap_or(0));
    Some(limit.saturating_sub(used))
}

/// What `ulimit -v` leaves.
fn left_of_address_space() -> Option<u64> {
    let limit = rustix::process::getrlimit(rustix::process::Resource::As).current?;
    Some(limit.saturating_sub(kilobytes("/proc/self/status", "VmSize:")?))
}

/// An entry of one of the files of proc(5) that count in units of 1024 bytes; in bytes.
fn kilobytes(file: &str, entry: &str) -> Option<u64> {
    let text = read_to_string(file).ok()?;
    let number = text.lines().find_map(|line| line.strip_prefix(entry))?;
    number.trim().trim_end_matches(" kB").parse::<u64>().ok()?.checked_mul(1024)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn this_machine_tells() {
        assert!(free_memory().is_some());
    }

    #[test]
    fn groups_of_both_versions_are_found_with_those_around_them() {
        let folders = |groups| {
            let folders = group_folders(Path::new("/g"), groups).into_iter();
            folders.map(|(folder, _)| folder.to_string_lossy().into_owned()).collect::<Vec<_>>()
        };
        assert_eq!(folders("0::/user/job_7\n"), ["/g/user/job_7", "/g/user", "/g/"]);
        assert_eq!(folders("5:cpu:/x\n4:memory:/job\n"), ["/g/memory/job", "/g/memory/"]);
        assert_eq!(folders("nonsense"), Vec::<String>::new());
    }

    #[test]
    fn a_group_leaves_its_limit_less_what_is_not_given_back() {
        let folder = tempfile::tempdir().unwrap();
        let write =
            |name: &str, text: &str| std::fs::write(folder.path().join(name), text).unwrap();
        assert_eq!(left_in_group(folder.path(), &SECOND_VERSION), None);
        write("memory.max", "1000\n");
        write("memory.current", "700\n");
        write("memory.stat", "anon 300\ninactive_file 400\n");
        assert_eq!(left_in_group(folder.path(), &SECOND_VERSION), Some(700));
        write("memory.max", "max\n");
        assert_eq!(left_in_group(folder.path(), &SECOND_VERSION), None);
    }
}
