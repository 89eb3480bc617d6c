//! The variables of a synthetic granule: names, units, attributes, storage.

use super::defects::CHANNEL_DEFECTS;
use super::granule_file::Layout;
use super::instrument::Band;
use super::spectra::Maker;
use super::storage::{FLOAT_FILL, PACKED_FILL, Storage, TEMPERATURE_OFFSET, TEMPERATURE_SCALE};
use crate::netcdf_files::{NetcdfWriter, ValueKind, VariableDraft, WriterError};

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

pub(super) fn define_coordinates(
    file: &mut NetcdfWriter,
    layout: &Layout,
) -> Result<(), WriterError> {
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
pub(super) fn named(stem: &str, band: &Band) -> String {
    if band.name.is_empty() { stem.to_owned() } else { format!("{stem}_{}", band.name) }
}

pub(super) fn data_name(band: &Band) -> String {
    let stem = match band.storage {
        Storage::Temperature => "brightness_temperature",
        Storage::Float { .. } | Storage::Packed { .. } => "radiance",
    };
    named(stem, band)
}

pub(super) const RADIANCE_UNIT: &str = "mW m-2 sr-1 (cm-1)-1";

/// The spectral dimension of a band, and its axis.
pub(super) fn define_axis(
    file: &mut NetcdfWriter,
    maker: &Maker,
    band: &Band,
) -> Result<(), WriterError> {
    let channel = named("channel", band);
    file.dimension(&channel, band.wavenumbers.len())?;
    let unit = if maker.instrument.axis_per_metre { "m-1" } else { "cm-1" };
    file.variable(
        &VariableDraft::new(named("wavenumber", band), ValueKind::F64, &[&channel])
            .attribute("standard_name", "sensor_band_central_radiation_wavenumber")
            .attribute("long_name", "wavenumber of the channel's middle")
            .attribute("units", unit)
            .deflate(5),
    )
}

pub(super) fn define_band(
    file: &mut NetcdfWriter,
    maker: &Maker,
    layout: &Layout,
    band: &Band,
) -> Result<(), WriterError> {
    define_axis(file, maker, band)?;
    let channel = named("channel", band);
    let wavenumber = named("wavenumber", band);
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

/// The same where a scene may have a plume.
const PLUMES: [(&str, &str, &str, &str); 2] = [
    ("ash_optical_depth", "", "1", "optical depth of volcanic ash at 909 cm-1"),
    ("so2_column", "", "1", "sulphur dioxide above the footprint in Dobson units"),
];

pub(super) fn define_truth(
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
    let plumes = if maker.has_plumes() { &PLUMES[..] } else { &[] };
    for (name, standard_name, units, long_name) in TRUTHS.iter().chain(plumes) {
        let mut variable = draft(name, ValueKind::F32)
            .attribute("long_name", *long_name)
            .attribute("units", *units)
            .fill(FLOAT_FILL);
        if !standard_name.is_empty() {
            variable = variable.attribute("standard_name", *standard_name);
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
            .attribute("flag_masks", masks(maker.faults.names()))
            .attribute("flag_meanings", maker.faults.names().join(" ")),
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
