//! Ranked channels on granules with cloud at known heights, and calculated spectra with a known bias.

use super::departure::COMMON;
use super::ranked::RankedChannels;
use super::ranking::{Ranked, Rankings};
use super::{Departures, RANKED_NAMES};
use crate::forward::{
    self, Atmosphere, Changes, Cover, Footprint, Particles, Response, Scenery, Standard, Surface,
    View,
};
use crate::granule::Channel;
use crate::layers::{FakeNames, Retrieval};
use crate::spectral::brightness_temperature_or_nan;

/// Scan lines, positions, detectors.
const LENGTHS: [usize; 3] = [12, 16, 2];
const FOOTPRINTS: usize = 12 * 16 * 2;
/// What the second detector is warmer by than the calculation, and the first colder, K.
const DETECTOR_BIAS: f64 = 0.3;
/// What all are warmer by under a slant view, K.
const SLANT_BIAS: f64 = 0.6;
/// Noise of a channel, K.
const NOISE: f64 = 0.2;

/// A sea with a band of cloud: positions 8 to 15.
struct Made {
    height: f64,
    amount: f64,
    /// What the calculation takes for the air.
    believed: Changes,
}

struct Found {
    columns: [Vec<f64>; RANKED_NAMES.len()],
    notes: Vec<String>,
    /// Pressure of the tops, hPa.
    truth: f64,
}

fn is_cloudy(at: usize) -> bool {
    at / 2 % 16 >= 8
}

fn bias(at: usize) -> f64 {
    let slant = if zenith(at) > 35.0 { SLANT_BIAS } else { 0.0 };
    slant + if at % 2 == 1 { DETECTOR_BIAS } else { -DETECTOR_BIAS }
}

/// Every other scan line looks aslant, so that each class has clear footprints.
fn zenith(at: usize) -> f64 {
    if (at / 32).is_multiple_of(2) { 10.0 } else { 40.0 }
}

/// Evenly spread with the variance of a unit normal, the same for the same place.
fn wobble(at: usize, channel: usize) -> f64 {
    let mut mixed = (at as u64 * 1009 + channel as u64 + 1).wrapping_mul(0x9E37_79B9_7F4A_7C15);
    mixed = (mixed ^ (mixed >> 29)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
    let share = (mixed >> 11) as f64 / (1u64 << 53) as f64;
    (2.0 * share - 1.0) * 3.0_f64.sqrt()
}

fn names() -> FakeNames {
    FakeNames::black_bodies(&LENGTHS)
}

/// The window, then the ranked channels.
fn channels(ranked: &[Ranked]) -> Vec<Channel> {
    let window = Channel { band: 0, index: 300, wavenumber: 900.0 };
    std::iter::once(window).chain(ranked.iter().map(|one| one.channel)).collect()
}

impl Made {
    /// Brightness temperatures, K, by channel, then footprint; with cloud, or as they are calculated.
    fn temperatures(&self, channels: &[Channel], observed: bool) -> Vec<Vec<f64>> {
        let changes = if observed { Changes::default() } else { self.believed.clone() };
        let air = Atmosphere::new(Standard::MidlatitudeSummer, &changes);
        let instrument: Vec<forward::Channel> = channels
            .iter()
            .map(|one| forward::Channel {
                wavenumber: one.wavenumber,
                response: Response::Box { width: 1.0 },
            })
            .collect();
        let view = View {
            zenith_angles: vec![10.0, 40.0],
            sun_zenith: None,
            cloud_heights: vec![self.height],
        };
        let scenery = Scenery::new(vec![air], &instrument, view);
        let mut columns = vec![Vec::with_capacity(FOOTPRINTS); channels.len()];
        for at in 0..FOOTPRINTS {
            let cover = Cover {
                particles: Particles::Ice,
                height: self.height,
                amount: self.amount,
                optical_depth: 40.0,
                scattering: 0.0,
            };
            let radiances = scenery.radiances(&Footprint {
                air: 0.0,
                view_zenith: zenith(at),
                sun_zenith: 120.0,
                surface_temperature: 295.0,
                ground: vec![(Surface::Sea, 1.0)],
                reflectivity_factor: 1.0,
                covers: if observed && is_cloudy(at) { vec![cover] } else { Vec::new() },
            });
            for (place, column) in columns.iter_mut().enumerate() {
                let at_ = channels[place].wavenumber;
                let kelvin = brightness_temperature_or_nan(at_, f64::from(radiances[place]));
                let noise = if observed { NOISE * wobble(at, place) } else { -bias(at) };
                column.push(kelvin + noise);
            }
        }
        columns
    }

    /// Runs a retrieval over the columns that it takes.
    fn run(
        &self,
        by: &dyn Retrieval,
        channels: &[Channel],
        of: Option<&Channel>,
    ) -> (Vec<Vec<f64>>, Vec<String>) {
        let observed = self.temperatures(channels, true);
        let calculated = self.temperatures(channels, false);
        let land = vec![0.0; FOOTPRINTS];
        let zeniths: Vec<f64> = (0..FOOTPRINTS).map(zenith).collect();
        let common = [&observed[0], &calculated[0], &land, &zeniths];
        let mut inputs: Vec<Option<&[f64]>> =
            common.iter().map(|column| Some(&column[..])).collect();
        assert_eq!(inputs.len(), COMMON);
        for (observed, calculated) in observed.iter().zip(&calculated).skip(1) {
            inputs.extend([Some(&observed[..]), Some(&calculated[..])]);
        }
        let found = by.run(&names(), &inputs, of);
        (found.columns, found.notes)
    }

    fn found(&self) -> Found {
        let ranked = Rankings::default().of(&names());
        let (columns, notes) = self.run(RankedChannels::shared(), &channels(&ranked), None);
        let air = Atmosphere::new(Standard::MidlatitudeSummer, &Changes::default());
        Found { columns: columns.try_into().unwrap(), notes, truth: air.pressure_at(self.height) }
    }
}

impl Found {
    /// The median over cloudy or over clear footprints.
    fn middle(&self, column: usize, cloudy: bool) -> f64 {
        let chosen = (0..FOOTPRINTS).filter(|at| is_cloudy(*at) == cloudy);
        super::bias::median(chosen.map(|at| self.columns[column][at]).collect())
    }

    fn share(&self, cloudy: bool, holds: impl Fn(f64) -> bool) -> f64 {
        let chosen: Vec<usize> = (0..FOOTPRINTS).filter(|at| is_cloudy(*at) == cloudy).collect();
        let holding = chosen.iter().filter(|at| holds(self.columns[0][**at])).count();
        holding as f64 / chosen.len() as f64
    }
}

fn made(height: f64, amount: f64) -> Made {
    Made { height, amount, believed: Changes::default() }
}

const DEPARTURE: usize = 0;
const CLEAR_SHARE: usize = 1;
const PRESSURE: usize = 2;

/// The first channel that is affected sees a little lower than the top: an opaque cloud changes it by 1 %,
/// 0.8 K, only from there on, and this one covers less and must show 0.5 K in a mean over nine ranks. Two
/// scale steps of the air, 140 hPa, are room enough.
#[test]
fn cloud_is_found_at_its_height_and_higher_cloud_higher() {
    let found: Vec<Found> =
        [2.0, 4.0, 6.0, 9.0].iter().map(|height| made(*height, 0.7).found()).collect();
    for one in &found {
        assert!(one.share(true, |departure| departure > 0.5) > 0.99);
        assert!(one.share(false, |departure| departure > 0.5) < 0.02, "{}", one.truth);
        let pressure = one.middle(PRESSURE, true);
        assert!((0.0..140.0).contains(&(pressure - one.truth)), "{pressure} {}", one.truth);
        assert_eq!(one.middle(CLEAR_SHARE, false), 1.0);
        assert!(one.notes[0].contains("taken for clear"), "{:?}", one.notes);
    }
    let falls = |column: usize| {
        found.windows(2).all(|pair| pair[0].middle(column, true) > pair[1].middle(column, true))
    };
    assert!(falls(PRESSURE) && falls(CLEAR_SHARE));
}

#[test]
fn more_cloud_departs_further_and_leaves_no_more_channels_clear() {
    let found: Vec<Found> =
        [0.1, 0.3, 1.0].iter().map(|amount| made(6.0, *amount).found()).collect();
    for pair in found.windows(2) {
        assert!(pair[0].middle(DEPARTURE, true) < pair[1].middle(DEPARTURE, true));
        assert!(pair[0].middle(CLEAR_SHARE, true) >= pair[1].middle(CLEAR_SHARE, true));
    }
}

/// A channel high above a cloud is clear, the window below it is not.
#[test]
fn channels_are_clear_or_affected_each_for_itself() {
    let ranked = Rankings::default().of(&names());
    let (high, low) = (ranked[0].channel, ranked[ranked.len() - 1].channel);
    let affected = |channel: &Channel| {
        let taken = [&channels(&ranked)[..], &[*channel]].concat();
        let (columns, _) = made(3.0, 0.8).run(RankedChannels::shared(), &taken, Some(channel));
        columns[0].clone()
    };
    let (above, below) = (affected(&high), affected(&low));
    for at in 0..FOOTPRINTS {
        assert_eq!(above[at], 0.0, "{at}");
        assert_eq!(below[at] == 1.0, is_cloudy(at), "{at}");
    }
}

/// Six hundredths of a kelvin: the median over some 90 footprints of 0.2 K of evenly spread noise is good
/// to 0.035 K, and two of them add up.
#[test]
fn the_bias_of_detectors_and_views_is_found() {
    let channel = Channel { band: 0, index: 133, wavenumber: 733.0 };
    let window = Channel { band: 0, index: 300, wavenumber: 900.0 };
    let (columns, notes) = made(5.0, 0.6).run(&Departures, &[window, channel], Some(&channel));
    for (at, (left, found)) in columns[0].iter().zip(&columns[1]).enumerate() {
        assert!((found - bias(at)).abs() < 0.06, "{at}: {found} {}", bias(at));
        assert!(is_cloudy(at) || left.abs() < 0.5, "{at}: {left}");
    }
    assert_eq!(notes.len(), 1, "{notes:?}");
}

/// Where everything is overcast nothing tells the bias but the cloud itself, and none is made up for a
/// view that has no clear footprints.
#[test]
fn without_clear_footprints_there_is_no_departure() {
    let overcast = Made { height: 4.0, amount: 1.0, believed: Changes::default() };
    let ranked = Rankings::default().of(&names());
    let channels = channels(&ranked);
    let observed = overcast.temperatures(&channels[..1], true);
    let nothing = vec![f64::NAN; FOOTPRINTS];
    let zeniths: Vec<f64> = (0..FOOTPRINTS).map(zenith).collect();
    let mut inputs: Vec<Option<&[f64]>> =
        vec![Some(&observed[0]), Some(&nothing), None, Some(&zeniths)];
    for _ in ranked.iter() {
        inputs.extend([Some(&observed[0][..]), Some(&nothing[..])]);
    }
    let found = RankedChannels::shared().run(&names(), &inputs, None);
    assert!(found.columns.iter().flatten().all(|value| value.is_nan()));
    assert!(found.notes.iter().any(|note| note.contains("fewer than 10")), "{:?}", found.notes);
}
