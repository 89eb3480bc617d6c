//! Which variables become bands, and the footprints that they lie over.

use super::apodisation;
use super::axis_steps;
use super::band::Band;
use super::channel_quality;
use super::error::{GranuleError, Setback};
use super::find_bands::{self, BandCandidate, Search};
use super::footprint_dimensions::FootprintDimensions;
use super::granule_file::BandSource;
use super::layout::{Layout, Role};
use super::layout_file::LayoutFile;
use super::named_variable::named_dimension;
use super::problem::Problem;
use super::spectral_axis::{self, AxisFrom};
use crate::netcdf_files::{FileIndex, FileReader, Variable};

/// The layout file and the file do not agree.
pub fn contradicted(reader: &FileReader, reason: &str) -> GranuleError {
    GranuleError::not_usable(reader.path(), format!("does not fit the layout file: {reason}"))
}

/// Bands that lie over the same footprints.
pub struct Chosen {
    /// The footprints' dimensions.
    pub dimensions: FootprintDimensions,
    /// Where each band comes from, and what it is.
    pub bands: Vec<(BandSource, Band)>,
}

/// The first candidate that can be read settles the footprints; others join where they fit.
pub fn choose(
    reader: &FileReader,
    search: &mut Search,
    layout: &LayoutFile,
    problems: &mut Vec<Problem>,
) -> Result<Chosen, GranuleError> {
    let index = reader.index();
    let mut chosen: Option<Chosen> = None;
    let any_named = search.candidates.iter().any(|candidate| candidate.named);
    for candidate in std::mem::take(&mut search.candidates) {
        let variable = &index.variables[candidate.variable];
        if any_named && !candidate.named {
            let what = "looks like a spectrum, but others have a standard_name that says so";
            problems.push(Problem::note(what, &variable.path, "left out"));
            continue;
        }
        match settle(reader, &candidate, problems) {
            Ok(Some((spectral, band))) => {
                join(index, &mut chosen, &candidate, spectral, band, layout, problems)
                    .map_err(|reason| contradicted(reader, &reason))?;
            }
            Ok(None) if candidate.said.is_some() => {
                let reason = format!("band `{}` has no spectral axis", variable.path);
                return Err(contradicted(reader, &reason));
            }
            Ok(None) => search.unusable.push(format!("`{}` has no spectral axis", variable.path)),
            Err(Setback::Variable(reason)) if candidate.said.is_some() => {
                return Err(contradicted(reader, &format!("band `{}`: {reason}", variable.path)));
            }
            Err(Setback::Variable(reason)) => {
                search.unusable.push(format!("`{}`: {reason}", variable.path));
            }
            Err(Setback::File(error)) => return Err(error.into()),
        }
    }
    match chosen {
        Some(mut chosen) => {
            for unusable in &search.unusable {
                problems.push(Problem::note(&format!("left out: {unusable}"), "", ""));
            }
            // The surest candidates came first; bands are listed in the file's order, or the layout's.
            if layout.bands.is_empty() {
                chosen.bands.sort_by_key(|(source, _)| source.variable);
            }
            Ok(chosen)
        }
        None => {
            Err(GranuleError::not_usable(reader.path(), nothing_found(index, &search.unusable)))
        }
    }
}

/// The spectral dimension and the band, by the first of its axes that holds up.
fn settle(
    reader: &FileReader,
    candidate: &BandCandidate,
    problems: &mut Vec<Problem>,
) -> Result<Option<(usize, Band)>, Setback> {
    let index = reader.index();
    let variable = &index.variables[candidate.variable];
    for axis_candidate in &candidate.axes {
        let axis_candidate = &axis_steps::resolved(reader, axis_candidate)?;
        let Some((axis, unit)) = spectral_axis::read(reader, axis_candidate, problems)? else {
            continue;
        };
        let (axis_variable, axis_steps) = match axis_candidate.from {
            AxisFrom::Variable(place) => (Some(&index.variables[place]), None),
            AxisFrom::Steps(steps) => (None, Some(steps)),
            AxisFrom::Numbers { .. } => (None, None),
        };
        let axis_path = axis_variable.map(|axis| axis.path.clone()).unwrap_or_default();
        match axis_steps.filter(|_| axis_candidate.rank > 0) {
            Some(steps) => {
                let what = format!(
                    "its spectral axis is taken along `{}` from {} in steps of {} {}, by their names",
                    index.dimensions[axis_candidate.dimension].name,
                    steps.first,
                    steps.step,
                    unit.label()
                );
                let advice = "a layout file would say it";
                problems.push(Problem::guess(&what, &variable.path, advice));
            }
            None if axis_candidate.rank >= 3 => {
                let what = format!("`{axis_path}` is taken for its spectral axis by its unit");
                let advice = "a standard_name would say it";
                problems.push(Problem::guess(&what, &variable.path, advice));
            }
            None => {}
        }
        if axis_candidate.look_alike {
            let what = format!(
                "`{}` is taken for its spectral axis by the name and length of its dimension",
                axis_path
            );
            problems.push(Problem::guess(&what, &variable.path, "a layout file would say it"));
        }
        let said = candidate.said.clone().unwrap_or_default();
        let band = Band {
            name: said.name.as_deref().map(find_bands::valid_name).unwrap_or_default(),
            variable: variable.path.clone(),
            axis_variable: axis_path,
            axis_steps,
            axis_unit: unit,
            dimension: index.dimensions[axis_candidate.dimension].name.clone(),
            quantity: candidate.quantity.clone(),
            unit_text: said.unit.or_else(|| variable.text("units")).unwrap_or_default(),
            apodisation: match &said.apodisation {
                Some(words) => apodisation::from_words(words),
                None => {
                    let axis = axis_variable.unwrap_or(variable);
                    apodisation::find(index, variable, axis, problems)
                }
            },
            bad: bad_channels(
                axis.len(),
                &match said.bad_channels {
                    Some(listed) => listed,
                    None => {
                        let spectral = axis_candidate.dimension;
                        channel_quality::find(reader, variable, spectral, problems)?
                    }
                },
            )?,
            noise: None,
            axis,
        };
        return Ok(Some((axis_candidate.dimension, band)));
    }
    Ok(None)
}

/// For each channel whether it is among the ones listed.
fn bad_channels(channels: usize, listed: &[usize]) -> Result<Vec<bool>, Setback> {
    let mut bad = vec![false; channels];
    for &channel in listed {
        let Some(place) = bad.get_mut(channel) else {
            let reason = format!("bad_channels: {channel}, but there are {channels} channels");
            return Err(Setback::Variable(reason));
        };
        *place = true;
    }
    Ok(bad)
}

/// Adds a band to the chosen ones, or says why it is left out.
///
/// # Errors
/// It does not fit what the layout file says; in words.
fn join(
    index: &FileIndex,
    chosen: &mut Option<Chosen>,
    candidate: &BandCandidate,
    spectral: usize,
    band: Band,
    layout_file: &LayoutFile,
    problems: &mut Vec<Problem>,
) -> Result<(), String> {
    let variable = &index.variables[candidate.variable];
    let footprints: Vec<usize> =
        variable.dimensions.iter().copied().filter(|&dimension| dimension != spectral).collect();
    let Some(chosen) = chosen else {
        let dimensions = match &layout_file.footprint_dimensions {
            Some(names) => said_dimensions(index, &footprints, names)?,
            None => FootprintDimensions(footprints),
        };
        if let Some(layout) = layout(index, variable, spectral, &dimensions) {
            let source = source(candidate, spectral, layout, &band);
            *chosen = Some(Chosen { dimensions, bands: vec![(source, band)] });
        }
        return Ok(());
    };
    let same_axis = |(_, other): &&(BandSource, Band)| {
        (&other.axis_variable, other.axis_steps) == (&band.axis_variable, band.axis_steps)
    };
    let twice = chosen.bands.iter().find(same_axis).filter(|_| candidate.said.is_none());
    if let Some((_, other)) = twice {
        let what = format!("`{}` has the same channels", other.variable);
        problems.push(Problem::note(
            &what,
            &variable.path,
            "the first one was taken, this one left out",
        ));
        return Ok(());
    }
    match layout(index, variable, spectral, &chosen.dimensions) {
        Some(layout) => {
            if footprints.iter().any(|own| !chosen.dimensions.0.contains(own)) {
                let what = "laid over the footprints by the names and lengths of its dimensions";
                problems.push(Problem::guess(what, &variable.path, ""));
            }
            chosen.bands.push((source(candidate, spectral, layout, &band), band));
        }
        None if candidate.said.is_some() => {
            let names: Vec<&str> = index.dimension_names(variable);
            return Err(format!(
                "band `{}` lies over {}, not over the footprints of the first band",
                variable.path,
                names.join(", ")
            ));
        }
        None => {
            let what = "its footprint dimensions are not those of the other bands";
            problems.push(Problem::note(what, &variable.path, "left out"));
        }
    }
    Ok(())
}

fn source(candidate: &BandCandidate, spectral: usize, layout: Layout, band: &Band) -> BandSource {
    BandSource {
        variable: candidate.variable,
        layout,
        bad: band.bad.clone(),
        spectral,
        said: candidate.said.clone().unwrap_or_default(),
    }
}

/// The footprint dimensions in the order that the layout file names them in.
fn said_dimensions(
    index: &FileIndex,
    footprints: &[usize],
    names: &[String],
) -> Result<FootprintDimensions, String> {
    let named = |name: &String| named_dimension(index, footprints, name);
    let places = names.iter().map(named).collect::<Result<Vec<usize>, String>>();
    let places = places.map_err(|error| format!("footprint_dimensions: {error}"))?;
    match footprints.iter().all(|own| places.contains(own)) && places.len() == footprints.len() {
        true => Ok(FootprintDimensions(places)),
        false => {
            let own: Vec<&str> =
                footprints.iter().map(|&own| index.dimensions[own].name.as_str()).collect();
            Err(format!("footprint_dimensions: must name each of {} once", own.join(", ")))
        }
    }
}

/// The roles of a band's dimensions, if they are the spectral one and all footprint dimensions.
fn layout(
    index: &FileIndex,
    variable: &Variable,
    spectral: usize,
    dimensions: &FootprintDimensions,
) -> Option<Layout> {
    let role = |&dimension: &usize| match dimension == spectral {
        true => Some(Role::Spectral),
        false => dimensions.place_of(index, dimension).map(|(place, _)| Role::Footprint(place)),
    };
    let roles: Vec<Role> = variable.dimensions.iter().map(role).collect::<Option<_>>()?;
    let all_there = (0..dimensions.0.len())
        .map(Role::Footprint)
        .chain([Role::Spectral])
        .all(|role| roles.iter().filter(|&&own| own == role).count() == 1);
    let fits = all_there && roles.len() == dimensions.0.len() + 1;
    fits.then(|| Layout::new(roles, index.lengths(variable)))
}

/// What was looked for, and what was found instead.
fn nothing_found(index: &FileIndex, unusable: &[String]) -> String {
    let looked_for = "holds no spectra that can be used; looked for a variable with two or more dimensions, one of \
         them with a spectral axis (units cm-1, m-1, um, nm, …), whose units are those of a spectral radiance \
         (for example mW m-2 sr-1 (cm-1)-1) or, for brightness temperatures, K";
    if !unusable.is_empty() {
        return format!("{looked_for}; found {}", unusable.join("; "));
    }
    let large = index.variables.iter().filter(|variable| variable.dimensions.len() >= 2).take(8);
    let names: Vec<String> = large
        .map(|variable| {
            let units = variable.text("units").unwrap_or_default();
            let dimensions = index.dimension_names(variable).join(", ");
            format!("`{}` ({dimensions}) in {units:?}", variable.path)
        })
        .collect();
    match names.is_empty() {
        true => format!("{looked_for}; found no variable with two dimensions"),
        false => format!("{looked_for}; found {}", names.join(", ")),
    }
}
