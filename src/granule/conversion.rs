//! From the values of a band as stored to numbers in the working unit.

use std::ops::Range;

use super::band::{Band, Quantity};
use super::decoder::{DecodeMany, Decoder};
use crate::netcdf_files::{Samples, with_values};
use crate::spectral::Hamming3;
use crate::units::TemperatureUnit;

/// How the stored values of a band become numbers.
#[derive(Debug)]
pub struct Conversion {
    channels: usize,
    decoder: Decoder,
    scale: Scale,
    apodise: Option<Hamming3>,
}

/// From the file's unit to the working unit.
#[derive(Debug)]
enum Scale {
    /// Radiance: a factor for each channel.
    Factors(Vec<f64>),
    /// Brightness temperature.
    Temperature(TemperatureUnit),
}

impl Scale {
    #[inline]
    fn apply(&self, channel: usize, value: f64) -> f64 {
        match self {
            Self::Factors(factors) => value * factors[channel],
            Self::Temperature(unit) => above_zero(unit.to_kelvin(value)),
        }
    }
}

/// There is no temperature of zero kelvin or less; such a value is missing.
#[inline]
fn above_zero(kelvin: f64) -> f64 {
    if kelvin > 0.0 { kelvin } else { f64::NAN }
}

/// Spectra that are gone through together where channels are taken out of them: values of so many
/// footprints fill a line of the processor's cache.
const SIDE_BY_SIDE: usize = 8;

impl Conversion {
    /// Of a band whose values are decoded so, and apodised if that was asked for.
    pub fn new(band: &Band, decoder: Decoder, apodise: Option<Hamming3>) -> Self {
        let scale = match &band.quantity {
            Quantity::Radiance(unit) => Scale::Factors(
                band.axis.wavenumbers().iter().map(|&nu| unit.factor_at(nu)).collect(),
            ),
            Quantity::BrightnessTemperature(unit) => Scale::Temperature(*unit),
        };
        Self { channels: band.channels(), decoder, scale, apodise }
    }

    /// How many channels there are.
    pub fn channels(&self) -> usize {
        self.channels
    }

    /// What apodises the spectra, if that was asked for.
    pub fn apodise(&self) -> Option<&Hamming3> {
        self.apodise.as_ref()
    }

    /// How many of the stored values are taken as missing without being declared so.
    pub fn undeclared_fills(&self, samples: &Samples) -> usize {
        self.decoder.undeclared_fills(samples)
    }

    /// A channel's value out of one footprint's stored values.
    #[inline]
    fn value(&self, channel: usize, stored: impl Fn(usize) -> f64) -> f64 {
        let plain = |channel| self.scale.apply(channel, self.decoder.decode(stored(channel)));
        match &self.apodise {
            Some(mean) => mean.at(channel, plain),
            None => plain(channel),
        }
    }

    /// How radiances that are not to be apodised become numbers, many at once.
    fn plainly(&self) -> Option<(DecodeMany, &[f64])> {
        match (&self.apodise, &self.scale) {
            (None, Scale::Factors(factors)) => Some((self.decoder.for_many()?, factors)),
            _ => None,
        }
    }

    /// One spectrum, whose values begin at `begin`, behind what is in `out`.
    #[allow(clippy::unnecessary_cast)] // One of the types is f64 itself.
    pub fn decode_spectrum(&self, samples: &Samples, begin: usize, out: &mut Vec<f64>) {
        out.reserve(self.channels);
        with_values!(
            samples,
            values => {
                let spectrum = &values[begin..begin + self.channels];
                match self.plainly() {
                    Some((decode, factors)) => out.extend(
                        spectrum.iter().zip(factors).map(|(v, f)| decode.decode(*v as f64) * f),
                    ),
                    None => {
                        let stored = |channel: usize| spectrum[channel] as f64;
                        out.extend((0..self.channels).map(|channel| self.value(channel, stored)));
                    }
                }
            },
            _strings => out.resize(self.channels, f64::NAN)
        );
    }

    /// Some channels from the slab's footprint `first` on, into the `place` of each channel's
    /// `length` values.
    #[allow(clippy::unnecessary_cast)] // One of the types is f64 itself.
    pub fn decode_channels(
        &self,
        samples: &Samples,
        first: usize,
        channels: &[usize],
        place: Range<usize>,
        length: usize,
        out: &mut [f64],
    ) {
        with_values!(
            samples,
            values => {
                let spectra = &values[first * self.channels..];
                let plainly = self.plainly();
                for start in (0..place.len()).step_by(SIDE_BY_SIDE) {
                    let some = start..(start + SIDE_BY_SIDE).min(place.len());
                    for (row, &channel) in channels.iter().enumerate() {
                        let begin = row * length + place.start;
                        let out = &mut out[begin + some.start..begin + some.end];
                        for (out, at) in out.iter_mut().zip(some.clone()) {
                            let spectrum = &spectra[at * self.channels..][..self.channels];
                            *out = match plainly {
                                Some((decode, factors)) => {
                                    decode.decode(spectrum[channel] as f64) * factors[channel]
                                }
                                None => self.value(channel, |channel| spectrum[channel] as f64),
                            };
                        }
                    }
                }
            },
            _strings => {
                for row in 0..channels.len() {
                    out[row * length..][place.clone()].fill(f64::NAN);
                }
            }
        );
    }
}
