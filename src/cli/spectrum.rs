//! `radsieve spectrum`: one footprint's spectrum as CSV or JSON.

use std::io::{self, BufWriter, Write};
use std::path::PathBuf;

use serde::Serialize;
use serde_json::{Map, Value};

use super::Exit;
use super::footprint_at::{footprint, indices};
use super::inputs::Reading;
use super::output::tell_refused;
use super::spectrum_energy::{EnergyView, stretches};
use super::table::{cell, present, stream_error};
use crate::granule::{Granule, Quantity};
use crate::review::{Review, Spectrum};
use crate::spectral::{absorption, brightness_temperature_or_nan, window_temperature};

/// What was typed.
#[derive(Debug, clap::Args)]
#[command(after_help = "Examples:\n  radsieve spectrum granule.nc --at 12,34,5\n  \
    radsieve spectrum granule.nc --at 12,34,5 --energy")]
pub struct Arguments {
    /// The granule.
    #[arg(value_name = "FILE")]
    file: PathBuf,
    /// The footprint: its zero-based index along each footprint dimension, as in 12,34 or 12,34,5.
    #[arg(long, value_name = "INDICES", allow_hyphen_values = true)]
    at: String,
    /// What the spectrum carries in each absorption band and window, W m-2 sr-1, against a black
    /// body of its window temperature.
    #[arg(long)]
    energy: bool,
    /// One JSON object in place of CSV.
    #[arg(long)]
    json: bool,
    #[command(flatten)]
    reading: Reading,
}

/// Runs the command.
pub fn run(arguments: Arguments) -> anyhow::Result<Exit> {
    let position = indices("--at", &arguments.at)?;
    let granule = arguments.reading.opening()?.open(&arguments.file)?;
    tell_refused(&granule);
    let footprint = footprint("--at", granule.footprints(), &position)?;
    let review = Review::of(granule);
    let spectrum = review.read_spectrum(footprint)?;
    let mut out = BufWriter::new(io::stdout().lock());
    if arguments.energy {
        let view = EnergyView::of(review.granule(), &spectrum);
        match arguments.json {
            true => view.write_json(&arguments.file, &mut out)?,
            false => view.write_csv(&mut out)?,
        }
    } else if arguments.json {
        let clear = clear(review.granule(), footprint)?;
        let answer = answer(&arguments, review.granule(), &position, &spectrum, clear.as_deref());
        serde_json::to_writer(&mut out, &answer).map_err(io::Error::from)?;
        out.write_all(b"\n")?;
    } else {
        let clear = clear(review.granule(), footprint)?;
        write_csv(review.granule(), &spectrum, clear.as_deref(), &mut out)?;
    }
    out.flush()?;
    Ok(Exit::Done)
}

/// The calculated clear-sky brightness temperatures of a footprint, band by band, missing as NaN;
/// nothing where no band has any.
fn clear(granule: &Granule, footprint: usize) -> anyhow::Result<Option<Vec<Vec<f64>>>> {
    let mut found = Vec::new();
    let mut any = false;
    for (number, band) in granule.bands().iter().enumerate() {
        let values = granule.calculated_clear(number, footprint..footprint + 1)?;
        any |= values.is_some();
        let values = values.unwrap_or_else(|| vec![f64::NAN; band.channels()]);
        let kelvin = |(value, nu): (f64, &f64)| match band.quantity {
            Quantity::BrightnessTemperature(_) => value,
            Quantity::Radiance(_) => brightness_temperature_or_nan(*nu, value),
        };
        found.push(values.into_iter().zip(band.axis.wavenumbers()).map(kelvin).collect());
    }
    Ok(any.then_some(found))
}

/// Channels in the file's order, band after band.
fn write_csv(
    granule: &Granule,
    spectrum: &Spectrum,
    clear: Option<&[Vec<f64>]>,
    out: &mut dyn Write,
) -> io::Result<()> {
    let window = window_temperature(&stretches(granule, spectrum)).unwrap_or(f64::NAN);
    let bands = granule.bands();
    let mut writer = csv::Writer::from_writer(out);
    let head = ["band", "wavenumber_cm-1", "radiance_mW_m-2_sr-1_(cm-1)-1", "bt_K", "absorption"];
    let head = head.iter().chain(clear.map(|_| &"bt_clear_K"));
    writer.write_record(head).map_err(stream_error)?;
    for (number, (band, values)) in bands.iter().zip(&spectrum.bands).enumerate() {
        let mut clear = clear.map(|clear| clear[number].iter());
        let values = values.radiances.iter().zip(&values.temperatures);
        for (wavenumber, (radiance, temperature)) in band.axis.wavenumbers().iter().zip(values) {
            let absorbed = absorption(*wavenumber, *radiance, window);
            let numbers = [*wavenumber, *radiance, *temperature, absorbed].map(cell);
            let clear = clear.as_mut().and_then(Iterator::next).map(|clear| cell(*clear));
            let row = std::iter::once(&band.name).chain(&numbers).chain(clear.iter());
            writer.write_record(row).map_err(stream_error)?;
        }
    }
    writer.flush()
}

/// The JSON object; its names are the contract for scripts.
#[derive(Serialize)]
struct Answer {
    file: String,
    position: Map<String, Value>,
    lat: Option<f64>,
    lon: Option<f64>,
    #[serde(rename = "window_bt_K")]
    window_temperature: Option<f64>,
    bands: Vec<BandAnswer>,
}

#[derive(Serialize)]
struct BandAnswer {
    band: String,
    #[serde(rename = "wavenumber_cm-1")]
    wavenumbers: Vec<f64>,
    #[serde(rename = "radiance_mW_m-2_sr-1_(cm-1)-1")]
    radiances: Vec<Option<f64>>,
    #[serde(rename = "bt_K")]
    temperatures: Vec<Option<f64>>,
    absorption: Vec<Option<f64>>,
    #[serde(rename = "bt_clear_K", skip_serializing_if = "Option::is_none")]
    clear: Option<Vec<Option<f64>>>,
}

fn answer(
    arguments: &Arguments,
    granule: &Granule,
    position: &[usize],
    spectrum: &Spectrum,
    clear: Option<&[Vec<f64>]>,
) -> Answer {
    let place = granule.geolocation();
    let field = |values: &Option<Vec<f64>>| {
        values.as_ref().and_then(|values| present(values[spectrum.footprint]))
    };
    let names = granule.footprints().names().iter().cloned();
    let all = |values: &[f64]| values.iter().map(|value| present(*value)).collect();
    let window = window_temperature(&stretches(granule, spectrum));
    let absorbed = |(nu, radiance): (&f64, &f64)| present(absorption(*nu, *radiance, window?));
    Answer {
        file: arguments.file.to_string_lossy().into_owned(),
        position: names.zip(position.iter().map(|index| Value::from(*index))).collect(),
        lat: field(&place.latitude),
        lon: field(&place.longitude),
        window_temperature: window,
        bands: granule
            .bands()
            .iter()
            .zip(&spectrum.bands)
            .enumerate()
            .map(|(number, (band, values))| BandAnswer {
                clear: clear.map(|clear| all(&clear[number])),
                band: band.name.clone(),
                wavenumbers: band.axis.wavenumbers().to_vec(),
                radiances: all(&values.radiances),
                temperatures: all(&values.temperatures),
                absorption: {
                    let channels = band.axis.wavenumbers().iter().zip(&values.radiances);
                    channels.map(absorbed).collect()
                },
            })
            .collect(),
    }
}
