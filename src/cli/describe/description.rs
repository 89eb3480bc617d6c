//! The description as data: what `--json` prints and the text is made of.

use serde::Serialize;

use crate::granule::{
    Band, Decoder, FootprintVariable, Granule, GranuleError, Lender, Origin, Problem, Quantity,
};
use crate::netcdf_files::{Storage, Variable};
use crate::review::Producer;
use crate::system::clean_text;
use crate::units::RadianceUnit;

/// The version of the JSON form. A field may be added without a new one; none is removed or renamed.
const SCHEMA: u32 = 1;

/// Everything that was understood of a file.
#[derive(Debug, Serialize)]
pub struct Description {
    pub schema: u32,
    pub file: String,
    pub format: &'static str,
    pub file_bytes: u64,
    pub memory_bytes: usize,
    pub title: Option<String>,
    pub source: Option<String>,
    /// The layout file that was used.
    pub layout_file: Option<LayoutDescription>,
    pub footprints: Footprints,
    pub bands: Vec<BandDescription>,
    pub geolocation: Vec<Field>,
    pub variables: Vec<VariableDescription>,
    /// Files that lend fields.
    pub lenders: Vec<LenderDescription>,
    pub problems: Vec<ProblemDescription>,
}

/// A layout file.
#[derive(Debug, Serialize)]
pub struct LayoutDescription {
    pub file: String,
    pub blake3: String,
}

/// A file that lends.
#[derive(Debug, Serialize)]
pub struct LenderDescription {
    pub file: String,
    pub blake3: String,
    pub bytes: u64,
    pub joined: String,
    pub footprints_matched: usize,
    /// Fields that the granule takes from it.
    pub lends: Vec<String>,
    pub variables: Vec<VariableDescription>,
}

/// The footprints' dimensions.
#[derive(Debug, Serialize)]
pub struct Footprints {
    pub count: usize,
    pub dimensions: Vec<Dimension>,
}

/// One dimension.
#[derive(Debug, Serialize)]
pub struct Dimension {
    pub name: String,
    pub length: usize,
}

/// One band.
#[derive(Debug, Serialize)]
pub struct BandDescription {
    pub name: String,
    pub variable: String,
    pub dimensions: Vec<String>,
    pub quantity: &'static str,
    pub units_in_file: String,
    pub units_in_use: String,
    /// What the unit in the file was understood as.
    pub units_understood: String,
    pub channels: usize,
    #[serde(rename = "first_cm-1")]
    pub first: f64,
    #[serde(rename = "last_cm-1")]
    pub last: f64,
    #[serde(rename = "smallest_spacing_cm-1")]
    pub smallest_spacing: Option<f64>,
    #[serde(rename = "largest_spacing_cm-1")]
    pub largest_spacing: Option<f64>,
    /// Stretches without a gap.
    pub segments: usize,
    pub axis_variable: String,
    /// First value and step of an axis that no variable gives.
    pub axis_steps: Option<[f64; 2]>,
    pub axis_units: &'static str,
    pub apodisation: String,
    pub noise: Option<NoiseDescription>,
    /// Calculated clear-sky spectra.
    pub calculated: Option<CalculatedDescription>,
    /// Channels that no layer takes.
    pub bad_channels: usize,
    pub storage: StorageDescription,
}

/// The noise of a band.
#[derive(Debug, Serialize)]
pub struct NoiseDescription {
    pub variable: String,
    pub units_in_file: String,
    /// The temperature of the scene that a noise in K is given for.
    #[serde(rename = "scene_K")]
    pub scene: Option<f64>,
    /// The footprints' dimensions that it differs along.
    pub along: Vec<String>,
}

/// The calculated clear-sky spectra of a band.
#[derive(Debug, Serialize)]
pub struct CalculatedDescription {
    pub variable: String,
    pub units_in_file: String,
    /// The file that lends them; none where it is the granule itself.
    pub file: Option<String>,
}

/// How values are stored.
#[derive(Debug, Serialize)]
pub struct StorageDescription {
    pub kind: &'static str,
    /// Whether scale_factor, add_offset or _Unsigned stand between stored and real values.
    pub packed: bool,
    pub chunks: Option<Vec<usize>>,
    pub filters: Vec<String>,
    pub big_endian: bool,
}

/// One field of the geolocation.
#[derive(Debug, Serialize)]
pub struct Field {
    pub name: &'static str,
    pub variable: String,
    /// The file that lends it; none where it is the granule itself.
    pub file: Option<String>,
    /// Whether it is worked out from what `variable` then names.
    pub computed: bool,
    pub units_in_file: String,
    pub lowest: Option<f64>,
    pub highest: Option<f64>,
    pub missing: usize,
}

/// A variable of the footprints.
#[derive(Debug, Serialize)]
pub struct VariableDescription {
    pub name: String,
    pub role: &'static str,
    pub long_name: String,
    pub units: String,
    pub meanings: Vec<String>,
}

/// A problem.
#[derive(Debug, Serialize)]
pub struct ProblemDescription {
    pub kind: &'static str,
    pub what: String,
    #[serde(rename = "where")]
    pub where_: String,
    pub advice: String,
}

impl Description {
    /// Describes a granule; reads nothing but the lending files, for their hashes.
    ///
    /// # Errors
    /// A lending file cannot be read.
    pub fn of(granule: &Granule) -> Result<Self, GranuleError> {
        let bands = granule.bands().iter().enumerate();
        let lenders = granule.lenders().iter().enumerate();
        let lenders = lenders.map(|(place, lender)| LenderDescription::of(granule, place, lender));
        Ok(Self {
            schema: SCHEMA,
            file: clean_text(&granule.path().to_string_lossy()),
            format: granule.index().format.label(),
            file_bytes: granule.file_size(),
            memory_bytes: granule.cube_bytes(),
            title: granule.title(),
            source: granule.source(),
            layout_file: granule.layout_origin().map(|origin| LayoutDescription {
                file: origin.name.clone(),
                blake3: origin.hash.clone(),
            }),
            footprints: Footprints::of(granule),
            bands: bands.map(|(place, band)| BandDescription::of(granule, place, band)).collect(),
            geolocation: fields(granule),
            variables: granule.variables().iter().map(VariableDescription::of).collect(),
            lenders: lenders.collect::<Result<_, _>>()?,
            problems: granule.problems().iter().map(ProblemDescription::of).collect(),
        })
    }
}

impl Description {
    /// Adds what a campaign makes of the producer's quality to the problems.
    pub fn take(&mut self, producer: &Producer) {
        let rejected = producer.rejections.iter().map(|one| {
            let (variable, count) = (&one.variable, one.footprints.len());
            let what =
                format!("the producer's `{variable}` rejects {count} footprints: {}", one.why);
            (what, format!("flagged {}; no test looks at them", one.flag))
        });
        let uncovered = producer.problems.iter().map(|what| (what.clone(), String::new()));
        self.problems.extend(rejected.chain(uncovered).map(|(what, advice)| ProblemDescription {
            kind: "quality",
            what,
            where_: String::new(),
            advice,
        }));
    }
}

impl LenderDescription {
    fn of(granule: &Granule, place: usize, lender: &Lender) -> Result<Self, GranuleError> {
        let identity = lender.hash()?;
        Ok(Self {
            file: clean_text(&lender.path().to_string_lossy()),
            blake3: identity.hash.clone(),
            bytes: identity.size,
            joined: lender.how().label(),
            footprints_matched: lender.matched(),
            lends: granule.lent_by(place),
            variables: lender.variables().iter().map(VariableDescription::of).collect(),
        })
    }
}

impl Footprints {
    fn of(granule: &Granule) -> Self {
        let grid = granule.footprints();
        let dimensions = grid.names().iter().zip(grid.lengths());
        Self {
            count: grid.count(),
            dimensions: dimensions
                .map(|(name, &length)| Dimension { name: clean_text(name), length })
                .collect(),
        }
    }
}

impl BandDescription {
    fn of(granule: &Granule, place: usize, band: &Band) -> Self {
        let (index, variable) = (granule.index(), granule.band_variable(place));
        let names = granule.footprints().names();
        let (first, last) = band.range();
        let spacing = band.spacing();
        let understood = match &band.quantity {
            Quantity::Radiance(unit) => unit.label(),
            Quantity::BrightnessTemperature(unit) => unit.label().to_owned(),
        };
        Self {
            name: band.name.clone(),
            variable: clean_text(&band.variable),
            dimensions: index.dimension_names(variable).into_iter().map(clean_text).collect(),
            quantity: band.quantity.label(),
            units_in_file: clean_text(&band.unit_text),
            units_in_use: band.quantity.working_unit(),
            units_understood: understood,
            channels: band.channels(),
            first,
            last,
            smallest_spacing: spacing.map(|(low, _)| low),
            largest_spacing: spacing.map(|(_, high)| high),
            segments: band.axis.segments().len(),
            axis_variable: clean_text(&band.axis_variable),
            axis_steps: band.axis_steps.map(|steps| [steps.first, steps.step]),
            axis_units: band.axis_unit.label(),
            apodisation: band.apodisation.label().to_owned(),
            noise: band.noise.as_ref().map(|noise| NoiseDescription {
                variable: clean_text(&noise.variable),
                units_in_file: clean_text(&noise.unit_text),
                scene: noise.scene,
                along: noise.along.iter().map(|&place| clean_text(&names[place])).collect(),
            }),
            calculated: granule.calculated(place).map(|found| CalculatedDescription {
                variable: clean_text(&found.variable),
                units_in_file: clean_text(&found.unit_text),
                file: found.lender.map(|lender| granule.lenders()[lender].name()),
            }),
            bad_channels: band.bad.iter().filter(|bad| **bad).count(),
            storage: StorageDescription::of(variable, &variable.storage),
        }
    }

    /// Whether the unit differs from the one that values are handed on in.
    pub fn is_converted(&self) -> bool {
        self.units_understood != RadianceUnit::WORKING.label() && self.units_understood != "K"
    }
}

impl StorageDescription {
    fn of(variable: &Variable, storage: &Storage) -> Self {
        let decoder = Decoder::of(variable);
        Self {
            kind: variable.kind.label(),
            packed: decoder.is_packed() || decoder.is_unsigned(),
            chunks: storage.chunks.clone(),
            filters: storage.filters.clone(),
            big_endian: storage.big_endian,
        }
    }
}

impl VariableDescription {
    fn of(variable: &FootprintVariable) -> Self {
        Self {
            name: clean_text(&variable.name),
            role: variable.role.label(),
            long_name: variable.long_name.clone(),
            units: variable.units.clone(),
            meanings: variable.meanings.iter().map(|meaning| meaning.meaning.clone()).collect(),
        }
    }
}

impl ProblemDescription {
    fn of(problem: &Problem) -> Self {
        Self {
            kind: problem.kind.label(),
            what: problem.what.clone(),
            where_: problem.where_.clone(),
            advice: problem.advice.clone(),
        }
    }
}

fn fields(granule: &Granule) -> Vec<Field> {
    let place = granule.geolocation();
    let field = |source: &crate::granule::GeolocationSource| {
        let values = place.field(source.field).unwrap_or_default();
        let finite = || values.iter().copied().filter(|value| value.is_finite());
        Field {
            name: source.field,
            variable: clean_text(&source.variable),
            file: match source.origin {
                Origin::Lent(lender) => granule.lenders().get(lender).map(Lender::name),
                Origin::Granule | Origin::Computed => None,
            },
            computed: source.origin == Origin::Computed,
            units_in_file: source.units.clone(),
            lowest: finite().reduce(f64::min),
            highest: finite().reduce(f64::max),
            missing: values.len() - finite().count(),
        }
    };
    place.sources.iter().map(field).collect()
}
