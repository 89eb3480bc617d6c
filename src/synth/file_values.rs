//! The values of a synthetic granule's variables.

use super::defects::DEAD_DETECTOR;
use super::file_variables::{data_name, named};
use super::granule_file::Layout;
use super::spectra::{Geometry, Made, Maker};
use super::storage::FLOAT_FILL;
use super::truth::Truth;
use crate::netcdf_files::{NetcdfWriter, Samples, WriterError};

/// A variable's name and how its values follow from something per footprint.
type Column<T, V> = (&'static str, fn(&T) -> V);

/// Sun's zenith angle below which it is day, degrees.
const DAYLIGHT: f64 = 85.0;

/// Steps that angles and places are rounded to, degrees: 14 m on the ground.
fn rounded(value: f64) -> f32 {
    ((value * 8192.0).round() / 8192.0) as f32
}

pub(super) fn put_coordinates(
    file: &mut NetcdfWriter,
    maker: &Maker,
    layout: &Layout,
    geometry: &[Geometry],
) -> Result<(), WriterError> {
    let detectors = maker.swath.detectors();
    let times: Vec<f64> = geometry.iter().step_by(detectors).map(|g| g.sight.time).collect();
    file.put("time", &[0, 0], &layout.lengths[..2], &times.into())?;
    let values: [Column<Geometry, f64>; 6] = [
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

pub(super) fn put_spectra(
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
pub(super) fn put_quality(
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

pub(super) fn put_truth(
    file: &mut NetcdfWriter,
    maker: &Maker,
    truths: &[Truth],
) -> Result<(), WriterError> {
    let plumes: [Column<Truth, f32>; 2] =
        [("/truth/ash_optical_depth", |t| t.ash_optical_depth), ("/truth/so2_column", |t| t.so2)];
    let plumes = if maker.has_plumes() { &plumes[..] } else { &[] };
    let values: [Column<Truth, f32>; 6] = [
        ("land_fraction", |t| t.land),
        ("/truth/cloud_amount", |t| t.cloud_amount),
        ("/truth/cloud_optical_depth", |t| t.cloud_optical_depth),
        ("/truth/cloud_top_pressure", |t| t.cloud_top_pressure),
        ("/truth/dust_optical_depth", |t| t.dust_optical_depth),
        ("/truth/surface_temperature", |t| t.surface_temperature),
    ];
    for (name, value) in values.iter().chain(plumes) {
        let missing = |value: f32| if value.is_nan() { FLOAT_FILL } else { value };
        let values: Vec<f32> = truths.iter().map(|t| missing(value(t))).collect();
        file.put_all(name, &values.into())?;
    }
    let phases: Vec<i8> = truths.iter().map(|t| t.cloud_phase).collect();
    file.put_all("/truth/cloud_phase", &phases.into())?;
    let defects: Vec<i32> = truths.iter().map(|t| t.defects).collect();
    file.put_all("/truth/defects", &Samples::from(defects))
}
