//! What tests say, tabulated; and that neither the order of channels nor a cut changes it.

use std::path::Path;

use assert_cmd::Command;
use radsieve::spectral::planck;
use serde_json::Value;

use crate::plain_granule::{PlainGranule, temperature};
use crate::plain_rules::plain_rules;

/// Colder than 220 K is cloudy.
fn rules() -> String {
    plain_rules(220.0, 20.0)
}

/// A column of each layer; missing is not a number.
fn columns(granule: &PlainGranule, rules: Option<&str>, layers: &[&str]) -> Vec<Vec<f64>> {
    let folder = tempfile::tempdir().unwrap();
    granule.write(&folder.path().join("plain.nc"));
    let mut arguments = vec!["tabulate", "plain.nc", "--json", "--quiet"];
    if let Some(rules) = rules {
        std::fs::write(folder.path().join("rules.toml"), rules).unwrap();
        arguments.extend(["--rules", "rules.toml"]);
    }
    arguments.extend(layers.iter().flat_map(|layer| ["--layer", *layer]));
    let rows = rows(folder.path(), &arguments);
    let number = |row: &Value, layer: &str| row[layer].as_f64().unwrap_or(f64::NAN);
    layers.iter().map(|layer| rows.iter().map(|row| number(row, layer)).collect()).collect()
}

fn rows(folder: &Path, arguments: &[&str]) -> Vec<Value> {
    let mut command = Command::cargo_bin("radsieve").unwrap();
    let result = command.env_clear().current_dir(folder).args(arguments).output().unwrap();
    assert!(result.status.success(), "{}", String::from_utf8_lossy(&result.stderr));
    let text = String::from_utf8(result.stdout).unwrap();
    text.lines().map(|line| serde_json::from_str(line).unwrap()).collect()
}

const JUDGED: [&str; 4] =
    ["doubt", "probability(\"cloudy\")", "flag(\"cloudy\")", "margin(\"cold window\")"];

#[test]
fn what_tests_say_is_a_layer_like_others() {
    let found = columns(&PlainGranule::new(), Some(&rules()), &JUDGED);
    for footprint in 0..180 {
        // From 200 K on, 0.25 K from one to the next; log-odds are three times the margin, and the
        // doubt of one test that speaks is 1 - |2 p - 1|. Radiances are stored in single precision,
        // good to 1e-5 K here.
        let margin = ((220.0 - temperature(footprint)) / 20.0).clamp(-1.5, 1.5);
        let probability = 1.0 / (1.0 + (-3.0 * margin).exp());
        let expected = [
            1.0 - (2.0 * probability - 1.0).abs(),
            probability,
            f64::from(u8::from(probability > 0.5)),
            margin,
        ];
        // On the limit itself a rounding decides.
        let on_the_limit = margin.abs() < 1e-4;
        for ((name, column), expected) in JUDGED.iter().zip(&found).zip(expected) {
            let value = column[footprint];
            let is_flag = name.starts_with("flag");
            let near = (value - expected).abs() < 1e-4 || (is_flag && on_the_limit);
            assert!(near, "{name} at {footprint}: {value}, not {expected}");
        }
    }
}

#[test]
fn the_order_of_channels_changes_nothing() {
    let plain = PlainGranule::new();
    let mut turned = PlainGranule::new();
    turned.bands.reverse();
    turned.bands.iter_mut().for_each(|(_, wavenumbers)| wavenumbers.reverse());
    let layers = ["doubt", "probability(\"cloudy\")", "margin(\"T06 tri-spectral ice\")"];
    let (one, other) = (columns(&plain, None, &layers), columns(&turned, None, &layers));
    let mut compared = 0;
    for (one, other) in one.iter().flatten().zip(other.iter().flatten()) {
        // Means over intervals are summed in another order.
        let same = (one - other).abs() < 1e-9 || (one.is_nan() && other.is_nan());
        assert!(same, "{one} {other}");
        compared += usize::from(!one.is_nan());
    }
    assert!(compared > 180, "only {compared} numbers were there");
}

#[test]
fn a_granule_that_is_cut_first_comes_out_the_same() {
    let mut cut = PlainGranule::new();
    // The last two of four scan lines, 90 footprints further on.
    cut.lengths[0] = 2;
    cut.radiance = |wavenumber, footprint| planck(wavenumber, temperature(footprint + 90));
    let whole = columns(&PlainGranule::new(), Some(&rules()), &JUDGED);
    for (whole, cut) in whole.iter().zip(columns(&cut, Some(&rules()), &JUDGED)) {
        assert_eq!(whole[90..], cut[..]);
    }
}
