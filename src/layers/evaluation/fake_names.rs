//! Footprints and spectra made up for tests.

use std::collections::HashMap;
use std::ops::Range;

use crate::granule::Channel;
use crate::layers::names::{NameError, Names, Values};
use crate::layers::neighbours::Neighbours;
use crate::layers::retrieval::Retrieval;
use crate::layers::syntax::{Expression, Judgement};
use crate::layers::unit::LayerUnit;
use crate::spectral::{brightness_temperature_or_nan, planck};

/// One band of channels at whole wavenumbers from 600 cm-1, whose radiances a function gives.
pub struct FakeNames {
    pub lengths: Vec<usize>,
    pub radiance: fn(wavenumber: f64, footprint: usize) -> f64,
    pub temperatures: bool,
    pub named: HashMap<String, Vec<f64>>,
    pub definitions: HashMap<String, Expression>,
    /// Brightness temperatures calculated for clear sky.
    pub calculated: Option<fn(wavenumber: f64, footprint: usize) -> f64>,
    pub retrievals: Vec<&'static dyn Retrieval>,
    neighbours: Neighbours,
}

/// Channels: 600, 601, … 2799 cm-1.
const CHANNELS: usize = 2200;

impl FakeNames {
    pub fn new(lengths: &[usize], radiance: fn(f64, usize) -> f64) -> Self {
        Self {
            lengths: lengths.to_vec(),
            radiance,
            temperatures: false,
            named: HashMap::new(),
            definitions: HashMap::new(),
            calculated: None,
            retrievals: Vec::new(),
            neighbours: Neighbours::by_array(lengths),
        }
    }

    /// Black bodies of 200 K and 0.5 K more from footprint to footprint.
    pub fn black_bodies(lengths: &[usize]) -> Self {
        Self::new(lengths, |wavenumber, footprint| {
            planck(wavenumber, 200.0 + 0.5 * footprint as f64)
        })
    }

    pub fn with(mut self, name: &str, values: &[f64]) -> Self {
        self.named.insert(name.to_owned(), values.to_vec());
        self
    }

    pub fn defining(mut self, name: &str, text: &str) -> Self {
        self.definitions.insert(name.to_owned(), Expression::parse(text).unwrap());
        self
    }
}

impl Names for FakeNames {
    fn footprints(&self) -> usize {
        self.lengths.iter().product()
    }

    fn channel_near(&self, wavenumber: f64) -> Result<Channel, NameError> {
        let index = (wavenumber - 600.0).round().clamp(0.0, CHANNELS as f64 - 1.0);
        let nearest = 600.0 + index;
        if (nearest - wavenumber).abs() > 0.6 {
            return Err(NameError::NoChannel { wanted: wavenumber, nearest: Some(nearest) });
        }
        Ok(Channel { band: 0, index: index as usize, wavenumber: nearest })
    }

    fn channels_between(&self, low: f64, high: f64) -> Vec<Channel> {
        (0..CHANNELS)
            .map(|index| Channel { band: 0, index, wavenumber: 600.0 + index as f64 })
            .filter(|channel| (low..=high).contains(&channel.wavenumber))
            .collect()
    }

    fn stores_temperature(&self, _channel: &Channel) -> bool {
        self.temperatures
    }

    fn radiances(&self, channels: &[Channel], footprints: Range<usize>, out: &mut [f64]) {
        let length = footprints.len();
        for (channel, out) in channels.iter().zip(out.chunks_mut(length)) {
            for (footprint, out) in footprints.clone().zip(out) {
                *out = (self.radiance)(channel.wavenumber, footprint);
            }
        }
    }

    fn temperatures(&self, channels: &[Channel], footprints: Range<usize>, out: &mut [f64]) {
        assert!(self.temperatures, "asked for temperatures that are not stored");
        let length = footprints.len();
        self.radiances(channels, footprints, out);
        for (channel, out) in channels.iter().zip(out.chunks_mut(length)) {
            // Marked, so that a test sees where the number came from.
            out.iter_mut().for_each(|value| {
                *value = brightness_temperature_or_nan(channel.wavenumber, *value) + 1000.0;
            });
        }
    }

    fn calculates(&self, _channel: &Channel) -> Result<(), NameError> {
        match self.calculated {
            Some(_) => Ok(()),
            None => Err(NameError::NotInFile("calculated spectra".into())),
        }
    }

    fn clear_temperatures(
        &self,
        channels: &[Channel],
        footprints: Range<usize>,
        out: &mut [f64],
    ) -> Result<(), NameError> {
        let calculated = self.calculated.unwrap();
        for (channel, out) in channels.iter().zip(out.chunks_mut(footprints.len())) {
            for (footprint, out) in footprints.clone().zip(out) {
                *out = calculated(channel.wavenumber, footprint);
            }
        }
        Ok(())
    }

    fn is_complete(&self, channel: &Channel) -> bool {
        channel.wavenumber < 2700.0
    }

    fn named(&self, name: &str) -> Result<Values, NameError> {
        match self.named.get(name) {
            Some(values) => Ok(Values { values: values.clone(), unit: LayerUnit::One }),
            None if name == "land" => Err(NameError::NotInFile("land fraction".into())),
            None => Err(NameError::Unknown {
                name: name.into(),
                known: vec!["lat".into(), "lon".into(), "land".into()],
            }),
        }
    }

    fn variable(&self, name: &str) -> Result<Values, NameError> {
        self.named(name)
    }

    fn definition(&self, name: &str) -> Option<&Expression> {
        self.definitions.get(name)
    }

    fn judged(&self, judgement: Judgement, _of: Option<&str>) -> Result<Values, NameError> {
        Err(NameError::NotJudged(judgement.word()))
    }

    fn lengths(&self) -> &[usize] {
        &self.lengths
    }

    fn retrievals(&self) -> &[&dyn Retrieval] {
        &self.retrievals
    }

    fn neighbours(&self) -> &Neighbours {
        &self.neighbours
    }
}
