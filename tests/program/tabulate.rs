//! `tabulate` from outside.

use std::path::{Path, PathBuf};
use std::process::{Command as Process, Stdio};

use assert_cmd::Command;
use radsieve::spectral::planck;
use serde_json::Value;
use tempfile::TempDir;

use crate::plain_granule::{PlainGranule, temperature};

struct Folder(TempDir);

impl Folder {
    fn new() -> Self {
        Self(tempfile::tempdir().unwrap())
    }

    fn granule(&self, name: &str, granule: &PlainGranule) -> PathBuf {
        let path = self.0.path().join(name);
        granule.write(&path);
        path
    }

    fn plain(&self) -> PathBuf {
        self.granule("plain.nc", &PlainGranule::new())
    }
}

fn tabulate(files: &[&Path], layers: &[&str]) -> Command {
    let mut command = Command::cargo_bin("radsieve").unwrap();
    command.env_clear().arg("tabulate").args(files);
    for layer in layers {
        command.args(["--layer", layer]);
    }
    command
}

fn output(command: &mut Command, code: i32) -> (String, String) {
    let output = command.assert().code(code).get_output().clone();
    let text = |bytes| String::from_utf8(bytes).unwrap();
    (text(output.stdout), text(output.stderr))
}

/// Head and cells.
fn csv(text: &str) -> (Vec<String>, Vec<Vec<String>>) {
    let mut reader = csv::Reader::from_reader(text.as_bytes());
    let owned = |record: &csv::StringRecord| record.iter().map(str::to_owned).collect();
    let head = owned(reader.headers().unwrap());
    let rows = reader.records().map(|record| owned(&record.unwrap())).collect();
    (head, rows)
}

fn column(text: &str, name: &str) -> Vec<f64> {
    let (head, rows) = csv(text);
    let at = head.iter().position(|title| title == name).unwrap();
    rows.iter().map(|row| row[at].parse().unwrap_or(f64::NAN)).collect()
}

#[test]
fn rows_are_footprints_and_columns_are_as_typed() {
    let folder = Folder::new();
    let (stdout, stderr) =
        output(&mut tabulate(&[&folder.plain()], &["bt(900)", "bt(900)  -  bt(1231, )"]), 2);
    assert!(stdout.is_empty());
    assert!(stderr.contains("bt(1231, )\n") && stderr.contains('^'), "{stderr}");

    let layers = ["bt(900)", "bt(900)  -  bt(1231)", "min(1, 2)"];
    let (stdout, stderr) = output(&mut tabulate(&[&folder.plain()], &layers), 0);
    assert_eq!(stderr, "");
    let (head, rows) = csv(&stdout);
    let expected = ["scan_line", "position", "detector", "lat", "lon"];
    assert_eq!(head[..5], expected);
    assert_eq!(head[5..], layers);
    assert_eq!(rows.len(), 180);
    // Footprint 1 x 45 + 2 x 9 + 3 = 66: detector 3 stands in the second row of its cluster.
    assert_eq!(rows[66][..3], ["1", "2", "3"]);
    assert_eq!(rows[66][3..5], ["0.4", "0.6000000000000001"]);
    assert!(!stdout.contains('#') && stdout.ends_with('\n') && !stdout.contains('\r'));
}

#[test]
fn a_black_bodys_temperature_comes_back() {
    let folder = Folder::new();
    let file = folder.plain();
    let layers = ["bt(900)", "bt(830..840)", "bt(11.1um)", "rad(850)"];
    let (stdout, _) = output(&mut tabulate(&[&file], &layers), 0);
    for (footprint, value) in column(&stdout, "bt(900)").iter().enumerate() {
        // What the contract of the table promises.
        assert!((value - temperature(footprint)).abs() < 1e-6, "{footprint}: {value}");
    }
    for (footprint, value) in column(&stdout, "bt(830..840)").iter().enumerate() {
        // The Planck function is curved: over 10 cm-1 the mean radiance is off by some mK.
        assert!((value - temperature(footprint)).abs() < 0.005, "{footprint}: {value}");
    }
    for (footprint, value) in column(&stdout, "rad(850)").iter().enumerate() {
        assert_eq!(*value, planck(850.0, temperature(footprint)));
    }
}

#[test]
fn stored_temperatures_are_exact_and_radiances_follow_planck() {
    let folder = Folder::new();
    let mut granule = PlainGranule::new();
    granule.temperatures = true;
    let file = folder.granule("warm.nc", &granule);
    let (stdout, _) = output(&mut tabulate(&[&file], &["bt(900)", "rad(900)"]), 0);
    for footprint in 0..granule.footprints() {
        assert_eq!(column(&stdout, "bt(900)")[footprint], temperature(footprint));
        assert_eq!(column(&stdout, "rad(900)")[footprint], planck(900.0, temperature(footprint)));
    }
}

#[test]
fn missing_is_an_empty_cell_and_null() {
    let folder = Folder::new();
    let mut granule = PlainGranule::new();
    granule.radiance = |wavenumber, footprint| match footprint {
        3 => f64::NAN,
        4 => -0.5,
        _ => planck(wavenumber, temperature(footprint)),
    };
    let file = folder.granule("holes.nc", &granule);
    let layers = ["bt(900)", "rad(900)", "bt(900) < 1000", "var(\"scene_quality\")"];
    let (stdout, stderr) = output(&mut tabulate(&[&file], &layers), 0);
    let (_, rows) = csv(&stdout);
    assert_eq!(rows[3][5..8], ["", "", ""]);
    assert_eq!(rows[4][5..8], ["", "-0.5", ""]);
    assert_eq!(rows[5][7..], ["1", ""], "the fill value of the variable is missing, too");
    assert!(stderr.contains("1 of 180 footprints have a radiance of zero or less"), "{stderr}");
    let (_, quiet) = output(tabulate(&[&file], &layers).arg("-q"), 0);
    assert_eq!(quiet, "");

    let (lines, _) = output(tabulate(&[&file], &layers).arg("--json"), 0);
    let rows: Vec<Value> = lines.lines().map(|line| serde_json::from_str(line).unwrap()).collect();
    assert_eq!(rows.len(), 180);
    assert_eq!(rows[3]["bt(900)"], Value::Null);
    assert_eq!(rows[4]["rad(900)"], -0.5);
    assert_eq!(rows[5]["detector"], 5);
    assert!(rows[5].get("file").is_none());
    let keys =
        ["{\"scan_line\":0,\"position\":0,\"detector\":0,\"lat\":0.0,\"lon\":0.0,\"bt(900)\":"];
    assert!(lines.starts_with(keys[0]), "{lines:.120}");
}

#[test]
fn where_bands_overlap_the_closer_channel_wins_then_the_first_band() {
    let folder = Folder::new();
    let mut granule = PlainGranule::new();
    // Radiances that tell where they come from.
    granule.radiance = |wavenumber, _| wavenumber;
    let file = folder.granule("overlap.nc", &granule);
    // Longwave has whole wavenumbers up to 910; midwave 905.5, 906.75, 908, 909.25, 910.5, …
    for (place, channel) in [
        ("905.3", 905.5),
        ("905.2", 905.0),
        ("905.25", 905.0),
        ("910.4", 910.5),
        ("1280.5", 1280.5),
        ("1281.2", 1280.5),
        ("799.5", 800.0),
    ] {
        let layer = format!("rad({place})");
        let (stdout, _) = output(&mut tabulate(&[&file], &[&layer]), 0);
        assert_eq!(column(&stdout, &layer)[0], channel, "{place}");
    }
    // 0.6 of a spacing: 0.6 below 800 at a spacing of 1, 0.75 above 1280.5 at 1.25.
    for (place, nearest) in [("799.3", "800"), ("1281.3", "1280.5"), ("3um", "1280.5")] {
        let layer = format!("bt(900) + rad({place})");
        let (stdout, stderr) = output(&mut tabulate(&[&file], &[&layer]), 4);
        assert_eq!(stdout, "");
        assert!(stderr.contains(&format!("the nearest is at {nearest} cm-1")), "{stderr}");
        assert!(stderr.contains("overlap.nc") && stderr.contains('^'), "{stderr}");
    }
}

#[test]
fn the_neighbourhood_is_that_of_the_ground() {
    let folder = Folder::new();
    let file = folder.plain();
    let (stdout, stderr) = output(&mut tabulate(&[&file], &["sd3(bt(900))"]), 0);
    assert_eq!(stderr, "");
    let found = column(&stdout, "sd3(bt(900))");
    // The 12 x 15 map of the detectors, worked out here by hand.
    let footprint =
        |row: usize, column: usize| (row / 3 * 5 + column / 3) * 9 + row % 3 * 3 + column % 3;
    for row in 0..12_usize {
        for column in 0..15_usize {
            let mut values = Vec::new();
            for beside in row.saturating_sub(1)..=(row + 1).min(11) {
                for next in column.saturating_sub(1)..=(column + 1).min(14) {
                    values.push(temperature(footprint(beside, next)));
                }
            }
            let value = found[footprint(row, column)];
            if values.len() < 5 {
                assert!(value.is_nan(), "corner {row} {column}");
                continue;
            }
            let count = values.len() as f64;
            let mean = values.iter().sum::<f64>() / count;
            let squares: f64 = values.iter().map(|value| (value - mean).powi(2)).sum();
            // 1e-9: temperatures that went through the inverse Planck function.
            assert!((value - (squares / count).sqrt()).abs() < 1e-9, "{row} {column}: {value}");
        }
    }
    let mut lost = PlainGranule::new();
    lost.geolocated = false;
    let file = folder.granule("lost.nc", &lost);
    let (stdout, stderr) = output(&mut tabulate(&[&file], &["sd3(bt(900))"]), 0);
    assert!(stderr.contains("order of the array"), "{stderr}");
    assert_eq!(csv(&stdout).0, ["scan_line", "position", "detector", "sd3(bt(900))"]);
}

#[test]
fn indices_and_geolocation_have_names() {
    let folder = Folder::new();
    let file = folder.plain();
    let layers = ["scan_line * 45 + position * 9 + detector", "lat + lon"];
    let (stdout, _) = output(&mut tabulate(&[&file], &layers), 0);
    let numbers = column(&stdout, layers[0]);
    assert!(numbers.iter().enumerate().all(|(footprint, value)| *value == footprint as f64));
    let (lat, lon) = (column(&stdout, "lat"), column(&stdout, "lon"));
    for (place, sum) in lat.iter().zip(lon).zip(column(&stdout, "lat + lon")) {
        assert_eq!(place.0 + place.1, sum);
    }
}

#[test]
fn names_that_mean_nothing_are_wrong_usage_and_those_a_file_lacks_are_not() {
    let folder = Folder::new();
    let file = folder.plain();
    let (_, stderr) = output(&mut tabulate(&[&file], &["bt(900) + scan_lime"]), 2);
    assert!(stderr.contains("did you mean scan_line?"), "{stderr}");
    assert!(stderr.contains("          ^^^^^^^^^"), "{stderr}");
    let (_, stderr) = output(&mut tabulate(&[&file], &["scene_quality"]), 2);
    assert!(stderr.contains("var(\"scene_quality\")"), "{stderr}");
    let (_, stderr) = output(&mut tabulate(&[&file], &["solar_zenith < 85"]), 4);
    assert!(stderr.contains("the file gives no solar_zenith"), "{stderr}");
    let (_, stderr) = output(&mut tabulate(&[&file], &["var(\"scene_qualty\")"]), 4);
    assert!(stderr.contains("did you mean scene_quality?"), "{stderr}");
}

#[test]
fn several_files_have_a_column_for_their_name_and_a_bad_one_is_passed_over() {
    let folder = Folder::new();
    let (one, other) = (folder.plain(), folder.granule("other.nc", &PlainGranule::new()));
    let bad = folder.0.path().join("bad.nc");
    std::fs::write(&bad, b"no netCDF file").unwrap();
    let (stdout, stderr) = output(&mut tabulate(&[&one, &bad, &other], &["bt(900)"]), 3);
    let (head, rows) = csv(&stdout);
    assert_eq!(head[..2], ["file", "scan_line"]);
    assert_eq!(rows.len(), 360);
    assert_eq!(
        (rows[0][0].as_str(), rows[180][0].as_str()),
        (one.to_str().unwrap(), other.to_str().unwrap())
    );
    assert!(stderr.contains("bad.nc"), "{stderr}");
    let (stdout, _) = output(&mut tabulate(&[&bad], &["bt(900)"]), 4);
    assert_eq!(stdout, "");
}

#[test]
fn files_of_other_dimensions_share_json_lines_but_no_csv() {
    let folder = Folder::new();
    let flat = folder.0.path().join("flat.nc");
    PlainGranule::new().write_flat(&flat);
    let files: [&Path; 2] = [&folder.plain(), &flat];
    let (stdout, stderr) = output(&mut tabulate(&files, &["bt(900)"]), 3);
    assert_eq!(csv(&stdout).1.len(), 180);
    assert!(stderr.contains("flat.nc") && stderr.contains("dimensions (line, place)"), "{stderr}");
    let (lines, _) = output(tabulate(&files, &["bt(900)"]).arg("--json"), 0);
    assert_eq!(lines.lines().count(), 182);
    let last: Value = serde_json::from_str(lines.lines().last().unwrap()).unwrap();
    assert_eq!((&last["line"], &last["place"]), (&Value::from(0), &Value::from(1)));
    assert!(last["bt(900)"].as_f64().is_some_and(|value| (value - temperature(1)).abs() < 1e-6));
}

#[test]
fn a_file_is_written_whole_or_not_at_all() {
    let folder = Folder::new();
    let file = folder.plain();
    let target = folder.0.path().join("table.csv");
    let (printed, _) = output(&mut tabulate(&[&file], &["bt(900)"]), 0);
    let (stdout, _) = output(tabulate(&[&file], &["bt(900)"]).arg("-o").arg(&target), 0);
    assert_eq!(stdout, "");
    assert_eq!(std::fs::read_to_string(&target).unwrap(), printed);

    let other = folder.0.path().join("nothing.csv");
    output(tabulate(&[&file], &["bt(3000)"]).arg("-o").arg(&other), 4);
    assert!(!other.exists());
    let nowhere = folder.0.path().join("no/such/folder.csv");
    let (_, stderr) = output(tabulate(&[&file], &["bt(900)"]).arg("-o").arg(nowhere), 4);
    assert!(stderr.contains("cannot make a file in"), "{stderr}");
}

#[test]
fn a_reader_that_goes_away_ends_it_silently() {
    let folder = Folder::new();
    let mut granule = PlainGranule::new();
    // More than a pipe holds.
    granule.lengths = [40, 30, 9];
    granule.bands.truncate(1);
    let file = folder.granule("large.nc", &granule);
    let mut child = Process::new(assert_cmd::cargo::cargo_bin("radsieve"))
        .env_clear()
        .arg("tabulate")
        .arg(&file)
        .args(["--layer", "bt(900)"])
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .unwrap();
    drop(child.stdout.take());
    let output = child.wait_with_output().unwrap();
    assert_eq!(String::from_utf8_lossy(&output.stderr), "");
    assert_eq!(output.status.code(), Some(0));
}

#[test]
fn the_number_of_threads_changes_no_byte() {
    let folder = Folder::new();
    let file = folder.plain();
    let layers = ["sd3(bt(900)) / bt(830..840)", "ln(rad(1231))"];
    let with =
        |threads: &str| output(tabulate(&[&file], &layers).env("RAYON_NUM_THREADS", threads), 0).0;
    assert_eq!(with("1"), with("4"));
}
