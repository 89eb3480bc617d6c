//! A synthetic granule as a CF file, written scan line by scan line.

use std::path::Path;

use super::defects::{CHANNEL_DEFECTS, DEAD_DETECTOR, FOOTPRINT_DEFECTS};
use super::instrument::Band;
use super::recipe::Recipe;
use super::spectra::{Geometry, Made, Maker};
use super::storage::{FLOAT_FILL, PACKED_FILL, Storage, TEMPERATURE_OFFSET, TEMPERATURE_SCALE};
use super::truth::Truth;
use crate::netcdf_files::{NetcdfWriter, Samples, ValueKind, VariableDraft, WriterError};
use crate::system::{Cancel, WriteError, write_whole};

/// Why a granule was not made.
#[derive(Debug, thiserror::Error)]
pub enum SynthError {
    /// The file could not be written.
    #[error(transparent)]
    Write(#[from] WriteError<ContentError>),
}

/// Why the content of a granule was not finished.
#[derive(Debug, thiserror::Error)]
pub enum ContentError {
    /// The netCDF library refused something.
    #[error(transparent)]
    Netcdf(#[from] WriterError),
    /// Someone asked to stop.
    #[error("stopped before the file was whole; nothing was left behind")]
    Cancelled,
}

/// Makes the granule of a recipe at `target`. `progress` gets scan lines done and in all.
///
/// The bytes depend on the recipe alone, not on the clock or the number of threads.
pub fn make_granule(
    recipe: Recipe,
    target: &Path,
    cancel: &Cancel,
    progress: &mut dyn FnMut(usize, usize),
) -> Result<(), SynthError> {
    let maker = Maker::new(recipe);
    let layout = Layout::new(&maker);
    write_whole(target, |path| write(recipe, &maker, &layout, path, cancel, progress))?;
    Ok(())
}

/// Footprint dimensions and how many scan lines go into one chunk.
struct Layout {
    names: Vec<&'static str>,
    lengths: Vec<usize>,
    lines_in_chunk: usize,
}

/// Values of a chunk: large enough to compress, small enough to read one footprint quickly.
const CHUNK_VALUES: usize = 300_000;

impl Layout {
    fn new(maker: &Maker) -> Layout {
        let swath = &maker.swath;
        let mut names = vec!["scan_line", "position"];
        let mut lengths = vec![swath.lines, swath.positions];
        if swath.side > 1 {
            names.push("detector");
            lengths.push(swath.detectors());
        }
        let widest = maker.instrument.bands.iter().map(|band| band.wavenumbers.len()).max();
        let line_values = swath.positions * swath.detectors() * widest.unwrap_or(1);
        let lines_in_chunk = (CHUNK_VALUES / line_values).clamp(1, swath.lines);
        Layout { names, lengths, lines_in_chunk }
    }
}

fn write(
    recipe: Recipe,
    maker: &Maker,
    layout: &Layout,
    path: &Path,
    cancel: &Cancel,
    progress: &mut dyn FnMut(usize, usize),
) -> Result<(), ContentError> {
    let geometry = maker.geometry();
    let mut file = NetcdfWriter::create(path)?;
    describe(&mut file, recipe, maker, &geometry)?;
    for (name, length) in layout.names.iter().zip(&layout.lengths) {
        file.dimension(name, *length)?;
    }
    define_coordinates(&mut file, layout)?;
    for band in &maker.instrument.bands {
        define_band(&mut file, maker, layout, band)?;
    }
    define_truth(&mut file, maker, layout)?;
    put_coordinates(&mut file, maker, layout, &geometry)?;
    let lines = maker.swath.lines;
    let mut truths = Vec::with_capacity(geometry.len());
    for first in (0..lines).step_by(layout.lines_in_chunk) {
        let last = (first + layout.lines_in_chunk).min(lines);
        let mut made = Vec::new();
        for line in first..last {
            if cancel.is_cancelled() {
                return Err(ContentError::Cancelled);
            }
            made.extend(maker.line(line));
            progress(line + 1, lines);
        }
        put_spectra(&mut file, maker, layout, first..last, &made)?;
        truths.extend(made.iter().map(|made| made.truth));
    }
    put_quality(&mut file, &geometry, &truths)?;
    put_truth(&mut file, &truths)?;
    file.close()?;
    Ok(())
}

/// Time of a count of seconds since 2000, as CF's `history` begins its lines.
fn iso_time(seconds: f64) -> String {
    const EPOCH_2000: i64 = 946_684_800;
    jiff::Timestamp::from_second(EPOCH_2000 + seconds.round() as i64)
        .map_or_else(|_| String::new(), |time| time.to_string())
}

fn describe(
    file: &mut NetcdfWriter,
    recipe: Recipe,
    maker: &Maker,
    geometry: &[Geometry],
) -> Result<(), WriterError> {
    let place = recipe.scene.place();
    let time = |geometry: Option<&Geometry>| geometry.map_or(0.0, |g| g.sight.time);
    let attributes = [
        ("Conventions", "CF-1.8".to_owned()),
        ("title", format!("Synthetic granule of the imaginary Brindle sounder: {place}")),
        ("summary", format!("Synthetic: {}", recipe.scene.summary())),
        ("institution", "none: instrument, orbit and places are imaginary".to_owned()),
        (
            "source",
            format!(
                "synthetic: forward model with approximate spectroscopy; imaginary Brindle sounder \
                 ({}); scene {}, seed {}",
                maker.instrument.description,
                recipe.scene.label(),
                recipe.seed
            ),
        ),
        (
            "comment",
            "Synthetic demonstration data. Not for science, not for tuning thresholds of real \
             data. What is true about each footprint stands in the group `truth`."
                .to_owned(),
        ),
        (
            "history",
            format!(
                "{} {} (time of the scene)",
                iso_time(time(geometry.first())),
                recipe.command()
            ),
        ),
        ("references", "docs/forward.md of radsieve".to_owned()),
        ("platform", "Brindle (imaginary)".to_owned()),
        ("time_coverage_start", iso_time(time(geometry.first()))),
        ("time_coverage_end", iso_time(time(geometry.last()))),
    ];
    for (name, value) in attributes {
        file.global_attribute(name, value)?;
    }
    Ok(())
}

/// Per-footprint variables at the top: name, standard name, unit, long name.
const COORDINATES: [(&str, &str, &str, &str); 7] = [
    ("latitude", "latitude", "degrees_north", "latitude of the footprint's middle"),
    ("longitude", "longitude", "degrees_east", "longitude of the footprint's middle"),
    ("sensor_zenith_angle", "sensor_zenith_angle", "degree", "view zenith angle on the ground"),
    ("sensor_azimuth_angle", "sensor_azimuth_angle", "degree", "direction to the satellite"),
    ("solar_zenith_angle", "solar_zenith_angle", "degree", "zenith angle of the sun"),
    ("solar_azimuth_angle", "solar_azimuth_angle", "degree", "direction to the sun"),
    ("land_fraction", "land_area_fraction", "1", "share of land in the footprint"),
];

fn define_coordinates(file: &mut NetcdfWriter, layout: &Layout) -> Result<(), WriterError> {
    file.variable(
        &VariableDraft::new("time", ValueKind::F64, &["scan_line", "position"])
            .attribute("standard_name", "time")
            .attribute("long_name", "time of the measurement")
            .attribute("units", "seconds since 2000-01-01 00:00:00")
            .attribute("calendar", "standard")
            .deflate(5),
    )?;
    for (name, standard_name, units, long_name) in COORDINATES {
        file.variable(
            &VariableDraft::new(name, ValueKind::F32, &layout.names)
                .attribute("standard_name", standard_name)
                .attribute("long_name", long_name)
                .attribute("units", units)
                .deflate(5),
        )?;
    }
    file.variable(
        &VariableDraft::new("quality", ValueKind::I8, &layout.names)
            .attribute("standard_name", "quality_flag")
            .attribute("long_name", "what the ground processing says of the footprint")
            .attribute("flag_masks", vec![1i8, 2, 4])
            .attribute("flag_meanings", "missing_values calibration_degraded daylight")
            .attribute("coordinates", "time latitude longitude")
            .deflate(5),
    )
}

/// `radiance_longwave`, `radiance` where there is one band only.
fn named(stem: &str, band: &Band) -> String {
    if band.name.is_empty() { stem.to_owned() } else { format!("{stem}_{}", band.name) }
}

fn data_name(band: &Band) -> String {
    let stem = match band.storage {
        Storage::Temperature => "brightness_temperature",
        Storage::Float { .. } | Storage::Packed { .. } => "radiance",
    };
    named(stem, band)
}

const RADIANCE_UNIT: &str = "mW m-2 sr-1 (cm-1)-1";

fn define_band(
    file: &mut NetcdfWriter,
    maker: &Maker,
    layout: &Layout,
    band: &Band,
) -> Result<(), WriterError> {
    let channel = named("channel", band);
    let wavenumber = named("wavenumber", band);
    file.dimension(&channel, band.wavenumbers.len())?;
    let unit = if maker.instrument.axis_per_metre { "m-1" } else { "cm-1" };
    file.variable(
        &VariableDraft::new(wavenumber.clone(), ValueKind::F64, &[&channel])
            .attribute("standard_name", "sensor_band_central_radiation_wavenumber")
            .attribute("long_name", "wavenumber of the channel's middle")
            .attribute("units", unit)
            .deflate(5),
    )?;
    let mut dimensions = layout.names.clone();
    dimensions.push(&channel);
    let mut chunks = layout.lengths.clone();
    chunks[0] = layout.lines_in_chunk;
    chunks.push(band.wavenumbers.len());
    let coordinates = format!(
        "time latitude longitude sensor_zenith_angle sensor_azimuth_angle solar_zenith_angle \
         solar_azimuth_angle {wavenumber}"
    );
    let draft = VariableDraft::new(data_name(band), band.storage.kind(), &dimensions)
        .chunks(&chunks)
        .deflate(5)
        .attribute("coordinates", coordinates)
        .attribute("ancillary_variables", "quality")
        .attribute("apodization", band.apodisation);
    file.variable(&with_quantity(draft, band))
}

/// Standard name, unit, packing and what was done about the number of digits.
fn with_quantity(draft: VariableDraft, band: &Band) -> VariableDraft {
    let radiance = |draft: VariableDraft| {
        draft
            .attribute("standard_name", "toa_outgoing_radiance_per_unit_wavenumber")
            .attribute("long_name", format!("radiance {}", band.name).trim_end().to_owned())
            .attribute("units", RADIANCE_UNIT)
    };
    match band.storage {
        Storage::Float { rounded: false } => radiance(draft).fill(FLOAT_FILL),
        Storage::Float { rounded: true } => radiance(draft).fill(FLOAT_FILL).attribute(
            "comment",
            "rounded, channel by channel, to the largest power of two below a quarter of the noise",
        ),
        Storage::Packed { exponent } => radiance(draft)
            .fill(PACKED_FILL)
            .attribute("scale_factor", 2f64.powi(exponent))
            .attribute("comment", "packed in steps well below the noise; negative values are valid"),
        Storage::Temperature => draft
            .attribute("standard_name", "toa_brightness_temperature")
            .attribute("long_name", "brightness temperature")
            .attribute("units", "K")
            .fill(PACKED_FILL)
            .attribute("scale_factor", TEMPERATURE_SCALE)
            .attribute("add_offset", TEMPERATURE_OFFSET)
            .attribute(
                "comment",
                "packed in steps well below the noise; missing where noise made a radiance negative",
            ),
    }
}

fn masks(names: &[&str]) -> Vec<i32> {
    (0..names.len()).map(|place| 1 << place).collect()
}

/// Truth in f32: name, standard name where there is one, unit, long name.
const TRUTHS: [(&str, &str, &str, &str); 5] = [
    ("cloud_amount", "cloud_area_fraction", "1", "share of the footprint under cloud"),
    (
        "cloud_optical_depth",
        "",
        "1",
        "absorption optical depth of all clouds at 909 cm-1, weighted with their amounts",
    ),
    (
        "cloud_top_pressure",
        "air_pressure_at_cloud_top",
        "hPa",
        "pressure at the top of the highest cloud",
    ),
    ("dust_optical_depth", "", "1", "optical depth of dust at 961 cm-1"),
    ("surface_temperature", "surface_temperature", "K", "temperature of the surface"),
];

fn define_truth(
    file: &mut NetcdfWriter,
    maker: &Maker,
    layout: &Layout,
) -> Result<(), WriterError> {
    file.group_attribute("truth", "comment", "what the synthetic scene was made from")?;
    let draft = |name: &str, kind| {
        VariableDraft::new(format!("/truth/{name}"), kind, &layout.names)
            .attribute("coordinates", "latitude longitude")
            .deflate(5)
    };
    for (name, standard_name, units, long_name) in TRUTHS {
        let mut variable = draft(name, ValueKind::F32)
            .attribute("long_name", long_name)
            .attribute("units", units)
            .fill(FLOAT_FILL);
        if !standard_name.is_empty() {
            variable = variable.attribute("standard_name", standard_name);
        }
        file.variable(&variable)?;
    }
    file.variable(
        &draft("cloud_phase", ValueKind::I8)
            .attribute("long_name", "phase of the highest cloud")
            .attribute("flag_values", vec![0i8, 1, 2])
            .attribute("flag_meanings", "no_cloud water ice"),
    )?;
    file.variable(
        &draft("defects", ValueKind::I32)
            .attribute("long_name", "what is wrong with the footprint's spectra")
            .attribute("flag_masks", masks(&FOOTPRINT_DEFECTS))
            .attribute("flag_meanings", FOOTPRINT_DEFECTS.join(" ")),
    )?;
    for band in &maker.instrument.bands {
        let channel = named("channel", band);
        let name = |stem: &str| format!("/truth/{}", named(stem, band));
        file.variable(
            &VariableDraft::new(name("channel_defects"), ValueKind::I32, &[&channel])
                .attribute("long_name", "what is wrong with the channel")
                .attribute("flag_masks", masks(&CHANNEL_DEFECTS))
                .attribute("flag_meanings", CHANNEL_DEFECTS.join(" ")),
        )?;
        file.variable(
            &VariableDraft::new(name("noise_equivalent_radiance"), ValueKind::F32, &[&channel])
                .attribute("long_name", "standard deviation of the noise of a sound channel")
                .attribute("units", RADIANCE_UNIT),
        )?;
    }
    Ok(())
}

/// Sun's zenith angle below which it is day, degrees.
const DAYLIGHT: f64 = 85.0;

/// Steps that angles and places are rounded to, degrees: 14 m on the ground.
fn rounded(value: f64) -> f32 {
    ((value * 8192.0).round() / 8192.0) as f32
}

fn put_coordinates(
    file: &mut NetcdfWriter,
    maker: &Maker,
    layout: &Layout,
    geometry: &[Geometry],
) -> Result<(), WriterError> {
    let detectors = maker.swath.detectors();
    let times: Vec<f64> = geometry.iter().step_by(detectors).map(|g| g.sight.time).collect();
    file.put("time", &[0, 0], &layout.lengths[..2], &times.into())?;
    let values: [(&str, fn(&Geometry) -> f64); 6] = [
        ("latitude", |g| g.sight.position.latitude),
        ("longitude", |g| g.sight.position.longitude),
        ("sensor_zenith_angle", |g| g.sight.view_zenith),
        ("sensor_azimuth_angle", |g| g.sight.view_azimuth),
        ("solar_zenith_angle", |g| g.sun_zenith),
        ("solar_azimuth_angle", |g| g.sun_azimuth),
    ];
    for (name, value) in values {
        let values: Vec<f32> = geometry.iter().map(|g| rounded(value(g))).collect();
        file.put_all(name, &values.into())?;
    }
    for (number, band) in maker.instrument.bands.iter().enumerate() {
        let factor = if maker.instrument.axis_per_metre { 100.0 } else { 1.0 };
        let axis: Vec<f64> = band.wavenumbers.iter().map(|nu| nu * factor).collect();
        file.put_all(&named("wavenumber", band), &axis.into())?;
        let bits = maker.faults.channel_bits(number).to_vec();
        file.put_all(&format!("/truth/{}", named("channel_defects", band)), &bits.into())?;
        let noise = format!("/truth/{}", named("noise_equivalent_radiance", band));
        file.put_all(&noise, &band.nedn.clone().into())?;
    }
    Ok(())
}

fn put_spectra(
    file: &mut NetcdfWriter,
    maker: &Maker,
    layout: &Layout,
    lines: std::ops::Range<usize>,
    made: &[Made],
) -> Result<(), WriterError> {
    for (number, band) in maker.instrument.bands.iter().enumerate() {
        let mut radiances = Vec::with_capacity(made.len() * band.wavenumbers.len());
        for footprint in made {
            radiances.extend_from_slice(&footprint.bands[number]);
        }
        let mut start = vec![0; layout.lengths.len() + 1];
        start[0] = lines.start;
        let mut count = layout.lengths.clone();
        count[0] = lines.len();
        count.push(band.wavenumbers.len());
        let samples = band.storage.encode(&radiances, &band.wavenumbers, &band.nedn);
        file.put(&data_name(band), &start, &count, &samples)?;
    }
    Ok(())
}

/// What ground processing would notice: holes and dead detectors, not more.
fn put_quality(
    file: &mut NetcdfWriter,
    geometry: &[Geometry],
    truths: &[Truth],
) -> Result<(), WriterError> {
    let bits = geometry.iter().zip(truths).map(|(geometry, truth)| {
        let bit = |set: bool, bit: i8| if set { bit } else { 0 };
        bit(truth.has_missing, 1)
            | bit(truth.defects & DEAD_DETECTOR != 0, 2)
            | bit(geometry.sun_zenith < DAYLIGHT, 4)
    });
    file.put_all("quality", &bits.collect::<Vec<i8>>().into())
}

fn put_truth(file: &mut NetcdfWriter, truths: &[Truth]) -> Result<(), WriterError> {
    let values: [(&str, fn(&Truth) -> f32); 6] = [
        ("land_fraction", |t| t.land),
        ("/truth/cloud_amount", |t| t.cloud_amount),
        ("/truth/cloud_optical_depth", |t| t.cloud_optical_depth),
        ("/truth/cloud_top_pressure", |t| t.cloud_top_pressure),
        ("/truth/dust_optical_depth", |t| t.dust_optical_depth),
        ("/truth/surface_temperature", |t| t.surface_temperature),
    ];
    for (name, value) in values {
        let missing = |value: f32| if value.is_nan() { FLOAT_FILL } else { value };
        let values: Vec<f32> = truths.iter().map(|t| missing(value(t))).collect();
        file.put_all(name, &values.into())?;
    }
    let phases: Vec<i8> = truths.iter().map(|t| t.cloud_phase).collect();
    file.put_all("/truth/cloud_phase", &phases.into())?;
    let defects: Vec<i32> = truths.iter().map(|t| t.defects).collect();
    file.put_all("/truth/defects", &Samples::from(defects))
}
