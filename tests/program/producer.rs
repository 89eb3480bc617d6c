//! The producer's word on quality, from the campaign's settings to the mask.

use std::path::Path;

use assert_cmd::Command;
use radsieve::netcdf_files::{FileReader, ReadLimits, ReaderProgram, Samples};

use crate::plain_granule::PlainGranule;
use crate::plain_rules::plain_rules;

fn output(folder: &Path, arguments: &[&str]) -> (String, String) {
    let mut command = Command::cargo_bin("radsieve").unwrap();
    command.env_clear().current_dir(folder).args(arguments);
    command.env("RADSIEVE_PERSON", "ada").env("RADSIEVE_NOW", "2026-03-01T12:00:00Z");
    let result = command.output().unwrap();
    let text = |bytes: Vec<u8>| String::from_utf8(bytes).unwrap();
    let (stdout, stderr) = (text(result.stdout), text(result.stderr));
    assert_eq!(result.status.code(), Some(0), "{arguments:?}\n{stdout}\n{stderr}");
    (stdout, stderr)
}

/// All footprints are colder than 300 K.
fn rules() -> String {
    plain_rules(300.0, 2.0)
}

/// A granule whose quality is 0, 1 and missing in turns, and a campaign with these settings.
fn campaign(settings: &str) -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    PlainGranule::new().write(&folder.path().join("plain.nc"));
    std::fs::write(folder.path().join("rules.toml"), rules()).unwrap();
    std::fs::create_dir(folder.path().join("campaign")).unwrap();
    change(folder.path(), settings);
    folder
}

fn change(folder: &Path, settings: &str) {
    std::fs::write(folder.join("campaign/campaign.toml"), settings).unwrap();
}

const SCREEN: [&str; 6] = ["screen", "plain.nc", "--rules", "rules.toml", "--campaign", "campaign"];

/// The flags of the footprints, and the global attributes of the mask.
fn mask(folder: &Path) -> (Vec<i32>, Vec<i8>, String) {
    output(folder, &["export", "plain.nc", "--campaign", "campaign", "--out", "masks"]);
    let program = ReaderProgram::new(env!("CARGO_BIN_EXE_radsieve"));
    let path = folder.join("masks/plain.mask.nc");
    let file = FileReader::open(&program, &path, &ReadLimits::default()).unwrap();
    let read = |name: &str| file.read_all(file.index().variable(name).unwrap()).unwrap();
    let Samples::I32(flags) = read("footprint_flag") else { panic!("flags are no ints") };
    let Samples::I8(states) = read("review_state") else { panic!("states are no bytes") };
    let rejected = file.index().global_attribute("rejected_by_producer");
    (flags, states, rejected.and_then(|value| value.text()).unwrap_or_default())
}

const CLOUDY: i32 = 1;
const BAD_SPECTRUM: i32 = 16;
const BAD_GEOLOCATION: i32 = 32;
/// What the spectra as a set may say of those that are looked at.
const BY_SPECTRA: i32 = 16 | 128;

#[test]
fn rejected_footprints_carry_the_producers_flag_and_no_test_speaks_about_them() {
    let folder = campaign(
        "[quality.scene_quality]\n\"value 1\" = 'reject as bad_geolocation'\nmissing = 'reject'\n",
    );
    let (_, said) = output(folder.path(), &SCREEN);
    let words =
        "rejected by the producer's scene_quality: 60 footprints bad_spectrum, missing (60)";
    assert!(said.contains(words), "{said}");
    assert!(!said.contains("does not cover"), "{said}");
    let (flags, states, rejected) = mask(folder.path());
    let expected = [CLOUDY, BAD_GEOLOCATION, BAD_SPECTRUM];
    let each = flags.iter().enumerate().all(|(at, flags)| match at % 3 {
        0 => flags & !BY_SPECTRA == CLOUDY,
        rejected => *flags == expected[rejected],
    });
    assert!(each, "{flags:?}");
    let assessed = |(at, state): (usize, &i8)| *state == i8::from(at % 3 == 0);
    assert!(states.iter().enumerate().all(assessed), "by tests, where they look: {states:?}");
    assert_eq!(
        rejected,
        "scene_quality: value 1 (60) as bad_geolocation; scene_quality: missing (60) as bad_spectrum"
    );
}

#[test]
fn what_the_map_leaves_out_is_named_and_rejects_nobody() {
    let folder = campaign("[quality.scene_quality]\nbad = 'reject'\n[quality.lost]\nx = 'show'\n");
    let (_, said) = output(folder.path(), &SCREEN);
    for words in [
        "names `bad` of `scene_quality`",
        "names `lost`, which the granule does not have",
        "does not cover value 1 (60), missing (60) of the producer's `scene_quality`",
    ] {
        assert!(said.contains(words), "{words}: {said}");
    }
    let (flags, _, rejected) = mask(folder.path());
    assert!(flags.iter().all(|flags| flags & !BY_SPECTRA == CLOUDY));
    assert_eq!(rejected, "");
}

#[test]
fn a_changed_map_takes_back_what_it_no_longer_rejects() {
    let folder = campaign("[quality.scene_quality]\n\"bit 0\" = 'reject as bad_geolocation'\n");
    output(folder.path(), &SCREEN);
    assert_eq!(mask(folder.path()).0[1], BAD_GEOLOCATION);
    output(folder.path(), &SCREEN);
    let decisions = |folder: &Path| {
        let (text, _) = output(
            folder,
            &["export", "plain.nc", "--campaign", "campaign", "--out", "masks", "--json"],
        );
        let answer: serde_json::Value = serde_json::from_str(&text).unwrap();
        answer["files"][0]["decisions"].as_u64().unwrap()
    };
    let before = decisions(folder.path());
    change(folder.path(), "[quality.scene_quality]\n\"bit 0\" = 'show'\n");
    output(folder.path(), &SCREEN);
    assert!(decisions(folder.path()) > before, "withdrawn, not forgotten");
    assert_eq!(mask(folder.path()).0[1] & !BY_SPECTRA, CLOUDY);
}

#[test]
fn explain_says_who_rejected() {
    let folder = campaign("[quality.scene_quality]\n\"value 1\" = 'reject'\n");
    let explain = [&SCREEN[..], &["--explain", "0,0,1"]].concat();
    let (text, _) = output(folder.path(), &explain);
    assert!(text.contains("no test looks at it: producer: scene_quality: bad_spectrum"), "{text}");
    assert!(text.contains("not assessed"), "{text}");
}

#[test]
fn describe_shows_what_the_campaigns_map_makes_of_a_file() {
    let folder = campaign("[quality.scene_quality]\n\"value 1\" = 'reject'\n");
    let (text, _) = output(folder.path(), &["describe", "plain.nc", "--campaign", "campaign"]);
    assert!(
        text.contains("quality: the producer's `scene_quality` rejects 60 footprints"),
        "{text}"
    );
    assert!(text.contains("does not cover missing (60)"), "{text}");
}

#[test]
fn describe_prints_a_map_to_start_with() {
    let sample =
        concat!(env!("CARGO_MANIFEST_DIR"), "/sample_granules/synthetic_brindle_sea_of_lowen.nc");
    let (text, _) = output(Path::new("."), &["describe", "--as-quality-map", sample]);
    let folder = campaign(&text);
    assert!(text.contains("[quality.quality]\n"), "{text}");
    assert!(text.contains("calibration_degraded = \"show\""), "{text}");
    // It is read as it stands.
    output(folder.path(), &SCREEN);
}
