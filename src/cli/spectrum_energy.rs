//! `radsieve spectrum --energy`: what a spectrum carries, interval by interval.

use std::io::{self, Write};
use std::path::Path;

use serde_json::{Value, json};

use super::table::{cell, present, stream_error};
use crate::granule::Granule;
use crate::review::Spectrum;
use crate::spectral::{Energy, Stretch, energy_view, window_temperature};

/// The bands of a spectrum as stretches of channels.
pub fn stretches<'s>(granule: &'s Granule, spectrum: &'s Spectrum) -> Vec<Stretch<'s>> {
    let bands = granule.bands().iter().zip(&spectrum.bands);
    bands.map(|(band, values)| Stretch { axis: &band.axis, radiances: &values.radiances }).collect()
}

/// What a spectrum carries.
pub struct EnergyView {
    /// K; NaN where the spectrum has no window, and then what is compared with it is missing.
    window_temperature: f64,
    intervals: Vec<Energy>,
}

impl EnergyView {
    /// That of one spectrum.
    pub fn of(granule: &Granule, spectrum: &Spectrum) -> Self {
        let stretches = stretches(granule, spectrum);
        let window_temperature = window_temperature(&stretches).unwrap_or(f64::NAN);
        let intervals = energy_view(&stretches, window_temperature);
        Self { window_temperature, intervals }
    }

    /// One row for each interval.
    pub fn write_csv(&self, out: &mut dyn Write) -> io::Result<()> {
        let mut writer = csv::Writer::from_writer(out);
        let head = [
            "band",
            "low_cm-1",
            "high_cm-1",
            "covered_cm-1",
            "radiance_W_m-2_sr-1",
            "black_body_W_m-2_sr-1",
            "taken_W_m-2_sr-1",
            "window_bt_K",
        ];
        writer.write_record(head).map_err(stream_error)?;
        for one in &self.intervals {
            let numbers = [
                one.band.low,
                one.band.high,
                one.covered,
                one.radiance,
                one.black_body,
                one.taken(),
                self.window_temperature,
            ];
            let row = std::iter::once(one.band.label.to_owned()).chain(numbers.map(cell));
            writer.write_record(row).map_err(stream_error)?;
        }
        writer.flush()
    }

    /// One object.
    pub fn write_json(&self, file: &Path, out: &mut dyn Write) -> io::Result<()> {
        let intervals: Vec<Value> = self
            .intervals
            .iter()
            .map(|one| {
                json!({
                    "band": one.band.label,
                    "low_cm-1": one.band.low,
                    "high_cm-1": one.band.high,
                    "covered_cm-1": one.covered,
                    "radiance_W_m-2_sr-1": one.radiance,
                    "black_body_W_m-2_sr-1": present(one.black_body),
                    "taken_W_m-2_sr-1": present(one.taken()),
                })
            })
            .collect();
        let answer = json!({
            "file": file.to_string_lossy(),
            "window_bt_K": present(self.window_temperature),
            "intervals": intervals,
        });
        writeln!(out, "{answer}")
    }
}
