//! The columns that come from the granule: all channels in one pass over the footprints.

use std::ops::Range;

use rayon::prelude::*;

use super::leaves::Leaf;
use crate::granule::Channel;
use crate::layers::names::Names;
use crate::layers::syntax::Quantity;
use crate::spectral::{NoTemperature, brightness_temperature};

/// Numbers that one block holds at the most, about 2 MB.
const BLOCK_NUMBERS: usize = 1 << 18;

/// Fewer numbers than this are gathered before other threads have woken up.
const PARALLEL_FROM: usize = 1 << 20;

/// A column, and what happened on the way.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Column {
    /// One number per footprint.
    pub values: Vec<f64>,
    /// Footprints whose radiance is zero or less, so that it has no temperature, in their order.
    pub not_positive: Vec<usize>,
    /// Footprints for which some of an interval's channels were missing.
    pub partial: usize,
    /// Why some of it could not be read; empty where all could.
    pub unread: String,
}

impl Column {
    fn append(&mut self, block: &Self) {
        self.values.extend_from_slice(&block.values);
        self.not_positive.extend_from_slice(&block.not_positive);
        self.partial += block.partial;
        if self.unread.is_empty() {
            self.unread.clone_from(&block.unread);
        }
    }
}

/// The columns of all leaves, in their order.
pub fn gather(leaves: &[Leaf], names: &dyn Names) -> Vec<Column> {
    let wanted = Wanted::by(leaves, names);
    let footprints = names.footprints();
    let block = (BLOCK_NUMBERS / wanted.len().max(1)).clamp(64, 4096);
    // What is read together is gathered by one thread, block by block.
    let piece = names.footprints_at_once().filter(|_| wanted.len() > 0);
    let gathered = |piece: Range<usize>| {
        let blocks = pieces(piece, block).into_iter();
        join(leaves.len(), blocks.map(|block| wanted.block(leaves, names, block)))
    };
    let pieces = pieces(0..footprints, piece.unwrap_or(block));
    if piece.is_none() && wanted.len() * footprints < PARALLEL_FROM {
        return join(leaves.len(), pieces.into_iter().map(gathered));
    }
    let gathered: Vec<Vec<Column>> = pieces.into_par_iter().map(gathered).collect();
    join(leaves.len(), gathered.into_iter())
}

/// A range cut into pieces of a length.
fn pieces(whole: Range<usize>, length: usize) -> Vec<Range<usize>> {
    let end = whole.end;
    whole.step_by(length.max(1)).map(|start| start..(start + length).min(end)).collect()
}

/// The columns of ranges of footprints, one behind the other.
fn join(leaves: usize, parts: impl Iterator<Item = Vec<Column>>) -> Vec<Column> {
    let mut columns: Vec<Column> = vec![Column::default(); leaves];
    for part in parts {
        for (column, part) in columns.iter_mut().zip(&part) {
            column.append(part);
        }
    }
    columns
}

/// The channels that have to be read, each once.
struct Wanted {
    radiances: Vec<Channel>,
    temperatures: Vec<Channel>,
    calculated: Vec<Channel>,
}

/// The numbers of one block.
struct Block<'w> {
    wanted: &'w Wanted,
    /// Number of the first footprint.
    start: usize,
    length: usize,
    radiances: Vec<f64>,
    temperatures: Vec<f64>,
    calculated: Vec<f64>,
    /// Why the calculated numbers could not be read; empty where they could.
    unread: String,
}

impl Wanted {
    fn by(leaves: &[Leaf], names: &dyn Names) -> Self {
        let exact = |leaf: &&Leaf| {
            matches!(leaf, Leaf::Channel(Quantity::BrightnessTemperature, channel)
                if names.stores_temperature(channel))
        };
        let (exact, other): (Vec<&Leaf>, Vec<&Leaf>) = leaves.iter().partition(exact);
        let calculated = leaves.iter().filter_map(|leaf| match leaf {
            Leaf::Calculated(channel) => Some(*channel),
            _ => None,
        });
        Self {
            radiances: unique(measured(&other)),
            temperatures: unique(measured(&exact)),
            calculated: unique(calculated),
        }
    }

    fn len(&self) -> usize {
        self.radiances.len() + self.temperatures.len() + self.calculated.len()
    }

    fn block(&self, leaves: &[Leaf], names: &dyn Names, footprints: Range<usize>) -> Vec<Column> {
        let length = footprints.len();
        let mut radiances = vec![f64::NAN; self.radiances.len() * length];
        let mut temperatures = vec![f64::NAN; self.temperatures.len() * length];
        if !radiances.is_empty() {
            names.radiances(&self.radiances, footprints.clone(), &mut radiances);
        }
        if !temperatures.is_empty() {
            names.temperatures(&self.temperatures, footprints.clone(), &mut temperatures);
        }
        let mut calculated = vec![f64::NAN; self.calculated.len() * length];
        let mut unread = String::new();
        if !calculated.is_empty()
            && let Err(error) =
                names.clear_temperatures(&self.calculated, footprints.clone(), &mut calculated)
        {
            unread = error.to_string();
        }
        let block = Block {
            wanted: self,
            start: footprints.start,
            length,
            radiances,
            temperatures,
            calculated,
            unread,
        };
        leaves.iter().map(|leaf| block.column(leaf, &footprints)).collect()
    }
}

fn measured<'l>(leaves: &'l [&Leaf]) -> impl Iterator<Item = Channel> + 'l {
    leaves.iter().flat_map(|leaf| leaf.channels().iter().copied())
}

/// Channels in the order of the file, so that a reader goes through each spectrum once.
fn unique(channels: impl Iterator<Item = Channel>) -> Vec<Channel> {
    let mut channels: Vec<Channel> = channels.collect();
    channels.sort_by_key(place);
    channels.dedup_by_key(|channel| place(channel));
    channels
}

fn place(channel: &Channel) -> (usize, usize) {
    (channel.band, channel.index)
}

impl Block<'_> {
    fn column(&self, leaf: &Leaf, footprints: &Range<usize>) -> Column {
        match leaf {
            Leaf::Named(_, named) => {
                let values = named.values.get(footprints.clone()).unwrap_or_default();
                let finite = |value: &f64| if value.is_finite() { *value } else { f64::NAN };
                let mut values: Vec<f64> = values.iter().map(finite).collect();
                values.resize(self.length, f64::NAN);
                Column { values, ..Column::default() }
            }
            Leaf::Calculated(channel) => {
                let values = part(&self.wanted.calculated, &self.calculated, channel);
                let finite = |value: &f64| if value.is_finite() { *value } else { f64::NAN };
                Column {
                    values: values.unwrap_or_default().iter().map(finite).collect(),
                    unread: self.unread.clone(),
                    ..Column::default()
                }
            }
            Leaf::Channel(Quantity::MissingShare, channel) => {
                self.missing_share(std::slice::from_ref(channel))
            }
            Leaf::Interval { quantity: Quantity::MissingShare, channels, .. } => {
                self.missing_share(channels)
            }
            Leaf::Channel(quantity, channel) => self.channel(*quantity, channel),
            Leaf::Interval { quantity, channels, .. } => self.interval(*quantity, channels),
        }
    }

    fn channel(&self, quantity: Quantity, channel: &Channel) -> Column {
        if let Some(exact) = part(&self.wanted.temperatures, &self.temperatures, channel)
            && quantity == Quantity::BrightnessTemperature
        {
            return Column { values: exact.to_vec(), ..Column::default() };
        }
        let radiances = part(&self.wanted.radiances, &self.radiances, channel).unwrap_or_default();
        let mut column = Column::default();
        for (footprint, radiance) in (self.start..).zip(radiances) {
            column.push(quantity, footprint, channel.wavenumber, *radiance);
        }
        column
    }

    /// Share of the channels that have no value.
    fn missing_share(&self, channels: &[Channel]) -> Column {
        let mut missing = vec![0_usize; self.length];
        for channel in channels {
            let radiances = part(&self.wanted.radiances, &self.radiances, channel);
            for (count, radiance) in missing.iter_mut().zip(radiances.unwrap_or_default()) {
                *count += usize::from(!radiance.is_finite());
            }
        }
        let share = |count: usize| count as f64 / channels.len() as f64;
        Column { values: missing.into_iter().map(share).collect(), ..Column::default() }
    }

    /// Radiances are averaged, negative ones included, for averages of temperatures are biased;
    /// the mean is inverted at the mean wavenumber of the channels that went into it. A footprint
    /// for which fewer than half of the channels are there has no mean.
    fn interval(&self, quantity: Quantity, channels: &[Channel]) -> Column {
        let parts: Vec<(f64, &[f64])> = channels
            .iter()
            .filter_map(|channel| {
                let part = part(&self.wanted.radiances, &self.radiances, channel)?;
                Some((channel.wavenumber, part))
            })
            .collect();
        let mut column = Column::default();
        for footprint in 0..self.length {
            let (mut count, mut radiances, mut wavenumbers) = (0_usize, 0.0, 0.0);
            for (wavenumber, part) in &parts {
                if !part[footprint].is_nan() {
                    count += 1;
                    radiances += part[footprint];
                    wavenumbers += wavenumber;
                }
            }
            if count == 0 || 2 * count < channels.len() {
                column.values.push(f64::NAN);
                continue;
            }
            column.partial += usize::from(count < channels.len());
            let count = count as f64;
            let footprint = self.start + footprint;
            column.push(quantity, footprint, wavenumbers / count, radiances / count);
        }
        column
    }
}

impl Column {
    fn push(&mut self, quantity: Quantity, footprint: usize, wavenumber: f64, radiance: f64) {
        let value = match quantity {
            Quantity::Radiance => radiance,
            Quantity::MissingShare => f64::NAN,
            Quantity::BrightnessTemperature => match brightness_temperature(wavenumber, radiance) {
                Ok(temperature) => temperature,
                Err(error) => {
                    if error == NoTemperature::NotPositive {
                        self.not_positive.push(footprint);
                    }
                    f64::NAN
                }
            },
        };
        self.values.push(if value.is_finite() { value } else { f64::NAN });
    }
}

/// The numbers of one channel in a block.
fn part<'b>(wanted: &[Channel], numbers: &'b [f64], channel: &Channel) -> Option<&'b [f64]> {
    let at = wanted.binary_search_by_key(&place(channel), place).ok()?;
    let length = numbers.len() / wanted.len();
    numbers.get(at * length..(at + 1) * length)
}
