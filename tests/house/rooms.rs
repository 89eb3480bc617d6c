//! The walls of the house.

use crate::source::{Source, read, sources};

/// Which room may use which, in the order of `lib.rs`. A room's head repeats its row.
const MAY_USE: &[(&str, &[&str])] = &[
    ("system", &[]),
    ("units", &[]),
    ("spectral", &["units"]),
    ("netcdf_files", &["system"]),
    ("granule", &["system", "units", "spectral", "netcdf_files"]),
    ("layers", &["system", "units", "spectral", "granule"]),
    ("forward", &["units", "spectral"]),
    ("screening", &["system", "units", "spectral", "granule", "layers", "forward"]),
    ("flags", &["system"]),
    ("export", &["system", "units", "spectral", "netcdf_files", "granule", "flags"]),
    ("synth", &["system", "units", "spectral", "netcdf_files", "forward"]),
    (
        "review",
        &[
            "system",
            "units",
            "spectral",
            "netcdf_files",
            "granule",
            "layers",
            "screening",
            "flags",
            "export",
        ],
    ),
    ("tray", &["system", "netcdf_files", "granule", "flags", "review"]),
    (
        "ui",
        &[
            "system",
            "units",
            "spectral",
            "netcdf_files",
            "granule",
            "layers",
            "screening",
            "flags",
            "review",
            "tray",
        ],
    ),
    (
        "cli",
        &[
            "system",
            "units",
            "spectral",
            "netcdf_files",
            "granule",
            "layers",
            "forward",
            "screening",
            "flags",
            "export",
            "synth",
            "review",
            "tray",
            "ui",
        ],
    ),
];

/// Words that may stand in the code of some rooms only, and why.
const BELONGS_TO: &[(&[&str], &[&str], &str)] = &[
    (
        &["netcdf::", "netcdf_sys", "hdf5_metno", "hdf5_sys"],
        &["netcdf_files"],
        "the C libraries are called in netcdf_files only",
    ),
    (&["libdeflater"], &["netcdf_files"], "bytes out of a file are inflated in netcdf_files only"),
    (&["ratatui", "crossterm"], &["ui"], "the terminal is drawn in ui only"),
    (
        &["println!", "eprintln!", "print!(", "eprint!(", "io::stdout()", "io::stderr()"],
        &["cli", "ui"],
        "printing is done in cli only (ui owns the terminal itself)",
    ),
    (
        &["SystemTime::now", "Timestamp::now", "Zoned::now", "env::var", "env::vars"],
        &["cli", "ui"],
        "wall clock and environment are passed in from cli and ui",
    ),
];

#[test]
fn the_table_has_every_room_in_the_order_of_lib_rs() {
    let rooms: Vec<String> = read("src/lib.rs")
        .lines()
        .filter_map(|line| line.strip_prefix("pub mod ")?.strip_suffix(';').map(String::from))
        .collect();
    let table: Vec<&str> = MAY_USE.iter().map(|(room, _)| *room).collect();
    assert_eq!(rooms, table);
}

#[test]
fn a_room_may_only_use_rooms_above_it() {
    for (place, (room, uses)) in MAY_USE.iter().enumerate() {
        for used in *uses {
            let above = MAY_USE[..place].iter().any(|(name, _)| name == used);
            assert!(above, "{room} would use {used}, which does not stand above it");
        }
    }
}

#[test]
fn rooms_use_only_what_the_table_allows() {
    let mut trespasses = Vec::new();
    for source in sources() {
        let Some(room) = source.room() else { continue };
        let allowed = allowed(room);
        for used in rooms_named(&source) {
            if used != room && !allowed.contains(&used) {
                trespasses.push(format!("src/{} uses {used}", source.path));
            }
        }
    }
    assert!(trespasses.is_empty(), "{}", trespasses.join("\n"));
}

#[test]
fn every_head_says_what_the_room_uses_and_what_it_never_does() {
    for (room, uses) in MAY_USE {
        let head = read(&format!("src/{room}/mod.rs"));
        assert!(head.contains("//! **Never** "), "{room}: the head has no **Never** line");
        let start = head.find("//! Uses: ").unwrap_or_else(|| panic!("{room}: no Uses line"));
        let line: String =
            head[start..].lines().take_while(|line| *line != "//!").collect::<Vec<_>>().join(" ");
        let named: Vec<&str> = MAY_USE
            .iter()
            .map(|(name, _)| *name)
            .filter(|name| line.contains(&format!("`{name}`")))
            .collect();
        if *room != "cli" {
            assert_eq!(named, *uses, "{room}: the head and the table differ");
        }
    }
}

#[test]
fn things_stay_in_the_rooms_they_belong_to() {
    let mut strays = Vec::new();
    for source in sources() {
        let Some(room) = source.room() else { continue };
        for (words, rooms, why) in BELONGS_TO {
            for word in *words {
                if source.code.contains(word) && !rooms.contains(&room) {
                    strays.push(format!("src/{}: {word} ({why})", source.path));
                }
            }
        }
    }
    assert!(strays.is_empty(), "{}", strays.join("\n"));
}

fn allowed(room: &str) -> &'static [&'static str] {
    MAY_USE
        .iter()
        .find(|(name, _)| *name == room)
        .map_or_else(|| panic!("src/{room} is not in the table"), |(_, uses)| uses)
}

/// Rooms that the code names as `crate::room`, also inside `use crate::{…}`.
fn rooms_named(source: &Source) -> Vec<&'static str> {
    MAY_USE
        .iter()
        .map(|(room, _)| *room)
        .filter(|room| {
            let path = format!("crate::{room}");
            let named = source.code.match_indices(&path).any(|(at, _)| {
                !source.code[at + path.len()..]
                    .starts_with(|c: char| c.is_alphanumeric() || c == '_')
            });
            named || grouped(&source.code).iter().any(|group| first_segments(group).contains(room))
        })
        .collect()
}

/// The insides of `use crate::{…};`.
fn grouped(code: &str) -> Vec<&str> {
    code.match_indices("use crate::{")
        .filter_map(|(at, head)| {
            let rest = &code[at + head.len()..];
            rest.find("};").map(|end| &rest[..end])
        })
        .collect()
}

/// First path segments of a use group, whatever is nested behind them.
fn first_segments(group: &str) -> Vec<&str> {
    let (mut depth, mut start, mut parts) = (0, 0, Vec::new());
    for (at, c) in group.char_indices() {
        match c {
            '{' => depth += 1,
            '}' => depth -= 1,
            ',' if depth == 0 => {
                parts.push(&group[start..at]);
                start = at + 1;
            }
            _ => {}
        }
    }
    parts.push(&group[start..]);
    parts
        .into_iter()
        .filter_map(|part| part.trim().split(|c: char| !(c.is_alphanumeric() || c == '_')).next())
        .collect()
}
