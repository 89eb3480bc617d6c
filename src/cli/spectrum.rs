//! `radsieve spectrum`: one footprint's spectrum as CSV or JSON.

use std::io::{self, BufWriter, Write};
use std::path::PathBuf;

use serde::Serialize;
use serde_json::{Map, Value};

use super::Exit;
use super::footprint_at::{footprint, indices};
use super::inputs::Reading;
use super::table::{cell, present, stream_error};
use crate::granule::{Band, Granule};

/// What was typed.
#[derive(Debug, clap::Args)]
#[command(after_help = "Example:\n  radsieve spectrum granule.nc --at 12,34,5")]
pub struct Arguments {
    /// The granule.
    #[arg(value_name = "FILE")]
    file: PathBuf,
    /// The footprint: its zero-based index along each footprint dimension, as in 12,34 or 12,34,5.
    #[arg(long, value_name = "INDICES", allow_hyphen_values = true)]
    at: String,
    /// One JSON object in place of CSV.
    #[arg(long)]
    json: bool,
    #[command(flatten)]
    reading: Reading,
}

/// The spectrum of one band; missing values are NaN.
struct BandSpectrum {
    name: String,
    wavenumbers: Vec<f64>,
    radiances: Vec<f64>,
    temperatures: Vec<f64>,
}

/// Runs the command.
pub fn run(arguments: Arguments) -> anyhow::Result<Exit> {
    let position = indices("--at", &arguments.at)?;
    let granule = arguments.reading.opening()?.open(&arguments.file)?;
    let footprint = footprint("--at", granule.footprints(), &position)?;
    let bands = bands(&granule, footprint)?;
    let mut out = BufWriter::new(io::stdout().lock());
    if arguments.json {
        let answer = answer(&arguments, &granule, &position, footprint, &bands);
        serde_json::to_writer(&mut out, &answer).map_err(io::Error::from)?;
        out.write_all(b"\n")?;
    } else {
        write_csv(&bands, &mut out)?;
    }
    out.flush()?;
    Ok(Exit::Done)
}

fn bands(granule: &Granule, footprint: usize) -> anyhow::Result<Vec<BandSpectrum>> {
    let spectrum = |(place, band): (usize, &Band)| {
        Ok(BandSpectrum {
            name: band.name.clone(),
            wavenumbers: band.axis.wavenumbers().to_vec(),
            radiances: granule.radiances(place, footprint)?,
            temperatures: granule.brightness_temperatures(place, footprint)?,
        })
    };
    granule.bands().iter().enumerate().map(spectrum).collect()
}

/// Channels in the file's order, band after band.
fn write_csv(bands: &[BandSpectrum], out: &mut dyn Write) -> io::Result<()> {
    let mut writer = csv::Writer::from_writer(out);
    let head = ["band", "wavenumber_cm-1", "radiance_mW_m-2_sr-1_(cm-1)-1", "bt_K"];
    writer.write_record(head).map_err(stream_error)?;
    for band in bands {
        let values = band.radiances.iter().zip(&band.temperatures);
        for (wavenumber, (radiance, temperature)) in band.wavenumbers.iter().zip(values) {
            let numbers = [*wavenumber, *radiance, *temperature].map(cell);
            let row = std::iter::once(&band.name).chain(&numbers);
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
}

fn answer(
    arguments: &Arguments,
    granule: &Granule,
    position: &[usize],
    footprint: usize,
    bands: &[BandSpectrum],
) -> Answer {
    let place = granule.geolocation();
    let field = |values: &Option<Vec<f64>>| values.as_ref().and_then(|v| present(v[footprint]));
    let names = granule.footprints().names().iter().cloned();
    let all = |values: &[f64]| values.iter().map(|value| present(*value)).collect();
    Answer {
        file: arguments.file.to_string_lossy().into_owned(),
        position: names.zip(position.iter().map(|index| Value::from(*index))).collect(),
        lat: field(&place.latitude),
        lon: field(&place.longitude),
        bands: bands
            .iter()
            .map(|band| BandAnswer {
                band: band.name.clone(),
                wavenumbers: band.wavenumbers.clone(),
                radiances: all(&band.radiances),
                temperatures: all(&band.temperatures),
            })
            .collect(),
    }
}
