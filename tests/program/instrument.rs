//! Instrument health and unusual spectra from outside, on a granule with a defect of every kind.

use std::path::{Path, PathBuf};

use assert_cmd::Command;
use radsieve::netcdf_files::{FileReader, ReadLimits, ReaderProgram};
use serde_json::Value;

const LINES: usize = 20;
const POSITIONS: usize = 16;
const DETECTORS: usize = 4;
const FOOTPRINTS: usize = LINES * POSITIONS * DETECTORS;

fn radsieve(folder: &Path, arguments: &[&str]) -> String {
    let mut command = Command::cargo_bin("radsieve").unwrap();
    command.env_clear().env("RADSIEVE_NOW", "2026-06-01T12:00:00Z").env("RADSIEVE_PERSON", "Ada");
    let output =
        command.current_dir(folder).args(arguments).assert().success().get_output().clone();
    String::from_utf8(output.stdout).unwrap()
}

fn faulty(folder: &Path) -> PathBuf {
    let shape = format!("{LINES}x{POSITIONS}x{DETECTORS}");
    let scene = ["synth", "--out", ".", "--scene", "sea-of-lowen", "--shape", &shape, "--faulty"];
    folder.join(radsieve(folder, &scene).trim())
}

fn screened(folder: &Path, file: &Path) -> Value {
    let file = file.to_str().unwrap();
    let text = radsieve(folder, &["screen", file, "--campaign", "campaign", "--json"]);
    serde_json::from_str::<Value>(&text).unwrap()["files"][0].clone()
}

/// Defect bits of all footprints, and the names of the bits.
fn truth(file: &Path) -> (Vec<i32>, Vec<String>) {
    let program = ReaderProgram::new(env!("CARGO_BIN_EXE_radsieve"));
    let reader = FileReader::open(&program, file, &ReadLimits::default()).unwrap();
    let variable = reader.index().variable("truth/defects").unwrap();
    let samples = reader.read_all(variable).unwrap();
    let names = variable.text("flag_meanings").unwrap();
    let bits = (0..FOOTPRINTS).map(|at| samples.get(at) as i32).collect();
    (bits, names.split(' ').map(str::to_owned).collect())
}

fn findings<'a>(screened: &'a Value, check: &'a str) -> impl Iterator<Item = &'a Value> {
    let all = screened["instrument"]["findings"].as_array().unwrap().iter();
    all.filter(move |finding| finding["check"] == check)
}

/// Footprints that findings with a flag are about.
fn bad(screened: &Value) -> Vec<bool> {
    let mut bad = vec![false; FOOTPRINTS];
    for finding in screened["instrument"]["findings"].as_array().unwrap() {
        if finding["flag"] != "bad_spectrum" {
            continue;
        }
        match (finding["footprint"].as_u64(), finding["detector"].as_u64()) {
            (Some(footprint), _) => bad[footprint as usize] = true,
            (None, Some(detector)) => {
                (0..FOOTPRINTS)
                    .filter(|at| at % DETECTORS == detector as usize)
                    .for_each(|at| bad[at] = true);
            }
            _ => {}
        }
    }
    bad
}

#[test]
fn every_planted_defect_is_found_and_sound_spectra_are_left_alone() {
    let folder = tempfile::tempdir().unwrap();
    let file = faulty(folder.path());
    let found = screened(folder.path(), &file);
    let (bits, names) = truth(&file);
    let bad = bad(&found);
    for (bit, name) in names.iter().enumerate() {
        let planted: Vec<usize> = (0..FOOTPRINTS).filter(|at| bits[*at] & 1 << bit != 0).collect();
        let caught = planted.iter().filter(|at| bad[**at]).count();
        assert!(!planted.is_empty(), "no {name} was planted");
        assert_eq!(caught, planted.len(), "{name}");
    }
    let sound = bits.iter().zip(&bad).filter(|(bits, _)| **bits == 0);
    let (all, wrong) =
        sound.fold((0, 0), |(all, wrong), (_, bad)| (all + 1, wrong + usize::from(*bad)));
    assert!(wrong * 200 <= all, "{wrong} of {all} sound spectra are called bad");

    let channel = |check: &str| {
        let all: Vec<f64> =
            findings(&found, check).map(|one| one["wavenumber_cm-1"].as_f64().unwrap()).collect();
        assert_eq!(all.len(), 1, "{check}: {all:?}");
        all[0]
    };
    // What was planted, to the nearest channel of 0.625 cm-1.
    assert!((channel("noisy channel") - 699.0).abs() < 0.4);
    assert!((channel("popping channel") - 724.5).abs() < 0.4);
    assert!((channel("dead channel") - 1322.0).abs() < 0.4);

    let value = |check: &str, detector: u64| {
        let own = findings(&found, check).find(|one| one["detector"] == detector);
        own.unwrap_or_else(|| panic!("{check} of {detector}"))["value"].as_f64().unwrap()
    };
    // 25 ppm off in one detector of four are 18.75 ppm off the mean of the four.
    assert!((value("spectral shift", 3) - 18.75).abs() < 2.0);
    assert!((value("noisy detector", 0) - 3.0).abs() < 0.3);
    // 0.7 K at 250 K; the channels that vary the least are colder, where the same radiance is more of a
    // temperature: twice as much for 225 K near 1600 cm-1.
    let striping = value("striping", 2);
    assert!(striping > 0.7 && striping < 1.8, "{striping}");
    assert!(findings(&found, "ringing").count() > 0);

    let basis = &found["instrument"]["bands"][0]["basis"];
    assert_eq!(basis["from"], "own");
    let again = screened(folder.path(), &file);
    assert_eq!(again["decisions"]["unchanged"], true, "the same input gives the same decisions");
}

#[test]
fn spectra_are_held_against_components_of_other_granules() {
    let folder = tempfile::tempdir().unwrap();
    let folder = folder.path();
    let samples = Path::new(env!("CARGO_MANIFEST_DIR")).join("sample_granules");
    let file = samples.join("synthetic_brindle_norrik_plateau.nc");
    let name = file.to_str().unwrap();
    let told = radsieve(folder, &["train", name, "--campaign", "campaign"]);
    assert!(told.starts_with("longwave: ") && told.contains("left out"), "{told}");
    let found = screened(folder, &file);
    for band in found["instrument"]["bands"].as_array().unwrap() {
        let from = band["basis"]["from"].as_str().unwrap();
        assert!(from.starts_with("501+262+155_"), "{from}");
    }
    let unusual = found["instrument"]["unusual"].as_array().unwrap();
    assert!(unusual.iter().any(|one| one["channels"].as_array().unwrap().len() == 5));
    assert_eq!(findings(&found, "spike").count(), 14, "the spikes of the sample's recipe");
    // The file is one of the program's own: what is no such file is refused in words.
    let basis = std::fs::read_dir(folder.join("campaign")).unwrap();
    let basis = basis
        .map(|entry| entry.unwrap().path())
        .find(|path| path.extension().is_some_and(|end| end == "nc"));
    std::fs::copy(&file, basis.unwrap()).unwrap();
    let mut command = Command::cargo_bin("radsieve").unwrap();
    command.env_clear().current_dir(folder).args([
        "screen",
        name,
        "--dry-run",
        "--campaign",
        "campaign",
    ]);
    let stderr = command.assert().failure().get_output().stderr.clone();
    assert!(String::from_utf8(stderr).unwrap().contains("radsieve train"));
}

#[test]
fn the_noise_that_a_file_tells_is_what_its_spectra_have() {
    let folder = tempfile::tempdir().unwrap();
    let folder = folder.path();
    for told in ["channels", "detectors"] {
        let scene = [
            "synth",
            "--out",
            ".",
            "--scene",
            "sea-of-lowen",
            "--shape",
            "16x12x4",
            "--nedn",
            told,
        ];
        let file = folder.join(radsieve(folder, &scene).trim());
        let found = screened(folder, &file);
        for band in found["instrument"]["bands"].as_array().unwrap() {
            assert_eq!(band["noise_in_file"], true);
            // A median over hundreds of channels, each known to 5 %; the files' detectors have 0.8 to
            // 1.4 of the noise, and all together a little more than their median.
            let over = band["noise_over_file"].as_f64().unwrap();
            assert!((over - 1.0).abs() < 0.12, "{told}: {over}");
            for (number, detector) in band["detectors"].as_array().unwrap().iter().enumerate() {
                let factor = if told == "detectors" { 0.8 + 0.2 * number as f64 } else { 1.0 };
                let usual = if told == "detectors" { 1.1 } else { 1.0 };
                let in_file = detector["noise_ratio_in_file"].as_f64().unwrap();
                assert!((in_file - factor / usual).abs() < 1e-6, "{in_file}");
                let found = detector["noise_ratio"].as_f64().unwrap();
                assert!((found / in_file - 1.0).abs() < 0.08, "{told} {number}: {found} {in_file}");
            }
        }
        assert_eq!(findings(&found, "noisy detector").count(), 0);
        assert_eq!(findings(&found, "noisy channel").count(), 0);
    }
}

#[test]
fn a_shift_is_absolute_where_clear_spectra_are_calculated() {
    let folder = tempfile::tempdir().unwrap();
    let folder = folder.path();
    let shape = "16x12x4";
    let scene = ["synth", "--out", ".", "--scene", "iskel-sound", "--shape", shape, "--faulty"];
    let made = radsieve(folder, &[&scene[..], &["--calculated", "exact"]].concat());
    let [granule, calculated] = made.lines().collect::<Vec<_>>()[..] else { panic!("{made}") };
    let screen = ["screen", granule, "--campaign", "campaign", "--json", "--with", calculated];
    let answer: Value = serde_json::from_str(&radsieve(folder, &screen)).unwrap();
    let found = &answer["files"][0];
    let shifts = found["instrument"]["bands"][0]["absolute_shifts"].as_array().unwrap();
    assert_eq!(shifts.len(), 4, "{shifts:?}");
    for shift in shifts {
        let planted = if shift["detector"] == 3 { 25.0 } else { 0.0 };
        let (ppm, deviation) =
            (shift["ppm"].as_f64().unwrap(), shift["deviation_ppm"].as_f64().unwrap());
        assert!((ppm - planted).abs() < 3.0 * deviation, "{shift}");
        assert!(deviation < 3.0, "{shift}");
    }
    let told: Vec<&Value> = findings(found, "absolute spectral shift").collect();
    assert_eq!(told.len(), 1);
    assert!(told[0]["detector"] == 3 && told[0]["flag"].is_null());
    let alone = screened(folder, &folder.join(granule));
    let why = &alone["instrument"]["bands"][0]["absolute_shift_not_applicable"];
    assert_eq!(why, "no calculated clear spectra are given");
}

#[test]
fn what_the_producer_rejects_trains_nothing() {
    let folder = tempfile::tempdir().unwrap();
    let folder = folder.path();
    let file = faulty(folder);
    let file = file.to_str().unwrap();
    let train = ["train", file, "--campaign", "campaign", "--json"];
    let trained = || serde_json::from_str::<Value>(&radsieve(folder, &train)).unwrap();
    let whole = trained();
    assert_eq!(whole["rejected_by_producer"], 0);
    let settings = "[quality.quality]\nmissing_values = 'reject'\n";
    std::fs::write(folder.join("campaign/campaign.toml"), settings).unwrap();
    let part = trained();
    assert!(part["rejected_by_producer"].as_u64().unwrap() > 0);
    // The last band lost nothing; of it the rejected footprints are missed, too.
    let spectra = |answer: &Value| {
        let band = &answer["bands"].as_array().unwrap()[1];
        band["spectra"].as_u64().unwrap() + band["left_out"].as_u64().unwrap()
    };
    assert!(spectra(&part) < spectra(&whole), "{part} {whole}");
}
