//! Granules of several layouts, made by the writer and read back in process.

use std::path::Path;

use super::*;
use crate::netcdf_files::{
    NetcdfWriter, ReadLimits, ReaderProgram, Samples, ValueKind, VariableDraft,
};
use crate::system::Cancel;

/// A file in a folder that vanishes with it.
pub(super) struct File {
    _folder: tempfile::TempDir,
    pub(super) path: std::path::PathBuf,
}

pub(super) fn file(write: impl FnOnce(&mut NetcdfWriter)) -> File {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("synthetic.nc");
    let mut writer = NetcdfWriter::create(&path).unwrap();
    write(&mut writer);
    writer.close().unwrap();
    File { _folder: folder, path }
}

pub(super) fn open(path: &Path) -> Result<Granule, GranuleError> {
    Granule::open(&ReaderProgram::in_process(), path, &ReadLimits::default())
}

/// A granule whose file stays there as long as it does.
pub(super) struct Opened {
    granule: Granule,
    _file: File,
}

impl std::ops::Deref for Opened {
    type Target = Granule;
    fn deref(&self) -> &Granule {
        &self.granule
    }
}

pub(super) fn opened(write: impl FnOnce(&mut NetcdfWriter)) -> Opened {
    let file = file(write);
    Opened { granule: open(&file.path).unwrap(), _file: file }
}

pub(super) fn put(writer: &mut NetcdfWriter, draft: VariableDraft, values: impl Into<Samples>) {
    writer.variable(&draft).unwrap();
    writer.put_all(&draft.path, &values.into()).unwrap();
}

pub(super) fn filled(granule: &Granule) -> std::sync::Arc<Cube> {
    granule.fill(&Cancel::new(), &mut |_| {}).unwrap();
    granule.cube()
}

pub(super) const UNIT: &str = "mW m-2 sr-1 (cm-1)-1";

pub(super) fn axis(path: &str, dimension: &str, units: &str) -> VariableDraft {
    VariableDraft::new(path, ValueKind::F64, &[dimension]).attribute("units", units)
}

pub(super) fn radiance(path: &str, dimensions: &[&str], units: &str) -> VariableDraft {
    VariableDraft::new(path, ValueKind::F32, dimensions).attribute("units", units)
}

/// 2 lines, 3 positions, channels at 900, 901, 902: the value is 100 line + 10 position + channel.
pub(super) fn plain(writer: &mut NetcdfWriter) {
    writer.dimension("line", 2).unwrap();
    writer.dimension("position", 3).unwrap();
    writer.dimension("nu", 3).unwrap();
    put(writer, axis("nu", "nu", "cm-1"), vec![900.0, 901.0, 902.0]);
    let values: Vec<f32> =
        (0..18).map(|n| (100 * (n / 9) + 10 * (n / 3 % 3) + n % 3) as f32).collect();
    put(writer, radiance("radiance", &["line", "position", "nu"], UNIT), values);
}

pub(super) fn has_problem(granule: &Granule, words: &str) -> bool {
    granule.problems().iter().any(|problem| problem.to_string().contains(words))
}

#[test]
fn the_plainest_granule_is_understood_and_what_it_lacks_is_named() {
    let granule = opened(plain);
    assert_eq!(granule.footprints().names(), ["line", "position"]);
    assert_eq!(granule.footprints().count(), 6);
    let band = &granule.bands()[0];
    assert_eq!(
        (band.name.as_str(), band.channels(), band.range()),
        ("radiance", 3, (900.0, 902.0))
    );
    assert_eq!(band.apodisation, Apodisation::Unknown);
    assert!(has_problem(&granule, "apodised"));
    assert!(has_problem(&granule, "no `lat`"));
    assert_eq!(granule.stem(), "synthetic");
    assert_eq!(granule.read_spectrum(0, 5).unwrap(), [120.0, 121.0, 122.0]);
}

#[test]
fn radiance_per_wavelength_on_a_wavelength_axis_is_converted() {
    let granule = opened(|writer| {
        writer.dimension("footprint", 1).unwrap();
        writer.dimension("channel", 2).unwrap();
        put(writer, axis("wavelength", "channel", "um"), vec![10.0, 12.5]);
        let draft = radiance("radiance", &["footprint", "channel"], "W m-2 sr-1 um-1")
            .attribute("coordinates", "wavelength");
        // Source: the facts on units give 85.9962615361 r.u. = 6.96569718442 W m-2 sr-1 um-1 at
        // 900 cm-1; the Jacobian is nu^2 1e-7.
        put(writer, draft, vec![1.0_f32, 2.0]);
    });
    let values = granule.read_spectrum(0, 0).unwrap();
    assert!((values[0] - 1.0 / (1e6 * 1e-7)).abs() < 1e-9, "{values:?}");
    assert!((values[1] - 2.0 / (640_000.0 * 1e-7)).abs() < 1e-9, "{values:?}");
}

#[test]
fn stored_brightness_temperatures_stay_exact() {
    let granule = opened(|writer| {
        writer.dimension("line", 1).unwrap();
        writer.dimension("position", 2).unwrap();
        writer.dimension("channel", 2).unwrap();
        let nu = axis("wavenumber", "channel", "m-1")
            .attribute("standard_name", "sensor_band_central_radiation_wavenumber");
        put(writer, nu, vec![90_000.0, 123_100.0]);
        let draft = radiance("bt", &["line", "position", "channel"], "K")
            .attribute("standard_name", "toa_brightness_temperature");
        put(writer, draft, vec![280.25_f32, 281.5, -5.0, 9.96921e36]);
    });
    assert_eq!(granule.read_spectrum(0, 0).unwrap(), [280.25, 281.5]);
    assert!(granule.read_spectrum(0, 1).unwrap().iter().all(|value| value.is_nan()));
}

#[test]
fn negative_radiances_are_data_and_undeclared_fills_are_noted() {
    let granule = opened(|writer| {
        writer.dimension("footprint", 2).unwrap();
        writer.dimension("nu", 2).unwrap();
        put(writer, axis("nu", "nu", "cm-1"), vec![2500.0, 2501.0]);
        let draft = radiance("radiance", &["footprint", "nu"], UNIT);
        put(writer, draft, vec![-0.002_f32, 0.5, -999.9, -9999.0]);
    });
    let cube = filled(&granule);
    let mut spectrum = Vec::new();
    cube.values(0, 0, &mut spectrum);
    assert_eq!(spectrum, [f64::from(-0.002_f32), 0.5]);
    cube.values(0, 1, &mut spectrum);
    assert!(spectrum.iter().all(|value| value.is_nan()));
    assert!(cube.notes()[0].to_string().contains("2 values of -900 or less"));
}

#[test]
fn geolocation_of_any_shape_is_spread_over_the_footprints() {
    let granule = opened(|writer| {
        plain(writer);
        let draft = |path, dimensions: &[&str], name: &str, units: &str| {
            VariableDraft::new(path, ValueKind::F32, dimensions)
                .attribute("standard_name", name)
                .attribute("units", units)
        };
        let lat = draft("geo/y", &["position", "line"], "latitude", "degrees_north");
        put(writer, lat, vec![0.0_f32, 10.0, 1.0, 11.0, 2.0, 99.0]);
        let zenith = draft("geo/zen", &["position"], "sensor_zenith_angle", "radian");
        put(writer, zenith, vec![0.0_f32, 0.5, 1.0]);
        let time = draft("t", &["line"], "time", "seconds since 1970-01-01");
        put(writer, time, vec![5.0_f32, 6.0]);
        let land = VariableDraft::new("land_frac", ValueKind::I8, &["line", "position"]);
        put(writer, land.attribute("units", "%"), vec![0_i8, 50, 100, 0, 0, 0]);
    });
    let place = granule.geolocation();
    let latitude = place.latitude.as_ref().unwrap();
    assert_eq!(latitude[..5], [0.0, 1.0, 2.0, 10.0, 11.0]);
    assert!(latitude[5].is_nan(), "there is no 99 degrees north");
    assert!(has_problem(&granule, "1 values outside of -90 to 90"));
    let zenith = place.view_zenith.as_ref().unwrap();
    assert!((zenith[4] - 0.5_f64.to_degrees()).abs() < 1e-6, "0.5 is exact in f32");
    assert_eq!(place.time.as_deref().unwrap(), [5.0, 5.0, 5.0, 6.0, 6.0, 6.0]);
    assert_eq!(place.land_fraction.as_deref().unwrap()[..3], [0.0, 0.5, 1.0]);
    assert!(has_problem(&granule, "taken for land by its name"));
    assert!(place.longitude.is_none());
}

#[test]
fn quality_variables_are_found_and_read_by_path_or_name() {
    let granule = opened(|writer| {
        plain(writer);
        let draft = VariableDraft::new("quality/rad_qc", ValueKind::I8, &["line", "position"])
            .attribute("standard_name", "quality_flag")
            .attribute("flag_values", vec![0_i8, 1])
            .attribute("flag_meanings", "good bad");
        put(writer, draft, vec![0_i8, 1, 0, 0, 0, 1]);
        put(
            writer,
            VariableDraft::new("surface_temperature", ValueKind::F32, &["line"]),
            vec![280.0_f32, 290.0],
        );
    });
    let quality = granule.variable("rad_qc").unwrap();
    assert_eq!((quality.name.as_str(), quality.role), ("quality/rad_qc", VariableRole::Quality));
    assert_eq!(quality.meanings_of(1.0), ["bad"]);
    assert_eq!(granule.read_variable("quality/rad_qc").unwrap(), [0.0, 1.0, 0.0, 0.0, 0.0, 1.0]);
    assert_eq!(granule.read_variable("surface_temperature").unwrap()[3], 290.0);
    let error = granule.read_variable("nothing").unwrap_err().to_string();
    assert!(error.contains("quality/rad_qc"), "{error}");
}

#[test]
fn a_file_without_spectra_says_what_was_looked_for_and_found() {
    let without_units = file(|writer| {
        writer.dimension("line", 2).unwrap();
        writer.dimension("nu", 2).unwrap();
        put(writer, axis("nu", "nu", "cm-1"), vec![900.0, 901.0]);
        put(writer, radiance("radiance", &["line", "nu"], "1"), vec![1.0_f32; 4]);
    });
    let error = open(&without_units.path).unwrap_err().to_string();
    assert!(error.contains("mW m-2 sr-1 (cm-1)-1") && error.contains("`radiance`"), "{error}");

    let without_axis = file(|writer| {
        writer.dimension("line", 2).unwrap();
        writer.dimension("nu", 2).unwrap();
        put(writer, radiance("radiance", &["line", "nu"], UNIT), vec![1.0_f32; 4]);
    });
    let error = open(&without_axis.path).unwrap_err().to_string();
    assert!(error.contains("no spectral axis"), "{error}");

    let empty = file(|_| {});
    assert!(open(&empty.path).unwrap_err().to_string().contains("no variable with two dimensions"));
}

#[test]
fn dimensions_of_length_zero_and_too_many_footprints_are_refused() {
    let none = file(|writer| {
        writer.unlimited_dimension("line").unwrap();
        writer.dimension("nu", 2).unwrap();
        put(writer, axis("nu", "nu", "cm-1"), vec![900.0, 901.0]);
        writer.variable(&radiance("radiance", &["line", "nu"], UNIT)).unwrap();
    });
    assert!(open(&none.path).unwrap_err().to_string().contains("no footprints"));
    let many = file(|writer| {
        writer.dimension("line", 5_000_000).unwrap();
        writer.dimension("position", 5).unwrap();
        writer.dimension("nu", 2).unwrap();
        put(writer, axis("nu", "nu", "cm-1"), vec![900.0, 901.0]);
        let draft = radiance("radiance", &["line", "position", "nu"], UNIT);
        writer.variable(&draft.chunks(&[100, 5, 2])).unwrap();
    });
    assert!(open(&many.path).unwrap_err().to_string().contains("20000000 footprints"));
}

#[test]
fn a_metre_axis_that_is_no_wavelength_is_not_taken_for_one() {
    let distances = file(|writer| {
        writer.dimension("line", 2).unwrap();
        writer.dimension("x", 2).unwrap();
        put(writer, axis("x", "x", "m"), vec![0.0, 1000.0]);
        put(writer, radiance("radiance", &["line", "x"], UNIT), vec![1.0_f32; 4]);
    });
    assert!(open(&distances.path).unwrap_err().to_string().contains("no spectral axis"));
}

#[test]
fn a_file_that_is_written_over_or_vanishes_is_not_read_on() {
    let file = file(plain);
    let granule = open(&file.path).unwrap();
    granule.read_spectrum(0, 0).unwrap();
    std::fs::OpenOptions::new().write(true).open(&file.path).unwrap().set_len(4000).unwrap();
    let error = granule.fill(&Cancel::new(), &mut |_| {}).unwrap_err().to_string();
    assert!(error.contains("has changed"), "{error}");
    std::fs::remove_file(&file.path).unwrap();
    assert!(granule.hash().unwrap_err().to_string().contains("synthetic.nc"));
}

#[test]
fn the_hash_is_of_the_content() {
    let file = file(plain);
    let granule = open(&file.path).unwrap();
    assert!(granule.identity().is_none());
    let identity = granule.hash().unwrap().clone();
    assert_eq!(identity, Identity::of(&file.path, granule.reader.limit()).unwrap());
    assert_eq!(granule.identity(), Some(&identity));
}
