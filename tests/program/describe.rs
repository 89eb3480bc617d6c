//! `describe` from outside: files of several layouts.

use std::path::{Path, PathBuf};

use radsieve::netcdf_files::{FileFormat, NetcdfWriter, Samples, ValueKind, VariableDraft};
use serde_json::Value;

const UNIT: &str = "mW m-2 sr-1 (cm-1)-1";

struct File {
    _folder: tempfile::TempDir,
    path: PathBuf,
}

fn file_as(format: FileFormat, write: impl FnOnce(&mut NetcdfWriter)) -> File {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("synthetic_brindle.nc");
    let mut writer = NetcdfWriter::create_as(&path, format).unwrap();
    writer.global_attribute("title", "synthetic: Brindle sounder, Sea of Lowen").unwrap();
    write(&mut writer);
    writer.close().unwrap();
    File { _folder: folder, path }
}

fn file(write: impl FnOnce(&mut NetcdfWriter)) -> File {
    file_as(FileFormat::Netcdf4, write)
}

/// In the classic formats everything is defined before the first value is put.
fn define_then_put(writer: &mut NetcdfWriter, variables: Vec<(VariableDraft, Samples)>) {
    for (draft, _) in &variables {
        writer.variable(draft).unwrap();
    }
    for (draft, values) in &variables {
        writer.put_all(&draft.path, values).unwrap();
    }
}

fn variable(
    path: &str,
    kind: ValueKind,
    dimensions: &[&str],
    attributes: &[(&str, &str)],
) -> VariableDraft {
    let draft = VariableDraft::new(path, kind, dimensions);
    attributes.iter().fold(draft, |draft, (name, text)| draft.attribute(name, *text))
}

fn dimensions(writer: &mut NetcdfWriter, lengths: &[(&str, usize)]) {
    for &(name, length) in lengths {
        writer.dimension(name, length).unwrap();
    }
}

fn radsieve() -> assert_cmd::Command {
    let mut command = assert_cmd::Command::cargo_bin("radsieve").unwrap();
    command.env_clear();
    command
}

fn described(path: &Path) -> Value {
    let output = radsieve().arg("describe").arg("--json").arg(path).assert().success();
    serde_json::from_slice(&output.get_output().stdout).unwrap()
}

fn problems(description: &Value) -> String {
    description["problems"].to_string()
}

#[test]
fn three_bands_over_three_footprint_dimensions() {
    let file = file(|writer| {
        dimensions(writer, &[("scan_line", 3), ("position", 4), ("detector", 9)]);
        dimensions(writer, &[("nu_lw", 5), ("nu_mw", 4), ("nu_sw", 3)]);
        let mut variables = Vec::new();
        for (band, first, channels) in [("lw", 650.0, 5), ("mw", 1210.0, 4), ("sw", 2155.0, 3)] {
            let axis = format!("nu_{band}");
            let central =
                [("units", "cm-1"), ("standard_name", "sensor_band_central_radiation_wavenumber")];
            let places: Vec<f64> = (0..channels).map(|n| first + 0.625 * f64::from(n)).collect();
            variables.push((variable(&axis, ValueKind::F64, &[&axis], &central), places.into()));
            let attributes = [
                ("units", UNIT),
                ("standard_name", "toa_outgoing_radiance_per_unit_wavenumber"),
                ("apodization", "Hamming"),
            ];
            let over = ["scan_line", "position", "detector", axis.as_str()];
            let draft = variable(&format!("rad_{band}"), ValueKind::F32, &over, &attributes);
            let draft = draft.chunks(&[1, 4, 9, channels as usize]).deflate(4);
            variables.push((draft, vec![1.0_f32; 108 * channels as usize].into()));
        }
        define_then_put(writer, variables);
    });
    let description = described(&file.path);
    assert_eq!(description["schema"], 1);
    assert_eq!(description["footprints"]["count"], 108);
    let bands = description["bands"].as_array().unwrap();
    let names: Vec<&str> = bands.iter().map(|band| band["name"].as_str().unwrap()).collect();
    assert_eq!(names, ["lw", "mw", "sw"]);
    assert_eq!(bands[1]["first_cm-1"], 1210.0);
    assert_eq!(bands[1]["last_cm-1"], 1211.875);
    assert_eq!(bands[1]["smallest_spacing_cm-1"], 0.625);
    assert_eq!(bands[0]["apodisation"], "Hamming");
    assert_eq!(bands[0]["storage"]["filters"][1], "deflate 4");
    assert_eq!(bands[0]["storage"]["chunks"], serde_json::json!([1, 4, 9, 5]));

    let text = radsieve().arg("describe").arg(&file.path).assert().success();
    let text = String::from_utf8(text.get_output().stdout.clone()).unwrap();
    for words in
        ["108 = scan_line 3 x position 4 x detector 9", "apodisation Hamming", "Sea of Lowen"]
    {
        assert!(text.contains(words), "{words} is not in\n{text}");
    }
}

#[test]
fn one_axis_with_a_gap_in_every_format() {
    let formats = [
        (FileFormat::Netcdf4, "netCDF-4"),
        (FileFormat::Classic, "netCDF classic"),
        (FileFormat::Offset64, "netCDF 64-bit offset"),
        (FileFormat::Data64, "netCDF 64-bit data"),
    ];
    for (format, label) in formats {
        let file = file_as(format, |writer| {
            dimensions(writer, &[("line", 3), ("position", 2), ("channel", 6)]);
            let axis = variable("wavenumber", ValueKind::F64, &["channel"], &[("units", "cm^-1")]);
            let data = [("units", UNIT), ("coordinates", "wavenumber lat lon")];
            let lat = [("units", "degrees_north"), ("standard_name", "latitude")];
            define_then_put(
                writer,
                vec![
                    (axis, vec![700.0, 701.0, 702.0, 900.0, 901.0, 902.0].into()),
                    (
                        variable(
                            "radiance",
                            ValueKind::F32,
                            &["line", "position", "channel"],
                            &data,
                        ),
                        vec![1.0_f32; 36].into(),
                    ),
                    (
                        variable("y", ValueKind::F32, &["line", "position"], &lat),
                        vec![-5.0_f32, -4.5, -4.0, -3.5, -3.0, 9.96921e36].into(),
                    ),
                ],
            );
        });
        let description = described(&file.path);
        assert_eq!(description["format"], label);
        assert_eq!(description["bands"][0]["segments"], 2, "{label}");
        let lat = &description["geolocation"][0];
        assert_eq!((lat["name"].as_str(), lat["lowest"].as_f64()), (Some("lat"), Some(-5.0)));
        assert_eq!(lat["missing"], 1);
        assert!(problems(&description).contains("no `lon`"));
        assert!(problems(&description).contains("apodised"));
    }
}

#[test]
fn radiance_per_wavelength_on_an_axis_in_micrometres() {
    let file = file(|writer| {
        dimensions(writer, &[("line", 2), ("position", 2), ("channel", 3)]);
        let axis = variable("wavelength", ValueKind::F32, &["channel"], &[("units", "µm")]);
        let data = [
            ("units", "W m-2 sr-1 um-1"),
            ("standard_name", "toa_outgoing_radiance_per_unit_wavelength"),
        ];
        define_then_put(
            writer,
            vec![
                (axis, vec![12.5_f32, 10.0, 8.0].into()),
                (
                    variable("radiance", ValueKind::F32, &["line", "position", "channel"], &data),
                    vec![7.0_f32; 12].into(),
                ),
            ],
        );
    });
    let band = &described(&file.path)["bands"][0];
    assert_eq!(band["first_cm-1"], 800.0);
    assert_eq!(band["last_cm-1"], 1250.0);
    assert_eq!(band["units_in_file"], "W m-2 sr-1 um-1");
    assert_eq!(band["units_in_use"], UNIT);
}

#[test]
fn brightness_temperatures_with_an_axis_per_metre() {
    let file = file(|writer| {
        dimensions(writer, &[("line", 2), ("position", 2), ("channel", 2)]);
        let central =
            [("units", "m-1"), ("standard_name", "sensor_band_central_radiation_wavenumber")];
        let data = [("units", "K"), ("standard_name", "toa_brightness_temperature")];
        define_then_put(
            writer,
            vec![
                (
                    variable("nu", ValueKind::F64, &["channel"], &central),
                    vec![90_000.0, 90_100.0].into(),
                ),
                (
                    variable("bt", ValueKind::F32, &["line", "position", "channel"], &data),
                    vec![280.0_f32; 8].into(),
                ),
            ],
        );
    });
    let band = &described(&file.path)["bands"][0];
    assert_eq!(band["quantity"], "brightness temperature");
    assert_eq!(band["first_cm-1"], 900.0);
    assert_eq!(band["units_in_use"], "K");
}

#[test]
fn packed_unsigned_shorts_and_quality_variables() {
    let file = file(|writer| {
        dimensions(writer, &[("line", 2), ("position", 2), ("channel", 2)]);
        let axis = variable("wavenumber", ValueKind::F64, &["channel"], &[("units", "cm-1")]);
        let data = variable(
            "Rad",
            ValueKind::I16,
            &["line", "position", "channel"],
            &[("_Unsigned", "true"), ("units", UNIT), ("ancillary_variables", "DQF")],
        )
        .fill(1023_i16)
        .attribute("valid_range", vec![0_i16, 1022])
        .attribute("scale_factor", 0.1_f32)
        .attribute("add_offset", -0.2_f32);
        let flags = variable(
            "DQF",
            ValueKind::I8,
            &["line", "position"],
            &[("standard_name", "status_flag"), ("flag_meanings", "good bad")],
        )
        .attribute("flag_values", vec![0_i8, 1]);
        define_then_put(
            writer,
            vec![
                (axis, vec![900.0, 901.0].into()),
                (data, vec![500_i16; 8].into()),
                (flags, vec![0_i8, 1, 0, 1].into()),
            ],
        );
    });
    let description = described(&file.path);
    assert_eq!(description["bands"][0]["storage"]["kind"], "short");
    assert_eq!(description["bands"][0]["storage"]["packed"], true);
    let flags = &description["variables"][0];
    assert_eq!((flags["name"].as_str(), flags["role"].as_str()), (Some("DQF"), Some("quality")));
    assert_eq!(flags["meanings"], serde_json::json!(["good", "bad"]));
}

#[test]
fn text_of_the_file_cannot_steer_the_terminal() {
    let file = file(|writer| {
        dimensions(writer, &[("line", 2), ("channel", 2)]);
        writer.global_attribute("source", "evil \x1b]0;title\x07\x1b[2J\u{202E}").unwrap();
        let axis = variable("wavenumber", ValueKind::F64, &["channel"], &[("units", "cm-1")]);
        let data = [("units", UNIT), ("apodization", "\x1b[31mred")];
        define_then_put(
            writer,
            vec![
                (axis, vec![900.0, 901.0].into()),
                (
                    variable("radiance", ValueKind::F32, &["line", "channel"], &data),
                    vec![1.0_f32; 4].into(),
                ),
            ],
        );
    });
    let output = radsieve().arg("describe").arg(&file.path).assert().success();
    let text = String::from_utf8(output.get_output().stdout.clone()).unwrap();
    assert!(text.contains("evil"), "{text}");
    assert!(!text.chars().any(|character| character.is_control() && character != '\n'), "{text:?}");
    assert!(!text.contains('\u{202E}'));
}
