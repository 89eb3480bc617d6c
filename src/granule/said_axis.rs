//! The spectral axis that a layout file gives a band.

use super::band::AxisSteps;
use super::layout_file::BandEntry;
use super::named_variable::{named_dimension, named_variable};
use super::spectral_axis::{AxisCandidate, AxisFrom, alike};
use crate::netcdf_files::{FileIndex, Variable};
use crate::units::SpectralUnit;

/// The axis that a layout file gives a variable; none where it leaves that to the file.
///
/// # Errors
/// It names what is not there, or does not tell which dimension is meant; in words.
pub fn said(
    index: &FileIndex,
    variable: &Variable,
    entry: &BandEntry,
) -> Result<Option<AxisCandidate>, String> {
    let unit = match entry.axis_unit.as_deref().map(SpectralUnit::parse) {
        Some(unit) => Some(unit.map_err(|error| format!("axis_unit: {error}"))?),
        None => None,
    };
    if let (Some(first), Some(step)) = (entry.axis_first, entry.axis_step) {
        return said_steps(index, variable, entry, AxisSteps { first, step }, unit).map(Some);
    }
    if entry.axis_first.is_some() || entry.axis_step.is_some() {
        return Err("axis_first and axis_step: say both".into());
    }
    let Some(name) = &entry.axis else {
        return match unit {
            Some(_) => Err("axis_unit without `axis`: say the variable, too".into()),
            None => Ok(None),
        };
    };
    let place = named_variable(index, name).map_err(|error| format!("axis: {error}"))?;
    let axis = &index.variables[place];
    let &[own] = axis.dimensions.as_slice() else {
        return said_repeated(index, variable, entry, place, unit).map(Some);
    };
    let dimension = match &entry.axis_dimension {
        Some(name) => named_dimension(index, &variable.dimensions, name)
            .map_err(|error| format!("axis_dimension: {error}"))?,
        None => meant(index, variable, own).ok_or_else(|| {
            format!(
                "axis: which dimension of `{}` `{}` belongs to is not plain; say axis_dimension",
                variable.path, axis.path
            )
        })?,
    };
    if index.dimensions[dimension].length != index.dimensions[own].length {
        return Err(format!(
            "axis: `{}` has {} values, but `{}` has {} along `{}`",
            axis.path,
            index.dimensions[own].length,
            variable.path,
            index.dimensions[dimension].length,
            index.dimensions[dimension].name
        ));
    }
    let unit = unit.or_else(|| axis.text("units").and_then(|unit| SpectralUnit::parse(&unit).ok()));
    let from = AxisFrom::Variable(place);
    Ok(Some(AxisCandidate { dimension, from, unit, rank: 0, look_alike: false }))
}

/// An axis over several dimensions, of which the layout file says which one is spectral.
fn said_repeated(
    index: &FileIndex,
    variable: &Variable,
    entry: &BandEntry,
    place: usize,
    unit: Option<SpectralUnit>,
) -> Result<AxisCandidate, String> {
    let axis = &index.variables[place];
    if axis.dimensions.is_empty() {
        return Err(format!("axis: `{}` has no dimension", axis.path));
    }
    let Some(name) = &entry.axis_dimension else {
        return Err(format!("axis: `{}` has several dimensions; say axis_dimension", axis.path));
    };
    let shared: Vec<usize> =
        axis.dimensions.iter().copied().filter(|one| variable.dimensions.contains(one)).collect();
    let dimension = named_dimension(index, &shared, name)
        .map_err(|error| format!("axis_dimension: {error}"))?;
    let unit = unit.or_else(|| axis.text("units").and_then(|unit| SpectralUnit::parse(&unit).ok()));
    let from = AxisFrom::Variable(place);
    Ok(AxisCandidate { dimension, from, unit, rank: 0, look_alike: false })
}

fn said_steps(
    index: &FileIndex,
    variable: &Variable,
    entry: &BandEntry,
    steps: AxisSteps,
    unit: Option<SpectralUnit>,
) -> Result<AxisCandidate, String> {
    if entry.axis.is_some() {
        return Err("axis or axis_first and axis_step, not both".into());
    }
    let unit = Some(unit.ok_or("axis_first and axis_step: say axis_unit, too")?);
    let dimension = match &entry.axis_dimension {
        Some(name) => named_dimension(index, &variable.dimensions, name)
            .map_err(|error| format!("axis_dimension: {error}"))?,
        None => return Err("axis_first and axis_step: say axis_dimension, too".into()),
    };
    let from = AxisFrom::Steps(steps);
    Ok(AxisCandidate { dimension, from, unit, rank: 0, look_alike: false })
}

/// The dimension of a variable that an axis over `own` belongs to: the same, its like, or the only
/// one of that length.
fn meant(index: &FileIndex, variable: &Variable, own: usize) -> Option<usize> {
    if let Some((dimension, _)) = alike(index, variable, own) {
        return Some(dimension);
    }
    let length = |dimension: usize| index.dimensions[dimension].length;
    let mut same = variable.dimensions.iter().copied().filter(|&one| length(one) == length(own));
    same.next().filter(|_| same.next().is_none())
}
