//! `export` from outside.

use std::path::{Path, PathBuf};
use std::time::Duration;

use assert_cmd::Command;
use radsieve::flags::{
    Act, Author, Campaign, ChannelName, FootprintSet, GranuleIdentity, LedgerWriter, Origin,
};
use radsieve::granule::Granule;
use radsieve::netcdf_files::{
    FileReader, NetcdfWriter, ReadLimits, ReaderProgram, Samples, ValueKind, VariableDraft,
};
use serde_json::Value;

const LINES: usize = 4;
const POSITIONS: usize = 5;
const CHANNELS: usize = 6;

/// A folder with granules, a campaign and a place for masks.
struct Desk {
    dir: tempfile::TempDir,
}

impl Desk {
    fn new() -> Self {
        Self { dir: tempfile::tempdir().unwrap() }
    }

    fn path(&self, name: &str) -> PathBuf {
        self.dir.path().join(name)
    }

    /// A granule of two bands; `seed` makes its content its own.
    fn granule(&self, name: &str, seed: f32) -> PathBuf {
        let path = self.path(name);
        std::fs::create_dir_all(path.parent().unwrap()).unwrap();
        let mut writer = NetcdfWriter::create(&path).unwrap();
        writer
            .global_attribute("title", "Synthetic granule for tests, no data for science")
            .unwrap();
        writer.dimension("scan_line", LINES).unwrap();
        writer.dimension("position", POSITIONS).unwrap();
        for (band, first) in [("lw", 650.0), ("sw", 2155.0)] {
            add_band(&mut writer, band, first, seed);
        }
        for (name, units) in [("latitude", "degrees_north"), ("longitude", "degrees_east")] {
            let draft = VariableDraft::new(name, ValueKind::F32, &["scan_line", "position"])
                .attribute("standard_name", name)
                .attribute("units", units);
            writer.variable(&draft).unwrap();
            let values: Vec<f32> = (0..LINES * POSITIONS).map(|at| at as f32 * 0.25).collect();
            writer.put_all(name, &values.into()).unwrap();
        }
        writer.close().unwrap();
        path
    }

    /// What the program calls the band whose variable's name ends in `ending`.
    fn band_name(&self, granule: &Path, ending: &str) -> String {
        let program = ReaderProgram::new(env!("CARGO_BIN_EXE_radsieve"));
        let granule = Granule::open(&program, granule, &ReadLimits::default()).unwrap();
        let mut bands = granule.bands().iter();
        bands.find(|band| band.variable.ends_with(ending)).unwrap().name.clone()
    }

    fn campaign(&self) -> PathBuf {
        self.path("campaign")
    }

    /// Decides as a review would, and waits until the disk has it.
    fn decide(&self, granule: &Path, acts: Vec<Act>) {
        let campaign = Campaign::open_or_create(&self.campaign()).unwrap();
        let content = std::fs::read(granule).unwrap();
        let identity = GranuleIdentity {
            bands: Vec::new(),
            hash: blake3::hash(&content).to_hex().to_string(),
            size: content.len() as u64,
            name: granule.file_name().unwrap().to_str().unwrap().to_owned(),
            footprints: vec![("scan_line".to_owned(), LINES), ("position".to_owned(), POSITIONS)],
            read_with: Vec::new(),
        };
        let author = Author { person: "anna".to_owned(), host: "node7".to_owned(), process: 1 };
        let now = "2026-01-31T11:00:00Z".parse().unwrap();
        let mut writer = LedgerWriter::start(&campaign, &identity, &author, "0.1.0", now).unwrap();
        for act in acts {
            writer.append(Origin::Person, act, None, now);
        }
        writer.close(Duration::from_secs(20)).unwrap();
    }

    fn export(&self, arguments: &[&str], files: &[&Path]) -> Command {
        let mut command = Command::cargo_bin("radsieve").unwrap();
        command
            .env_clear()
            .env("RADSIEVE_PERSON", "bert")
            .env("RADSIEVE_NOW", "2026-01-31T12:00:00Z")
            .current_dir(self.dir.path())
            .args(["export", "--campaign", "campaign", "--out", "masks"])
            .args(arguments)
            .args(files);
        command
    }

    fn mask(&self, name: &str) -> FileReader {
        let program = ReaderProgram::new(env!("CARGO_BIN_EXE_radsieve"));
        let path = self.path("masks").join(name);
        FileReader::open(&program, &path, &ReadLimits::default()).unwrap()
    }
}

fn add_band(writer: &mut NetcdfWriter, band: &str, first: f64, seed: f32) {
    let dimension = format!("wnum_{band}");
    writer.dimension(&dimension, CHANNELS).unwrap();
    let axis = VariableDraft::new(&dimension, ValueKind::F64, &[&dimension])
        .attribute("standard_name", "sensor_band_central_radiation_wavenumber")
        .attribute("units", "cm-1");
    writer.variable(&axis).unwrap();
    let axis: Vec<f64> = (0..CHANNELS).map(|at| first + at as f64 * 0.625).collect();
    writer.put_all(&dimension, &axis.into()).unwrap();
    let name = format!("rad_{band}");
    let draft = VariableDraft::new(&name, ValueKind::F32, &["scan_line", "position", &dimension])
        .attribute("standard_name", "toa_outgoing_radiance_per_unit_wavenumber")
        .attribute("units", "mW m-2 sr-1 (cm-1)-1");
    writer.variable(&draft).unwrap();
    writer.put_all(&name, &vec![seed; LINES * POSITIONS * CHANNELS].into()).unwrap();
}

fn cloudy(at: std::ops::Range<usize>) -> Act {
    Act::Flag { flag: "cloudy".to_owned(), footprints: FootprintSet::range(at), bands: None }
}

fn sign_off(at: std::ops::Range<usize>) -> Act {
    Act::SignOff { rest_assessed: FootprintSet::range(at), summary: String::new() }
}

fn values(mask: &FileReader, name: &str) -> Samples {
    mask.read_all(mask.index().variable(name).expect(name)).unwrap()
}

fn text(bytes: &[u8]) -> String {
    String::from_utf8(bytes.to_vec()).unwrap()
}

fn folder(path: &Path) -> Vec<String> {
    let entries = std::fs::read_dir(path).unwrap();
    let mut names: Vec<_> =
        entries.map(|entry| entry.unwrap().file_name().into_string().unwrap()).collect();
    names.sort();
    names
}

#[test]
fn a_mask_says_what_was_decided() {
    let desk = Desk::new();
    let granule = desk.granule("lowen.nc", 80.0);
    let before = std::fs::read(&granule).unwrap();
    let band = desk.band_name(&granule, "sw");
    desk.decide(
        &granule,
        vec![
            cloudy(0..3),
            Act::FlagChannels {
                flag: "popping".to_owned(),
                channels: vec![ChannelName { band: band.clone(), index: 4, wavenumber: 2157.5 }],
            },
            sign_off(3..18),
        ],
    );
    let output = desk.export(&[], &[&granule]).assert().success().get_output().clone();
    assert_eq!(text(&output.stdout), "masks/lowen.mask.nc\n");
    let mask = desk.mask("lowen.mask.nc");
    let mut flags = vec![0; LINES * POSITIONS];
    flags[..3].fill(1);
    assert_eq!(values(&mask, "footprint_flag"), Samples::I32(flags));
    let mut review = vec![2; LINES * POSITIONS];
    review[18..].fill(0);
    assert_eq!(values(&mask, "review_state"), Samples::I8(review));
    let channels = values(&mask, &format!("channel_flag_{band}"));
    assert_eq!(channels, Samples::I32(vec![0, 0, 0, 0, 0b100, 0]));
    let index = mask.index();
    let variable = index.variable("footprint_flag").unwrap();
    assert_eq!(index.dimension_names(variable), ["scan_line", "position"]);
    let global = |name: &str| index.global_attribute(name).unwrap().text().unwrap();
    assert_eq!(global("signed_off_by"), "anna");
    assert!(global("history").starts_with("2026-01-31T12:00:00Z"));
    assert!(global("history").ends_with("by bert"));
    assert_eq!(std::fs::read(&granule).unwrap(), before, "the granule is never written to");
}

#[test]
fn the_same_export_gives_the_same_bytes() {
    let desk = Desk::new();
    let granule = desk.granule("lowen.nc", 80.0);
    desk.decide(&granule, vec![cloudy(0..3)]);
    let bytes = || {
        desk.export(&[], &[&granule]).assert().success();
        std::fs::read(desk.path("masks/lowen.mask.nc")).unwrap()
    };
    assert!(bytes() == bytes());
    assert_eq!(folder(&desk.path("masks")), ["lowen.mask.nc"], "its own mask is written anew");
}

#[test]
fn equal_stems_never_overwrite_each_other() {
    let desk = Desk::new();
    let (a, b) = (desk.granule("a/g.nc", 80.0), desk.granule("b/g.nc", 90.0));
    let copy = desk.path("c/g.nc");
    std::fs::create_dir(desk.path("c")).unwrap();
    std::fs::copy(&a, &copy).unwrap();
    desk.decide(&a, vec![cloudy(0..1)]);
    desk.decide(&b, vec![cloudy(5..7)]);
    let output = desk.export(&[], &[&a, &b, &copy]).assert().success().get_output().clone();
    let written = text(&output.stdout);
    let names: Vec<&str> = written.lines().map(|line| line.trim_start_matches("masks/")).collect();
    assert_eq!(names[0], "g.mask.nc");
    assert_eq!(folder(&desk.path("masks")).len(), 3);
    assert!(text(&output.stderr).contains("g.mask.nc is of"), "{}", text(&output.stderr));
    let flagged = |name: &str| values(&desk.mask(name), "footprint_flag").to_f64();
    assert_eq!(flagged(names[0])[0], 1.0);
    assert_eq!(flagged(names[1])[4..8], [0.0, 1.0, 1.0, 0.0]);
    assert_eq!(flagged(names[2])[0], 1.0);
    // A later run over one of them finds the name that is its own.
    let again = desk.export(&[], &[&b]).assert().success().get_output().clone();
    assert_eq!(text(&again.stdout).trim_start_matches("masks/").trim_end(), names[1]);
}

#[test]
fn a_granule_without_decisions_is_not_assessed_and_says_so() {
    let desk = Desk::new();
    let granule = desk.granule("lowen.nc", 80.0);
    Campaign::open_or_create(&desk.campaign()).unwrap();
    let output = desk.export(&[], &[&granule]).assert().success().get_output().clone();
    assert!(text(&output.stderr).contains("no decision in this campaign"));
    let mask = desk.mask("lowen.mask.nc");
    assert_eq!(values(&mask, "review_state"), Samples::I8(vec![0; LINES * POSITIONS]));
    assert_eq!(values(&mask, "usable"), Samples::I8(vec![0; LINES * POSITIONS]));
}

#[test]
fn the_list_holds_the_usable_footprints() {
    let desk = Desk::new();
    let granule = desk.granule("lowen.nc", 80.0);
    desk.decide(&granule, vec![cloudy(0..18), sign_off(18..20)]);
    desk.export(&["--format", "csv"], &[&granule]).assert().success();
    let list = std::fs::read_to_string(desk.path("masks/lowen.usable.csv")).unwrap();
    let rows: Vec<&str> = list.lines().collect();
    assert_eq!(rows[0], "scan_line,position,lat,lon,bands_lost,granule");
    assert!(rows[1].starts_with("3,3,4.5,4.5,,"), "{}", rows[1]);
    assert!(rows[2].starts_with("3,4,4.75,4.75,,"), "{}", rows[2]);
    assert_eq!(rows.len(), 3);
}

#[test]
fn a_summary_for_scripts() {
    let desk = Desk::new();
    let granule = desk.granule("lowen.nc", 80.0);
    desk.decide(&granule, vec![cloudy(0..2)]);
    let output = desk.export(&["--json"], &[&granule]).assert().success().get_output().clone();
    let summary: Value = serde_json::from_slice(&output.stdout).unwrap();
    assert_eq!(summary["schema"], 1);
    let file = &summary["files"][0];
    assert_eq!(file["written"], "masks/lowen.mask.nc");
    assert_eq!(file["granule_state"], "in_hand");
    assert_eq!(file["reviewers"][0], "anna");
    assert_eq!(file["counts"]["per_flag"]["cloudy"], 2);
    assert_eq!(file["counts"]["not_assessed"], LINES * POSITIONS - 2);
}

#[test]
fn some_of_many_fail_and_each_is_named() {
    let desk = Desk::new();
    let granule = desk.granule("lowen.nc", 80.0);
    Campaign::open_or_create(&desk.campaign()).unwrap();
    let bad = desk.path("bad.nc");
    std::fs::write(&bad, "no netCDF").unwrap();
    let output = desk.export(&[], &[&bad, &granule]).assert().code(3).get_output().clone();
    assert!(text(&output.stderr).contains("bad.nc"), "{}", text(&output.stderr));
    assert_eq!(folder(&desk.path("masks")), ["lowen.mask.nc"]);
    desk.export(&[], &[&bad]).assert().code(4);
}

#[test]
fn what_cannot_be_done_says_why() {
    let desk = Desk::new();
    let granule = desk.granule("lowen.nc", 80.0);
    let output = desk.export(&[], &[&granule]).assert().code(4).get_output().clone();
    assert!(text(&output.stderr).contains("no campaign folder"), "{}", text(&output.stderr));
    desk.export(&[], &[]).assert().code(2);
    desk.export(&[], &[&granule]).env("RADSIEVE_NOW", "noon").assert().code(2);
    Campaign::open_or_create(&desk.campaign()).unwrap();
    std::fs::write(desk.path("masks"), "in the way").unwrap();
    let output = desk.export(&[], &[&granule]).assert().code(4).get_output().clone();
    assert!(text(&output.stderr).contains("masks"), "{}", text(&output.stderr));
}

/// A mask without decisions that are known to exist would mislead a retrieval.
#[test]
fn a_ledger_of_a_newer_version_stops_the_export() {
    let desk = Desk::new();
    let granule = desk.granule("lowen.nc", 80.0);
    desk.decide(&granule, vec![cloudy(0..2)]);
    let ledgers = desk.campaign().join("ledgers");
    let folder = std::fs::read_dir(ledgers).unwrap().next().unwrap().unwrap().path();
    let ledger = std::fs::read_dir(folder).unwrap().next().unwrap().unwrap().path();
    let content = std::fs::read_to_string(&ledger).unwrap();
    std::fs::write(&ledger, content.replacen("\"version\":1", "\"version\":2", 1)).unwrap();
    let output = desk.export(&[], &[&granule]).assert().code(4).get_output().clone();
    assert!(text(&output.stderr).contains("newer version"), "{}", text(&output.stderr));
    // A torn last line, on the other hand, is told and does not stop anything.
    std::fs::write(&ledger, format!("{content}{{\"sequence\":2,")).unwrap();
    let output = desk.export(&[], &[&granule]).assert().success().get_output().clone();
    assert!(text(&output.stderr).contains("cut off"), "{}", text(&output.stderr));
    let problems = desk.mask("lowen.mask.nc");
    let problems = problems.index().global_attribute("problems").unwrap().text().unwrap();
    assert!(problems.contains("cut off"), "{problems}");
    assert!(!problems.contains("campaign/"), "the folder's place is nobody's business: {problems}");
}

#[test]
fn a_granule_in_the_out_folder_is_never_overwritten() {
    let desk = Desk::new();
    let one = desk.granule("masks/g.nc", 80.0);
    let other = desk.granule("masks/g.mask.nc", 90.0);
    Campaign::open_or_create(&desk.campaign()).unwrap();
    let before = std::fs::read(&other).unwrap();
    // Side by side its name makes it a mask, which is left out with a word.
    let output = desk.export(&[], &[&one, &other]).assert().success().get_output().clone();
    let words = text(&output.stderr);
    assert!(words.contains("g.mask.nc") && words.contains("left out"), "{words}");
    desk.export(&[], &[&other]).assert().success();
    assert!(std::fs::read(&other).unwrap() == before);
    assert_eq!(folder(&desk.path("masks")).len(), 4);
}
