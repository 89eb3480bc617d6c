//! Ranked-channel cloud detection (T19): which channels of a footprint cloud reaches into.

use std::sync::OnceLock;

use rayon::prelude::*;

use super::bias::Bias;
use super::departure::{COMMON, common_inputs, difference, pair_of, scene};
use super::filter::{Found, HALF, find};
use super::ranking::{Ranked, Rankings};
use crate::granule::Channel;
use crate::layers::{Input, LayerUnit, Names, Retrieval, Retrieved};

/// What comes out, and its unit: the largest smoothed departure that still grows down the ranks; the
/// share of the ranked channels that are clear; the pressure of the lowest cloud that the first
/// affected channel sees, and that channel's wavenumber.
pub const RANKED_NAMES: [(&str, LayerUnit); 4] = [
    ("ranked_departure", LayerUnit::KelvinDifference),
    ("ranked_clear_share", LayerUnit::One),
    ("ranked_cloud_pressure", LayerUnit::Hectopascal),
    ("ranked_cloud_channel", LayerUnit::Unknown),
];

/// Fewer channels than this are no ranking.
const FEWEST_CHANNELS: usize = 4 * (2 * HALF + 1);

/// The `ranked_…` names and `cloud_affected(nu)`.
#[derive(Debug, Default)]
pub struct RankedChannels {
    rankings: Rankings,
}

impl RankedChannels {
    /// The rankings of all instruments met so far: to work one out takes longer than to use it.
    pub fn shared() -> &'static RankedChannels {
        static SHARED: OnceLock<RankedChannels> = OnceLock::new();
        SHARED.get_or_init(RankedChannels::default)
    }

    /// What the filter finds at each footprint.
    fn found(
        &self,
        names: &dyn Names,
        inputs: &[Option<&[f64]>],
        ranked: &[Ranked],
    ) -> (Vec<Option<Found>>, Vec<String>) {
        let (classes, clear) = scene(names, inputs);
        let columns: Vec<Vec<f64>> = (0..ranked.len())
            .into_par_iter()
            .map(|rank| {
                let departures = difference(inputs, COMMON + 2 * rank);
                let bias = Bias::of(&departures, &clear, &classes);
                let left = departures.iter().enumerate();
                left.map(|(at, departure)| departure - bias.at(at, &classes)).collect()
            })
            .collect();
        let found = (0..names.footprints())
            .into_par_iter()
            .map(|at| {
                let departures: Vec<f64> = columns.iter().map(|column| column[at]).collect();
                find(&departures)
            })
            .collect();
        (found, classes.words(&clear))
    }

    /// Whether cloud reaches into what a channel sees.
    fn affected(
        &self,
        names: &dyn Names,
        channel: &Channel,
        found: &[Option<Found>],
        ranked: &[Ranked],
        departures: &[f64],
    ) -> Vec<f64> {
        let pressures = self.rankings.pressures(std::slice::from_ref(channel), names);
        // What sees no cloud at all is affected by none.
        let own = pressures.first().map_or(f64::NAN, |one| one.pressure);
        let affected = |found: &Found| found.first.is_some_and(|rank| own >= ranked[rank].pressure);
        let value = |found: &Option<Found>| {
            found.as_ref().map_or(f64::NAN, |found| f64::from(u8::from(affected(found))))
        };
        // Of a footprint whose own value in the channel is missing nothing is said.
        let departures = departures.iter();
        let both = found.iter().zip(departures);
        both.map(|(found, own)| if own.is_nan() { f64::NAN } else { value(found) }).collect()
    }
}

impl Retrieval for RankedChannels {
    fn outputs(&self) -> &[(&'static str, LayerUnit)] {
        &RANKED_NAMES
    }

    fn functions(&self) -> &[(&'static str, LayerUnit)] {
        &[("cloud_affected", LayerUnit::Truth)]
    }

    fn inputs(&self, names: &dyn Names, channel: Option<&Channel>) -> Vec<Input> {
        let mut inputs = common_inputs();
        // Without calculated spectra nothing more is asked for, and no ranking is worked out.
        let window = names.channel_near(900.3);
        if window.is_ok_and(|channel| names.calculates(&channel).is_ok()) {
            let ranked = self.rankings.of(names);
            inputs.extend(ranked.iter().flat_map(|one| pair_of(&one.channel)));
            inputs.extend(channel.into_iter().flat_map(pair_of));
        }
        inputs
    }

    fn run(
        &self,
        names: &dyn Names,
        inputs: &[Option<&[f64]>],
        channel: Option<&Channel>,
    ) -> Retrieved {
        let ranked = self.rankings.of(names);
        let results = if channel.is_some() { 1 } else { RANKED_NAMES.len() };
        if ranked.len() < FEWEST_CHANNELS {
            return Retrieved {
                columns: vec![vec![f64::NAN; names.footprints()]; results],
                notes: vec![format!(
                    "{} channels between 680 and 960 cm-1 can be ranked by height, fewer than \
                     {FEWEST_CHANNELS}",
                    ranked.len()
                )],
            };
        }
        let (found, notes) = self.found(names, inputs, &ranked);
        let columns = match channel {
            Some(channel) => {
                let own = difference(inputs, COMMON + 2 * ranked.len());
                vec![self.affected(names, channel, &found, &ranked, &own)]
            }
            None => columns(&found, &ranked),
        };
        Retrieved { columns, notes }
    }
}

/// In the order of [`RANKED_NAMES`].
fn columns(found: &[Option<Found>], ranked: &[Ranked]) -> Vec<Vec<f64>> {
    let column = |of: &dyn Fn(&Found) -> f64| {
        found.iter().map(|one| one.as_ref().map_or(f64::NAN, of)).collect()
    };
    let first = |found: &Found, of: &dyn Fn(&Ranked) -> f64| {
        found.first.map_or(f64::NAN, |rank| of(&ranked[rank]))
    };
    vec![
        column(&|found| found.largest),
        column(&|found| found.first.unwrap_or(ranked.len()) as f64 / ranked.len() as f64),
        column(&|found| first(found, &|one| one.pressure)),
        column(&|found| first(found, &|one| one.channel.wavenumber)),
    ]
}
