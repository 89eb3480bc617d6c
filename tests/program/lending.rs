//! Files that lend, from outside: `--with`, what it adds to layers, ledgers and masks.

use std::path::Path;

use assert_cmd::Command;
use radsieve::netcdf_files::{
    FileReader, NetcdfWriter, ReadLimits, ReaderProgram, Samples, ValueKind, VariableDraft,
};

use crate::plain_granule::{PlainGranule, temperature};

fn output(folder: &Path, arguments: &[&str], code: i32) -> (String, String) {
    let mut command = Command::cargo_bin("radsieve").unwrap();
    command.env_clear().current_dir(folder).args(arguments);
    command.env("RADSIEVE_PERSON", "ada").env("RADSIEVE_NOW", "2026-03-01T12:00:00Z");
    let result = command.output().unwrap();
    let text = |bytes: Vec<u8>| String::from_utf8(bytes).unwrap();
    let (stdout, stderr) = (text(result.stdout), text(result.stderr));
    assert_eq!(result.status.code(), Some(code), "{arguments:?}\n{stdout}\n{stderr}");
    (stdout, stderr)
}

/// A granule `plain.nc` and a file that lends temperatures of the surface 5 K warmer, and clear
/// skies 10 K warmer, in one band.
fn folder() -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    let granule = PlainGranule::new();
    granule.write(&folder.path().join("plain.nc"));
    std::fs::create_dir(folder.path().join("aux")).unwrap();
    let mut writer = NetcdfWriter::create(&folder.path().join("aux/plain.aux.nc")).unwrap();
    let dimensions = ["scan_line", "position", "detector", "wavenumber_longwave"];
    let channels = granule.bands[0].1.len();
    let [lines, positions, detectors] = granule.lengths;
    for (name, length) in dimensions.iter().zip([lines, positions, detectors, channels]) {
        writer.dimension(name, length).unwrap();
    }
    let kelvin = |more: f64| (0..granule.footprints()).map(move |at| temperature(at) + more);
    let surface = VariableDraft::new("skt", ValueKind::F64, &dimensions[..3])
        .attribute("standard_name", "surface_temperature")
        .attribute("units", "K");
    writer.variable(&surface).unwrap();
    writer.put_all("skt", &Samples::F64(kelvin(5.0).collect())).unwrap();
    let clear =
        VariableDraft::new("bt_calculated", ValueKind::F64, &dimensions).attribute("units", "K");
    writer.variable(&clear).unwrap();
    let spectra = kelvin(10.0).flat_map(|kelvin| std::iter::repeat_n(kelvin, channels));
    writer.put_all("bt_calculated", &Samples::F64(spectra.collect())).unwrap();
    writer.close().unwrap();
    folder
}

#[test]
fn layers_take_what_is_lent() {
    let folder = folder();
    let layers = ["surface_temperature - bt(850)", "bt_clear(850) - bt(850)", "var(\"skt\")"];
    for with in ["aux", "aux/{stem}.aux.nc", "aux/plain.aux.nc"] {
        let mut arguments = vec!["tabulate", "plain.nc", "--with", with, "-q"];
        layers.iter().for_each(|layer| arguments.extend(["--layer", layer]));
        let (text, _) = output(folder.path(), &arguments, 0);
        let mut reader = csv::Reader::from_reader(text.as_bytes());
        for (footprint, row) in reader.records().enumerate() {
            let row = row.unwrap();
            let number = |from_end: usize| row[row.len() - from_end].parse::<f64>().unwrap();
            // Planck's function and its inverse agree to parts in 1e13.
            assert!((number(3) - 5.0).abs() < 1e-9, "{row:?}");
            assert!((number(2) - 10.0).abs() < 1e-9, "{row:?}");
            assert!((number(1) - temperature(footprint) - 5.0).abs() < 1e-9, "{row:?}");
        }
    }
}

#[test]
fn a_spectrum_has_the_calculated_one_beside_it() {
    let folder = folder();
    let ask = ["spectrum", "plain.nc", "--at", "0,0,3", "--with", "aux"];
    let (text, _) = output(folder.path(), &ask, 0);
    let mut reader = csv::Reader::from_reader(text.as_bytes());
    assert_eq!(reader.headers().unwrap().iter().next_back(), Some("bt_clear_K"));
    let row = reader.records().next().unwrap().unwrap();
    let last: f64 = row.iter().next_back().unwrap().parse().unwrap();
    assert!((last - temperature(3) - 10.0).abs() < 1e-9, "{row:?}");
    let json: serde_json::Value =
        serde_json::from_str(&output(folder.path(), &[&ask[..], &["--json"]].concat(), 0).0)
            .unwrap();
    assert!(json["bands"][0]["bt_clear_K"][0].is_f64());
    assert!(json["bands"][1]["bt_clear_K"][0].is_null(), "lent for one band only");
    let (text, _) = output(folder.path(), &ask[..4], 0);
    assert!(!text.contains("bt_clear_K"));
}

#[test]
fn without_a_lender_the_names_are_known_and_missing() {
    let folder = folder();
    let ask = |layer: &str| output(folder.path(), &["tabulate", "plain.nc", "--layer", layer], 4).1;
    assert!(ask("surface_temperature").contains("gives no surface_temperature"));
    assert!(ask("bt_clear(850)").contains("--with FILE lends them"));
}

#[test]
fn describe_shows_what_is_lent_and_by_whom() {
    let folder = folder();
    let (text, _) = output(folder.path(), &["describe", "plain.nc", "--with", "aux"], 0);
    for words in [
        "joined by dimensions: 180 of 180 footprints",
        "lends by itself: surface_temperature, calculated spectra of longwave",
        "calculated clear sky `bt_calculated` of plain.aux.nc",
        "surface_temperature: `skt` of plain.aux.nc",
    ] {
        assert!(text.contains(words), "{words}\n{text}");
    }
    let arguments = ["describe", "plain.nc", "--with", "aux", "--json"];
    let json: serde_json::Value =
        serde_json::from_str(&output(folder.path(), &arguments, 0).0).unwrap();
    let bytes = std::fs::read(folder.path().join("aux/plain.aux.nc")).unwrap();
    assert_eq!(json["lenders"][0]["blake3"], blake3::hash(&bytes).to_hex().to_string());
}

#[test]
fn ledger_and_mask_say_what_the_granule_was_read_with() {
    let folder = folder();
    let layout = "[[bands]]\nvariable = \"radiance_longwave\"\napodisation = \"none\"\n\
                  bad_channels = [3]\n";
    std::fs::write(folder.path().join("plain.toml"), layout).unwrap();
    let reading = ["--with", "aux", "--layout", "plain.toml", "--apodise", "hamming"];
    let screen = [&["screen", "plain.nc", "--campaign", "campaign"][..], &reading].concat();
    output(folder.path(), &screen, 0);
    let export = ["export", "plain.nc", "--campaign", "campaign", "--out", "masks"];
    output(folder.path(), &[&export[..], &reading].concat(), 0);

    let program = ReaderProgram::new(env!("CARGO_BIN_EXE_radsieve"));
    let path = folder.path().join("masks/plain.mask.nc");
    let mask = FileReader::open(&program, &path, &ReadLimits::default()).unwrap();
    let attribute = mask.index().global_attribute("read_with").unwrap().text().unwrap();
    let hash = blake3::hash(layout.as_bytes()).to_hex().to_string();
    assert!(attribute.starts_with(&format!("layout file plain.toml (blake3 {hash}); ")));
    assert!(attribute.contains("plain.aux.nc (blake3 "), "{attribute}");
    let axis = mask.index().variable("wavenumber_longwave").unwrap();
    assert_eq!(axis.text("apodization").unwrap(), "Hamming, applied on request");
    // Guard channels and bad ones keep their place in the mask.
    assert_eq!(mask.index().lengths(axis), [PlainGranule::new().bands[0].1.len()]);

    let ledgers = folder.path().join("campaign/ledgers");
    let granule = std::fs::read_dir(ledgers).unwrap().next().unwrap().unwrap().path();
    let ledger = std::fs::read_dir(granule).unwrap().next().unwrap().unwrap().path();
    let text = std::fs::read_to_string(ledger).unwrap();
    let head: serde_json::Value = serde_json::from_str(text.lines().next().unwrap()).unwrap();
    assert_eq!(head["granule"]["read_with"].as_array().unwrap().len(), 2, "{head}");
}

#[test]
fn a_file_that_is_not_there_or_cannot_be_joined_is_told_at_once() {
    let folder = folder();
    let describe = |with: &str| output(folder.path(), &["describe", "plain.nc", "--with", with], 4);
    assert!(describe("no.nc").1.contains("--with no.nc"));
    std::fs::write(folder.path().join("text.nc"), "no netCDF").unwrap();
    assert!(describe("text.nc").1.contains("text.nc"));
    let wrong = ["describe", "plain.nc", "--with", "aux", "--within", "10 miles"];
    assert!(output(folder.path(), &wrong, 2).1.contains("none of km, m"));
}
