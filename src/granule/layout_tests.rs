//! Layout files: what they say is believed, what they leave out is found, mistakes are named.

use super::layout_file::LayoutFile;
use super::tests::{File, UNIT, axis, file, has_problem, plain, put, radiance};
use super::*;
use crate::netcdf_files::{NetcdfWriter, ReaderProgram, ValueKind, VariableDraft};
use crate::spectral::hamming3;
use crate::system::Cancel;

fn open(file: &File, layout: &str) -> Result<Granule, GranuleError> {
    let mut opening = Opening::new(ReaderProgram::in_process());
    opening.layout = LayoutFile::parse(layout).unwrap();
    opening.open(&file.path)
}

fn refused(file: &File, layout: &str) -> String {
    open(file, layout).unwrap_err().to_string()
}

/// 2 x 3 footprints and 4 channels under names and units that say nothing; latitude under one that
/// misleads, with dimensions of other names.
fn dumb(writer: &mut NetcdfWriter) {
    for (name, length) in [("a", 2), ("b", 3), ("c", 4), ("u", 2), ("v", 3)] {
        writer.dimension(name, length).unwrap();
    }
    let counted =
        |path: &str, dimensions: &[&str]| VariableDraft::new(path, ValueKind::F64, dimensions);
    put(writer, counted("x", &["c"]), vec![900.0, 901.0, 902.0, 903.0]);
    let values: Vec<f64> = (0..24).map(|value| f64::from(value * value)).collect();
    put(writer, counted("s", &["a", "b", "c"]), values);
    put(writer, counted("p", &["u", "v"]), vec![0.0, 0.1, 0.2, 0.3, 0.4, 0.5]);
    put(writer, counted("land", &["a", "b"]), vec![0.0; 6]);
    put(writer, counted("q", &["a", "b"]), vec![0.0, 1.0, 0.0, 1.0, 0.0, 1.0]);
}

const DUMB: &str = r#"
footprint_dimensions = ["a", "b"]
quality = ["q"]
[[bands]]
variable = "s"
unit = "mW m-2 sr-1 (cm-1)-1"
axis = "x"
axis_unit = "cm-1"
apodisation = "none"
[geolocation]
lat = "p"
lat_unit = "radian"
land = ""
"#;

#[test]
fn a_file_that_says_nothing_is_understood_by_its_layout_file() {
    let file = file(dumb);
    assert!(refused(&file, "").contains("holds no spectra"));
    let granule = open(&file, DUMB).unwrap();
    assert_eq!(granule.footprints().names(), ["a", "b"]);
    assert_eq!(granule.read_spectrum(0, 1).unwrap(), [16.0, 25.0, 36.0, 49.0]);
    assert_eq!(granule.bands()[0].apodisation, Apodisation::None);
    let latitude = granule.geolocation().latitude.as_ref().unwrap();
    assert!((latitude[5] - 0.5_f64.to_degrees()).abs() < 1e-12);
    assert_eq!(granule.geolocation().land_fraction, None);
    assert_eq!(granule.variable("q").unwrap().role, VariableRole::Quality);
    let guesses = granule.problems().iter().filter(|one| one.kind == ProblemKind::Guess).count();
    assert_eq!(guesses, 0, "{:?}", granule.problems());
}

#[test]
fn what_was_found_opens_as_the_same_granule() {
    for layout in [DUMB, &DUMB.replace("apodisation = \"none\"", "bad_channels = [1, 3]")] {
        let file = file(dumb);
        same_again(&file, layout);
        same_again(&file, &format!("apodise = \"hamming\"\n{layout}"));
    }
    same_again(&file(plain), "");
    let noisy = file(|writer| {
        plain(writer);
        put(writer, radiance("nedn", &["nu"], UNIT), vec![0.1_f32, 0.2, 0.3]);
    });
    same_again(&noisy, "");
    same_again(&noisy, "[[bands]]\nvariable = \"radiance\"\nnoise = \"\"\n");
}

#[test]
fn an_axis_may_be_said_by_first_value_and_step() {
    let file = file(plain);
    let band = |lines: &str| format!("[[bands]]\nvariable = \"radiance\"\n{lines}");
    let steps = "axis_first = 7.0\naxis_step = 0.5\n";
    let whole = format!("{steps}axis_unit = \"um\"\naxis_dimension = \"nu\"\n");
    let granule = open(&file, &band(&whole)).unwrap();
    // 1e4 / 7.5 um, in the file's order.
    let middle = granule.bands()[0].axis.wavenumbers()[1];
    assert!((middle - 1e4 / 7.5).abs() < 1e-9, "{middle}");
    same_again(&file, &band(&whole));
    assert!(refused(&file, &band(steps)).contains("say axis_unit, too"));
    assert!(refused(&file, &band("axis_step = 0.5\n")).contains("say both"));
    let both = format!("axis = \"nu\"\n{whole}");
    assert!(refused(&file, &band(&both)).contains("not both"));
}

#[test]
fn noise_is_the_variable_said() {
    let file = file(|writer| {
        plain(writer);
        put(writer, radiance("spread", &["nu"], ""), vec![0.1_f32, 0.2, 0.3]);
    });
    let band = |lines: &str| format!("[[bands]]\nvariable = \"radiance\"\n{lines}");
    let unit = format!("noise = \"spread\"\nnoise_unit = \"{UNIT}\"\n");
    let granule = open(&file, &band(&unit)).unwrap();
    assert_eq!(granule.noise(0, 0).unwrap().unwrap()[2], f64::from(0.3_f32));
    assert!(refused(&file, &band("noise = \"spread\"")).contains("noise: no unit is given"));
    let kelvin = "noise = \"spread\"\nnoise_unit = \"K\"\nnoise_temperature = 250.0\n";
    let granule = open(&file, &band(kelvin)).unwrap();
    assert_eq!(granule.bands()[0].noise.as_ref().unwrap().scene, Some(250.0));
    let error = refused(&file, &band("noise = \"spread\"\nnoise_unit = \"m\""));
    assert!(error.contains("or K or degC for temperatures"), "{error}");
}

fn same_again(file: &File, layout: &str) {
    let first = open(file, layout).unwrap();
    let text = layout_text(&first);
    let again = open(file, &text).unwrap_or_else(|error| panic!("{error} with\n{text}"));
    assert_eq!(again.bands(), first.bands(), "{text}");
    assert_eq!(again.geolocation(), first.geolocation(), "{text}");
    assert_eq!(again.footprints(), first.footprints());
    assert_eq!(again.variables(), first.variables());
    assert_eq!(
        layout_text(&again),
        text.lines()
            .filter(|line| !line.starts_with("# guess"))
            .fold(String::new(), |all, line| all + line + "\n")
    );
}

#[test]
fn footprint_dimensions_are_in_the_order_said() {
    let file = file(plain);
    let granule = open(&file, "footprint_dimensions = [\"position\", \"line\"]").unwrap();
    assert_eq!(granule.footprints().lengths(), [3, 2]);
    // Position 2, line 1.
    assert_eq!(granule.read_spectrum(0, 5).unwrap(), [120.0, 121.0, 122.0]);
    assert_eq!(granule.read_spectrum(0, 1).unwrap(), [100.0, 101.0, 102.0]);
}

#[test]
fn a_unit_in_the_layout_file_beats_the_one_in_the_file() {
    let file = file(plain);
    let granule = open(
        &file,
        "[[bands]]\nvariable = \"radiance\"\nunit = \"K\"\naxis = \"nu\"\naxis_unit = \"m-1\"\n",
    )
    .unwrap();
    let band = &granule.bands()[0];
    assert_eq!(band.quantity.label(), "brightness temperature");
    assert_eq!(band.range(), (9.0, 9.02));
}

#[test]
fn what_is_not_there_is_named_with_what_may_have_been_meant() {
    let file = file(plain);
    let band =
        |lines: &str| refused(&file, &format!("[[bands]]\nvariable = \"radiance\"\n{lines}"));
    let message = refused(&file, "[[bands]]\nvariable = \"radiances\"\n");
    assert!(message.contains("does not fit the layout file"), "{message}");
    assert!(message.contains("no variable `radiances`; did you mean radiance?"), "{message}");
    assert!(band("axis = \"mu\"").contains("did you mean nu?"));
    assert!(band("axis = \"radiance\"").contains("has several dimensions"));
    assert!(band("axis = \"nu\"\naxis_unit = \"kg\"").contains("cm-1"));
    assert!(band("axis = \"nu\"\naxis_dimension = \"line\"").contains("3 values"));
    assert!(band("unit = \"furlong\"").contains("mW m-2 sr-1"));
    assert!(band("bad_channels = [3]").contains("there are 3 channels"));
    assert!(refused(&file, "footprint_dimensions = [\"line\"]").contains("each of line, position"));
    assert!(refused(&file, "footprint_dimensions = [\"lane\"]").contains("among line, position"));
    assert!(refused(&file, "quality = [\"nu\"]").contains("does not lie over the footprints"));
    assert!(refused(&file, "[geolocation]\nlat = \"nu\"").contains("lat: `nu` does not lie"));
}

#[test]
fn spectra_are_apodised_on_request_alike_from_cube_and_file() {
    let file = file(|writer| {
        for (name, length) in [("line", 3), ("nu", 9)] {
            writer.dimension(name, length).unwrap();
        }
        let wavenumbers = vec![702.0, 701.0, 700.0, 900.0, 901.0, 902.0, 903.0, 904.0, 905.0];
        put(writer, axis("nu", "nu", "cm-1"), wavenumbers);
        let values: Vec<f32> = (0..27).map(|value| (value * value % 17) as f32).collect();
        let draft = radiance("radiance", &["line", "nu"], UNIT).attribute("apodization", "none");
        put(writer, draft, values);
    });
    let plain = open(&file, "").unwrap();
    let granule = open(&file, "apodise = \"hamming\"").unwrap();
    let band = &granule.bands()[0];
    assert_eq!(band.apodisation, Apodisation::HammingApplied);
    let expected = hamming3(&band.axis, &plain.read_spectrum(0, 1).unwrap());
    let same = |found: &[f64], wanted: &[f64]| {
        found.iter().zip(wanted).all(|(one, other)| one.to_bits() == other.to_bits())
            && found.len() == wanted.len()
    };
    assert!(same(&granule.read_spectrum(0, 1).unwrap(), &expected), "from the file");
    granule.fill(&Cancel::new(), &mut |_| {}).unwrap();
    let mut found = Vec::new();
    granule.cube().values(0, 1, &mut found);
    assert!(same(&found, &expected), "from the cube");
    let mut column = vec![0.0; 3];
    granule.cube().channel(0, 5, &mut column);
    assert_eq!(column[1], expected[5]);
    // Guard channels keep their place, but no layer takes them.
    assert_eq!(band.channels(), 9);
    assert!(granule.channel_near(900.0).is_err());
    assert_eq!(granule.channel_near(901.0).unwrap().index, 4);
    assert!(!has_problem(&granule, "not apodised as asked"));
}
