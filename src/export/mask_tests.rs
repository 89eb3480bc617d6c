//! Masks written and read back.

use std::path::Path;

use jiff::Timestamp;

use super::*;
use crate::flags::{
    Act, ChannelName, Decision, DecisionId, FlagExtension, FlagState, FootprintSet, Origin,
    ReviewState, Scope, SpotCheck, Stratum, Vocabulary,
};
use crate::netcdf_files::{AttributeValue, FileReader, ReadLimits, ReaderProgram, Samples};
use crate::system::Placing;

pub(super) fn source() -> MaskSource {
    let band = |name: &str, dimension: &str, first: f64| MaskBand {
        name: name.to_owned(),
        dimension: dimension.to_owned(),
        axis_name: Some(dimension.to_owned()),
        wavenumbers: (0..5).map(|at| first + f64::from(at) * 0.625).collect(),
        apodisation: (name == "lw").then(|| "Hamming".to_owned()),
    };
    MaskSource {
        name: "lowen_001.nc".to_owned(),
        size: 12_345,
        hash: "0123456789abcdef".repeat(4),
        title: Some("Synthetic: Sea of Lowen".to_owned()),
        source: Some("synthetic data of the imaginary Brindle sounder".to_owned()),
        history: Some("2026-01-01T00:00:00Z made\n".to_owned()),
        footprints: vec![("scan_line".to_owned(), 3), ("position".to_owned(), 4)],
        bands: vec![band("lw", "wnum_lw", 650.0), band("sw", "wnum_sw", 2155.0)],
        latitude: Some((0..12).map(f64::from).collect()),
        longitude: Some((0..12).map(|at| if at == 3 { f64::NAN } else { f64::from(at) }).collect()),
        time: Some((0..12).map(f64::from).collect()),
        read_with: Vec::new(),
        problems: vec!["apodisation is not named".to_owned()],
    }
}

fn decisions(acts: Vec<Act>) -> Vec<Decision> {
    let numbered = acts.into_iter().zip(1..);
    let decision = |(act, sequence): (Act, u64)| Decision {
        id: DecisionId { writer: "anna-1".to_owned(), sequence },
        at: Timestamp::from_second(1_767_225_600 + sequence as i64).unwrap(),
        clock: None,
        person: "anna".to_owned(),
        origin: Origin::Person,
        act,
        why: None,
        step: None,
    };
    numbered.map(decision).collect()
}

fn flag(name: &str, at: std::ops::Range<usize>, band: Option<&str>) -> Act {
    Act::Flag {
        flag: name.to_owned(),
        footprints: FootprintSet::range(at),
        bands: band.map(|band| vec![band.to_owned()]),
    }
}

fn some_decisions() -> Vec<Decision> {
    let channel = ChannelName { band: "sw".to_owned(), index: 2, wavenumber: 2156.25 };
    decisions(vec![
        flag("cloudy", 0..3, None),
        flag("unusual", 2..4, None),
        flag("bad_spectrum", 5..6, Some("sw")),
        Act::FlagChannels { flag: "dead".to_owned(), channels: vec![channel] },
        Act::SignOff {
            rest_assessed: [3, 5, 6, 7, 8, 9].into_iter().collect(),
            summary: String::new(),
        },
    ])
}

fn provenance() -> Provenance {
    Provenance {
        program: "0.1.0".to_owned(),
        now: Timestamp::from_second(1_767_229_200).unwrap(),
        person: "bert".to_owned(),
        campaign: None,
        ledger_problems: Vec::new(),
    }
}

fn write(
    source: &MaskSource,
    decisions: &[Decision],
    vocabulary: &Vocabulary,
    target: &Path,
) -> Vec<String> {
    let state = FlagState::replay(source.footprint_count(), &[], decisions, vocabulary);
    let record = Record { decisions, state: &state, vocabulary };
    write_mask(source, &record, &provenance(), target, Placing::Over).unwrap()
}

struct Mask {
    _dir: tempfile::TempDir,
    reader: FileReader,
}

impl Mask {
    fn of(source: &MaskSource, decisions: &[Decision], vocabulary: &Vocabulary) -> Self {
        let dir = tempfile::tempdir().unwrap();
        let path = dir.path().join("mask.nc");
        write(source, decisions, vocabulary, &path);
        let program = ReaderProgram::in_process();
        let reader = FileReader::open(&program, &path, &ReadLimits::default()).unwrap();
        Self { _dir: dir, reader }
    }

    fn values(&self, name: &str) -> Samples {
        self.reader.read_all(self.reader.index().variable(name).expect(name)).unwrap()
    }

    fn has(&self, name: &str) -> bool {
        self.reader.index().variable(name).is_some()
    }

    fn attribute(&self, variable: &str, name: &str) -> AttributeValue {
        let variable = self.reader.index().variable(variable).expect(variable);
        variable.attribute(name).expect(name).clone()
    }

    fn global(&self, name: &str) -> String {
        self.reader.index().global_attribute(name).expect(name).text().unwrap()
    }
}

#[test]
fn the_contract_of_a_mask() {
    let mask = Mask::of(&source(), &some_decisions(), &Vocabulary::released());
    let index = mask.reader.index();
    for name in ["footprint_flag", "review_state", "usable", "latitude", "longitude", "time"] {
        let variable = index.variable(name).unwrap();
        assert_eq!(index.dimension_names(variable), ["scan_line", "position"], "{name}");
    }
    let cloudy_unusual = 1 | 1 << 7;
    assert_eq!(
        mask.values("footprint_flag"),
        Samples::I32(vec![1, 1, cloudy_unusual, 1 << 7, 0, 0, 0, 0, 0, 0, 0, 0])
    );
    let decided = ReviewState::DecidedByPerson.code();
    assert_eq!(
        mask.values("review_state"),
        Samples::I8(
            (0..12).map(|at| if at == 4 || at > 9 { 0 } else { decided }).collect::<Vec<_>>()
        )
    );
    assert_eq!(mask.values("usable"), Samples::I8(vec![0, 0, 0, 1, 0, 1, 1, 1, 1, 1, 0, 0]));
    assert_eq!(mask.values("channel_flag_lw"), Samples::I32(vec![0; 5]));
    assert_eq!(mask.values("channel_flag_sw"), Samples::I32(vec![0, 0, 0b10, 0, 0]));
    assert_eq!(mask.values("wnum_sw").get(2), 2156.25);
    assert_eq!(mask.attribute("wnum_sw", "units"), "cm-1".into());
    assert_eq!(mask.attribute("footprint_flag", "coordinates"), "latitude longitude time".into());
}

#[test]
fn flag_attributes_are_those_of_cf() {
    let mask = Mask::of(&source(), &[], &Vocabulary::released());
    let masks = Samples::I32((0..9).map(|bit| 1 << bit).collect());
    assert_eq!(mask.attribute("footprint_flag", "flag_masks"), AttributeValue::Numbers(masks));
    let AttributeValue::Text(names) = mask.attribute("footprint_flag", "flag_meanings") else {
        panic!("flag_meanings are characters");
    };
    assert_eq!(names.split(' ').count(), 9);
    assert!(names.starts_with("cloudy thin_cloud dust_or_ash so2 bad_spectrum"));
    assert_eq!(
        mask.attribute("channel_flag_lw", "flag_masks"),
        AttributeValue::Numbers(Samples::I32(vec![1, 2, 4]))
    );
    assert_eq!(
        mask.attribute("review_state", "flag_values"),
        AttributeValue::Numbers(Samples::I8(vec![0, 1, 2]))
    );
    assert_eq!(
        mask.attribute("review_state", "flag_meanings"),
        "not_assessed assessed_by_test decided_by_person".into()
    );
}

#[test]
fn nothing_decided_is_nothing_usable() {
    let mask = Mask::of(&source(), &[], &Vocabulary::released());
    assert_eq!(mask.values("review_state"), Samples::I8(vec![0; 12]));
    assert_eq!(mask.values("usable"), Samples::I8(vec![0; 12]));
    assert_eq!(mask.global("reviewers"), "none");
    assert!(mask.global("signed_off_by").starts_with("nobody"));
}

#[test]
fn a_flag_limited_to_a_band_shows_in_that_band_only() {
    let mask = Mask::of(&source(), &some_decisions(), &Vocabulary::released());
    assert_eq!(mask.values("footprint_flag").get(5), 0.0);
    assert_eq!(mask.values("footprint_flag_sw").get(5), 16.0);
    assert_eq!(mask.values("footprint_flag_lw"), mask.values("footprint_flag"));
    let without = decisions(vec![flag("cloudy", 0..3, None)]);
    assert!(!Mask::of(&source(), &without, &Vocabulary::released()).has("footprint_flag_sw"));
}

#[test]
fn one_band_needs_no_name() {
    let mut source = source();
    source.bands.truncate(1);
    let mask = Mask::of(&source, &[], &Vocabulary::released());
    assert!(mask.has("channel_flag") && !mask.has("channel_flag_lw"));
}

#[test]
fn a_campaigns_own_flags_are_in_the_mask() {
    let glint = FlagExtension {
        name: "sun_glint".to_owned(),
        bit: 30,
        scope: Scope::Footprint,
        glyph: 'L',
        key: 'l',
        meaning: "glint".to_owned(),
        excludes: true,
    };
    let vocabulary = Vocabulary::with_extensions(&[glint]).unwrap();
    let mask = Mask::of(&source(), &decisions(vec![flag("sun_glint", 1..2, None)]), &vocabulary);
    assert_eq!(mask.values("footprint_flag").get(1), f64::from(1 << 30));
    assert_eq!(mask.values("usable").get(1), 0.0);
    assert!(mask.global("vocabulary").ends_with("sun_glint"));
}

#[test]
fn the_error_rate_of_the_plain_cases_goes_with_it() {
    let check = SpotCheck {
        rulebook: "built-in (0123)".to_owned(),
        seed: 7,
        strata: vec![Stratum {
            flagged: false,
            plain: 900,
            right: FootprintSet::range(0..20),
            wrong: FootprintSet::empty(),
            untold: FootprintSet::empty(),
        }],
    };
    let mask =
        Mask::of(&source(), &decisions(vec![Act::SpotCheck(check)]), &Vocabulary::released());
    assert_eq!(
        mask.global("spot_check"),
        "no flag: 0 of 20 wrong: 0.0 %, with 95 % confidence 0.0 % to 16.8 %"
    );
    assert_eq!(mask.global("spot_check_rulebook"), "built-in (0123)");
    assert_eq!(mask.global("spot_check_seed"), "7");
}

#[test]
fn provenance_and_cautions_go_with_it() {
    let mask = Mask::of(&source(), &some_decisions(), &Vocabulary::released());
    assert_eq!(mask.global("Conventions"), "CF-1.8");
    assert_eq!(
        mask.global("history"),
        "2026-01-01T00:00:00Z made\n\
         2026-01-01T01:00:00Z radsieve 0.1.0 export: flag mask of lowen_001.nc by bert"
    );
    assert_eq!(mask.global("granule_blake3"), source().hash);
    assert_eq!(mask.global("granule_size_bytes"), "12345");
    assert_eq!(mask.global("reviewers"), "anna");
    assert_eq!(mask.global("signed_off_by"), "anna");
    assert_eq!(mask.global("decision_count"), "5");
    assert_eq!(mask.global("problems"), "apodisation is not named");
    assert!(mask.global("comment").contains("not a warning service"));
    assert!(mask.global("source").contains("synthetic data"), "a synthetic granule stays labelled");
}

#[test]
fn flags_that_do_not_fit_the_granule_are_told() {
    let channel = |band: &str, index, wavenumber| Act::FlagChannels {
        flag: "dead".to_owned(),
        channels: vec![ChannelName { band: band.to_owned(), index, wavenumber }],
    };
    let odd = decisions(vec![
        channel("lw", 99, 650.0),
        channel("lw", 1, 700.0),
        channel("uv", 0, 650.0),
        flag("cloudy", 0..1, Some("uv")),
    ]);
    let dir = tempfile::tempdir().unwrap();
    let path = dir.path().join("mask.nc");
    let problems = write(&source(), &odd, &Vocabulary::released(), &path);
    assert_eq!(problems.len(), 5, "{problems:?}");
    let state = FlagState::replay(3, &[], &[], &Vocabulary::released());
    let record = Record { decisions: &[], state: &state, vocabulary: &Vocabulary::released() };
    let error = write_mask(&source(), &record, &provenance(), &path, Placing::Over).unwrap_err();
    assert!(error.to_string().contains("3 footprints"), "{error}");
}

/// Coordinates that would be called like a dimension get another name: readers refuse the other.
#[test]
fn odd_dimension_names_do_no_harm() {
    let mut source = source();
    source.footprints[0].0 = "time".to_owned();
    source.bands[0].dimension = "position".to_owned();
    let mask = Mask::of(&source, &[], &Vocabulary::released());
    assert!(mask.has("time_of_footprint"));
    let index = mask.reader.index();
    let channel = index.variable("channel_flag_lw").unwrap();
    assert_eq!(index.dimension_names(channel), ["position_lw"]);
}

#[test]
fn missing_geolocation_is_left_out_and_missing_positions_are_fill() {
    let mask = Mask::of(&source(), &[], &Vocabulary::released());
    assert_eq!(mask.values("longitude").get(3), 9.969_209_968_386_869e36);
    let bare = MaskSource { latitude: None, longitude: None, time: None, ..source() };
    let mask = Mask::of(&bare, &[], &Vocabulary::released());
    assert!(!mask.has("latitude"));
    let flags = mask.reader.index().variable("footprint_flag").unwrap();
    assert_eq!(flags.attribute("coordinates"), None);
}

/// The same decisions, clock and person give the same bytes: no time stamps inside the file.
#[test]
fn the_same_decisions_give_the_same_bytes() {
    let dir = tempfile::tempdir().unwrap();
    let bytes = |name: &str| {
        let path = dir.path().join(name);
        write(&source(), &some_decisions(), &Vocabulary::released(), &path);
        std::fs::read(path).unwrap()
    };
    let first = bytes("one.nc");
    // Time stamps in HDF5 count whole seconds.
    std::thread::sleep(std::time::Duration::from_millis(1100));
    assert!(first == bytes("two.nc"));
}

#[test]
fn a_list_holds_the_usable_footprints_with_their_places() {
    let dir = tempfile::tempdir().unwrap();
    let path = dir.path().join("list.csv");
    let (source, decisions, vocabulary) = (source(), some_decisions(), Vocabulary::released());
    let state = FlagState::replay(12, &[], &decisions, &vocabulary);
    let record = Record { decisions: &decisions, state: &state, vocabulary: &vocabulary };
    assert_eq!(write_usable_list(&source, &record, &path, Placing::Over).unwrap(), 6);
    let text = std::fs::read_to_string(&path).unwrap();
    let lines: Vec<&str> = text.lines().collect();
    assert_eq!(lines[0], "scan_line,position,lat,lon,bands_lost,granule");
    assert_eq!(lines[1], "0,3,3,,,0123456789ab");
    assert_eq!(lines[2], "1,1,5,5,sw,0123456789ab");
    assert_eq!(lines.len(), 7);
    assert_eq!(list_owner(&path, &source), Owner::Granule(source.hash.clone()));
    let other = MaskSource { hash: "ff".repeat(32), ..source.clone() };
    assert!(matches!(list_owner(&path, &other), Owner::Granule(hash) if hash != other.hash));
    std::fs::write(&path, "scan_line,position,lat,lon,bands_lost,granule\n").unwrap();
    assert_eq!(list_owner(&path, &source), Owner::Unknown);
    std::fs::write(&path, "a,b\n1,2\n").unwrap();
    assert_eq!(list_owner(&path, &source), Owner::Other);
    assert_eq!(list_owner(&dir.path().join("none"), &source), Owner::Other);
}
