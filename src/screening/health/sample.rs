//! The spectra that channels, detectors and components are judged by: some hundred pairs of
//! neighbours over the whole granule.

use rayon::prelude::*;

use super::finding::{Check, Finding, Limit, Subject};
use super::grid::ScanGrid;
use super::limits::HealthLimits;
use super::readings::BandReadings;
use crate::granule::Channel;
use crate::screening::unusual::{Rows, pair_deviations};
use crate::spectral::{median, planck, running_median};

/// Spectra in the sample: enough that the noise of a channel is known to 4 %.
pub const SAMPLE: usize = 1200;
/// A spectrum with less than this share of its channels says nothing about them.
const HALF: f64 = 0.5;
/// A channel must have values in this share of the sample to be among the components.
const NEARLY_ALL: f64 = 0.95;
/// Neighbours to either side that a channel's spread is compared with.
const REACH: usize = 5;
/// Black bodies that bound what a scene can be, K (T24, common practice).
const COLDEST: f64 = 150.0;
const HOTTEST: f64 = 370.0;
/// The share of pairs that are the most alike, of which the noise is measured.
const ALIKE: f64 = 0.2;
/// But no fewer than this.
const FEWEST_ALIKE: usize = 40;

/// One band's sample.
#[derive(Debug, Clone)]
pub struct Sample {
    /// The spectra that are whole.
    pub rows: Rows,
    /// Their footprints.
    pub footprints: Vec<usize>,
    /// First guess of the noise of the rows' channels, mW m-2 sr-1 (cm-1)-1: what pairs differ by that
    /// are the most alike.
    pub spatial_noise: Vec<f64>,
    /// Channels of the band that may be missing without being missed: dead or given up.
    pub excused: Vec<bool>,
    /// Detectors that see nothing.
    pub dead_detectors: Vec<usize>,
    /// Dead channels and detectors.
    pub findings: Vec<Finding>,
}

/// Radiances of the footprints of the pairs over some channels.
struct Raw {
    footprints: Vec<usize>,
    channels: Vec<usize>,
    values: Vec<Vec<f64>>,
    /// The same, all footprints of the first channel, then of the next.
    columns: Vec<f64>,
}

/// Channels that are turned into columns together.
const SIDE_BY_SIDE: usize = 16;

/// Columns of rows: all of the first channel, then of the next.
fn columns(rows: &[Vec<f64>], channels: usize) -> Vec<f64> {
    let count = rows.len();
    let mut columns = vec![0.0; count * channels];
    if count == 0 {
        return columns;
    }
    columns.par_chunks_mut(count * SIDE_BY_SIDE).enumerate().for_each(|(block, columns)| {
        let first = block * SIDE_BY_SIDE;
        for (row, values) in rows.iter().enumerate() {
            let values = &values[first..(first + SIDE_BY_SIDE).min(channels)];
            values.iter().enumerate().for_each(|(at, value)| columns[at * count + row] = *value);
        }
    });
    columns
}

impl Sample {
    /// Takes the sample of a band, about `most` spectra.
    pub fn take(
        readings: &BandReadings<'_>,
        grid: &ScanGrid,
        limits: &HealthLimits,
        most: usize,
    ) -> Self {
        let pairs = grid.pairs(most);
        let footprints: Vec<usize> = pairs.iter().flat_map(|(one, other)| [*one, *other]).collect();
        let (channels, adjacent) = readings.channels();
        let values = footprints.par_iter().map_init(Vec::new, |buffer, footprint| {
            readings.radiances(*footprint, buffer);
            channels.iter().map(|channel| buffer[*channel]).collect()
        });
        let values: Vec<Vec<f64>> = values.collect();
        let columns = columns(&values, channels.len());
        let raw = Raw { values, columns, footprints, channels };
        let (dead_detectors, mut findings) = raw.dead_detectors(readings, grid, limits);
        let alive = |at: usize| {
            let there = raw.values[at].iter().filter(|value| value.is_finite()).count();
            !dead_detectors.contains(&grid.detector(raw.footprints[at]))
                && there as f64 > HALF * raw.channels.len() as f64
        };
        let alive: Vec<usize> = (0..raw.footprints.len()).filter(|at| alive(*at)).collect();
        let states = raw.channel_states(readings, &alive, limits);
        let mut excused = vec![true; readings.band.channels()];
        for (&channel, state) in raw.channels.iter().zip(&states) {
            excused[channel] = state.dead.is_some();
            let wavenumber = readings.band.axis.wavenumbers()[channel];
            let subject =
                Subject::Channel(Channel { band: readings.number, index: channel, wavenumber });
            findings.extend(state.dead.as_ref().map(|(limit, value, detail)| {
                let finding =
                    limit.finding(Check::DeadChannel, subject, Some(readings.number), *value);
                finding.saying((*detail).to_owned())
            }));
        }
        let used: Vec<usize> = (0..states.len()).filter(|at| states[*at].used).collect();
        let (rows, kept) = raw.rows(readings, &adjacent, &used, &alive);
        let spreads = used.iter().map(|at| states[*at].spread).collect::<Vec<_>>();
        let spatial_noise = spatial_noise(&rows, &spreads);
        let footprints = kept.into_iter().map(|at| raw.footprints[at]).collect();
        Self { rows, footprints, spatial_noise, excused, dead_detectors, findings }
    }
}

/// What a channel looks like over the sample.
struct ChannelState {
    /// Mean size of what it differs from its median by.
    spread: f64,
    /// Whether it may be among the components.
    used: bool,
    /// Limit, value and words where it is dead.
    dead: Option<(Limit, f64, &'static str)>,
}

impl Raw {
    fn column(&self, channel: usize, among: &[usize]) -> Vec<f64> {
        let column = &self.columns[channel * self.footprints.len()..];
        let values = among.iter().map(|at| column[*at]);
        values.filter(|value| value.is_finite()).collect()
    }

    /// Detectors whose spread over the footprints is far below that of the others.
    fn dead_detectors(
        &self,
        readings: &BandReadings<'_>,
        grid: &ScanGrid,
        limits: &HealthLimits,
    ) -> (Vec<usize>, Vec<Finding>) {
        if grid.detectors < 2 {
            return Default::default();
        }
        let of_detector: Vec<Vec<usize>> = (0..grid.detectors)
            .map(|detector| {
                let all = 0..self.footprints.len();
                all.filter(|at| grid.detector(self.footprints[*at]) == detector).collect()
            })
            .collect();
        // Channels x detectors.
        let ratios: Vec<Vec<f64>> = (0..self.channels.len())
            .into_par_iter()
            .map(|channel| {
                let spreads: Vec<f64> =
                    of_detector.iter().map(|rows| spread(&self.column(channel, rows))).collect();
                let mut there: Vec<f64> =
                    spreads.iter().copied().filter(|one| one.is_finite()).collect();
                let usual = median(&mut there);
                spreads.into_iter().map(|spread| spread / usual).collect()
            })
            .collect();
        let limit = Limit::of(limits, "dead_signal");
        let (mut dead, mut findings) = (Vec::new(), Vec::new());
        for detector in 0..grid.detectors {
            let of_channels = ratios.iter().map(|ratios| ratios[detector]);
            let mut known: Vec<f64> = of_channels.filter(|one| one.is_finite()).collect();
            // Without any value where others have some it is as dead as one without a signal.
            let silent = known.is_empty() && ratios.iter().flatten().any(|one| one.is_finite());
            let ratio = if silent { 0.0 } else { median(&mut known) };
            if ratio < limit.value {
                dead.push(detector);
                let (subject, band) = (Subject::Detector(detector), Some(readings.number));
                let finding = limit.finding(Check::DeadDetector, subject, band, ratio);
                findings.push(
                    finding.saying("spread over the footprints, of that of the others".into()),
                );
            }
        }
        (dead, findings)
    }

    fn channel_states(
        &self,
        readings: &BandReadings<'_>,
        alive: &[usize],
        limits: &HealthLimits,
    ) -> Vec<ChannelState> {
        let columns: Vec<(f64, f64, f64)> = (0..self.channels.len())
            .into_par_iter()
            .map(|channel| {
                let mut values = self.column(channel, alive);
                let spread = spread(&values);
                (values.len() as f64 / alive.len() as f64, spread, median(&mut values))
            })
            .collect();
        let spreads: Vec<f64> = columns.iter().map(|column| column.1).collect();
        let usual = running_median(&spreads, REACH);
        let (share_limit, signal_limit) =
            (Limit::of(limits, "dead_share"), Limit::of(limits, "dead_signal"));
        let state = |(number, (share, spread, level)): (usize, &(f64, f64, f64))| {
            let (missing, usual) = (1.0 - share, usual[number]);
            // Some channels see what hardly varies; then they see it at a sensible level.
            let nu = readings.band.axis.wavenumbers()[self.channels[number]];
            let sensible =
                *spread > 0.0 && (planck(nu, COLDEST)..planck(nu, HOTTEST)).contains(level);
            let dead = if alive.is_empty() {
                None
            } else if missing >= share_limit.value {
                Some((share_limit, missing, "share of footprints without a value"))
            } else if *spread < signal_limit.value * usual && !sensible {
                Some((
                    signal_limit,
                    spread / usual,
                    "spread over the footprints, of that of the neighbours",
                ))
            } else {
                None
            };
            let used = dead.is_none() && *share >= NEARLY_ALL && *spread > 0.0;
            ChannelState { spread: *spread, used, dead }
        };
        columns.iter().enumerate().map(state).collect()
    }

    /// The spectra that are whole over the used channels, with their places in the sample.
    fn rows(
        &self,
        readings: &BandReadings<'_>,
        adjacent: &[bool],
        used: &[usize],
        alive: &[usize],
    ) -> (Rows, Vec<usize>) {
        let whole = |at: &usize| used.iter().all(|channel| self.values[*at][*channel].is_finite());
        let kept: Vec<usize> = alive.iter().copied().filter(whole).collect();
        let pair = |row: usize| {
            // Pairs lie one behind the other in the sample.
            let even = kept[row].is_multiple_of(2) && kept.get(row + 1) == Some(&(kept[row] + 1));
            even.then_some((row, row + 1))
        };
        let channels: Vec<usize> = used.iter().map(|at| self.channels[*at]).collect();
        let next_to = |pair: &[usize]| pair[0] + 1 == pair[1] && adjacent[pair[0]];
        let rows = Rows {
            wavenumbers: channels
                .iter()
                .map(|one| readings.band.axis.wavenumbers()[*one])
                .collect(),
            adjacent: used.windows(2).map(next_to).chain(used.last().map(|_| false)).collect(),
            radiances: kept
                .iter()
                .flat_map(|at| used.iter().map(|channel| self.values[*at][*channel]))
                .collect(),
            pairs: (0..kept.len()).filter_map(pair).collect(),
            channels,
        };
        (rows, kept)
    }
}

/// Mean size of what values differ from their median by: unlike a median of sizes it does not vanish
/// where coarsely packed values are mostly the same. NaN without values.
fn spread(values: &[f64]) -> f64 {
    let middle = median(&mut values.to_vec());
    values.iter().map(|value| (value - middle).abs()).sum::<f64>() / values.len() as f64
}

/// The noise of each channel, from the differences of those pairs that are the most alike over the
/// whole band; what is left of the scene in them makes it too large, never too small.
fn spatial_noise(rows: &Rows, spreads: &[f64]) -> Vec<f64> {
    let width = rows.channels.len();
    let difference = |(one, other): &(usize, usize), channel: usize| {
        rows.radiances[one * width + channel] - rows.radiances[other * width + channel]
    };
    let mut pairs: Vec<(f64, &(usize, usize))> = rows
        .pairs
        .par_iter()
        .map(|pair| {
            let sizes =
                (0..width).map(|channel| (difference(pair, channel) / spreads[channel]).abs());
            (sizes.sum(), pair)
        })
        .collect();
    pairs.sort_by(|one, next| one.0.total_cmp(&next.0));
    let wanted = ((ALIKE * pairs.len() as f64) as usize).max(FEWEST_ALIKE);
    pairs.truncate(wanted);
    let pairs: Vec<(usize, usize)> = pairs.into_iter().map(|(_, pair)| *pair).collect();
    let noise = pair_deviations(&rows.radiances, width, &pairs);
    // Where packing is coarser than noise, most pairs do not differ at all.
    let usual = running_median(&noise, REACH);
    let least =
        |(noise, (usual, spread)): (f64, (f64, &f64))| noise.max(0.05 * usual).max(1e-6 * spread);
    noise.into_iter().zip(usual.into_iter().zip(spreads)).map(least).collect()
}
