//! Which place of a lending file belongs to which footprint.

use rayon::prelude::*;

use super::within::Within;
use crate::granule::globe::{KdTree, Vector, chord, point};

/// How a lending file was joined to a granule.
#[derive(Debug, Clone, PartialEq)]
pub enum Join {
    /// Its dimensions are the footprints': the same names and lengths.
    Dimensions,
    /// Each footprint has the nearest place, if that is near enough.
    Nearest {
        /// How near it must be.
        within: Within,
        /// Whether times were compared as well.
        timed: bool,
        /// For each footprint the place in the lending file, or `NOWHERE`.
        numbers: Vec<u32>,
    },
}

/// No place is near enough.
const NOWHERE: u32 = u32::MAX;

/// Places of a lending file, and when they were seen.
pub struct Places<'a> {
    /// Degrees north and east.
    pub latitudes: &'a [f64],
    pub longitudes: &'a [f64],
    pub times: Times<'a>,
}

/// The times of a lending file, in seconds since 1970.
pub enum Times<'a> {
    /// It says none: all times match.
    Unknown,
    /// One for each place.
    OfPlaces(&'a [f64]),
    /// Fields of all places at each of these times, one after another.
    Steps(&'a [f64]),
}

/// Footprints that look for places.
pub struct Seekers<'a> {
    pub latitudes: &'a [f64],
    pub longitudes: &'a [f64],
    /// Seconds since 1970.
    pub times: Option<&'a [f64]>,
}

impl Join {
    /// For each footprint the nearest place within the tolerance: the nearest on the ground among
    /// those whose time is near enough; of several as near, the one with the lowest number. Where
    /// both sides know times, a footprint or place without a time matches nothing.
    pub fn nearest(places: &Places<'_>, seekers: &Seekers<'_>, within: Within) -> Self {
        let points = places.latitudes.iter().zip(places.longitudes);
        let points: Vec<(u32, Vector)> = (0..)
            .zip(points)
            .filter_map(|(number, (&latitude, &longitude))| {
                Some((number, point(latitude, longitude)?))
            })
            .collect();
        let tree = KdTree::new(points);
        let timed = seekers.times.is_some() && !matches!(places.times, Times::Unknown);
        let radius = chord(within.metres);
        let near = |one: f64, other: f64| (one - other).abs() <= within.seconds;
        let count = places.latitudes.len();
        let number = |footprint: usize| {
            let centre = point(seekers.latitudes[footprint], seekers.longitudes[footprint])?;
            let time = seekers.times.filter(|_| timed).map(|times| times[footprint]);
            match (&places.times, time) {
                (Times::OfPlaces(times), Some(time)) => {
                    tree.nearest(centre, radius, &|place| near(times[place as usize], time))
                }
                (Times::Steps(steps), Some(time)) => {
                    let step = nearest_step(steps, time).filter(|step| near(steps[*step], time))?;
                    let place = tree.nearest(centre, radius, &|_| true)?;
                    u32::try_from(step * count + place as usize).ok()
                }
                // Which of several steps is meant is not known.
                (Times::Steps(steps), None) if steps.len() > 1 => None,
                _ => tree.nearest(centre, radius, &|_| true),
            }
        };
        let footprints = 0..seekers.latitudes.len();
        let numbers =
            footprints.into_par_iter().map(|one| number(one).unwrap_or(NOWHERE)).collect();
        Self::Nearest { within, timed, numbers }
    }

    /// The place for a footprint.
    pub fn place(&self, footprint: usize) -> Option<usize> {
        match self {
            Self::Dimensions => Some(footprint),
            Self::Nearest { numbers, .. } => numbers
                .get(footprint)
                .filter(|place| **place != NOWHERE)
                .map(|place| *place as usize),
        }
    }

    /// How many of the footprints have a place.
    pub fn matched(&self, footprints: usize) -> usize {
        (0..footprints).filter(|footprint| self.place(*footprint).is_some()).count()
    }

    /// The values of places handed to the footprints; missing where there is no place.
    pub fn gather(&self, values: Vec<f64>, footprints: usize) -> Vec<f64> {
        match self {
            Self::Dimensions => values,
            Self::Nearest { .. } => {
                let value = |footprint| {
                    let place = self.place(footprint)?;
                    values.get(place).copied()
                };
                (0..footprints).map(|footprint| value(footprint).unwrap_or(f64::NAN)).collect()
            }
        }
    }

    /// In words, such as `nearest within 10 km, 15 min`.
    pub fn label(&self) -> String {
        match self {
            Self::Dimensions => "by dimensions".to_owned(),
            Self::Nearest { within, timed: true, .. } => {
                format!("by the nearest place within {within}")
            }
            Self::Nearest { within, timed: false, .. } => {
                let place = Within { seconds: 0.0, ..*within }.to_string();
                let place = place.split(',').next().unwrap_or_default();
                format!("by the nearest place within {place}, times not compared")
            }
        }
    }
}

/// The step nearest in time; of two as near, the earlier in the file.
fn nearest_step(steps: &[f64], time: f64) -> Option<usize> {
    let apart = |step: &usize| (steps[*step] - time).abs();
    let known = (0..steps.len()).filter(|step| steps[*step].is_finite() && time.is_finite());
    known.min_by(|one, other| apart(one).total_cmp(&apart(other)))
}
