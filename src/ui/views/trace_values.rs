//! Spectra in the quantity on show, as differences where a reference is in use.

use crate::granule::Quantity;
use crate::review::BandSpectrum;
use crate::spectral::{Stretch, absorption, nedt, planck, planck_slope, window_temperature};
use crate::ui::bench::Bench;
use crate::ui::panes::trace::Bar;
use crate::ui::trace_look::TraceQuantity;
use crate::units::RadianceUnit;

/// Per band, in ascending order of wavenumber.
pub type Values = Vec<Vec<f64>>;

/// The label of the unit on show.
pub fn unit(bench: &Bench) -> String {
    match bench.look.quantity {
        TraceQuantity::Temperature => "K".to_owned(),
        TraceQuantity::Radiance => RadianceUnit::WORKING.label(),
        TraceQuantity::Absorption => String::new(),
    }
}

/// The quantity on show of a spectrum, less that of the reference, if one is in use.
pub fn of(bench: &Bench, bands: &[BandSpectrum]) -> Values {
    let values = in_file_order(bench, bands);
    bench
        .channels
        .bands()
        .iter()
        .zip(&values)
        .map(|(channels, values)| {
            let at = |index: &usize| values.get(*index).copied().unwrap_or(f64::NAN);
            channels.indices.iter().map(at).collect()
        })
        .collect()
}

/// The value on show of the channel in hand at the cursor.
pub fn in_hand(bench: &Bench) -> Option<f64> {
    of_channel(bench, bench.channel)
}

/// The value on show of any channel at the cursor.
pub fn of_channel(bench: &Bench, number: usize) -> Option<f64> {
    let channel = bench.channels.channel(number)?;
    let spectrum = bench.spectrum.as_ref()?;
    let values = of(bench, &spectrum.bands);
    values.get(channel.band)?.get(channel.place).copied().filter(|value| !value.is_nan())
}

fn in_file_order(bench: &Bench, bands: &[BandSpectrum]) -> Vec<Vec<f64>> {
    let mut values = quantity(bench, bands);
    if bench.look.reference.is_some() {
        // A reference that is not there yet leaves nothing to show, rather than no difference.
        let reference = bench.reference_bands().map(|reference| quantity(bench, reference));
        for (number, values) in values.iter_mut().enumerate() {
            let reference = reference.as_ref().and_then(|bands| bands.get(number));
            for (channel, value) in values.iter_mut().enumerate() {
                let other = reference.and_then(|other| other.get(channel));
                *value -= other.copied().unwrap_or(f64::NAN);
            }
        }
    }
    values
}

fn quantity(bench: &Bench, bands: &[BandSpectrum]) -> Vec<Vec<f64>> {
    match bench.look.quantity {
        TraceQuantity::Temperature => bands.iter().map(|band| band.temperatures.clone()).collect(),
        TraceQuantity::Radiance => bands.iter().map(|band| band.radiances.clone()).collect(),
        TraceQuantity::Absorption => {
            let window = window(bench, bands);
            let granule = bench.review.granule();
            let bands = granule.bands().iter().zip(bands);
            bands
                .map(|(band, values)| {
                    let channels = band.axis.wavenumbers().iter().zip(&values.radiances);
                    channels.map(|(at, radiance)| absorption(*at, *radiance, window)).collect()
                })
                .collect()
        }
    }
}

/// The window temperature of a spectrum, K; NaN where it has no window.
fn window(bench: &Bench, bands: &[BandSpectrum]) -> f64 {
    let bands = bench.review.granule().bands().iter().zip(bands);
    let stretches: Vec<Stretch<'_>> = bands
        .map(|(band, values)| Stretch { axis: &band.axis, radiances: &values.radiances })
        .collect();
    window_temperature(&stretches).unwrap_or(f64::NAN)
}

/// One standard deviation of noise below and above each value at the cursor.
pub fn bars(bench: &Bench) -> Vec<Bar> {
    let beside = bench.look.beside.as_ref().filter(|one| one.footprint == bench.cursor);
    let (Some(beside), Some(spectrum)) = (beside.filter(|_| bench.look.bars), &bench.spectrum)
    else {
        return Vec::new();
    };
    let shown = in_file_order(bench, &spectrum.bands);
    let window = window(bench, &spectrum.bands);
    let mut bars = Vec::new();
    for (number, band) in bench.review.granule().bands().iter().enumerate() {
        let (Some(Some(noise)), Some(values), Some(here)) =
            (beside.noise.get(number), shown.get(number), spectrum.bands.get(number))
        else {
            continue;
        };
        for (channel, wavenumber) in band.axis.wavenumbers().iter().enumerate() {
            let at = |values: &[f64]| values.get(channel).copied().unwrap_or(f64::NAN);
            let (value, noise, temperature) = (at(values), at(noise), at(&here.temperatures));
            // The noise as radiance and as temperature, whichever the file gives.
            let (nedn, kelvins) = match band.quantity {
                Quantity::Radiance(_) => (noise, nedt(*wavenumber, temperature, noise)),
                Quantity::BrightnessTemperature(_) => {
                    (noise * planck_slope(*wavenumber, temperature), noise)
                }
            };
            let reach = match bench.look.quantity {
                TraceQuantity::Temperature => kelvins,
                TraceQuantity::Radiance => nedn,
                TraceQuantity::Absorption => nedn / planck(*wavenumber, window),
            };
            if value.is_finite() && reach.is_finite() {
                bars.push(Bar { wavenumber: *wavenumber, low: value - reach, high: value + reach });
            }
        }
    }
    bars
}
