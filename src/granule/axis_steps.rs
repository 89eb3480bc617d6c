//! Spectral axes that a file gives by their first value and their step.

use super::band::AxisSteps;
use super::decoder::Decoder;
use super::error::Setback;
use super::spectral_axis::{AxisCandidate, AxisFrom, sounds_spectral};
use crate::netcdf_files::{AttributeValue, FileIndex, FileReader, Variable};
use crate::units::SpectralUnit;

/// Names of attributes and variables that give the first value, in lower case without underscores.
const FIRST: [&str; 6] = [
    "firstwavenumber",
    "wavenumberfirst",
    "wavenumberstart",
    "startwavenumber",
    "wavenumberoffset",
    "wavenumber0",
];

/// Names that give the distance from channel to channel.
const STEP: [&str; 6] = [
    "wavenumberstep",
    "wavenumberinterval",
    "wavenumberincrement",
    "wavenumberspacing",
    "deltawavenumber",
    "wavenumberdelta",
];

/// Wavenumbers below this are in cm-1, and those above in m-1: thermal sounders lie far from it in
/// either unit.
const BETWEEN_UNITS: f64 = 10_000.0;

/// The axis that single numbers give by first value and step: attributes of a variable, of its group
/// or of a group around it, or variables with one value.
pub fn find(index: &FileIndex, variable: &Variable) -> Option<AxisCandidate> {
    let (from, unit) = by_attributes(index, variable).or_else(|| by_variables(index))?;
    // The dimension that is called like one of channels, else the last.
    let name = |dimension: &usize| index.dimensions[*dimension].name.as_str();
    let sounds = |dimension: &&usize| sounds_spectral(name(dimension));
    let dimension = variable.dimensions.iter().rfind(sounds).or(variable.dimensions.last())?;
    Some(AxisCandidate { dimension: *dimension, from, unit, rank: 5, look_alike: false })
}

fn by_attributes(
    index: &FileIndex,
    variable: &Variable,
) -> Option<(AxisFrom, Option<SpectralUnit>)> {
    let mut places = vec![variable.attributes.as_slice()];
    let mut around = Some(variable.group);
    while let Some(group) = around {
        places.push(&index.groups[group].attributes);
        around = index.groups[group].parent;
    }
    let steps = places.into_iter().find_map(|attributes| {
        let number = |names: &[&str]| {
            let named = attributes.iter().find(|attribute| is_among(&attribute.name, names));
            named.and_then(|attribute| AttributeValue::number(&attribute.value))
        };
        Some(AxisSteps { first: number(&FIRST)?, step: number(&STEP)? })
    })?;
    let unit = match steps.first < BETWEEN_UNITS {
        true => SpectralUnit::PerCentimetre,
        false => SpectralUnit::PerMetre,
    };
    Some((AxisFrom::Steps(steps), Some(unit)))
}

fn by_variables(index: &FileIndex) -> Option<(AxisFrom, Option<SpectralUnit>)> {
    let single = |names: &[&str]| {
        index.variables.iter().position(|one| {
            let count: usize = index.lengths(one).iter().product();
            one.kind.is_number() && count == 1 && is_among(&one.name, names)
        })
    };
    let (first, step) = (single(&FIRST)?, single(&STEP)?);
    let units = index.variables[first].text("units")?;
    Some((AxisFrom::Numbers { first, step }, SpectralUnit::parse(&units).ok()))
}

fn is_among(name: &str, names: &[&str]) -> bool {
    names.contains(&name.to_lowercase().replace('_', "").as_str())
}

/// The same candidate with the numbers that its variables hold.
///
/// # Errors
/// They cannot be read.
pub fn resolved(reader: &FileReader, candidate: &AxisCandidate) -> Result<AxisCandidate, Setback> {
    let AxisFrom::Numbers { first, step } = candidate.from else { return Ok(candidate.clone()) };
    let number = |place: usize| {
        let variable = &reader.index().variables[place];
        let values = Decoder::of(variable).decode_all(&reader.read_all(variable)?);
        Ok::<f64, Setback>(values.first().copied().unwrap_or(f64::NAN))
    };
    let steps = AxisSteps { first: number(first)?, step: number(step)? };
    Ok(AxisCandidate { from: AxisFrom::Steps(steps), ..candidate.clone() })
}

/// The values of an axis of so many channels.
pub fn values(steps: AxisSteps, channels: usize) -> Vec<f64> {
    (0..channels).map(|channel| steps.first + channel as f64 * steps.step).collect()
}
