//! Which variables of a file are radiances or brightness temperatures.

use super::band::Quantity;
use super::layout_file::{BandEntry, LayoutFile};
use super::named_variable::named_variable;
use super::problem::Problem;
use super::said_axis;
use super::spectral_axis::{self, AxisCandidate, PossibleAxes};
use crate::netcdf_files::{FileIndex, Variable};
use crate::units::{RadianceUnit, SpectralDensity, TemperatureUnit};

/// A variable that may be a band.
#[derive(Debug, Clone, PartialEq)]
pub struct BandCandidate {
    /// The variable, as a place in the file's list.
    pub variable: usize,
    /// What its values are.
    pub quantity: Quantity,
    /// Axes that one of its dimensions may have, the best first.
    pub axes: Vec<AxisCandidate>,
    /// Whether its standard name or the layout file says what it is.
    pub named: bool,
    /// What the layout file says of it; nothing where it was found without.
    pub said: Option<BandEntry>,
}

/// What was found: candidates, and variables that look like bands but cannot be used, with the reason.
#[derive(Debug, Default)]
pub struct Search {
    /// The surest first, then in the file's order.
    pub candidates: Vec<BandCandidate>,
    /// In words, one for each variable.
    pub unusable: Vec<String>,
}

const RADIANCES: [(&str, Option<SpectralDensity>); 3] = [
    ("toa_outgoing_radiance_per_unit_wavenumber", Some(SpectralDensity::Wavenumber)),
    ("toa_outgoing_radiance_per_unit_wavelength", Some(SpectralDensity::Wavelength)),
    ("toa_outgoing_radiance", None),
];
const TEMPERATURES: [&str; 2] = ["toa_brightness_temperature", "brightness_temperature"];

/// Words in a name that mean something else than the measured spectrum.
const OTHER_THINGS: [&str; 17] = [
    "nedn",
    "nedt",
    "nesr",
    "noise",
    "imag",
    "residual",
    "uncertainty",
    "error",
    "stddev",
    "std_",
    "_std",
    "bias",
    "calc",
    "clear_sky",
    "clearsky",
    "simulated",
    "mean_",
];

/// Looks through all variables.
pub fn search(index: &FileIndex, problems: &mut Vec<Problem>) -> Search {
    let possible = PossibleAxes::of(index);
    let mut found = Search::default();
    for (place, variable) in index.variables.iter().enumerate() {
        if !variable.kind.is_number() || variable.dimensions.len() < 2 {
            continue;
        }
        let named = measured_standard_name(variable);
        if named.is_none() && means_something_else(variable) {
            continue;
        }
        let axes = spectral_axis::candidates(index, &possible, variable);
        match quantity(variable, named.as_deref(), !axes.is_empty(), problems) {
            Ok(Some(quantity)) if !axes.is_empty() => {
                let named = named.is_some();
                found.candidates.push(BandCandidate {
                    variable: place,
                    quantity,
                    axes,
                    named,
                    said: None,
                });
            }
            Ok(Some(_)) => found.unusable.push(format!(
                "`{}` has no spectral axis: a 1-D variable on one of its dimensions ({}) with units such as cm-1, m-1, um or nm",
                variable.path,
                index.dimension_names(variable).join(", ")
            )),
            Ok(None) => {}
            Err(reason) => found.unusable.push(format!("`{}`: {reason}", variable.path)),
        }
    }
    found.candidates.sort_by_key(|candidate| !candidate.named);
    found
}

/// The bands that a layout file names, in its order.
///
/// # Errors
/// It names what is not there or cannot be used; in words.
pub fn said(
    index: &FileIndex,
    layout: &LayoutFile,
    problems: &mut Vec<Problem>,
) -> Result<Search, String> {
    let candidate = |entry: &BandEntry| {
        let place = named_variable(index, &entry.variable)?;
        let variable = &index.variables[place];
        said_candidate(index, place, entry, problems)
            .map_err(|reason| format!("band `{}`: {reason}", variable.path))
    };
    let candidates = layout.bands.iter().map(candidate).collect::<Result<_, _>>()?;
    Ok(Search { candidates, unusable: Vec::new() })
}

fn said_candidate(
    index: &FileIndex,
    place: usize,
    entry: &BandEntry,
    problems: &mut Vec<Problem>,
) -> Result<BandCandidate, String> {
    let variable = &index.variables[place];
    if !variable.kind.is_number() || variable.dimensions.len() < 2 {
        return Err("no numbers over two or more dimensions".into());
    }
    let axes = match said_axis::said(index, variable, entry)? {
        Some(axis) => vec![axis],
        None => spectral_axis::candidates(index, &PossibleAxes::of(index), variable),
    };
    if axes.is_empty() {
        return Err("it has no spectral axis that can be found; say `axis`".into());
    }
    let quantity = match &entry.unit {
        Some(unit) => Some(quantity_of_unit(unit)?),
        None => {
            let named = measured_standard_name(variable);
            quantity(variable, named.as_deref(), true, problems)?
        }
    };
    let quantity = quantity.ok_or("what its values are can't be told; say `unit`")?;
    Ok(BandCandidate { variable: place, quantity, axes, named: true, said: Some(entry.clone()) })
}

/// A spectral radiance or a temperature, by the unit alone.
pub fn quantity_of_unit(unit: &str) -> Result<Quantity, String> {
    if let Ok(unit) = TemperatureUnit::parse(unit) {
        return Ok(Quantity::BrightnessTemperature(unit));
    }
    let unit = RadianceUnit::parse(unit);
    unit.map(Quantity::Radiance).map_err(|error| format!("{error}; or K or degC for temperatures"))
}

/// The standard name, if it is that of a measured spectrum.
fn measured_standard_name(variable: &Variable) -> Option<String> {
    let name = variable.text("standard_name")?;
    let known =
        RADIANCES.iter().any(|&(known, _)| known == name) || TEMPERATURES.contains(&name.as_str());
    known.then_some(name)
}

fn means_something_else(variable: &Variable) -> bool {
    let standard_name = variable.text("standard_name").unwrap_or_default().to_lowercase();
    let long_name = variable.text("long_name").unwrap_or_default().to_lowercase();
    let name = variable.name.to_lowercase();
    let text = format!("{name} {standard_name} {}", long_name.replace(' ', "_"));
    OTHER_THINGS.iter().any(|word| text.contains(word))
}

/// What a variable's values are: nothing where it is no spectrum, an error where it is one without a
/// unit that can be used.
fn quantity(
    variable: &Variable,
    standard_name: Option<&str>,
    has_axis: bool,
    problems: &mut Vec<Problem>,
) -> Result<Option<Quantity>, String> {
    let units = variable.text("units").unwrap_or_default();
    if let Some(name) = standard_name.filter(|name| TEMPERATURES.contains(name)) {
        return match TemperatureUnit::parse(&units) {
            Ok(unit) => Ok(Some(Quantity::BrightnessTemperature(unit))),
            Err(error) => Err(format!("standard_name {name}, but {error}")),
        };
    }
    match (RadianceUnit::parse(&units), standard_name) {
        (Ok(unit), Some(name)) => {
            note_contradiction(variable, name, &unit, problems);
            Ok(Some(Quantity::Radiance(unit)))
        }
        (Ok(unit), None) => Ok(Some(Quantity::Radiance(unit))),
        (Err(error), Some(name)) => Err(format!("standard_name {name}, but {error}")),
        (Err(error), None) if has_axis && sounds_like(variable, &["radiance", "rad"]) => {
            Err(error.to_string())
        }
        (Err(_), None) => Ok(temperature_by_name(variable, &units, has_axis, problems)),
    }
}

fn temperature_by_name(
    variable: &Variable,
    units: &str,
    has_axis: bool,
    problems: &mut Vec<Problem>,
) -> Option<Quantity> {
    let unit = TemperatureUnit::parse(units).ok().filter(|_| has_axis)?;
    if !sounds_like(variable, &["brightness", "bt", "tb"]) {
        return None;
    }
    let what = "taken for a brightness temperature by its name and unit";
    problems.push(Problem::guess(what, &variable.path, "a standard_name would say it"));
    Some(Quantity::BrightnessTemperature(unit))
}

fn note_contradiction(
    variable: &Variable,
    name: &str,
    unit: &RadianceUnit,
    problems: &mut Vec<Problem>,
) {
    let said =
        RADIANCES.iter().find(|&&(known, _)| known == name).and_then(|&(_, density)| density);
    if said.is_some_and(|said| said != unit.per()) {
        problems.push(Problem::note(
            &format!("standard_name {name} contradicts its unit {}", unit.label()),
            &variable.path,
            "the unit was believed",
        ));
    }
}

/// Whether a word of the variable's name, or its description, is among `words`; longer words may be
/// parts of a name.
fn sounds_like(variable: &Variable, words: &[&str]) -> bool {
    let name = variable.name.to_lowercase();
    let long_name = variable.text("long_name").unwrap_or_default().to_lowercase();
    let parts: Vec<&str> = name.split(|character: char| !character.is_ascii_alphabetic()).collect();
    words.iter().any(|word| {
        parts.contains(word)
            || (word.len() > 3 && (name.contains(word) || long_name.contains(word)))
    })
}

/// Short names for bands that are valid in CF names: what tells the variables apart.
pub fn band_names(variables: &[&Variable]) -> Vec<String> {
    let full = |variable: &&Variable| valid_name(&variable.path.replace('/', "_"));
    if let [only] = variables {
        return vec![valid_name(&only.name)];
    }
    let mut names: Vec<String> = variables.iter().map(full).collect();
    let paths: Vec<Vec<String>> = names
        .iter()
        .map(|name| name.split('_').map(str::to_owned).collect::<Vec<String>>())
        .collect();
    let shortest = paths.iter().map(Vec::len).min().unwrap_or(0);
    let alike = |place: &dyn Fn(&Vec<String>) -> String| {
        paths.windows(2).all(|pair| place(&pair[0]) == place(&pair[1]))
    };
    let front = (0..shortest).take_while(|&at| alike(&|words| words[at].clone())).count();
    let back = (0..shortest - front)
        .take_while(|&at| alike(&|words| words[words.len() - 1 - at].clone()))
        .count();
    let short: Vec<String> =
        paths.iter().map(|words| words[front..words.len() - back].join("_")).collect();
    if short.iter().all(|name| !name.is_empty()) {
        names = short.iter().map(|name| valid_name(name)).collect();
    }
    unique(names)
}

/// Letters, digits and underscores, a letter first (CF conventions 2.3).
pub fn valid_name(name: &str) -> String {
    let plain = |character: char| if character.is_ascii_alphanumeric() { character } else { '_' };
    let name: String = name.chars().map(plain).take(60).collect();
    let name = name.trim_matches('_');
    if name.starts_with(|first: char| first.is_ascii_alphabetic()) {
        name.to_owned()
    } else {
        format!("band{}{name}", if name.is_empty() { "" } else { "_" })
    }
}

fn unique(names: Vec<String>) -> Vec<String> {
    let mut taken: Vec<String> = Vec::new();
    for name in names {
        let mut candidate = name.clone();
        let mut number = 2;
        while taken.contains(&candidate) {
            candidate = format!("{name}_{number}");
            number += 1;
        }
        taken.push(candidate);
    }
    taken
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::netcdf_files::{Storage, ValueKind};

    fn names(paths: &[&str]) -> Vec<String> {
        let variable = |path: &&str| Variable {
            path: (*path).into(),
            name: path.rsplit('/').next().unwrap().into(),
            group: 0,
            dimensions: Vec::new(),
            kind: ValueKind::F32,
            attributes: Vec::new(),
            storage: Storage::default(),
        };
        let variables: Vec<Variable> = paths.iter().map(variable).collect();
        band_names(&variables.iter().collect::<Vec<_>>())
    }

    #[test]
    fn bands_are_called_by_what_tells_them_apart() {
        assert_eq!(names(&["rad_lw", "rad_mw", "rad_sw"]), ["lw", "mw", "sw"]);
        assert_eq!(names(&["long/radiance", "short/radiance"]), ["long", "short"]);
        assert_eq!(names(&["data/radiance"]), ["radiance"]);
        assert_eq!(names(&["rad_1", "rad_2"]), ["band_1", "band_2"]);
        assert_eq!(names(&["rad", "rad_sw"]), ["rad", "rad_sw"]);
    }

    #[test]
    fn names_are_valid_and_different() {
        assert_eq!(names(&["r-a d", "r a-d"]), ["r_a_d", "r_a_d_2"]);
        assert_eq!(names(&["µ"]), ["band"]);
    }
}
