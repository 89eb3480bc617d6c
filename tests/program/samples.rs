//! `synth` from outside, and the sample granules against their recipes.

use std::path::{Path, PathBuf};

use assert_cmd::Command;
use radsieve::netcdf_files::{FileReader, ReadLimits, ReaderProgram, Samples, Variable};

fn synth(folder: &Path, arguments: &[&str]) -> Command {
    let mut command = Command::cargo_bin("radsieve").unwrap();
    command.env_clear().arg("synth").arg("--out").arg(folder).args(arguments);
    command
}

fn samples() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("sample_granules")
}

fn open(path: &Path) -> FileReader {
    let program = ReaderProgram::new(env!("CARGO_BIN_EXE_radsieve"));
    FileReader::open(&program, path, &ReadLimits::default()).unwrap()
}

/// All values of a variable, as they are stored.
fn values(file: &FileReader, variable: &Variable) -> Samples {
    let count: Vec<usize> =
        variable.dimensions.iter().map(|place| file.index().dimensions[*place].length).collect();
    file.read(variable, &vec![0; count.len()], &count).unwrap()
}

fn variable<'a>(file: &'a FileReader, path: &str) -> &'a Variable {
    file.index().variables.iter().find(|variable| variable.path == path).unwrap()
}

/// By how much each value may differ: one step of what it is rounded to. Sums and logarithms may
/// round otherwise on another processor, and a value at the edge of a step then falls to the other
/// side.
fn quantum(file: &FileReader, variable: &Variable, number: usize) -> f64 {
    match &variable.path[..] {
        // Rounded per channel, to a power of two below a quarter of the noise.
        "radiance" => {
            let path = "truth/noise_equivalent_radiance";
            let noise = values(file, self::variable(file, path));
            0.25 * noise.get(number % noise.len())
        }
        // Packed values differ by a whole step.
        path if path.starts_with("radiance_") || path == "brightness_temperature" => 1.0,
        "time" | "truth/defects" | "quality" | "truth/cloud_phase" => 0.0,
        // Angles are rounded to 1/8192 degree; the rest is f32 of at most four digits before the point.
        _ => 1.3e-4,
    }
}

#[test]
fn the_sample_granules_come_out_of_their_recipes_again() {
    let folder = tempfile::tempdir().unwrap();
    synth(folder.path(), &["--scene", "samples", "--shape", "sample"]).assert().success();
    let mut compared = 0;
    for entry in std::fs::read_dir(folder.path()).unwrap() {
        let path = entry.unwrap().path();
        let (made, kept) = (open(&path), open(&samples().join(path.file_name().unwrap())));
        assert_eq!(made.index().dimensions, kept.index().dimensions, "{}", path.display());
        assert_eq!(made.index().groups, kept.index().groups, "{}", path.display());
        assert_eq!(made.index().variables.len(), kept.index().variables.len());
        for (new, old) in made.index().variables.iter().zip(&kept.index().variables) {
            assert_eq!((&new.path, &new.attributes), (&old.path, &old.attributes));
            compare(&made, new, &kept, old);
        }
        compared += 1;
    }
    assert_eq!(compared, 4);
}

fn compare(made: &FileReader, new: &Variable, kept: &FileReader, old: &Variable) {
    let (new_values, old_values) = (values(made, new), values(kept, old));
    assert_eq!(new_values.len(), old_values.len(), "{}", new.path);
    for number in 0..new_values.len() {
        let (a, b) = (new_values.get(number), old_values.get(number));
        if a != b {
            let step = quantum(made, new, number);
            assert!((a - b).abs() <= step, "{} at {number}: {a} and {b}", new.path);
        }
    }
}

#[test]
fn samples_are_small_and_say_what_they_are() {
    let mut seen = 0;
    for entry in std::fs::read_dir(samples()).unwrap() {
        let path = entry.unwrap().path();
        if path.extension().is_none_or(|extension| extension != "nc") {
            continue;
        }
        seen += 1;
        assert!(path.metadata().unwrap().len() < 4_000_000, "{}", path.display());
        assert!(path.file_name().unwrap().to_string_lossy().starts_with("synthetic_"));
        let file = open(&path);
        let text = |name: &str| {
            let attributes = &file.index().groups[0].attributes;
            let found = attributes.iter().find(|attribute| attribute.name == name).unwrap();
            found.value.text().unwrap().to_lowercase()
        };
        assert!(text("title").contains("synthetic") && text("source").contains("synthetic"));
        assert!(text("comment").contains("not for science"));
    }
    assert_eq!(seen, 4);
}

#[test]
fn cold_short_wave_channels_keep_their_negative_radiances() {
    let file = open(&samples().join("synthetic_brindle_sea_of_lowen.nc"));
    let radiances = values(&file, variable(&file, "radiance_shortwave")).to_f64();
    // -32768 is the missing value.
    let negative = radiances.iter().filter(|value| (-32_767.0..0.0).contains(*value)).count();
    assert!(negative > 100, "{negative}");
}

#[test]
fn the_faulty_instrument_has_every_defect_in_its_truth() {
    let file = open(&samples().join("synthetic_brindle_norrik_plateau.nc"));
    let defects = values(&file, variable(&file, "truth/defects")).to_f64();
    for bit in 0..7 {
        let count = defects.iter().filter(|bits| **bits as i32 & 1 << bit != 0).count();
        assert!(count > 0, "nothing has bit {bit}");
    }
    let channels = ["longwave", "window", "shortwave"];
    let bits = channels.iter().flat_map(|band| {
        values(&file, variable(&file, &format!("truth/channel_defects_{band}"))).to_f64()
    });
    // Dead, noisy and popping: one channel each.
    assert_eq!(bits.sum::<f64>(), 7.0);
}

#[test]
fn bytes_do_not_depend_on_the_number_of_threads() {
    let make = |threads: &str| {
        let folder = tempfile::tempdir().unwrap();
        let arguments = ["--scene", "strait-of-pell", "--shape", "2x4", "--seed", "9"];
        synth(folder.path(), &arguments).env("RAYON_NUM_THREADS", threads).assert().success();
        let name = "synthetic_brindle_strait_of_pell_2x4_seed9.nc";
        std::fs::read(folder.path().join(name)).unwrap()
    };
    assert_eq!(make("1"), make("3"));
}

#[test]
fn a_perturbed_granule_is_another_one_that_can_be_made_again() {
    let make = |more: &[&str]| {
        let folder = tempfile::tempdir().unwrap();
        let mut arguments = vec!["--scene", "hesk-isles", "--shape", "2x4", "--seed", "9"];
        arguments.extend(more);
        synth(folder.path(), &arguments).assert().success();
        let entry = std::fs::read_dir(folder.path()).unwrap().next().unwrap().unwrap();
        let file = open(&entry.path());
        let radiances = values(&file, variable(&file, "radiance")).to_f64();
        (entry.file_name(), radiances, std::fs::read(entry.path()).unwrap())
    };
    let (plain, perturbed) = (make(&[]), make(&["--perturbed", "4"]));
    assert_eq!(perturbed.0, "synthetic_brindle_hesk_isles_2x4_seed9_perturbed4.nc");
    assert_ne!(plain.1, perturbed.1);
    assert_eq!(perturbed.2, make(&["--perturbed", "4"]).2);
    assert_ne!(perturbed.1, make(&["--perturbed", "5"]).1);
}

#[test]
fn ash_and_sulphur_dioxide_stand_in_the_truth_where_they_stand_in_the_spectra() {
    let folder = tempfile::tempdir().unwrap();
    synth(folder.path(), &["--scene", "hesk-isles", "--shape", "20x30"]).assert().success();
    let file = open(&folder.path().join("synthetic_brindle_hesk_isles_20x30.nc"));
    let truth = |name: &str| values(&file, variable(&file, &format!("truth/{name}"))).to_f64();
    let axis = values(&file, variable(&file, "wavenumber")).to_f64();
    let radiances = values(&file, variable(&file, "radiance")).to_f64();
    let near = |wanted: f64| {
        let distance = |at: &usize| (axis[*at] - wanted).abs();
        (0..axis.len()).min_by(|a, b| distance(a).total_cmp(&distance(b))).unwrap()
    };
    let mean_ratio = |column: &[f64], wanted: &dyn Fn(f64) -> bool, pair: (f64, f64)| {
        let (a, b) = (near(pair.0), near(pair.1));
        let ratios: Vec<f64> = (0..column.len())
            .filter(|at| wanted(column[*at]))
            .map(|at| radiances[at * axis.len() + a] / radiances[at * axis.len() + b])
            .collect();
        assert!(ratios.len() > 20);
        ratios.iter().sum::<f64>() / ratios.len() as f64
    };
    // Ash absorbs more at 961 than at 831 cm-1, the gas at 1362 but not at 1410 cm-1; clouds are
    // alike inside and outside of the plumes.
    let (ash, so2) = (truth("ash_optical_depth"), truth("so2_column"));
    for (column, much, pair) in [(&ash, 0.5, (961.1, 831.0)), (&so2, 20.0, (1362.0, 1410.0))] {
        let (inside, outside) =
            (mean_ratio(column, &|v| v > much, pair), mean_ratio(column, &|v| v == 0.0, pair));
        assert!(inside < 0.98 * outside, "{inside} {outside}");
    }
}

#[test]
fn nothing_is_overwritten_unasked() {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("synthetic_brindle_ketter_desert_1x2.nc");
    std::fs::write(&file, "kept").unwrap();
    let arguments = ["--scene", "ketter-desert", "--shape", "1x2"];
    let assert = synth(folder.path(), &arguments).assert().code(4);
    let message = String::from_utf8(assert.get_output().stderr.clone()).unwrap();
    assert!(message.contains("--force"), "{message}");
    assert_eq!(std::fs::read_to_string(&file).unwrap(), "kept");
}

#[test]
fn senseless_arguments_are_wrong_usage() {
    let folder = tempfile::tempdir().unwrap();
    for arguments in [["--scene", "atlantis"], ["--shape", "0x3"], ["--seed", "one"]] {
        synth(folder.path(), &arguments).assert().code(2);
    }
    assert_eq!(std::fs::read_dir(folder.path()).unwrap().count(), 0);
}

#[test]
fn the_help_lists_scenes_and_shapes() {
    let mut command = Command::cargo_bin("radsieve").unwrap();
    let assert = command.env_clear().args(["synth", "--help"]).assert().success();
    let help = String::from_utf8(assert.get_output().stdout.clone()).unwrap();
    for word in ["sea-of-lowen", "ketter-desert", "norrik-plateau", "strait-of-pell", "hesk-isles"]
    {
        assert!(help.contains(word), "{word}");
    }
    for word in ["interferometer", "grating", "20x30x9"] {
        assert!(help.contains(word), "{word}");
    }
}
