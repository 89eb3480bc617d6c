//! From the index of a file to a granule.

use std::sync::{Arc, OnceLock};

use super::angles;
use super::apodise;
use super::choose_bands::{choose, contradicted};
use super::cube::{BandStorage, Cube};
use super::decoder::Decoder;
use super::error::GranuleError;
use super::find_bands;
use super::footprint_dimensions::FootprintDimensions;
use super::footprint_variables;
use super::footprints::FootprintGrid;
use super::geolocation::{self, GeolocationSource, Origin, Over};
use super::granule_file::Granule;
use super::layout_file::{ApodiseBy, BandEntry, LayoutFile};
use super::lending;
use super::memory_plan::MemoryPlan;
use super::named_variable::named_variable;
use super::noise::{Noise, NoiseSearch};
use super::opening::Opening;
use super::passing::PassingSlabs;
use super::problem::Problem;
use super::slabs::rows_per_slab;
use crate::netcdf_files::{FileIndex, FileReader, ReadError, ReadFault, Variable};

/// More footprints than any granule has; the screen and the layers hold numbers for each.
const MOST_FOOTPRINTS: usize = 20_000_000;

/// Understands an open file, whose values may take as much memory as is planned, with what the
/// layout file says of it, and joins the files that lend to it.
pub fn open(
    reader: FileReader,
    memory: &MemoryPlan,
    how: &Opening,
) -> Result<Granule, GranuleError> {
    let layout = &how.layout;
    let index = reader.index();
    let mut problems: Vec<Problem> = index
        .unreadable
        .iter()
        .map(|what| Problem::note("cannot be read", what, "left out"))
        .collect();
    let mut search = match layout.bands.is_empty() {
        true => find_bands::search(index, &mut problems),
        false => find_bands::said(index, layout, &mut problems)
            .map_err(|reason| contradicted(&reader, &reason))?,
    };
    let chosen = choose(&reader, &mut search, layout, &mut problems)?;
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
        let rows = rows_per_slab(index, variable, &source.layout, memory.slab);
        let search = NoiseSearch {
            index,
            band: source.variable,
            spectral: source.spectral,
            quantity: &band.quantity,
            dimensions: &dimensions,
        };
        band.noise = noise(&search, &source.said, &mut problems)
            .map_err(|reason| contradicted(&reader, &reason))?;
        let decoder = Decoder::of(variable).with_undeclared_fill();
        let apodise = match layout.apodise {
            Some(ApodiseBy::Hamming) => apodise::hamming(&mut band, &mut problems),
            None => None,
        };
        let value_size = variable.kind.size().unwrap_or(8);
        storage.push(BandStorage { decoder, rows_per_slab: rows, value_size, apodise });
        if band.name.is_empty() {
            band.name = name;
        }
        bands.push(band);
        sources.push(source);
    }
    let over = Over { reader: &reader, dimensions: &dimensions, grid: &grid };
    let mut geolocation = geolocation::read(over, layout, &mut problems)?;
    let lenders = lending::lenders(how, reader.path(), &grid, &mut geolocation, &mut problems)?;
    angles::complete(&mut geolocation, &grid, &mut problems);
    geolocation.note_missing(&mut problems);
    let calculated = lending::calculated(over, &bands, &sources, &lenders, &mut problems)?;
    let quality = said_quality(index, &dimensions, layout)
        .map_err(|reason| contradicted(&reader, &reason))?;
    let is_geolocation = |place| {
        let own = |source: &&GeolocationSource| source.origin == Origin::Granule;
        geolocation.sources.iter().filter(own).any(|source| source.place == place)
    };
    let footprint_variables = footprint_variables::find(
        index,
        &dimensions,
        &variables,
        quality.as_deref(),
        is_geolocation,
    );
    let cube = Arc::new(Cube::new(&grid, &bands, storage, memory));
    let largest_slab = (0..bands.len()).map(|band| cube.slab_bytes(band, 0)).max().unwrap_or(0);
    Ok(Granule {
        footprints: grid,
        dimensions,
        bands,
        sources,
        geolocation,
        variables: footprint_variables,
        layout: layout.origin.clone(),
        lenders,
        calculated,
        problems,
        cube,
        passing: PassingSlabs::new(memory.passing(largest_slab)),
        identity: OnceLock::new(),
        reader,
    })
}

/// A band's noise, by what is said of it or by what is found.
fn noise(
    search: &NoiseSearch<'_>,
    said: &BandEntry,
    problems: &mut Vec<Problem>,
) -> Result<Option<Noise>, String> {
    match said.noise.as_deref() {
        Some("") => Ok(None),
        Some(name) => search
            .said(name, said.noise_unit.as_deref(), said.noise_temperature, problems)
            .map(Some)
            .map_err(|reason| format!("band `{}`: noise: {reason}", said.variable)),
        None => Ok(search.find(problems)),
    }
}

/// The quality variables that the layout file names; nothing where it leaves that to the file.
fn said_quality(
    index: &FileIndex,
    dimensions: &FootprintDimensions,
    layout: &LayoutFile,
) -> Result<Option<Vec<usize>>, String> {
    let Some(names) = &layout.quality else { return Ok(None) };
    let place = |name: &String| {
        let place = named_variable(index, name).map_err(|error| format!("quality: {error}"))?;
        match dimensions.spread(index, &index.variables[place]) {
            Some(_) => Ok(place),
            None => Err(format!("quality: `{name}` does not lie over the footprints")),
        }
    };
    names.iter().map(place).collect::<Result<_, String>>().map(Some)
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
