//! The layout that was found in a file, as the text of a layout file.

use std::fmt::Write;

use super::band::{Apodisation, Band};
use super::footprint_variables::VariableRole;
use super::geolocation::{GeolocationSource, Origin};
use super::geolocation_fields::FIELDS;
use super::granule_file::Granule;
use super::problem::ProblemKind;
use crate::system::clean_text;

/// The text of a layout file that says what was found. What was guessed is marked by a comment, so
/// that a wrong guess is corrected by editing one line.
pub fn layout_text(granule: &Granule) -> String {
    let mut text = format!("# What is what in {}.\n\n", granule.name());
    line(&mut text, "footprint_dimensions", &list(granule.footprints().names()));
    let quality = granule.variables().iter().filter(|one| one.role == VariableRole::Quality);
    let quality: Vec<String> = quality.map(|variable| variable.name.clone()).collect();
    line(&mut text, "quality", &list(&quality));
    let bands = || granule.bands().iter().zip(&granule.sources);
    if bands().any(|(band, _)| band.apodisation == Apodisation::HammingApplied) {
        line(&mut text, "apodise", &quoted("hamming"));
    }
    for (band, source) in bands() {
        write_band(&mut text, granule, band, &source.bad);
    }
    text.push_str("\n[geolocation]\n");
    for field in &FIELDS {
        // What is lent or computed is not in this file.
        let own =
            |one: &&GeolocationSource| one.field == field.name && one.origin == Origin::Granule;
        if let Some(source) = granule.geolocation().sources.iter().find(own) {
            write_guesses(&mut text, granule, &source.variable);
            line(&mut text, field.name, &quoted(&source.variable));
            if !source.units.is_empty() {
                line(&mut text, &format!("{}_unit", field.name), &quoted(&source.units));
            }
        } else {
            line(&mut text, field.name, &quoted(""));
        }
    }
    text
}

fn write_band(text: &mut String, granule: &Granule, band: &Band, bad: &[bool]) {
    text.push_str("\n[[bands]]\n");
    write_guesses(text, granule, &band.variable);
    line(text, "variable", &quoted(&band.variable));
    line(text, "name", &quoted(&band.name));
    line(text, "unit", &quoted(&band.unit_text));
    write_guesses(text, granule, &band.axis_variable);
    match band.axis_steps {
        None => line(text, "axis", &quoted(&band.axis_variable)),
        Some(steps) => {
            line(text, "axis_first", &toml::Value::Float(steps.first).to_string());
            line(text, "axis_step", &toml::Value::Float(steps.step).to_string());
        }
    }
    line(text, "axis_unit", &quoted(band.axis_unit.label()));
    line(text, "axis_dimension", &quoted(&band.dimension));
    let in_file = match &band.apodisation {
        Apodisation::HammingApplied => &Apodisation::None,
        other => other,
    };
    line(text, "apodisation", &quoted(in_file.label()));
    line(text, "noise", &quoted(band.noise.as_ref().map_or("", |noise| &noise.variable)));
    if let Some(noise) = &band.noise {
        line(text, "noise_unit", &quoted(&noise.unit_text));
        if let Some(kelvin) = noise.scene {
            line(text, "noise_temperature", &toml::Value::Float(kelvin).to_string());
        }
    }
    let bad = bad.iter().enumerate().filter(|(_, bad)| **bad);
    let bad: Vec<String> = bad.map(|(channel, _)| channel.to_string()).collect();
    line(text, "bad_channels", &format!("[{}]", bad.join(", ")));
}

fn write_guesses(text: &mut String, granule: &Granule, variable: &str) {
    let guesses = granule.problems().iter().filter(|problem| {
        problem.kind == ProblemKind::Guess && problem.where_ == clean_text(variable)
    });
    for guess in guesses {
        // Writing to a string cannot fail.
        let _ = writeln!(text, "# guess: {}", guess.what);
    }
}

fn line(text: &mut String, key: &str, value: &str) {
    // Writing to a string cannot fail.
    let _ = writeln!(text, "{key} = {value}");
}

fn quoted(text: &str) -> String {
    toml::Value::String(text.to_owned()).to_string()
}

fn list(texts: &[String]) -> String {
    let quoted: Vec<String> = texts.iter().map(|text| quoted(text)).collect();
    format!("[{}]", quoted.join(", "))
}
