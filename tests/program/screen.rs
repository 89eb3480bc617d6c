//! `screen` and `rules` from outside: decisions, masks, evidence, mistakes.

use std::collections::BTreeMap;
use std::path::{Path, PathBuf};

use assert_cmd::Command;
use radsieve::netcdf_files::{FileReader, ReadLimits, ReaderProgram, Samples};
use serde_json::Value;

use crate::plain_granule::{PlainGranule, temperature};
use crate::plain_rules::plain_rules;

fn radsieve(folder: &Path, arguments: &[&str]) -> Command {
    let mut command = Command::cargo_bin("radsieve").unwrap();
    command.env_clear().current_dir(folder).args(arguments);
    command.env("RADSIEVE_PERSON", "ada").env("RADSIEVE_NOW", "2026-03-01T12:00:00Z");
    command
}

fn output(folder: &Path, arguments: &[&str], code: i32) -> (String, String) {
    let result = radsieve(folder, arguments).output().unwrap();
    let text = |bytes: Vec<u8>| String::from_utf8(bytes).unwrap();
    let (stdout, stderr) = (text(result.stdout), text(result.stderr));
    assert_eq!(result.status.code(), Some(code), "{arguments:?}\n{stdout}\n{stderr}");
    (stdout, stderr)
}

fn json(folder: &Path, arguments: &[&str]) -> Value {
    serde_json::from_str(&output(folder, arguments, 0).0).unwrap()
}

/// Colder than 220 K is cloudy.
fn rules() -> String {
    plain_rules(220.1, 2.0)
}

fn plain(folder: &Path) {
    PlainGranule::new().write(&folder.join("plain.nc"));
    std::fs::write(folder.join("rules.toml"), rules()).unwrap();
}

const SCREEN: [&str; 6] = ["screen", "plain.nc", "--rules", "rules.toml", "--campaign", "campaign"];

/// All ledger files with their bytes.
fn ledgers(folder: &Path) -> BTreeMap<PathBuf, Vec<u8>> {
    let mut files = BTreeMap::new();
    let mut folders = vec![folder.join("campaign")];
    while let Some(next) = folders.pop() {
        for entry in std::fs::read_dir(next).unwrap() {
            let path = entry.unwrap().path();
            if path.is_dir() {
                folders.push(path);
            } else if path.extension().is_some_and(|ending| ending == "jsonl") {
                files.insert(path.clone(), std::fs::read(&path).unwrap());
            }
        }
    }
    files
}

fn mask(folder: &Path, variable: &str) -> Samples {
    output(folder, &["export", "plain.nc", "--campaign", "campaign", "--out", "masks"], 0);
    let program = ReaderProgram::new(env!("CARGO_BIN_EXE_radsieve"));
    let path = folder.join("masks/plain.mask.nc");
    let file = FileReader::open(&program, &path, &ReadLimits::default()).unwrap();
    let index = file.index();
    let found = index.variables.iter().find(|one| one.name == variable).unwrap();
    let count: Vec<usize> =
        found.dimensions.iter().map(|place| index.dimensions[*place].length).collect();
    file.read(found, &vec![0; count.len()], &count).unwrap()
}

#[test]
fn decisions_of_the_tests_come_out_in_the_mask() {
    let folder = tempfile::tempdir().unwrap();
    let folder = folder.path();
    plain(folder);
    let (stdout, _) = output(folder, &SCREEN, 0);
    assert_eq!(stdout.lines().count(), 1);
    assert!(stdout.starts_with("plain.nc: 180 footprints: cloudy 45.0 %"), "{stdout}");
    let flags = mask(folder, "footprint_flag");
    let review = mask(folder, "review_state");
    for footprint in 0..180 {
        // Bit 0 is cloudy; 200 K and a quarter more from footprint to footprint.
        let cloudy = flags.get(footprint) as u32 & 1 == 1;
        assert_eq!(cloudy, temperature(footprint) < 220.1, "{footprint}");
        assert_eq!(review.get(footprint), 1.0, "assessed by test");
    }
}

#[test]
fn a_repeated_run_changes_nothing_and_another_threshold_replaces() {
    let folder = tempfile::tempdir().unwrap();
    let folder = folder.path();
    plain(folder);
    output(folder, &SCREEN, 0);
    let before = ledgers(folder);
    assert_eq!(before.len(), 1);
    output(folder, &SCREEN, 0);
    assert_eq!(ledgers(folder), before);
    std::fs::write(folder.join("rules.toml"), rules().replace("220.1", "210.1")).unwrap();
    let answer = json(folder, &[&SCREEN[..], &["--json"]].concat());
    let decisions = &answer["files"][0]["decisions"];
    assert_eq!(decisions["unchanged"], false);
    assert!(decisions["replaced"].as_u64().unwrap() > 0);
    let flags = mask(folder, "footprint_flag");
    let cloudy = (0..180).filter(|footprint| flags.get(*footprint) as u32 & 1 == 1).count();
    // 200, 200.25 … 210 K.
    assert_eq!(cloudy, 41);
    // And back again: the ledger only ever grows.
    std::fs::write(folder.join("rules.toml"), rules()).unwrap();
    output(folder, &SCREEN, 0);
    let after = ledgers(folder);
    assert!(before.iter().all(|(path, bytes)| after[path].starts_with(bytes)));
}

#[test]
fn a_dry_run_and_an_explanation_leave_no_trace() {
    let folder = tempfile::tempdir().unwrap();
    let folder = folder.path();
    plain(folder);
    output(folder, &[&SCREEN[..], &["--dry-run"]].concat(), 0);
    let explained = ["--explain", "0,1,2"];
    let (text, _) = output(folder, &[&SCREEN[..], &explained].concat(), 0);
    assert!(!folder.join("campaign").exists());
    for words in
        ["cloudy: set", "cold window: for", "bt(900) = 202.750 < 220.100?", "source: this test"]
    {
        assert!(text.contains(words), "{words}: {text}");
    }
    let answer = json(folder, &[&SCREEN[..], &explained, &["--json"]].concat());
    assert_eq!(answer["position"]["position"], 1);
    let test = &answer["evidence"]["tests"][0];
    assert_eq!((&test["verdict"], &test["margin"]), (&"for".into(), &1.5.into()));
    let (_, stderr) = output(folder, &[&SCREEN[..], &["--explain", "9,9,9"]].concat(), 2);
    assert!(stderr.contains("scan_line 0 to 3"), "{stderr}");
}

#[test]
fn files_that_fail_are_named_and_the_others_are_done() {
    let folder = tempfile::tempdir().unwrap();
    let folder = folder.path();
    plain(folder);
    std::fs::write(folder.join("broken.nc"), b"no netCDF").unwrap();
    let both = ["screen", "broken.nc", "plain.nc", "--rules", "rules.toml"];
    let (stdout, stderr) = output(folder, &both, 3);
    assert!(stdout.starts_with("plain.nc: ") && stderr.contains("broken.nc"), "{stdout}{stderr}");
    output(folder, &["screen", "broken.nc", "--rules", "rules.toml"], 4);
    output(folder, &["screen", "plain.nc", "--rules", "nowhere.toml"], 4);
    std::fs::write(folder.join("rules.toml"), rules().replace("below", "under")).unwrap();
    let (_, stderr) = output(folder, &SCREEN, 2);
    assert!(stderr.contains("rules.toml:"), "{stderr}");
    std::fs::write(folder.join("rules.toml"), rules().replace("cloudy", "foggy")).unwrap();
    let (_, stderr) = output(folder, &SCREEN, 2);
    assert!(stderr.contains("foggy") && stderr.contains("thin_cloud"), "{stderr}");
}

#[test]
fn a_file_without_the_rulebooks_channels_stays_not_assessed() {
    let folder = tempfile::tempdir().unwrap();
    let folder = folder.path();
    plain(folder);
    // The plain granule warms from detector to detector, which looks like striping, without noise.
    let rules =
        rules().replace("bt(900)", "bt(2616)") + "\n[health]\nstriping = 100\nunusual = 1000\n";
    std::fs::write(folder.join("rules.toml"), rules).unwrap();
    let answer = json(folder, &[&SCREEN[..], &["--json"]].concat());
    let file = &answer["files"][0];
    assert_eq!((&file["not_assessed"], &file["no_flag"]), (&180.into(), &0.into()));
    assert!(file["tests"][0]["not_in_file"].as_str().unwrap().contains("2616"), "{file}");
    let review = mask(folder, "review_state");
    let flagged = (0..180).find(|footprint| review.get(*footprint) != 0.0);
    assert_eq!(flagged, None, "{}", file["instrument"]);
}

#[test]
fn rulebooks_are_checked_and_shown() {
    let folder = tempfile::tempdir().unwrap();
    let folder = folder.path();
    plain(folder);
    let (stdout, _) = output(folder, &["rules", "check", "rules.toml"], 0);
    assert!(stdout.contains("1 tests of cloudy; no mistakes"), "{stdout}");
    let spoiled = rules().replace("below", "under").replace("softness", "softnes");
    std::fs::write(folder.join("rules.toml"), spoiled).unwrap();
    let (stdout, _) = output(folder, &["rules", "check", "rules.toml"], 2);
    assert!(stdout.contains("expected above or below") && stdout.contains("softnes"), "{stdout}");
    let (shown, _) = output(folder, &["rules", "show", "--builtin"], 0);
    assert!(shown.contains("T01 gross window") && shown.contains("source: "), "{shown}");
    let shown = json(folder, &["rules", "show", "--json"]);
    assert!(shown["tests"].as_array().unwrap().len() > 20);
    // The text that is handed out is a rulebook.
    let (text, _) = output(folder, &["rules", "show", "--toml"], 0);
    std::fs::write(folder.join("mine.toml"), text).unwrap();
    output(folder, &["rules", "check", "mine.toml"], 0);
}

/// Every sample granule goes through with the built-in rulebook.
#[test]
fn the_samples_are_screened_with_the_built_in_rulebook() {
    let folder = tempfile::tempdir().unwrap();
    let samples = Path::new(env!("CARGO_MANIFEST_DIR")).join("sample_granules");
    let answer = json(folder.path(), &["screen", samples.to_str().unwrap(), "--dry-run", "--json"]);
    let files = answer["files"].as_array().unwrap();
    assert_eq!(files.len(), 4);
    for file in files {
        let (all, not) =
            (file["footprints"].as_u64().unwrap(), file["not_assessed"].as_u64().unwrap());
        assert!(20 * not < all, "{file}");
        assert!(file["flagged"]["cloudy"].as_u64().unwrap() > 0, "{file}");
    }
}

/// A ledger as another session of a person leaves it, beside those of the tests.
fn person_says(folder: &Path, line: &str) {
    let of_tests = ledgers(folder).into_keys().next().unwrap();
    let text = std::fs::read_to_string(&of_tests).unwrap();
    let mut header: Value = serde_json::from_str(text.lines().next().unwrap()).unwrap();
    header["writer"] = "bo-desk-1".into();
    header["author"]["person"] = "bo".into();
    std::fs::write(of_tests.with_file_name("bo-desk-1.jsonl"), format!("{header}\n{line}\n"))
        .unwrap();
}

/// What a person accepted or overruled on the screen survives every later run of the tests.
#[test]
fn a_persons_word_on_a_suggestion_survives_a_rescreen() {
    let folder = tempfile::tempdir().unwrap();
    plain(folder.path());
    output(folder.path(), &SCREEN, 0);
    let Samples::I32(before) = mask(folder.path(), "footprint_flag") else { panic!() };
    let cloudy = before.iter().position(|flags| flags & 1 != 0).expect("a cloudy one");
    let clear = before.iter().position(|flags| flags & 1 == 0).expect("a clear one");
    let word = |sequence: u32, ruling: &str, given: String, withdrawn: String, at: usize| {
        format!(
            "{{\"sequence\":{sequence},\"at\":\"2026-03-01T13:00:0{sequence}Z\",\"act\":\"judge\",\
             \"ruling\":\"{ruling}\",\"rulebook\":\"plain (0)\",\"given\":[{given}],\
             \"withdrawn\":[{withdrawn}],\"footprints\":[[{at},1]]}}"
        )
    };
    let part = |at: usize| format!("{{\"flag\":\"cloudy\",\"footprints\":[[{at},1]]}}");
    let overruled = word(1, "overruled", String::new(), part(cloudy), cloudy);
    let accepted = word(2, "accepted", part(clear), String::new(), clear);
    person_says(folder.path(), &format!("{overruled}\n{accepted}"));
    // The tests change their mind both ways, and nothing of it reaches these two.
    for threshold in ["100", "400", "220.1"] {
        let rules = rules().replace("220.1", threshold);
        std::fs::write(folder.path().join("rules.toml"), rules).unwrap();
        output(folder.path(), &SCREEN, 0);
        let Samples::I32(flags) = mask(folder.path(), "footprint_flag") else { panic!() };
        assert_eq!((flags[cloudy] & 1, flags[clear] & 1), (0, 1), "threshold {threshold}");
        let Samples::I8(states) = mask(folder.path(), "review_state") else { panic!() };
        assert_eq!((states[cloudy], states[clear]), (2, 2));
    }
}
