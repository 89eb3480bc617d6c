//! Cloud height of every footprint.

use std::sync::OnceLock;

use rayon::prelude::*;

use super::air::Air;
use super::clear::{Layout, clear_around, warmest_around};
use super::intervals::{INTERVALS, PAIRS, WINDOW, middle};
use super::profile::Profile;
use super::slicing::{at_pressure, overcast_black, pressure};
use crate::granule::Channel;
use crate::layers::{Expression, Input, LayerUnit, Names, Retrieval, Retrieved};
use crate::spectral::{brightness_temperature_or_nan, planck};

/// What comes out, and its unit: the pressure of the top, its error, the effective amount.
pub const CLOUD_HEIGHT_NAMES: [(&str, LayerUnit); 3] = [
    ("co2_cloud_pressure", LayerUnit::Hectopascal),
    ("co2_cloud_pressure_sd", LayerUnit::Hectopascal),
    ("co2_cloud_amount", LayerUnit::One),
];

/// A cloud's forcing must exceed its own error by this factor.
const SIGNIFICANT: f64 = 3.0;
/// Below this pressure, hPa, the ratio is nearly flat and says nothing [Wylie & Menzel 1999].
const LOWEST_CLOUD: f64 = 700.0;
/// Heights with a larger error than this, hPa, are none.
const LARGEST_ERROR: f64 = 150.0;
/// Pairs that differ by more than so many standard deviations see no single layer.
const DISAGREEMENT: f64 = 3.0;
/// How far the temperatures of a given profile may be wrong, K.
const GIVEN_ERROR: f64 = 1.0;
/// Effective amounts above this contradict the height, for nothing covers more than everything.
const LARGEST_AMOUNT: f64 = 1.15;
/// View zenith angle where the file gives none, degrees.
const USUAL_ZENITH: f64 = 30.0;

/// Input layers by place.
const BRIGHT: usize = 5;
const SPREAD: usize = 6;
const LAND: usize = 7;
const LATITUDE: usize = 8;
const SEASON: usize = 9;
const ZENITH: usize = 10;

/// Cloud height by CO2 slicing, on the standard atmosphere nearest by latitude and season or on a
/// given profile.
#[derive(Debug, Default)]
pub struct CloudHeight {
    profile: Option<Profile>,
    own: OnceLock<Air>,
    inputs: OnceLock<Vec<Input>>,
}

/// A cloud's pressure and its error, hPa, and its effective amount.
type Cloud = (f64, f64, f64);

impl CloudHeight {
    /// On a profile, if one is given.
    pub fn on(profile: Option<Profile>) -> CloudHeight {
        CloudHeight { profile, ..CloudHeight::default() }
    }

    fn air(&self, latitude: f64, season: f64) -> &Air {
        match &self.profile {
            // As for the standard atmospheres, never computed while the cell is locked.
            Some(profile) => self.own.get().unwrap_or_else(|| {
                let air = Air::of(&profile.air, GIVEN_ERROR);
                self.own.get_or_init(|| air)
            }),
            None => Air::nearest(latitude, season),
        }
    }
}

impl Retrieval for CloudHeight {
    fn outputs(&self) -> &[(&'static str, LayerUnit)] {
        &CLOUD_HEIGHT_NAMES
    }

    fn inputs(&self, _: &dyn Names, _: Option<&Channel>) -> Vec<Input> {
        let inputs = self.inputs.get_or_init(|| {
            // Two of the four CO2 intervals are needed; which, is up to the file.
            let radiance = |(place, (low, high)): (usize, &(f64, f64))| {
                (format!("rad({low}..{high})"), place == WINDOW)
            };
            let mut all: Vec<(String, bool)> = INTERVALS.iter().enumerate().map(radiance).collect();
            let others =
                ["bt(899..903.7)", "sd3(bt(899..903.7))", "land", "lat", "season", "view_zenith"];
            all.extend(others.iter().enumerate().map(|(at, text)| ((*text).to_owned(), at < 2)));
            let read = |(text, needed): (String, bool)| {
                Some(Input { layer: Expression::parse(&text).ok()?, needed })
            };
            all.into_iter().filter_map(read).collect()
        });
        inputs.clone()
    }

    fn run(&self, names: &dyn Names, inputs: &[Option<&[f64]>], _: Option<&Channel>) -> Retrieved {
        let layout = Layout::of(names.lengths());
        let scene = Scene { heights: self, inputs };
        let clouds = scene.clouds(&layout, names.footprints());
        let column = |of: fn(&Cloud) -> f64| clouds.iter().map(of).collect();
        let columns =
            vec![column(|cloud| cloud.0), column(|cloud| cloud.1), column(|cloud| cloud.2)];
        Retrieved { columns, notes: vec![self.note()] }
    }
}

impl CloudHeight {
    /// What a reader of the results should know.
    pub(super) fn note(&self) -> String {
        match &self.profile {
            Some(profile) => format!("CO2 slicing on the profile {}", profile.name),
            None => {
                "CO2 slicing on the standard atmosphere nearest by latitude and season".to_owned()
            }
        }
    }
}

/// The height of the pair with the smallest error, and its error. Pairs see into different depths: below
/// a single layer they agree, of two layers those that see less deep put more weight on the upper one.
/// What they are apart by counts into the error, and where that is plainly more than noise there is no
/// height. Pairs that come out where the ratio hardly changes say nothing.
pub(super) fn agreed(pairs: Vec<(f64, f64)>) -> Option<(f64, f64)> {
    let (height, sd) = pairs.iter().copied().min_by(|one, other| one.1.total_cmp(&other.1))?;
    let others = || pairs.iter().filter(|other| other.0 <= LOWEST_CLOUD);
    let disagrees =
        |other: &&(f64, f64)| (other.0 - height).abs() > DISAGREEMENT * sd.hypot(other.1);
    let apart = others().map(|other| (other.0 - height).abs()).fold(0.0, f64::max);
    (!others().any(|other| disagrees(&other))).then_some((height, sd.hypot(apart)))
}

/// A granule's inputs.
struct Scene<'s> {
    heights: &'s CloudHeight,
    inputs: &'s [Option<&'s [f64]>],
}

/// What is clear around one footprint, as departures from what is calculated.
struct Around {
    /// By interval: mean and spread.
    departures: Vec<(f64, f64)>,
}

impl Scene<'_> {
    fn input(&self, place: usize, at: usize) -> f64 {
        self.inputs[place].and_then(|column| column.get(at)).copied().unwrap_or(f64::NAN)
    }

    fn air(&self, at: usize) -> &Air {
        self.heights.air(self.input(LATITUDE, at), self.input(SEASON, at))
    }

    fn zenith(&self, at: usize) -> f64 {
        let zenith = self.input(ZENITH, at);
        if zenith.is_nan() { USUAL_ZENITH } else { zenith }
    }

    fn clouds(&self, layout: &Layout, footprints: usize) -> Vec<Cloud> {
        // Sea and land are compared each with its own; ground that is not known counts as one.
        let kinds: Vec<u8> =
            (0..footprints).map(|at| u8::from(self.input(LAND, at) >= 0.1)).collect();
        let bright: Vec<f64> = (0..footprints).map(|at| self.input(BRIGHT, at)).collect();
        let warmest = warmest_around(layout, &bright, &kinds);
        let clear: Vec<bool> =
            (0..footprints).map(|at| self.is_clear(at, kinds[at], warmest[at])).collect();
        let departures: Vec<Vec<f64>> = (0..footprints)
            .into_par_iter()
            .map(|at| {
                let calculated = self.air(at).clear(self.zenith(at));
                (0..INTERVALS.len())
                    .map(|place| self.input(place, at) - calculated[place])
                    .collect()
            })
            .collect();
        let around: Vec<Vec<(f64, f64)>> = (0..INTERVALS.len())
            .map(|interval| {
                let values: Vec<f64> = departures.iter().map(|all| all[interval]).collect();
                let whole: Vec<bool> = clear
                    .iter()
                    .zip(&values)
                    .map(|(clear, value)| *clear && !value.is_nan())
                    .collect();
                clear_around(layout, &values, &whole, &kinds)
            })
            .collect();
        (0..footprints)
            .into_par_iter()
            .map(|at| {
                let around = Around { departures: around.iter().map(|all| all[at]).collect() };
                self.cloud(at, &departures[at], &around).unwrap_or((f64::NAN, f64::NAN, f64::NAN))
            })
            .collect()
    }

    /// Nearly as warm as the warmest around, even, and not far colder than the air at the ground.
    fn is_clear(&self, at: usize, kind: u8, warmest: f64) -> bool {
        let (colder, spread) = if kind == 0 { (2.0, 0.5) } else { (4.0, 1.5) };
        let bright = self.input(BRIGHT, at);
        bright >= warmest - colder
            && self.input(SPREAD, at) <= spread
            && bright >= self.air(at).temperatures.first().copied().unwrap_or(0.0) - 25.0
    }

    /// The best of the pairs.
    fn cloud(&self, at: usize, departures: &[f64], around: &Around) -> Option<Cloud> {
        let air = self.air(at);
        let forcing: Vec<f64> = (0..INTERVALS.len())
            .map(|interval| departures[interval] - around.departures[interval].0)
            .collect();
        // The footprint's own noise and that of the clear ones, whose spread is noise and scene.
        let error = |interval: usize| 1.5 * around.departures[interval].1;
        let counts = |interval: usize| forcing[interval] < -SIGNIFICANT * error(interval);
        let candidates: Vec<_> =
            PAIRS.iter().filter(|pair| counts(pair.0) && counts(pair.1)).collect();
        if candidates.is_empty() {
            return None;
        }
        let modes = Curves::of(air, self.zenith(at), &around.departures);
        let heights = candidates.into_iter().filter_map(|(one, other)| {
            let solve = |mode: &Curves, shift: (f64, f64)| {
                let ratio = (forcing[*one] + shift.0) / (forcing[*other] + shift.1);
                let curves = (&mode.curves[*one][..], &mode.curves[*other][..]);
                pressure(&air.pressures, curves, air.tropopause, ratio).ok()
            };
            let height = solve(&modes[0], (0.0, 0.0))?;
            let from = |shift: (f64, f64)| {
                let back = (-shift.0, -shift.1);
                let (up, down) = (solve(&modes[0], shift), solve(&modes[0], back));
                // Where one side has no height, the other counts for both.
                let steps = [up, down].map(|found| found.map(|found| (found - height).powi(2)));
                steps.into_iter().flatten().reduce(f64::max)
            };
            let noise = from((error(*one), 0.0))? + from((0.0, error(*other)))?;
            let moved =
                |mode: &Curves| solve(mode, (0.0, 0.0)).map(|found| (found - height).powi(2));
            let of_air: f64 = modes[1..].iter().filter_map(moved).sum();
            let lost = modes[1..].iter().any(|mode| moved(mode).is_none());
            (!lost).then_some((height, (noise + of_air).sqrt()))
        });
        let (height, sd) = agreed(heights.collect())?;
        let taken = at_pressure(&air.pressures, &modes[0].curves[WINDOW], height);
        let amount = forcing[WINDOW] / taken;
        let sound = height <= LOWEST_CLOUD
            && sd <= LARGEST_ERROR
            && amount > 0.0
            && amount <= LARGEST_AMOUNT;
        sound.then_some((height, sd, amount.min(1.0)))
    }
}

/// What an opaque cloud at each level takes, by interval.
struct Curves {
    curves: Vec<Vec<f64>>,
}

impl Curves {
    /// For each way in which the air's temperatures may be wrong, the first of which is none. The ground
    /// is as warm as the clear window says.
    fn of(air: &Air, zenith: f64, departures: &[(f64, f64)]) -> Vec<Curves> {
        let transmittances = air.transmittances(zenith);
        let passes = transmittances[WINDOW][0].max(0.05);
        let window = air.black()[0][WINDOW][0] + departures[WINDOW].0 / passes;
        let ground = brightness_temperature_or_nan(middle(WINDOW), window);
        let grounds: Vec<f64> =
            (0..INTERVALS.len()).map(|interval| planck(middle(interval), ground)).collect();
        let curves = |black: &Vec<Vec<f64>>| {
            let curve = |interval: usize| {
                let jump = grounds[interval] - black[interval][0];
                overcast_black(&black[interval], &transmittances[interval], jump)
            };
            Curves { curves: (0..INTERVALS.len()).map(curve).collect() }
        };
        air.black().iter().map(curves).collect()
    }
}
