//! Which dimension of a variable is spectral, and which variable says where its channels lie.

use super::axis_rows::{Rows, rows};
use super::axis_steps;
use super::band::AxisSteps;
use super::decoder::Decoder;
use super::error::Setback;
use super::problem::Problem;
use crate::netcdf_files::{FileIndex, FileReader, Variable};
use crate::spectral::ChannelAxis;
use crate::units::SpectralUnit;

/// A variable that may be the spectral axis of a dimension.
#[derive(Debug, Clone, PartialEq)]
pub struct AxisCandidate {
    /// The dimension, as a place in the file's list.
    pub dimension: usize,
    /// Where its values are from.
    pub from: AxisFrom,
    /// The unit of its values; none where the file gives none that can be read.
    pub unit: Option<SpectralUnit>,
    /// How sure it is: the smaller the better.
    pub rank: u8,
    /// Whether its own dimension is another one of the same name and length, in another group.
    pub look_alike: bool,
}

/// Where the values of an axis are from.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum AxisFrom {
    /// A variable, as a place in the file's list.
    Variable(usize),
    /// A first value and a step.
    Steps(AxisSteps),
    /// The same in two variables with one value each, as places in the file's list.
    Numbers {
        /// Where the first channel lies.
        first: usize,
        /// How far each is from the one before.
        step: usize,
    },
}

const STANDARD_NAMES: [&str; 6] = [
    "sensor_band_central_radiation_wavenumber",
    "sensor_band_central_radiation_wavelength",
    "sensor_band_central_radiation_frequency",
    "radiation_wavelength",
    "radiation_frequency",
    "radiation_wavenumber",
];

/// Parts of names that spectral axes go by.
const NAME_PARTS: [&str; 8] =
    ["wavenumber", "wavelength", "wave_number", "wnum", "wvn", "frequency", "channel", "spectral"];

/// Axes of thermal sounders lie well inside of this, cm-1; a length in metres of anything else does not.
const PLAUSIBLE: std::ops::RangeInclusive<f64> = 100.0..=10_000.0;

/// A variable of numbers along one dimension: what an axis mostly is.
struct OneDimensional {
    variable: usize,
    dimension: usize,
    unit: Option<SpectralUnit>,
}

/// Everything in a file that can be an axis. Made once, because reading the units anew for each
/// variable would take as long as a file with thousands of variables likes.
pub struct PossibleAxes {
    plain: Vec<OneDimensional>,
    /// Over several dimensions, as for each detector: the variables, and their units.
    repeated: Vec<(usize, SpectralUnit)>,
}

impl PossibleAxes {
    /// Looks through all variables.
    pub fn of(index: &FileIndex) -> Self {
        let possible = |(variable, axis): (usize, &Variable)| {
            let &[dimension] = axis.dimensions.as_slice() else { return None };
            let unit = || axis.text("units").and_then(|unit| SpectralUnit::parse(&unit).ok());
            axis.kind.is_number().then(|| OneDimensional { variable, dimension, unit: unit() })
        };
        let repeated = |(place, axis): (usize, &Variable)| {
            let several = (2..=3).contains(&axis.dimensions.len()) && axis.kind.is_number();
            let standard_name = axis.text("standard_name").unwrap_or_default();
            let named = STANDARD_NAMES.contains(&standard_name.as_str());
            // A unit alone says too little: there are drop sizes in um as well.
            let says_so = named || (standard_name.is_empty() && sounds_spectral(&axis.name));
            let unit = SpectralUnit::parse(&axis.text("units")?).ok()?;
            (several && says_so).then_some((place, unit))
        };
        let all = || index.variables.iter().enumerate();
        Self {
            plain: all().filter_map(possible).collect(),
            repeated: all().filter_map(repeated).collect(),
        }
    }
}

/// The spectral axes that a variable's dimensions may have, the best first.
pub fn candidates(
    index: &FileIndex,
    possible: &PossibleAxes,
    variable: &Variable,
) -> Vec<AxisCandidate> {
    let named = variable.text("coordinates").unwrap_or_default();
    let mut found: Vec<AxisCandidate> = Vec::new();
    for &OneDimensional { variable: place, dimension, unit } in &possible.plain {
        let Some((own, look_alike)) = alike(index, variable, dimension) else { continue };
        let axis = &index.variables[place];
        if let Some(rank) = rank(index, axis, dimension, unit, &named) {
            let from = AxisFrom::Variable(place);
            found.push(AxisCandidate { dimension: own, from, unit, rank, look_alike });
        }
    }
    if found.is_empty() {
        found = repeated(index, possible, variable);
    }
    if found.is_empty() {
        found.extend(axis_steps::find(index, variable));
    }
    // The last dimension first where two are as sure; stable, so then by the file's order.
    let depth = |dimension| variable.dimensions.iter().rposition(|&own| own == dimension);
    found.sort_by_key(|candidate| {
        let deepest = std::cmp::Reverse(depth(candidate.dimension));
        (candidate.look_alike, candidate.rank, deepest)
    });
    found
}

/// Axes over several of the variable's dimensions, each of which may be the spectral one.
fn repeated(index: &FileIndex, possible: &PossibleAxes, variable: &Variable) -> Vec<AxisCandidate> {
    let fits = |(place, _): &&(usize, SpectralUnit)| {
        let axis = &index.variables[*place];
        axis.path != variable.path
            && axis.dimensions.iter().all(|one| variable.dimensions.contains(one))
    };
    let each = |(place, unit): &(usize, SpectralUnit)| {
        let (from, unit) = (AxisFrom::Variable(*place), Some(*unit));
        let candidate =
            move |&dimension| AxisCandidate { dimension, from, unit, rank: 2, look_alike: false };
        index.variables[*place].dimensions.iter().map(candidate).collect::<Vec<_>>()
    };
    possible.repeated.iter().filter(fits).flat_map(each).collect()
}

/// The dimension of a variable that `dimension` is, or that it is like by name and length.
pub fn alike(index: &FileIndex, variable: &Variable, dimension: usize) -> Option<(usize, bool)> {
    if variable.dimensions.contains(&dimension) {
        return Some((dimension, false));
    }
    let other = &index.dimensions[dimension];
    let same = |own: &usize| {
        let own = &index.dimensions[*own];
        own.name == other.name && own.length == other.length
    };
    variable.dimensions.iter().copied().find(same).map(|own| (own, true))
}

/// How sure it is that a one-dimensional variable is a spectral axis; none if nothing speaks for it.
fn rank(
    index: &FileIndex,
    axis: &Variable,
    dimension: usize,
    unit: Option<SpectralUnit>,
    named: &str,
) -> Option<u8> {
    let standard_name = axis.text("standard_name").unwrap_or_default();
    if STANDARD_NAMES.contains(&standard_name.as_str()) {
        return Some(0);
    }
    if !standard_name.is_empty() && unit.is_none() {
        return None;
    }
    let sounds_spectral = sounds_spectral(&axis.name);
    let is_coordinate = axis.name == index.dimensions[dimension].name;
    let is_named = named.split_whitespace().any(|name| name == axis.name);
    match unit {
        // Wavenumbers, frequencies and micrometres are hardly anything else; metres may be.
        Some(unit) if unit != SpectralUnit::Metre || sounds_spectral => Some(if is_coordinate {
            1
        } else if is_named || sounds_spectral {
            2
        } else {
            3
        }),
        Some(_) => None,
        None => (sounds_spectral && axis.name.to_lowercase().contains("wave")).then_some(4),
    }
}

/// Whether a name has a part that names of spectral axes have.
pub fn sounds_spectral(name: &str) -> bool {
    let lower = name.to_lowercase();
    NAME_PARTS.iter().any(|part| lower.contains(part))
}

/// The values of an axis as they are in the file, and what they are called in messages. None where
/// they run along another dimension than the candidate's.
fn stored(
    reader: &FileReader,
    candidate: &AxisCandidate,
    problems: &mut Vec<Problem>,
) -> Result<Option<(Vec<f64>, String)>, Setback> {
    let index = reader.index();
    let place = match candidate.from {
        AxisFrom::Steps(steps) => {
            let channels = index.dimensions[candidate.dimension].length;
            let name = format!("from {} in steps of {}", steps.first, steps.step);
            return Ok(Some((axis_steps::values(steps, channels), name)));
        }
        AxisFrom::Variable(place) => place,
        // Resolved to steps before.
        AxisFrom::Numbers { .. } => return Ok(None),
    };
    let variable = &index.variables[place];
    let values = Decoder::of(variable).decode_all(&reader.read_all(variable)?);
    let name = format!("`{}`", variable.path);
    if variable.dimensions.len() == 1 {
        return Ok(Some((values, name)));
    }
    let along = variable.dimensions.iter().position(|one| *one == candidate.dimension);
    let Some(along) = along else { return Ok(None) };
    let others: Vec<&str> = index
        .dimension_names(variable)
        .into_iter()
        .enumerate()
        .filter(|(place, _)| *place != along)
        .map(|(_, name)| name)
        .collect();
    let others = others.join(", ");
    match rows(&values, &index.lengths(variable), along) {
        Rows::Across => Ok(None),
        Rows::Differ(most) => Err(Setback::Variable(format!(
            "its spectral axis {name} differs by up to {most} along {others}; all footprints must \
             share one axis: bring the spectra to one grid first"
        ))),
        Rows::Same(row) => {
            let what =
                format!("the spectral axis is the same along {others}; one row of it is used");
            problems.push(Problem::note(&what, &variable.path, ""));
            Ok(Some((row, name)))
        }
    }
}

/// Reads an axis: wavenumbers in the file's order. None where its values are no spectral axis.
///
/// # Errors
/// The values could not be read, or are in part no wavenumbers.
pub fn read(
    reader: &FileReader,
    candidate: &AxisCandidate,
    problems: &mut Vec<Problem>,
) -> Result<Option<(ChannelAxis, SpectralUnit)>, Setback> {
    let Some((stored, name)) = stored(reader, candidate, problems)? else { return Ok(None) };
    let unit = match candidate.unit {
        Some(unit) => unit,
        None => match guessed_unit(&stored) {
            Some(unit) => {
                problems.push(Problem::guess(
                    &format!(
                        "the spectral axis has no unit that can be read; taken as {}",
                        unit.label()
                    ),
                    name.trim_matches('`'),
                    "give it as `units`, for example cm-1 or um",
                ));
                unit
            }
            None => return Ok(None),
        },
    };
    let wavenumbers: Vec<f64> = stored.iter().map(|&place| unit.to_wavenumber(place)).collect();
    let implausible = |nu: &f64| nu.is_finite() && !PLAUSIBLE.contains(nu);
    if candidate.rank > 0 && wavenumbers.iter().any(implausible) {
        return Ok(None);
    }
    match ChannelAxis::new(wavenumbers) {
        Ok(axis) => Ok(Some((axis, unit))),
        Err(error) => Err(Setback::Variable(format!("its spectral axis {name}: {error}"))),
    }
}

/// Wavenumbers in cm-1 and wavelengths in um of thermal sounders cannot be mistaken for each other.
fn guessed_unit(values: &[f64]) -> Option<SpectralUnit> {
    let all_within = |low: f64, high: f64| values.iter().all(|value| (low..=high).contains(value));
    if all_within(500.0, 3_500.0) {
        Some(SpectralUnit::PerCentimetre)
    } else if all_within(2.5, 20.0) {
        Some(SpectralUnit::Micrometre)
    } else {
        None
    }
}
