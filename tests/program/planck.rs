//! `planck` from outside.

use assert_cmd::Command;
use serde_json::Value;

fn planck(arguments: &[&str]) -> Command {
    let mut command = Command::cargo_bin("radsieve").unwrap();
    command.env_clear().arg("planck").args(arguments);
    command
}

fn json(arguments: &[&str]) -> Value {
    let output = planck(arguments).arg("--json").assert().success().get_output().stdout.clone();
    serde_json::from_slice(&output).unwrap()
}

fn refusal(arguments: &[&str]) -> String {
    let output = planck(arguments).assert().code(2).get_output().clone();
    assert!(output.stdout.is_empty(), "a refusal prints no data");
    String::from_utf8(output.stderr).unwrap()
}

fn assert_near(value: &Value, expected: f64, tolerance: f64) {
    let value = value.as_f64().unwrap();
    assert!((value - expected).abs() <= tolerance, "{value} instead of {expected}");
}

// 900 cm-1, 280 K: Planck law with the SI 2019 constants, worked with 50 digits and given to 12,
// which is where the tolerances come from.

#[test]
fn temperature_to_radiance() {
    let answer = json(&["--at", "900", "--bt", "280"]);
    assert_near(&answer["radiance"], 85.996_261_536_1, 1e-10);
    assert_near(&answer["bt_K"], 280.0, 0.0);
    assert_near(&answer["wavenumber_cm-1"], 900.0, 0.0);
    assert_near(&answer["wavelength_um"], 1e4 / 900.0, 1e-14);
    assert_eq!(answer["unit"], "mW m-2 sr-1 (cm-1)-1");
}

#[test]
fn radiance_to_temperature() {
    // From the table of round radiances, given to 1e-7 K.
    let answer = json(&["--at", "900", "--rad", "60"]);
    assert_near(&answer["bt_K"], 259.934_830_4, 6e-8);
    assert_near(&answer["radiance"], 60.0, 0.0);
}

#[test]
fn places_in_any_spelling() {
    for place in ["900", "900cm-1", "900 cm^-1", "90000 m-1"] {
        assert_near(&json(&["--at", place, "--bt", "280"])["radiance"], 85.996_261_536_1, 1e-10);
    }
    // Two roundings between the wavelength typed and the wavelength shown.
    for place in ["11.1um", "11.1 µm", "11100nm", "1.11e-5m"] {
        assert_near(&json(&["--at", place, "--bt", "280"])["wavelength_um"], 11.1, 4e-15);
    }
}

#[test]
fn units_in_any_kind() {
    for (unit, radiance) in [
        ("W m-2 sr-1 (m-1)-1", 8.599_626_153_61e-4),
        ("W m-2 sr-1 um-1", 6.965_697_184_42),
        ("W/m2/sr/um", 6.965_697_184_42),
        ("W m-2 sr-1 Hz-1", 2.868_526_516_97e-12),
        ("erg s-1 cm-2 sr-1 (cm-1)-1", 85.996_261_536_1),
    ] {
        let answer = json(&["--at", "900", "--bt", "280", "--unit", unit]);
        assert_near(&answer["radiance"], radiance, 2e-12 * radiance);
        assert_eq!(answer["unit"], unit);
        let text = answer["radiance"].as_f64().unwrap().to_string();
        // There and back again to a few roundings.
        let back = json(&["--at", "900", "--rad", &text, "--unit", unit]);
        assert_near(&back["bt_K"], 280.0, 2e-13 * 280.0);
    }
}

#[test]
fn plain_output_names_its_units() {
    let expected = "\
wavenumber              900 cm-1
wavelength              11.1111111111 um
brightness temperature  280 K
radiance                85.9962615361 mW m-2 sr-1 (cm-1)-1
";
    planck(&["--at", "900", "--bt", "280"]).assert().success().stdout(expected);
}

#[test]
fn a_radiance_without_temperature_is_refused() {
    for radiance in ["0", "-0.5", "-1e9"] {
        let message = refusal(&["--at", "900", "--rad", radiance]);
        assert!(message.contains("no brightness temperature"), "{message}");
        assert!(message.contains("not positive"), "{message}");
    }
    let message = refusal(&["--at", "900", "--rad", "1e-320"]);
    assert!(message.contains("outside the range"), "{message}");
}

#[test]
fn senseless_arguments_are_refused_with_a_word() {
    for (arguments, word) in [
        (["--at", "900", "--bt", "-5"], "greater than 0 K"),
        (["--at", "900", "--bt", "0"], "greater than 0 K"),
        (["--at", "900", "--bt", "warm"], "no number"),
        (["--at", "900", "--bt", "inf"], "no number"),
        (["--at", "900", "--bt", "0.001"], "outside the range"),
        (["--at", "900", "--rad", "nan"], "no number"),
        (["--at", "0", "--bt", "280"], "positive"),
        (["--at", "-900", "--bt", "280"], "positive"),
        (["--at", "red", "--bt", "280"], "number"),
        (["--at", "900K", "--bt", "280"], "accepted are cm-1"),
        (["--at", "1e200", "--bt", "280"], "outside the range"),
    ] {
        let message = refusal(&arguments);
        assert!(message.contains(word), "{arguments:?}: {message}");
    }
}

#[test]
fn one_of_temperature_and_radiance_is_needed() {
    let message = refusal(&["--at", "900"]);
    assert!(message.contains("--bt") && message.contains("--rad"), "{message}");
    refusal(&["--at", "900", "--bt", "280", "--rad", "60"]);
    refusal(&["--bt", "280"]);
}

#[test]
fn a_unit_that_is_no_spectral_radiance_is_refused() {
    for unit in ["K", "W m-2", "mW m-2 sr-1 cm-1", "bananas", ""] {
        let message = refusal(&["--at", "900", "--bt", "280", "--unit", unit]);
        assert!(message.contains("mW m-2 sr-1 (cm-1)-1"), "{message}");
    }
}
