//! Where the footprints lie, when they were seen, and how they are seen and lit.

use super::decoder::Decoder;
use super::error::GranuleError;
use super::footprint_dimensions::{FootprintDimensions, Spread};
use super::footprints::FootprintGrid;
use super::geolocation_fields::{Evidence, FIELDS, Field, Kind, evidence};
use super::layout_file::LayoutFile;
use super::named_variable::named_variable;
use super::problem::Problem;
use super::time::{TimeScale, TimeUnit};
use super::truth::is_truth;
use crate::netcdf_files::{FileReader, ReadError, Variable};
use crate::units::{AngleUnit, TemperatureUnit};

/// One value for each footprint, as far as the file has it. Missing values are NaN.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Geolocation {
    /// Degrees north.
    pub latitude: Option<Vec<f64>>,
    /// Degrees east.
    pub longitude: Option<Vec<f64>>,
    /// Zenith angle of the sensor seen from the footprint, degrees.
    pub view_zenith: Option<Vec<f64>>,
    /// Azimuth of the sensor seen from the footprint, degrees.
    pub view_azimuth: Option<Vec<f64>>,
    /// Zenith angle of the sun, degrees.
    pub solar_zenith: Option<Vec<f64>>,
    /// Azimuth of the sun, degrees.
    pub solar_azimuth: Option<Vec<f64>>,
    /// Share of land, 0 to 1.
    pub land_fraction: Option<Vec<f64>>,
    /// Seconds since 1970-01-01T00:00:00Z, leap seconds not counted.
    pub time: Option<Vec<f64>>,
    /// Temperature of the surface, its skin where there is a choice, by another instrument or a
    /// model, K.
    pub surface_temperature: Option<Vec<f64>>,
    /// Share under snow, 0 to 1.
    pub snow: Option<Vec<f64>>,
    /// Share under sea ice, 0 to 1.
    pub sea_ice: Option<Vec<f64>>,
    /// Share under cloud as another instrument or a model has it, 0 to 1.
    pub cloud_amount: Option<Vec<f64>>,
    /// Where each field was found, in the order in which they were looked for.
    pub sources: Vec<GeolocationSource>,
}

impl Geolocation {
    /// A field by its name in layer expressions, if the file has it.
    pub fn field(&self, name: &str) -> Option<&[f64]> {
        let values = match name {
            "lat" => &self.latitude,
            "lon" => &self.longitude,
            "view_zenith" => &self.view_zenith,
            "view_azimuth" => &self.view_azimuth,
            "solar_zenith" => &self.solar_zenith,
            "solar_azimuth" => &self.solar_azimuth,
            "land" => &self.land_fraction,
            "time" => &self.time,
            "surface_temperature" => &self.surface_temperature,
            "snow" => &self.snow,
            "sea_ice" => &self.sea_ice,
            "cloud_amount" => &self.cloud_amount,
            _ => return None,
        };
        values.as_deref()
    }

    /// Takes the values of a field, and where they are from.
    pub(super) fn set(&mut self, values: Vec<f64>, source: GeolocationSource) {
        let place = match source.field {
            "lat" => &mut self.latitude,
            "lon" => &mut self.longitude,
            "view_zenith" => &mut self.view_zenith,
            "view_azimuth" => &mut self.view_azimuth,
            "solar_zenith" => &mut self.solar_zenith,
            "solar_azimuth" => &mut self.solar_azimuth,
            "land" => &mut self.land_fraction,
            "time" => &mut self.time,
            "surface_temperature" => &mut self.surface_temperature,
            "snow" => &mut self.snow,
            "sea_ice" => &mut self.sea_ice,
            _ => &mut self.cloud_amount,
        };
        *place = Some(values);
        self.sources.push(source);
    }

    /// Names the fields that nothing gave and that are missed.
    pub(super) fn note_missing(&self, problems: &mut Vec<Problem>) {
        for field in FIELDS.iter().filter(|field| !field.cost.is_empty()) {
            if self.field(field.name).is_none() {
                problems.push(Problem::missing(&format!("no `{}`", field.name), "", field.cost));
            }
        }
    }
}

/// Where a field of the geolocation was found.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct GeolocationSource {
    /// The field's name in layer expressions.
    pub field: &'static str,
    /// The variable's path in its file; what it was worked out from, where it was.
    pub variable: String,
    /// Its unit as in the file.
    pub units: String,
    /// Which file, if any.
    pub origin: Origin,
    pub(super) place: usize,
}

/// Where values come from.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Origin {
    /// From the granule's own file.
    Granule,
    /// From a file that lends, by its place among the granule's lenders.
    Lent(usize),
    /// Worked out by this program.
    Computed,
}

/// What fields are looked for in, and the footprints or places that they must lie over.
#[derive(Clone, Copy)]
pub struct Over<'a> {
    pub reader: &'a FileReader,
    pub dimensions: &'a FootprintDimensions,
    pub grid: &'a FootprintGrid,
}

/// Finds and reads all fields that the granule's own file has.
///
/// # Errors
/// The whole file cannot be read any more, or the layout file names what is not there.
pub fn read(
    over: Over<'_>,
    layout: &LayoutFile,
    problems: &mut Vec<Problem>,
) -> Result<Geolocation, GranuleError> {
    let mut found = Geolocation::default();
    for field in &FIELDS {
        let (variable, unit) = layout.field(field.name);
        let candidate = match variable {
            Some("") => None,
            Some(name) => Some(said(over, name).map_err(|reason| {
                let why = format!("does not fit the layout file: {}: {reason}", field.name);
                GranuleError::not_usable(over.reader.path(), why)
            })?),
            None => find(over, field),
        };
        let Some(candidate) = candidate else { continue };
        if let Some((values, source)) = read_field(over, field, candidate, unit, problems)? {
            found.set(values, source);
        }
    }
    Ok(found)
}

/// One field as another file has it, over the places of that file.
pub fn read_from(
    over: Over<'_>,
    field: &Field,
    problems: &mut Vec<Problem>,
) -> Result<Option<(Vec<f64>, GeolocationSource)>, ReadError> {
    match find(over, field) {
        Some(candidate) => read_field(over, field, candidate, None, problems),
        None => Ok(None),
    }
}

/// The variable of a field.
struct Candidate {
    place: usize,
    /// What speaks for it; nothing more is needed where the layout file says so.
    evidence: Option<Evidence>,
    spread: Spread,
}

/// The variable that the layout file names.
fn said(over: Over<'_>, name: &str) -> Result<Candidate, String> {
    let index = over.reader.index();
    let place = named_variable(index, name)?;
    let variable = &index.variables[place];
    if !variable.kind.is_number() {
        return Err(format!("`{}` holds no numbers", variable.path));
    }
    let mut spread = over
        .dimensions
        .spread(index, variable)
        .or_else(|| Spread::by_lengths(over.grid, &index.lengths(variable)))
        .or_else(|| Spread::of_single(index, variable))
        .ok_or_else(|| format!("`{}` does not lie over the footprints", variable.path))?;
    // Said outright, so no guess.
    spread.guessed = false;
    Ok(Candidate { place, evidence: None, spread })
}

fn find(over: Over<'_>, field: &Field) -> Option<Candidate> {
    let index = over.reader.index();
    let all = index.variables.iter().enumerate();
    let candidates =
        all.filter(|(_, variable)| !is_truth(variable)).filter_map(|(place, variable)| {
            let spread =
                over.dimensions.spread(index, variable).filter(|_| variable.kind.is_number())?;
            let evidence = evidence(field, variable)?;
            // Full fields before those that are repeated, own dimensions before look-alikes.
            let order = (evidence, !spread.is_full(over.grid), spread.guessed, place);
            Some((order, Candidate { place, evidence: Some(evidence), spread }))
        });
    let found = candidates.min_by_key(|(order, _)| *order).map(|(_, found)| found);
    found.or_else(|| find_single(over, field))
}

/// One value for the whole file, as a station has it for its place.
fn find_single(over: Over<'_>, field: &Field) -> Option<Candidate> {
    let index = over.reader.index();
    let fits = matches!(field.kind, Kind::Latitude | Kind::Longitude | Kind::Time);
    let all = index.variables.iter().enumerate().filter(|_| fits);
    let candidates = all.filter_map(|(place, variable)| {
        let spread = Spread::of_single(index, variable).filter(|_| variable.kind.is_number())?;
        let evidence = evidence(field, variable).filter(|_| !is_truth(variable))?;
        Some(((evidence, place), Candidate { place, evidence: Some(evidence), spread }))
    });
    candidates.min_by_key(|(order, _)| *order).map(|(_, found)| found)
}

fn read_field(
    over: Over<'_>,
    field: &Field,
    candidate: Candidate,
    said_unit: Option<&str>,
    problems: &mut Vec<Problem>,
) -> Result<Option<(Vec<f64>, GeolocationSource)>, ReadError> {
    let Candidate { place, evidence, spread } = candidate;
    let variable = &over.reader.index().variables[place];
    let path = &variable.path;
    if evidence == Some(Evidence::Name) {
        let what = format!("`{}` is taken for {} by its name", path, field.name);
        problems.push(Problem::guess(&what, path, "a standard_name would say it"));
    }
    if spread.along.is_empty() {
        let what = format!("`{path}` has one value, taken for all footprints");
        problems.push(Problem::note(&what, path, ""));
    }
    if spread.guessed {
        let what = format!(
            "`{path}` is laid over the footprints by the names and lengths of its dimensions"
        );
        problems.push(Problem::guess(&what, path, ""));
    }
    let units = match said_unit {
        Some(unit) => unit.to_owned(),
        None => variable.text("units").unwrap_or_default(),
    };
    let convert = match conversion(field.kind, variable, &units, problems) {
        Ok(convert) => convert,
        Err(reason) => {
            let what = format!("`{path}` cannot be used: {reason}");
            problems.push(Problem::missing(&what, path, field.cost));
            return Ok(None);
        }
    };
    let samples = match over.reader.read_all(variable) {
        Ok(samples) => samples,
        Err(error) if error.fault.ends_the_file() => return Err(error),
        Err(error) => {
            let what = format!("`{}` cannot be read: {}", path, error.fault);
            problems.push(Problem::missing(&what, path, field.cost));
            return Ok(None);
        }
    };
    let mut values = spread.over(over.grid, Decoder::of(variable).decode_all(&samples));
    values.iter_mut().for_each(|value| *value = convert(*value));
    note_impossible(field.kind, &mut values, path, problems);
    let source = GeolocationSource {
        field: field.name,
        variable: path.clone(),
        units: crate::system::clean_text(&units),
        origin: Origin::Granule,
        place,
    };
    Ok(Some((values, source)))
}

type Conversion = Box<dyn Fn(f64) -> f64>;

/// From the variable's unit to ours.
fn conversion(
    kind: Kind,
    variable: &Variable,
    units: &str,
    problems: &mut Vec<Problem>,
) -> Result<Conversion, String> {
    match kind {
        Kind::Latitude | Kind::Longitude | Kind::Angle if units.is_empty() => {
            problems.push(Problem::guess("no unit; taken as degrees", &variable.path, ""));
            Ok(Box::new(|value| value))
        }
        Kind::Latitude | Kind::Longitude | Kind::Angle => {
            let unit = AngleUnit::parse(units).map_err(|error| error.to_string())?;
            Ok(Box::new(move |value| unit.to_degrees(value)))
        }
        Kind::Share if units == "%" || units.eq_ignore_ascii_case("percent") => {
            Ok(Box::new(|value| value / 100.0))
        }
        Kind::Share => Ok(Box::new(|value| value)),
        Kind::Temperature => {
            let unit = TemperatureUnit::parse(units).map_err(|error| error.to_string())?;
            Ok(Box::new(move |value| unit.to_kelvin(value)))
        }
        Kind::Time => {
            let mut texts = ["long_name", "comment", "description"]
                .iter()
                .filter_map(|name| variable.text(name));
            let says_tai = texts.any(|text| speaks_of_tai(&text));
            let calendar = variable.text("calendar");
            let unit = TimeUnit::parse(units, calendar.as_deref(), says_tai)?;
            let said = calendar.is_some_and(|calendar| calendar.eq_ignore_ascii_case("utc"));
            if unit.scale() == TimeScale::ElapsedSinceUtc && !said {
                problems.push(Problem::guess(
                    "the time counts TAI; its epoch is taken as UTC, and leap seconds since then are taken off",
                    &variable.path,
                    "a calendar attribute (tai or utc) would say it",
                ));
            }
            Ok(Box::new(move |value| unit.to_unix(value)))
        }
    }
}

/// Whether `TAI` is among the words of a text, or `TAI93` and its like, but not a longer word.
fn speaks_of_tai(text: &str) -> bool {
    let behind = |word: &str| word.strip_prefix("TAI").map(str::to_owned);
    text.split(|character: char| !character.is_ascii_alphanumeric())
        .filter_map(behind)
        .any(|epoch| epoch.chars().all(|digit| digit.is_ascii_digit()))
}

/// Values that no place or angle can have are missing.
fn note_impossible(kind: Kind, values: &mut [f64], path: &str, problems: &mut Vec<Problem>) {
    let range = match kind {
        Kind::Latitude => -90.0..=90.0,
        Kind::Longitude => -360.0..=360.0,
        Kind::Angle => -360.0..=360.0,
        Kind::Share => 0.0..=1.0,
        // Wider than any place on Earth: what is beyond is a fill value that nobody declared.
        Kind::Temperature => 100.0..=500.0,
        Kind::Time => return,
    };
    let mut count = 0;
    for value in values.iter_mut().filter(|value| value.is_finite() && !range.contains(*value)) {
        *value = f64::NAN;
        count += 1;
    }
    if count > 0 {
        let what = format!("{count} values outside of {} to {}", range.start(), range.end());
        problems.push(Problem::note(&what, path, "taken as missing"));
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn tai_is_a_word_of_its_own() {
        assert!(speaks_of_tai("Seconds of TAI") && speaks_of_tai("TAI93 at the scan's start"));
        assert!(!speaks_of_tai("TIME AS THE PACKET CONTAINS IT"));
    }
}
