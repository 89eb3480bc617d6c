//! `spectrum` from outside.

use std::path::Path;

use assert_cmd::Command;
use radsieve::spectral::planck;
use serde_json::Value;

use crate::plain_granule::{PlainGranule, temperature};

fn spectrum(file: &Path, at: &str) -> Command {
    let mut command = Command::cargo_bin("radsieve").unwrap();
    command.env_clear().arg("spectrum").arg(file).args(["--at", at]);
    command
}

fn with_granule(granule: &PlainGranule, test: impl FnOnce(&Path)) {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("plain.nc");
    granule.write(&path);
    test(&path);
}

fn text(bytes: &[u8]) -> String {
    String::from_utf8(bytes.to_vec()).unwrap()
}

/// Holes: a missing channel at 803 cm-1, a negative radiance at 804.
fn holed() -> PlainGranule {
    let mut granule = PlainGranule::new();
    granule.radiance = |wavenumber, footprint| {
        if wavenumber == 803.0 {
            f64::NAN
        } else if wavenumber == 804.0 {
            -0.25
        } else {
            planck(wavenumber, temperature(footprint))
        }
    };
    granule
}

#[test]
fn channels_come_in_the_files_order_with_radiance_and_temperature() {
    with_granule(&holed(), |file| {
        let output = spectrum(file, "1,2,3").assert().success().get_output().clone();
        let stdout = text(&output.stdout);
        let lines: Vec<&str> = stdout.lines().collect();
        assert_eq!(lines[0], "band,wavenumber_cm-1,radiance_mW_m-2_sr-1_(cm-1)-1,bt_K,absorption");
        assert_eq!(lines.len(), 1 + 111 + 301);
        assert_eq!(lines[4], "longwave,803,,,");
        assert!(lines[5].starts_with("longwave,804,-0.25,,1.00"), "{}", lines[5]);
        let cells: Vec<&str> = lines[1].split(',').collect();
        assert_eq!(cells[..2], ["longwave", "800"]);
        assert_eq!(cells[2].parse::<f64>().unwrap(), planck(800.0, temperature(66)));
        // What the contract promises.
        assert!((cells[3].parse::<f64>().unwrap() - temperature(66)).abs() < 1e-6);
        assert!(lines[112].starts_with("midwave,905.5,"));
    });
}

#[test]
fn json_is_one_object_with_nulls() {
    with_granule(&holed(), |file| {
        let output =
            spectrum(file, "1, 2, 3").arg("--json").assert().success().get_output().clone();
        let answer: Value = serde_json::from_slice(&output.stdout).unwrap();
        assert_eq!(answer["file"], file.to_str().unwrap());
        assert_eq!(
            answer["position"],
            serde_json::json!({"scan_line": 1, "position": 2, "detector": 3})
        );
        assert_eq!(answer["lat"], 0.4);
        let band = &answer["bands"][0];
        assert_eq!(band["band"], "longwave");
        assert_eq!(band["wavenumber_cm-1"].as_array().unwrap().len(), 111);
        assert_eq!(band["radiance_mW_m-2_sr-1_(cm-1)-1"][3], Value::Null);
        assert_eq!(band["radiance_mW_m-2_sr-1_(cm-1)-1"][4], -0.25);
        assert_eq!(band["bt_K"][4], Value::Null);
    });
}

#[test]
fn the_energy_of_a_black_body_is_that_of_its_window() {
    with_granule(&PlainGranule::new(), |file| {
        let output = spectrum(file, "1,2,3")
            .args(["--energy", "--json"])
            .assert()
            .success()
            .get_output()
            .clone();
        let answer: Value = serde_json::from_slice(&output.stdout).unwrap();
        let number = |value: &Value| value.as_f64().unwrap();
        // The window is 10 cm-1 wide and the Planck function curved: about a millikelvin.
        assert!((number(&answer["window_bt_K"]) - temperature(66)).abs() < 2e-3);
        let intervals = answer["intervals"].as_array().unwrap();
        assert_eq!(intervals[0]["band"], "window 11 um");
        for interval in intervals {
            let taken = number(&interval["taken_W_m-2_sr-1"]);
            assert!(taken.abs() < 2e-4 * number(&interval["radiance_W_m-2_sr-1"]), "{interval}");
        }
        let csv = spectrum(file, "1,2,3").arg("--energy").assert().success().get_output().clone();
        assert_eq!(text(&csv.stdout).lines().count(), 1 + intervals.len());
    });
}

#[test]
fn stored_temperatures_come_out_as_they_are() {
    let mut granule = PlainGranule::new();
    granule.temperatures = true;
    granule.geolocated = false;
    with_granule(&granule, |file| {
        let output = spectrum(file, "0,0,8").arg("--json").assert().success().get_output().clone();
        let answer: Value = serde_json::from_slice(&output.stdout).unwrap();
        assert_eq!(answer["lat"], Value::Null);
        assert_eq!(answer["bands"][0]["bt_K"][10], temperature(8));
        let radiance = &answer["bands"][0]["radiance_mW_m-2_sr-1_(cm-1)-1"][10];
        assert_eq!(radiance.as_f64().unwrap(), planck(810.0, temperature(8)));
    });
}

#[test]
fn places_that_are_not_there_are_wrong_usage() {
    with_granule(&PlainGranule::new(), |file| {
        for at in ["4,0,0", "0,0", "0,0,0,0"] {
            let output = spectrum(file, at).assert().code(2).get_output().clone();
            let stderr = text(&output.stderr);
            let ranges = "scan_line 0 to 3, position 0 to 4, detector 0 to 8";
            assert!(stderr.contains(ranges), "{stderr}");
            assert!(output.stdout.is_empty());
        }
        for at in ["", "a,b,c", "-1,0,0", "1.5,0,0", "1,,2"] {
            let output = spectrum(file, at).assert().code(2).get_output().clone();
            assert!(text(&output.stderr).contains("no index"), "{at}");
        }
    });
}

#[test]
fn a_file_that_is_not_there_is_an_input_error() {
    let output =
        spectrum(Path::new("no-such-file.nc"), "0,0").assert().code(4).get_output().clone();
    assert!(text(&output.stderr).contains("no-such-file.nc"));
}
