//! From the index of a file to a granule.

use std::sync::{Arc, OnceLock};

use super::apodisation;
use super::band::Band;
use super::cube::Cube;
use super::decoder::Decoder;
use super::error::{GranuleError, Setback};
use super::find_bands::{self, BandCandidate, Search};
use super::footprint_dimensions::FootprintDimensions;
use super::footprint_variables;
use super::footprints::FootprintGrid;
use super::geolocation;
use super::granule_file::{BandSource, Granule};
use super::layout::{Layout, Role};
use super::problem::Problem;
use super::slabs::rows_per_slab;
use super::spectral_axis;
use crate::netcdf_files::{FileIndex, FileReader, ReadError, ReadFault, Variable};

/// More footprints than any granule has; the screen and the layers hold numbers for each.
const MOST_FOOTPRINTS: usize = 20_000_000;

/// Understands an open file, whose values may take `budget` bytes of memory.
pub fn open(reader: FileReader, budget: u64) -> Result<Granule, GranuleError> {
    let index = reader.index();
    let mut problems: Vec<Problem> = index
        .unreadable
        .iter()
        .map(|what| Problem::note("cannot be read", what, "left out"))
        .collect();
    let mut search = find_bands::search(index, &mut problems);
    let chosen = choose(&reader, &mut search, &mut problems)?;
    let dimensions = chosen.dimensions;
    let grid = grid(index, &dimensions);
    check_size(&reader, &grid)?;

    let variables: Vec<&Variable> =
        chosen.bands.iter().map(|(source, _)| &index.variables[source.variable]).collect();
    let names = find_bands::band_names(&variables);
    let mut bands = Vec::new();
    let mut storage = Vec::new();
    let mut sources = Vec::new();
    for ((source, mut band), name) in chosen.bands.into_iter().zip(names) {
        let variable = &index.variables[source.variable];
        if let Some(filter) = &variable.storage.missing_filter {
            let what = format!("variable `{}`", variable.path);
            let fault = ReadFault::MissingFilter { what, filter: filter.clone() };
            return Err(ReadError::new(reader.path(), fault).into());
        }
        let rows = rows_per_slab(index, variable, &source.layout);
        storage.push((Decoder::of(variable).with_undeclared_fill(), rows));
        band.name = name;
        bands.push(band);
        sources.push(source);
    }
    let geolocation = geolocation::read(&reader, &dimensions, &grid, &mut problems)?;
    let is_geolocation = |place| geolocation.sources.iter().any(|source| source.place == place);
    let footprint_variables =
        footprint_variables::find(index, &dimensions, &variables, is_geolocation);
    let cube = Arc::new(Cube::new(&grid, &bands, storage));
    Ok(Granule {
        footprints: grid,
        dimensions,
        bands,
        sources,
        geolocation,
        variables: footprint_variables,
        problems,
        cube,
        budget,
        identity: OnceLock::new(),
        reader,
    })
}

/// Bands that lie over the same footprints.
struct Chosen {
    dimensions: FootprintDimensions,
    bands: Vec<(BandSource, Band)>,
}

/// The first candidate that can be read settles the footprints; others join where they fit.
fn choose(
    reader: &FileReader,
    search: &mut Search,
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
                join(index, &mut chosen, &candidate, spectral, band, problems)
            }
            Ok(None) => search.unusable.push(format!("`{}` has no spectral axis", variable.path)),
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
            // The surest candidates came first; bands are listed in the file's order.
            chosen.bands.sort_by_key(|(source, _)| source.variable);
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
        let Some((axis, unit)) = spectral_axis::read(reader, axis_candidate, problems)? else {
            continue;
        };
        let axis_variable = &index.variables[axis_candidate.variable];
        if axis_candidate.rank >= 3 {
            let what =
                format!("`{}` is taken for its spectral axis by its unit", axis_variable.path);
            problems.push(Problem::guess(&what, &variable.path, "a standard_name would say it"));
        }
        let band = Band {
            name: String::new(),
            variable: variable.path.clone(),
            axis_variable: axis_variable.path.clone(),
            axis_unit: unit,
            dimension: index.dimensions[axis_candidate.dimension].name.clone(),
            quantity: candidate.quantity.clone(),
            unit_text: variable.text("units").unwrap_or_default(),
            apodisation: apodisation::find(index, variable, axis_variable, problems),
            bad: vec![false; axis.len()],
            axis,
        };
        return Ok(Some((axis_candidate.dimension, band)));
    }
    Ok(None)
}

/// Adds a band to the chosen ones, or says why it is left out.
fn join(
    index: &FileIndex,
    chosen: &mut Option<Chosen>,
    candidate: &BandCandidate,
    spectral: usize,
    band: Band,
    problems: &mut Vec<Problem>,
) {
    let variable = &index.variables[candidate.variable];
    let footprints: Vec<usize> =
        variable.dimensions.iter().copied().filter(|&dimension| dimension != spectral).collect();
    let Some(chosen) = chosen else {
        let layout = layout(index, variable, spectral, &FootprintDimensions(footprints.clone()));
        if let Some(layout) = layout {
            let source = BandSource { variable: candidate.variable, layout };
            let dimensions = FootprintDimensions(footprints);
            *chosen = Some(Chosen { dimensions, bands: vec![(source, band)] });
        }
        return;
    };
    let same_axis = |(_, other): &&(BandSource, Band)| other.axis_variable == band.axis_variable;
    if let Some((_, other)) = chosen.bands.iter().find(same_axis) {
        let what = format!("`{}` has the same channels", other.variable);
        problems.push(Problem::note(
            &what,
            &variable.path,
            "the first one was taken, this one left out",
        ));
        return;
    }
    match layout(index, variable, spectral, &chosen.dimensions) {
        Some(layout) => {
            chosen.bands.push((BandSource { variable: candidate.variable, layout }, band));
        }
        None => {
            let what = "its footprint dimensions are not those of the other bands";
            problems.push(Problem::note(what, &variable.path, "left out"));
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

fn grid(index: &FileIndex, dimensions: &FootprintDimensions) -> FootprintGrid {
    let dimension = |&place: &usize| &index.dimensions[place];
    FootprintGrid::new(
        dimensions.0.iter().map(|place| dimension(place).name.clone()).collect(),
        dimensions.0.iter().map(|place| dimension(place).length).collect(),
    )
}

fn check_size(reader: &FileReader, grid: &FootprintGrid) -> Result<(), GranuleError> {
    let names = grid.names().join(" x ");
    let count =
        grid.lengths().iter().try_fold(1_usize, |product, &length| product.checked_mul(length));
    match count {
        Some(0) => Err(GranuleError::not_usable(
            reader.path(),
            format!("has no footprints: one of its dimensions {names} has the length zero"),
        )),
        Some(count) if count <= MOST_FOOTPRINTS => Ok(()),
        _ => Err(GranuleError::not_usable(
            reader.path(),
            format!(
                "has more than {MOST_FOOTPRINTS} footprints ({names}); cut it along `{}`, for example with \
                 `ncks -d {},0,999 in.nc out.nc`",
                grid.names().first().map_or("", String::as_str),
                grid.names().first().map_or("", String::as_str),
            ),
        )),
    }
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
