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

fn filled(granule: &Granule) -> std::sync::Arc<Cube> {
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
fn the_cube_says_what_is_not_here_yet() {
    let granule = opened(plain);
    let cube = granule.cube();
    let mut column = vec![0.0; 6];
    assert_eq!(cube.channel(0, 1, &mut column), Presence::NotYet);
    assert!(column.iter().all(|value| value.is_nan()));
    let mut seen = Vec::new();
    granule.fill(&Cancel::new(), &mut |progress| seen.push(progress)).unwrap();
    assert_eq!(seen.last(), Some(&Progress { done: 1, total: 1 }));
    assert!(cube.is_complete(0));
    assert_eq!(cube.channel(0, 1, &mut column), Presence::Here);
    assert_eq!(column, [1.0, 11.0, 21.0, 101.0, 111.0, 121.0]);
    let mut spectrum = Vec::new();
    assert_eq!(cube.values(0, 4, &mut spectrum), Presence::Here);
    assert_eq!(spectrum, [110.0, 111.0, 112.0]);
}

#[test]
fn many_slabs_are_filled_by_several_threads_and_told_in_order() {
    let channels = 500;
    let value = |line: usize, position: usize, channel: usize| {
        (1000 * line + 10 * position) as f32 + channel as f32 / 1000.0
    };
    let file = file(|writer| {
        for (name, length) in [("line", 40), ("position", 30), ("nu", channels)] {
            writer.dimension(name, length).unwrap();
        }
        let wavenumbers: Vec<f64> = (0..channels).map(|n| 900.0 + n as f64).collect();
        put(writer, axis("nu", "nu", "cm-1"), wavenumbers);
        let draft = radiance("radiance", &["line", "position", "nu"], UNIT);
        let places = (0..40).flat_map(|line| (0..30).map(move |position| (line, position)));
        let values: Vec<f32> = places
            .flat_map(|(line, position)| (0..channels).map(move |n| value(line, position, n)))
            .collect();
        put(writer, draft.chunks(&[4, 10, 300]).deflate(1), values);
    });
    let granule = open(&file.path).unwrap();
    let slabs = granule.cube().slabs(0);
    assert!(slabs > 1);
    let mut seen = Vec::new();
    granule.fill(&Cancel::new(), &mut |progress| seen.push(progress.done)).unwrap();
    assert_eq!(seen, (1..=slabs).collect::<Vec<_>>());
    let cube = granule.cube();
    let mut spectrum = Vec::new();
    for footprint in [0, 29, 30, 601, 1199] {
        assert_eq!(cube.values(0, footprint, &mut spectrum), Presence::Here);
        let expected: Vec<f64> = (0..channels)
            .map(|channel| f64::from(value(footprint / 30, footprint % 30, channel)))
            .collect();
        assert_eq!(spectrum, expected);
    }
}

#[test]
fn filling_stops_when_it_is_asked_to() {
    let granule = opened(plain);
    let cancel = Cancel::new();
    cancel.cancel();
    let result = granule.fill(&cancel, &mut |_| {});
    assert!(matches!(result, Err(GranuleError::Cancelled)));
    assert!(!granule.cube().is_complete(0));
}

#[test]
fn the_spectral_axis_may_stand_first_or_in_the_middle() {
    for dimensions in
        [["nu", "line", "position"], ["line", "nu", "position"], ["position", "nu", "line"]]
    {
        let lengths = dimensions.map(|name| match name {
            "line" => 2,
            "position" => 3,
            _ => 4,
        });
        let granule = opened(|writer| {
            for (name, length) in [("line", 2), ("position", 3), ("nu", 4)] {
                writer.dimension(name, length).unwrap();
            }
            put(writer, axis("nu", "nu", "cm-1"), vec![900.0, 901.0, 902.0, 903.0]);
            // Each value tells its place: 100 line + 10 position + channel.
            let values: Vec<f32> = (0..24)
                .map(|number| {
                    let mut rest = number;
                    let mut value = 0;
                    for (name, length) in dimensions.iter().zip(lengths).rev() {
                        let worth = match *name {
                            "line" => 100,
                            "position" => 10,
                            _ => 1,
                        };
                        value += rest % length * worth;
                        rest /= length;
                    }
                    value as f32
                })
                .collect();
            put(writer, radiance("radiance", &dimensions, UNIT), values);
        });
        let place =
            |name: &str| granule.footprints().names().iter().position(|own| own == name).unwrap();
        let mut position = vec![0; 2];
        position[place("line")] = 1;
        position[place("position")] = 2;
        let footprint = granule.footprints().number(&position).unwrap();
        let expected = [120.0, 121.0, 122.0, 123.0];
        assert_eq!(granule.read_spectrum(0, footprint).unwrap(), expected, "{dimensions:?}");
        let mut spectrum = Vec::new();
        filled(&granule).values(0, footprint, &mut spectrum);
        assert_eq!(spectrum, expected, "{dimensions:?}");
    }
}

#[test]
fn slabs_of_several_rows_join_without_a_seam() {
    // 40 lines of 50 positions and 3000 channels are 24 MB: several slabs, of whole chunks.
    let (lines, positions, channels) = (40, 50, 3000);
    let granule = opened(|writer| {
        writer.dimension("line", lines).unwrap();
        writer.dimension("position", positions).unwrap();
        writer.dimension("nu", channels).unwrap();
        let wavenumbers: Vec<f64> = (0..channels).map(|n| 700.0 + 0.25 * n as f64).collect();
        put(writer, axis("nu", "nu", "cm-1"), wavenumbers);
        let draft = radiance("radiance", &["line", "position", "nu"], UNIT);
        let values: Vec<f32> = (0..lines * positions * channels).map(|n| n as f32).collect();
        put(writer, draft.chunks(&[3, positions, channels]), values);
    });
    let cube = filled(&granule);
    assert!(cube.slabs(0) > 1);
    assert_eq!(cube.footprints_of(0, 0).len() % (3 * positions), 0, "slabs hold whole chunks");
    let mut column = vec![0.0; lines * positions];
    cube.channel(0, 17, &mut column);
    let expected: Vec<f64> = (0..lines * positions)
        .map(|footprint| f64::from((footprint * channels + 17) as f32))
        .collect();
    assert_eq!(column, expected);
    let last = cube.slab_of(0, lines * positions - 1);
    assert_eq!(last, cube.slabs(0) - 1);
}

#[test]
fn bands_of_three_footprint_dimensions_keep_their_order() {
    let granule = opened(|writer| {
        for (name, length) in
            [("line", 2), ("position", 2), ("detector", 3), ("nu_lw", 2), ("nu_sw", 3)]
        {
            writer.dimension(name, length).unwrap();
        }
        let named = |draft: VariableDraft, name: &str| draft.attribute("standard_name", name);
        let central = "sensor_band_central_radiation_wavenumber";
        put(writer, named(axis("nu_lw", "nu_lw", "cm-1"), central), vec![700.0, 701.0]);
        put(
            writer,
            named(axis("nu_sw", "nu_sw", "m-1"), central),
            vec![220_000.0, 220_100.0, 220_200.0],
        );
        let name = "toa_outgoing_radiance_per_unit_wavenumber";
        let footprints = ["line", "position", "detector"];
        let lw = radiance("rad_lw", &[footprints[0], footprints[1], footprints[2], "nu_lw"], UNIT);
        let sw = radiance("rad_sw", &[footprints[0], footprints[1], footprints[2], "nu_sw"], UNIT);
        put(writer, named(lw, name).attribute("apodization", "Hamming"), vec![50.0_f32; 24]);
        put(writer, named(sw, name).attribute("comment", "unapodised"), vec![0.5_f32; 36]);
        let noise = radiance("nedn_lw", &["detector", "nu_lw"], UNIT);
        put(writer, noise, vec![0.1_f32; 6]);
    });
    let names: Vec<&str> = granule.bands().iter().map(|band| band.name.as_str()).collect();
    assert_eq!(names, ["lw", "sw"]);
    assert_eq!(granule.footprints().lengths(), [2, 2, 3]);
    assert_eq!(granule.bands()[0].apodisation, Apodisation::Hamming);
    assert_eq!(granule.bands()[1].apodisation, Apodisation::None);
    assert_eq!(granule.bands()[1].range(), (2200.0, 2202.0));
    assert_eq!(
        granule.channel_near(2201.2).unwrap(),
        Channel { band: 1, index: 1, wavenumber: 2201.0 }
    );
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
