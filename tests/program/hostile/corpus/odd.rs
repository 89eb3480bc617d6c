//! Files that are whole, and odd.

use std::path::{Path, PathBuf};

use super::Answer;
use radsieve::netcdf_files::{AttributeValue, FileFormat, NetcdfWriter, ValueKind, VariableDraft};

/// What shall come of a file.
enum Expected {
    /// Described and its values read.
    Read,
    /// Refused with a message that holds this.
    Refused(&'static str),
}

/// An odd file.
pub struct Odd {
    /// In words.
    pub what: &'static str,
    /// Where it is.
    pub path: PathBuf,
    expected: Expected,
}

impl Odd {
    /// What is wrong with how describing it and taking a layer out of it ended, if anything.
    pub fn surprise(&self, described: &Answer, tabulated: &Answer) -> Option<String> {
        let (codes, word, text) = match self.expected {
            Expected::Read => ((0, 0), "", &tabulated.text),
            Expected::Refused(word) => ((4, 4), word, &described.text),
        };
        let as_expected = described.code == Some(codes.0)
            && tabulated.code == Some(codes.1)
            && text.contains(word);
        let found = || format!("{}: {:?} {:?}", self.what, described.code, tabulated.code);
        let begin = || text.chars().take(600).collect::<String>();
        (!as_expected).then(|| format!("{} {}", found(), begin()))
    }
}

/// A granule to make odd: 3 x 4 footprints, 8 channels from 897 cm-1 on.
struct Plan {
    format: FileFormat,
    lines: Option<usize>,
    positions: usize,
    channels: Option<usize>,
    axis: ValueKind,
    radiance: VariableDraft,
    written: bool,
    more: fn(&mut NetcdfWriter),
}

fn plan() -> Plan {
    let radiance = VariableDraft::new("radiance", ValueKind::F32, &["line", "position", "nu"])
        .attribute("units", "mW m-2 sr-1 (cm-1)-1");
    Plan {
        format: FileFormat::Netcdf4,
        lines: Some(3),
        positions: 4,
        channels: Some(8),
        axis: ValueKind::F64,
        radiance,
        written: true,
        more: |_| {},
    }
}

fn of_kind(kind: ValueKind) -> Plan {
    let mut plan = plan();
    plan.radiance.kind = kind;
    plan.written = false;
    plan
}

/// A granule with much on paper and nothing in the file.
fn sparse(lines: usize, channels: usize) -> Plan {
    let mut plan = plan();
    (plan.lines, plan.channels, plan.written) = (Some(lines), Some(channels), false);
    plan.radiance = plan.radiance.chunks(&[64, 4, channels]);
    plan
}

fn with_attributes(attributes: &[(&str, AttributeValue)]) -> Plan {
    let mut plan = plan();
    for (name, value) in attributes {
        plan.radiance = plan.radiance.attribute(name, value.clone());
    }
    plan
}

fn with_more(more: fn(&mut NetcdfWriter)) -> Plan {
    Plan { more, ..plan() }
}

impl Plan {
    fn write(&self, path: &Path) {
        let mut writer = NetcdfWriter::create_as(path, self.format).unwrap();
        for (name, length) in
            [("line", self.lines), ("position", Some(self.positions)), ("nu", self.channels)]
        {
            match length {
                Some(length) => writer.dimension(name, length).unwrap(),
                None => writer.unlimited_dimension(name).unwrap(),
            }
        }
        let axis = VariableDraft::new("nu", self.axis, &["nu"]).attribute("units", "cm-1");
        writer.variable(&axis).unwrap();
        writer.variable(&self.radiance).unwrap();
        (self.more)(&mut writer);
        if let (Some(channels), ValueKind::F64) = (self.channels, self.axis) {
            let step = 8.0 / channels as f64;
            let axis: Vec<f64> = (0..channels).map(|n| 897.0 + step * n as f64).collect();
            writer.put_all("nu", &axis.into()).unwrap();
        }
        if let (true, Some(lines), Some(channels)) = (self.written, self.lines, self.channels) {
            let values = vec![60.0_f32; lines * self.positions * channels];
            writer.put_all("radiance", &values.into()).unwrap();
        }
        writer.close().unwrap();
    }
}

/// What a terminal would obey, invisible, or turned around.
const ESCAPES: &str = "\x1b[2J\x1b]0;owned\x07\u{202e}\u{200b}\u{9b}31m\r\n";

/// Odd files in a folder.
pub fn files(folder: &Path) -> Vec<Odd> {
    use Expected::{Read, Refused};
    let text = |times: usize| AttributeValue::from(ESCAPES.repeat(times));
    let plans: Vec<(&'static str, Plan, Expected)> = vec![
        ("as usual", plan(), Read),
        ("radiances that are strings", of_kind(ValueKind::Text), Refused("no spectra")),
        ("radiances that were never written", of_kind(ValueKind::F64), Read),
        ("radiances in bytes", of_kind(ValueKind::I8), Read),
        ("an axis of strings", Plan { axis: ValueKind::Text, ..plan() }, Refused("no spectra")),
        ("an axis never written", Plan { axis: ValueKind::F32, ..plan() }, Refused("no spectra")),
        ("no lines", Plan { lines: None, written: false, ..plan() }, Refused("no footprints")),
        ("no channels", Plan { channels: None, written: false, ..plan() }, Refused("axis")),
        ("one footprint", Plan { lines: Some(1), positions: 1, ..plan() }, Read),
        ("one channel", Plan { channels: Some(1), ..plan() }, Read),
        ("too many footprints", sparse(6_000_000, 8), Refused("ncks -d line,0,999")),
        ("values never written", sparse(640, 200), Read),
        ("an attribute of escapes", with_attributes(&[("long_name", text(1))]), Read),
        ("attributes of megabytes", with_attributes(&[("long_name", text(30_000))]), Read),
        ("an attribute too long", with_attributes(&[("comment", text(70_000))]), Read),
        (
            "strings of escapes",
            with_attributes(&[("names", vec![ESCAPES.to_owned(); 9].into())]),
            Read,
        ),
        (
            "a title of escapes",
            with_more(|file| file.global_attribute("title", ESCAPES).unwrap()),
            Read,
        ),
        ("many long attributes", with_more(long_attributes), Read),
        ("many attributes", with_more(many_attributes), Read),
        ("many variables", with_more(many_variables), Read),
        ("many dimensions", with_more(many_dimensions), Read),
        ("many groups", with_more(many_groups), Read),
        ("groups deep in groups", with_more(deep_groups), Read),
        ("names turned around", with_more(odd_names), Read),
        ("units of megabytes", long_units(), Refused("no spectra")),
    ];
    let mut files: Vec<Odd> = plans
        .into_iter()
        .enumerate()
        .map(|(number, (what, plan, expected))| {
            let path = folder.join(format!("odd_{number}.nc"));
            plan.write(&path);
            Odd { what, path, expected }
        })
        .collect();
    let path = folder.join("odd_nothing.nc");
    NetcdfWriter::create(&path).unwrap().close().unwrap();
    files.push(Odd { what: "nothing at all", path, expected: Refused("no spectra") });
    files
}

fn long_units() -> Plan {
    let mut plan = plan();
    plan.radiance.attributes.clear();
    plan.radiance = plan.radiance.attribute("units", ESCAPES.repeat(30_000));
    plan
}

fn long_attributes(file: &mut NetcdfWriter) {
    for number in 0..100 {
        file.global_attribute(&format!("text_{number}"), ESCAPES.repeat(30_000)).unwrap();
    }
}

fn many_attributes(file: &mut NetcdfWriter) {
    for number in 0..2000 {
        file.global_attribute(&format!("text_{number}"), ESCAPES).unwrap();
    }
}

fn many_variables(file: &mut NetcdfWriter) {
    for number in 0..500 {
        let draft = VariableDraft::new(format!("v{number}"), ValueKind::F32, &["line", "position"]);
        file.variable(&draft.attribute("long_name", ESCAPES)).unwrap();
    }
}

fn many_dimensions(file: &mut NetcdfWriter) {
    for number in 0..500 {
        file.dimension(&format!("d{number}"), 1 << 40).unwrap();
    }
}

fn many_groups(file: &mut NetcdfWriter) {
    for number in 0..300 {
        file.group_attribute(&format!("g{number}"), "comment", ESCAPES).unwrap();
    }
}

fn deep_groups(file: &mut NetcdfWriter) {
    file.group_attribute(&["g"; 30].join("/"), "comment", ESCAPES).unwrap();
}

fn odd_names(file: &mut NetcdfWriter) {
    let name = "qualit\u{202e}y\u{200b}";
    let draft = VariableDraft::new(name, ValueKind::I8, &["line", "position"]);
    file.variable(
        &draft.attribute("flag_meanings", "a\u{202e}b c").attribute("flag_values", vec![0_i8, 1]),
    )
    .unwrap();
}
