//! The repository around the code.

use std::fs;

use crate::source::{read, sources, top};

/// The top level, exactly; dotfiles and what git ignores apart.
const TOP: &[&str] = &[
    "Cargo.lock",
    "Cargo.toml",
    "DEVELOPERS.md",
    "LICENSE",
    "README.md",
    "benches",
    "docs",
    "sample_granules",
    "src",
    "tests",
];

/// Folders that builds and reviews make, all ignored by git.
const IGNORED: &[&str] = &["target", "radsieve-campaign", "proptest-regressions"];

#[test]
fn the_top_level_is_as_designed() {
    let mut found: Vec<String> = fs::read_dir(top())
        .unwrap()
        .map(|entry| entry.unwrap().file_name().to_string_lossy().into_owned())
        .filter(|name| !name.starts_with('.') && !IGNORED.contains(&name.as_str()))
        .collect();
    found.sort();
    assert_eq!(found, TOP);
    let ignored = read(".gitignore");
    for name in IGNORED {
        assert!(ignored.contains(&format!("/{name}\n")), "{name} is not ignored by git");
    }
}

#[test]
fn the_gate_runs_the_test_command_of_the_readme() {
    let command = ". .ci/setup && cargo test --release";
    assert!(read("README.md").lines().any(|line| line.trim() == command));
    assert!(read(".ci/run").lines().any(|line| line == command));
}

#[test]
fn every_dependency_has_its_reason_beside_it() {
    let manifest = read("Cargo.toml");
    let mut in_dependencies = false;
    let mut reason = false;
    for line in manifest.lines() {
        if line.starts_with('[') {
            in_dependencies = line.ends_with("dependencies]");
            reason = false;
        } else if in_dependencies && line.starts_with('#') {
            reason = true;
        } else if in_dependencies && !line.trim().is_empty() {
            assert!(reason, "no reason stands above: {line}");
        }
    }
}

#[test]
fn the_source_speaks_of_no_machine() {
    for source in sources() {
        for word in ["/work/", "/root/", "/home/"] {
            assert!(!source.code.contains(word), "src/{} names a path: {word}", source.path);
        }
    }
}

/// Every key cited as `[Author Year]` in a physics document is resolved in `docs/references.md`.
#[test]
fn cited_keys_are_resolved() {
    let references = read("docs/references.md");
    let mut cited = 0;
    for entry in fs::read_dir(top().join("docs")).unwrap() {
        let path = entry.unwrap().path();
        if path.extension().is_none_or(|extension| extension != "md") {
            continue;
        }
        let text = fs::read_to_string(&path).unwrap();
        for key in citation_keys(&text) {
            cited += 1;
            assert!(
                references.contains(&format!("**{key}**"))
                    || references.contains(&format!("[{key}]")),
                "{}: [{key}] is not in docs/references.md",
                path.display()
            );
        }
    }
    assert!(cited > 0, "no document cites anything");
}

/// Words in square brackets that end in a year.
fn citation_keys(text: &str) -> Vec<&str> {
    text.split('[')
        .skip(1)
        .filter_map(|part| part.split_once(']').map(|(key, _)| key))
        .filter(|key| {
            key.len() < 60
                && key.rsplit(' ').next().is_some_and(|year| {
                    let digits = year.trim_end_matches(char::is_alphabetic);
                    digits.len() == 4 && digits.chars().all(|c| c.is_ascii_digit())
                })
                && key.contains(' ')
        })
        .collect()
}
