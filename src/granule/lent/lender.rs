//! One file that lends, and how its places lie to the footprints.

use std::path::Path;
use std::sync::OnceLock;

use super::join::{Join, Places, Seekers, Times};
use super::within::Within;
use crate::granule::decoder::Decoder;
use crate::granule::error::GranuleError;
use crate::granule::footprint_dimensions::FootprintDimensions;
use crate::granule::footprint_variables::{self, FootprintVariable};
use crate::granule::footprints::FootprintGrid;
use crate::granule::geolocation::{self, Geolocation, Over};
use crate::granule::geolocation_fields::{FIELDS, Field, evidence};
use crate::granule::globe::{chord, dot, minus, point};
use crate::granule::identity::Identity;
use crate::granule::problem::Problem;
use crate::granule::truth::is_truth;
use crate::netcdf_files::{FileReader, ReadError, Variable};
use crate::system::clean_text;

/// More places than a field on the finest global grid of today's analyses.
const MOST_PLACES: usize = 50_000_000;

/// A file that lends.
#[derive(Debug)]
pub struct Lender {
    pub(in crate::granule) reader: FileReader,
    pub(in crate::granule) dimensions: FootprintDimensions,
    pub(in crate::granule) grid: FootprintGrid,
    join: Join,
    footprints: usize,
    matched: usize,
    pub(in crate::granule) variables: Vec<FootprintVariable>,
    identity: OnceLock<Identity>,
}

impl Lender {
    /// Joins an open file to the footprints of a granule, whose own places are in `geolocation`.
    ///
    /// # Errors
    /// The file cannot be read, or there is no way to join it; the message says what was looked for.
    pub(in crate::granule) fn join(
        reader: FileReader,
        footprints: &FootprintGrid,
        geolocation: &Geolocation,
        within: Within,
        problems: &mut Vec<Problem>,
    ) -> Result<Self, GranuleError> {
        let by_dimensions = by_dimensions(&reader, footprints);
        let apart = match &by_dimensions {
            Some(dimensions) => {
                lies_elsewhere(&reader, dimensions, geolocation, footprints, within)?
            }
            None => None,
        };
        let (dimensions, grid, join) = match (by_dimensions, apart) {
            (Some(dimensions), None) => (dimensions, footprints.clone(), Join::Dimensions),
            (_, apart) => {
                if let Some(metres) = apart {
                    let what = format!(
                        "its dimensions are the granule's, but its places are {:.0} km away",
                        metres / 1000.0
                    );
                    problems.push(Problem::note(&what, "", "joined by the nearest places"));
                }
                by_place(&reader, footprints, geolocation, within, problems)?
            }
        };
        let index = reader.index();
        let variables = footprint_variables::find(index, &dimensions, &[], Some(&[]), |_| false);
        let variables = variables
            .into_iter()
            .filter(|variable| !is_truth(&index.variables[variable.place]))
            .collect();
        let matched = join.matched(footprints.count());
        let lender = Self {
            dimensions,
            grid,
            join,
            footprints: footprints.count(),
            matched,
            variables,
            identity: OnceLock::new(),
            reader,
        };
        if matched == 0 {
            problems.push(Problem::refused(
                "no footprint has a place in it",
                "",
                "it lends nothing",
            ));
        }
        Ok(lender)
    }

    /// The file as it was named.
    pub fn path(&self) -> &Path {
        self.reader.path()
    }

    /// The file's name, safe to show.
    pub fn name(&self) -> String {
        let name = self.path().file_name().map(|name| name.to_string_lossy().into_owned());
        clean_text(&name.unwrap_or_default())
    }

    /// How it was joined.
    pub fn how(&self) -> &Join {
        &self.join
    }

    /// How many footprints have a place in it.
    pub fn matched(&self) -> usize {
        self.matched
    }

    /// Variables over its places, which [`crate::granule::Granule::read_variable`] hands to the
    /// footprints.
    pub fn variables(&self) -> &[FootprintVariable] {
        &self.variables
    }

    /// Size and content hash. The first call reads the whole file, later ones cost nothing.
    ///
    /// # Errors
    /// The file cannot be read, or is not the one that was opened.
    pub fn hash(&self) -> Result<&Identity, GranuleError> {
        if let Some(identity) = self.identity.get() {
            return Ok(identity);
        }
        self.reader.check_unchanged()?;
        let limit = self.reader.limit();
        let identity = Identity::of(self.path(), limit)
            .map_err(|error| ReadError::of_slow_system(self.path(), &error, limit))?;
        self.reader.check_unchanged()?;
        Ok(self.identity.get_or_init(|| identity))
    }

    /// A field of the geolocation, handed to the footprints.
    pub(in crate::granule) fn field(
        &self,
        field: &Field,
        problems: &mut Vec<Problem>,
    ) -> Result<Option<(Vec<f64>, geolocation::GeolocationSource)>, ReadError> {
        let over = Over { reader: &self.reader, dimensions: &self.dimensions, grid: &self.grid };
        let found = geolocation::read_from(over, field, problems)?;
        Ok(found.map(|(values, source)| (self.join.gather(values, self.footprints), source)))
    }

    /// A variable over its places, handed to the footprints; missing as NaN.
    pub(in crate::granule) fn read(
        &self,
        found: &FootprintVariable,
    ) -> Result<Vec<f64>, ReadError> {
        let variable = &self.reader.index().variables[found.place];
        let values = Decoder::of(variable).decode_all(&self.reader.read_all(variable)?);
        let spread = self.dimensions.spread(self.reader.index(), variable);
        let values = spread.map_or(Vec::new(), |spread| spread.over(&self.grid, values));
        Ok(self.join.gather(values, self.footprints))
    }
}

/// The file's dimensions that are the footprints' by name and length, in their order.
fn by_dimensions(reader: &FileReader, footprints: &FootprintGrid) -> Option<FootprintDimensions> {
    let index = reader.index();
    let own = |(name, &length): (&String, &usize)| {
        index.dimensions.iter().position(|own| own.name == *name && own.length == length)
    };
    let places = footprints.names().iter().zip(footprints.lengths()).map(own);
    let dimensions = FootprintDimensions(places.collect::<Option<_>>()?);
    let lies_over = |variable: &Variable| {
        let places = variable.dimensions.iter().map(|&one| dimensions.place_of(index, one));
        places.flatten().count() >= dimensions.0.len()
    };
    index.variables.iter().any(lies_over).then_some(dimensions)
}

/// How far away (m) most of its places are, where they are farther than the tolerance: then it is
/// another granule's file with the same shape.
fn lies_elsewhere(
    reader: &FileReader,
    dimensions: &FootprintDimensions,
    geolocation: &Geolocation,
    grid: &FootprintGrid,
    within: Within,
) -> Result<Option<f64>, ReadError> {
    let (Some(latitudes), Some(longitudes)) = (&geolocation.latitude, &geolocation.longitude)
    else {
        return Ok(None);
    };
    let over = Over { reader, dimensions, grid };
    let Some((own_latitudes, own_longitudes)) = places(over, &mut Vec::new())? else {
        return Ok(None);
    };
    let own = own_latitudes.iter().zip(&own_longitudes);
    let mut chords: Vec<f64> = latitudes
        .iter()
        .zip(longitudes)
        .zip(own)
        .filter_map(|((latitude, longitude), (own_latitude, own_longitude))| {
            let offset =
                minus(point(*latitude, *longitude)?, point(*own_latitude, *own_longitude)?);
            Some(dot(offset, offset).sqrt())
        })
        .collect();
    if chords.is_empty() {
        return Ok(None);
    }
    let middle = chords.len() / 2;
    let (_, median, _) = chords.select_nth_unstable_by(middle, f64::total_cmp);
    let metres = 2.0 * (0.5 * *median).min(1.0).asin() * crate::granule::globe::EARTH_RADIUS;
    Ok((*median > chord(within.metres)).then_some(metres))
}

/// Degrees north and degrees east of some places.
type LatitudesAndLongitudes = (Vec<f64>, Vec<f64>);

/// Latitudes and longitudes over a grid.
fn places(
    over: Over<'_>,
    problems: &mut Vec<Problem>,
) -> Result<Option<LatitudesAndLongitudes>, ReadError> {
    let [latitude, longitude] = [field("lat"), field("lon")];
    let latitudes = geolocation::read_from(over, latitude, problems)?;
    let longitudes = geolocation::read_from(over, longitude, problems)?;
    Ok(latitudes.zip(longitudes).map(|((latitudes, _), (longitudes, _))| (latitudes, longitudes)))
}

fn field(name: &str) -> &'static Field {
    FIELDS.iter().find(|field| field.name == name).unwrap_or(&FIELDS[0])
}

/// The dimensions that the file's places lie over, and for each footprint the nearest of them.
fn by_place(
    reader: &FileReader,
    footprints: &FootprintGrid,
    geolocation: &Geolocation,
    within: Within,
    problems: &mut Vec<Problem>,
) -> Result<(FootprintDimensions, FootprintGrid, Join), GranuleError> {
    let refused = |why: String| GranuleError::not_usable(reader.path(), why);
    let (Some(latitudes), Some(longitudes)) = (&geolocation.latitude, &geolocation.longitude)
    else {
        let names = footprints.names().join(", ");
        return Err(refused(format!(
            "cannot be joined: it lacks the granule's dimensions ({names}), and the granule has no \
             latitude and longitude to look for the nearest places by"
        )));
    };
    let on_ground = place_dimensions(reader).ok_or_else(|| {
        let lengths = footprints.names().iter().zip(footprints.lengths());
        let names: Vec<String> =
            lengths.map(|(name, length)| format!("{} {length}", clean_text(name))).collect();
        refused(format!(
            "cannot be joined: it has neither the granule's dimensions ({}) nor latitude and \
             longitude",
            names.join(", ")
        ))
    })?;
    let ground = checked_grid(reader, &on_ground)?;
    let over = Over { reader, dimensions: &on_ground, grid: &ground };
    let Some((own_latitudes, own_longitudes)) = places(over, problems)? else {
        return Err(refused("cannot be joined: its latitude or longitude cannot be used".into()));
    };
    let times = Timing::of(over, problems)?;
    let mut dimensions = on_ground.clone();
    if let Timing::Steps { dimension, .. } = &times {
        dimensions.0.insert(0, *dimension);
    }
    let grid = checked_grid(reader, &dimensions)?;
    let places = Places {
        latitudes: &own_latitudes,
        longitudes: &own_longitudes,
        times: match &times {
            Timing::Unknown => Times::Unknown,
            Timing::OfPlaces(times) => Times::OfPlaces(times),
            Timing::Steps { times, .. } => Times::Steps(times),
        },
    };
    let seekers = Seekers { latitudes, longitudes, times: geolocation.time.as_deref() };
    let join = Join::nearest(&places, &seekers, within);
    if matches!(join, Join::Nearest { timed: false, .. }) {
        let who = if seekers.times.is_some() { "it" } else { "the granule" };
        let what = format!("{who} has no times; joined by place alone");
        problems.push(Problem::note(&what, "", ""));
    }
    Ok((dimensions, grid, join))
}

/// The times of the file as far as they lie over its places.
enum Timing {
    Unknown,
    OfPlaces(Vec<f64>),
    Steps { dimension: usize, times: Vec<f64> },
}

impl Timing {
    fn of(over: Over<'_>, problems: &mut Vec<Problem>) -> Result<Self, ReadError> {
        let time = field("time");
        if let Some((times, _)) = geolocation::read_from(over, time, problems)? {
            return Ok(Self::OfPlaces(times));
        }
        let index = over.reader.index();
        let steps = best(over.reader, time, |variable| variable.dimensions.len() == 1);
        let Some(dimension) = steps.and_then(|variable| variable.dimensions.first().copied())
        else {
            return Ok(Self::Unknown);
        };
        let dimensions = FootprintDimensions(vec![dimension]);
        let grid = grid_of(index, &dimensions);
        let over = Over { reader: over.reader, dimensions: &dimensions, grid: &grid };
        let found = geolocation::read_from(over, time, problems)?;
        Ok(found.map_or(Self::Unknown, |(times, _)| Self::Steps { dimension, times }))
    }
}

/// The variable that is a field by the best evidence, among those that suit.
fn best<'r>(
    reader: &'r FileReader,
    field: &Field,
    suits: impl Fn(&Variable) -> bool,
) -> Option<&'r Variable> {
    let all = reader.index().variables.iter().enumerate();
    let candidates = all.filter_map(|(place, variable)| {
        let fits = variable.kind.is_number() && !is_truth(variable) && suits(variable);
        Some(((evidence(field, variable)?, place), variable)).filter(|_| fits)
    });
    candidates.min_by_key(|(order, _)| *order).map(|(_, variable)| variable)
}

/// The dimensions of latitude and longitude: the same for both, or one for each as on a regular grid.
fn place_dimensions(reader: &FileReader) -> Option<FootprintDimensions> {
    let latitude = best(reader, field("lat"), |variable| !variable.dimensions.is_empty())?;
    let own = &latitude.dimensions;
    let lon = field("lon");
    let together = best(reader, lon, |variable| variable.dimensions == *own);
    if together.is_some() {
        return Some(FootprintDimensions(own.clone()));
    }
    let &[across] = own.as_slice() else { return None };
    let along = best(reader, lon, |variable| {
        variable.dimensions.len() == 1 && variable.dimensions[0] != across
    })?;
    Some(FootprintDimensions(vec![across, along.dimensions[0]]))
}

fn grid_of(
    index: &crate::netcdf_files::FileIndex,
    dimensions: &FootprintDimensions,
) -> FootprintGrid {
    let dimension = |&place: &usize| &index.dimensions[place];
    FootprintGrid::new(
        dimensions.0.iter().map(|place| dimension(place).name.clone()).collect(),
        dimensions.0.iter().map(|place| dimension(place).length).collect(),
    )
}

fn checked_grid(
    reader: &FileReader,
    dimensions: &FootprintDimensions,
) -> Result<FootprintGrid, GranuleError> {
    let grid = grid_of(reader.index(), dimensions);
    let lengths = grid.lengths().iter();
    let count = lengths.copied().try_fold(1_usize, usize::checked_mul);
    match count {
        Some(count) if count <= MOST_PLACES => Ok(grid),
        _ => Err(GranuleError::not_usable(
            reader.path(),
            format!(
                "has more than {MOST_PLACES} places ({}); cut it to the granule's region and time, for \
                 example with `ncks -d`",
                grid.names().join(" x ")
            ),
        )),
    }
}
