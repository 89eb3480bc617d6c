//! Layout files and apodising from outside.

use std::path::Path;

use radsieve::netcdf_files::{NetcdfWriter, ValueKind, VariableDraft};
use serde_json::Value;

/// Two lines of three places and five channels, under names that say nothing; synthetic.
fn write_dumb(path: &Path) {
    let mut writer = NetcdfWriter::create(path).unwrap();
    for (name, length) in [("a", 2), ("b", 3), ("c", 5)] {
        writer.dimension(name, length).unwrap();
    }
    for (name, dimensions) in
        [("x", &["c"] as &[&str]), ("s", &["a", "b", "c"]), ("p", &["a", "b"])]
    {
        writer.variable(&VariableDraft::new(name, ValueKind::F64, dimensions)).unwrap();
    }
    let wavenumbers = vec![900.0, 901.0, 902.0, 903.0, 904.0];
    writer.put_all("x", &wavenumbers.into()).unwrap();
    let radiances: Vec<f64> = (0..30).map(|value| f64::from(value * value % 11)).collect();
    writer.put_all("s", &radiances.into()).unwrap();
    writer.put_all("p", &vec![1.0, 2.0, 3.0, 4.0, 5.0, 6.0].into()).unwrap();
    writer.close().unwrap();
}

const LAYOUT: &str = r#"
[[bands]]
variable = "s"
unit = "mW m-2 sr-1 (cm-1)-1"
axis = "x"
axis_unit = "cm-1"
apodisation = "none"
[geolocation]
lat = "p"
"#;

struct Desk {
    folder: tempfile::TempDir,
}

impl Desk {
    fn new(layout: &str) -> Self {
        let folder = tempfile::tempdir().unwrap();
        write_dumb(&folder.path().join("brindle.nc"));
        std::fs::write(folder.path().join("layout.toml"), layout).unwrap();
        Self { folder }
    }

    fn run(&self, words: &[&str]) -> assert_cmd::assert::Assert {
        let mut command = assert_cmd::Command::cargo_bin("radsieve").unwrap();
        command.env_clear().current_dir(self.folder.path()).args(words).assert()
    }

    fn output(&self, words: &[&str]) -> String {
        let done = self.run(words).success();
        String::from_utf8(done.get_output().stdout.clone()).unwrap()
    }

    fn errors(&self, words: &[&str], code: i32) -> String {
        let done = self.run(words).code(code);
        String::from_utf8(done.get_output().stderr.clone()).unwrap()
    }
}

#[test]
fn the_layout_printed_describes_the_same_granule() {
    let desk = Desk::new(LAYOUT);
    let with = ["describe", "--json", "brindle.nc", "--layout"];
    let first = desk.output(&[&with[..], &["layout.toml"]].concat());
    let printed =
        desk.output(&["describe", "--as-layout", "brindle.nc", "--layout", "layout.toml"]);
    std::fs::write(desk.folder.path().join("again.toml"), &printed).unwrap();
    let again = desk.output(&[&with[..], &["again.toml"]].concat());
    let [first, again] = [first, again].map(|text| {
        let mut description: Value = serde_json::from_str(&text).unwrap();
        // The unit of the latitude was a guess the first time and is said the second time.
        let problems = description["problems"].take();
        assert!(!problems.to_string().contains("spectral axis"), "{problems}");
        let layout = description["layout_file"].take();
        assert_eq!(layout["blake3"].as_str().unwrap().len(), 64);
        description
    });
    assert_eq!(first, again);
}

#[test]
fn every_command_takes_a_layout_file() {
    let desk = Desk::new(LAYOUT);
    let refused = desk.errors(&["describe", "brindle.nc"], 4);
    assert!(refused.contains("holds no spectra that can be used"), "{refused}");
    let table = ["tabulate", "brindle.nc", "--layer", "rad(901)", "--layout", "layout.toml"];
    let table = desk.output(&table);
    assert!(table.starts_with("a,b,lat,rad(901)\n0,0,1,1\n"), "{table}");
    let spectrum =
        desk.output(&["spectrum", "brindle.nc", "--at", "0,0", "--layout", "layout.toml"]);
    assert!(spectrum.contains("s,901,1,"), "{spectrum}");
}

#[test]
fn apodising_on_request_weighs_a_channel_with_its_neighbours() {
    let desk = Desk::new(LAYOUT);
    let rad = |more: &[&str]| {
        let words =
            ["tabulate", "brindle.nc", "--layout", "layout.toml", "--quiet", "--layer", "rad(901)"];
        let table = desk.output(&[&words[..], more].concat());
        let first = table.lines().nth(1).unwrap().rsplit(',').next().unwrap().to_owned();
        first.parse::<f64>().unwrap()
    };
    assert_eq!(rad(&[]), 1.0);
    // Channels 900, 901, 902 of the first footprint hold 0, 1, 4: 0.23 * 4 + 0.54 * 1. The tolerance
    // is rounding in the last digit.
    assert!((rad(&["--apodise", "hamming"]) - 1.46).abs() < 1e-12);
    let described = ["describe", "brindle.nc", "--layout", "layout.toml", "--apodise", "hamming"];
    let described = desk.output(&described);
    assert!(described.contains("apodisation Hamming, applied on request"), "{described}");
    // The first channel has no value any more.
    let edge = ["tabulate", "brindle.nc", "--layout", "layout.toml", "--layer", "rad(900)"];
    let edge = desk.errors(&[&edge[..], &["--apodise", "hamming"]].concat(), 4);
    assert!(edge.contains("901"), "{edge}");
}

#[test]
fn a_slip_in_a_layout_file_is_wrong_usage_and_named() {
    let desk = Desk::new("apodize = \"hamming\"\n");
    let error = desk.errors(&["describe", "brindle.nc", "--layout", "layout.toml"], 2);
    assert!(error.contains("layout.toml: unknown key `apodize`; did you mean apodise?"), "{error}");
    let error = desk.errors(&["describe", "brindle.nc", "--layout", "none.toml"], 4);
    assert!(error.contains("cannot read the layout file none.toml"), "{error}");
}
