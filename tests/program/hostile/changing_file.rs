//! A file that is cut, written over, replaced or taken away while it is open.

use std::fs::OpenOptions;
use std::path::Path;

use radsieve::granule::Granule;
use radsieve::netcdf_files::{
    FileFormat, NetcdfWriter, ReadLimits, ReaderProgram, ValueKind, VariableDraft,
};
use radsieve::system::Cancel;

/// Lines, positions, channels: values of several slabs.
const LENGTHS: [usize; 3] = [64, 8, 2048];

/// What can happen to a file that somebody reads: in words, and done.
type Mishap = (&'static str, fn(&Path));

const MISHAPS: [Mishap; 5] = [
    ("cut short", |path| cut(path, |length| length / 2)),
    ("emptied", |path| cut(path, |_| 0)),
    ("grown", |path| cut(path, |length| length + 4096)),
    ("replaced", |path| {
        let other = path.with_extension("new");
        std::fs::write(&other, b"something else").unwrap();
        std::fs::rename(&other, path).unwrap();
    }),
    ("taken away", |path| std::fs::remove_file(path).unwrap()),
];

fn cut(path: &Path, length: fn(u64) -> u64) {
    let file = OpenOptions::new().write(true).open(path).unwrap();
    file.set_len(length(file.metadata().unwrap().len())).unwrap();
}

fn write(path: &Path, format: FileFormat) {
    let mut writer = NetcdfWriter::create_as(path, format).unwrap();
    for (name, length) in ["line", "position", "nu"].iter().zip(LENGTHS) {
        writer.dimension(name, length).unwrap();
    }
    let axis = VariableDraft::new("nu", ValueKind::F64, &["nu"]).attribute("units", "cm-1");
    let radiance = VariableDraft::new("radiance", ValueKind::F32, &["line", "position", "nu"])
        .attribute("units", "mW m-2 sr-1 (cm-1)-1");
    let quality = VariableDraft::new("quality", ValueKind::I16, &["line", "position"]);
    for draft in [axis, radiance, quality] {
        writer.variable(&draft).unwrap();
    }
    let wavenumbers: Vec<f64> = (0..LENGTHS[2]).map(|n| 700.0 + 0.25 * n as f64).collect();
    writer.put_all("nu", &wavenumbers.into()).unwrap();
    writer.put_all("radiance", &vec![60.0_f32; LENGTHS.iter().product()].into()).unwrap();
    writer.put_all("quality", &vec![0_i16; LENGTHS[0] * LENGTHS[1]].into()).unwrap();
    writer.close().unwrap();
}

fn open(path: &Path) -> Granule {
    let program = ReaderProgram::new(env!("CARGO_BIN_EXE_radsieve"));
    let limits = ReadLimits { per_request: super::PATIENCE, ..ReadLimits::default() };
    Granule::open(&program, path, &limits).unwrap()
}

/// Asserts that an error names the file and says what has become of it.
fn assert_clear(error: &impl std::fmt::Display, case: &str) {
    let error = error.to_string();
    let says = |what: &str| error.contains(what);
    assert!(says("synthetic.nc"), "{case}: {error}");
    assert!(says("has changed since it was opened") || says("No such file"), "{case}: {error}");
}

#[test]
fn whatever_becomes_of_an_open_file_is_told_by_every_way_to_read_it() {
    for format in [FileFormat::Netcdf4, FileFormat::Classic] {
        for (what, mishap) in MISHAPS {
            let case = format!("{} {what}", format.label());
            let folder = tempfile::tempdir().unwrap();
            let path = folder.path().join("synthetic.nc");
            write(&path, format);
            let granule = open(&path);
            granule.read_spectrum(0, 0).unwrap();
            mishap(&path);
            assert_clear(&granule.read_spectrum(0, 1).unwrap_err(), &case);
            assert_clear(&granule.read_variable("quality").unwrap_err(), &case);
            assert_clear(&granule.hash().unwrap_err(), &case);
            let filled = granule.fill(&Cancel::new(), &mut |_| {});
            assert_clear(&filled.unwrap_err(), &case);
            assert!(granule.read_spectrum(0, 1).is_err(), "{case}: and stays so");
        }
    }
}

#[test]
fn a_file_that_goes_while_it_is_read_ends_the_reading_and_keeps_what_is_here() {
    for format in [FileFormat::Netcdf4, FileFormat::Offset64] {
        for (what, mishap) in MISHAPS {
            let case = format!("{} {what}", format.label());
            let folder = tempfile::tempdir().unwrap();
            let path = folder.path().join("synthetic.nc");
            write(&path, format);
            let granule = open(&path);
            let mut begun = false;
            let filled = granule.fill(&Cancel::new(), &mut |_| {
                if !std::mem::replace(&mut begun, true) {
                    mishap(&path);
                }
            });
            assert_clear(&filled.unwrap_err(), &case);
            let cube = granule.cube();
            let here = (0..cube.slabs(0)).filter(|slab| cube.has_slab(0, *slab));
            let first = here.map(|slab| cube.footprints_of(0, slab).start).next().unwrap();
            assert_eq!(granule.read_spectrum(0, first).unwrap(), vec![60.0; LENGTHS[2]], "{case}");
        }
    }
}
