//! Radiative transfer through a column of air, convolved to channels.
//!
//! `I = eps B(Ts) + (1 - eps) Idown`, then for each layer upward
//! `I = I exp(-tau) + B (1 - exp(-tau))` (Liou 2002, ch. 4). Everything that a footprint may vary
//! (surface, clouds, sun) enters that sum linearly, so that the parts are convolved once and
//! mixed later: what the air above a level emits and transmits, and what reaches the ground.

use rayon::prelude::*;

use super::atmosphere::{Atmosphere, Level};
use super::exponential::exp;
use super::grid::Grid;
use super::opacity::optical_depth;
use super::response::{Response, Weights};
use crate::spectral::planck;

/// Spacing of the fine grid, cm-1: a divisor of every interferometer's channel spacing.
const FINE_STEP: f64 = 0.0125;
/// Spacing where channels look into the stratosphere, whose lines are narrower.
const FINEST_STEP: f64 = 0.0025;
/// Where that is, cm-1: the strong part of the 15 um band.
const FINEST: (f64, f64) = (648.0, 744.0);
/// Channels are worked on in pieces of about this width, cm-1, so that memory stays bounded.
const PIECE: f64 = 40.0;
/// Diffusivity: the downward flux behaves like a beam at 53 degrees.
const DIFFUSE_SECANT: f64 = 1.66;
/// Mean radius of the Earth, km.
const EARTH_RADIUS: f64 = 6371.0;

/// Channels of an instrument with their response.
#[derive(Debug, Clone, PartialEq)]
pub struct Channel {
    /// Centre, cm-1.
    pub wavenumber: f64,
    /// Shape.
    pub response: Response,
}

/// What to compute a column for.
#[derive(Debug, Clone, PartialEq)]
pub struct View {
    /// View zenith angles at the ground, degrees.
    pub zenith_angles: Vec<f64>,
    /// Sun's zenith angle, degrees; `None` by night.
    pub sun_zenith: Option<f64>,
    /// Heights at which clouds may have their tops, km, ascending.
    pub cloud_heights: Vec<f64>,
}

/// The parts of the radiance that leaves the column under one angle, per channel.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Column {
    /// What the whole air emits upward, mW m-2 sr-1 (cm-1)-1.
    pub emission: Vec<f32>,
    /// Transmittance from the ground to space.
    pub transmittance: Vec<f32>,
    /// Sky radiance at the ground times transmittance, mW m-2 sr-1 (cm-1)-1.
    pub sky: Vec<f32>,
    /// Transmittance from the sun to the ground and up to space; empty by night.
    pub sun: Vec<f32>,
    /// The same above each cloud height.
    pub above: Vec<Above>,
}

/// The air above one height.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Above {
    /// What it emits upward, mW m-2 sr-1 (cm-1)-1.
    pub emission: Vec<f32>,
    /// Its transmittance.
    pub transmittance: Vec<f32>,
}

/// Columns of one atmosphere: one for each zenith angle of `view`, over all `channels`.
///
/// Channels may come in any order; each piece of the spectrum is computed once.
pub fn columns(air: &Atmosphere, channels: &[Channel], view: &View) -> Vec<Column> {
    let pieces = pieces(channels);
    let parts: Vec<Vec<Column>> =
        pieces.par_iter().map(|piece| piece_columns(air, channels, piece, view)).collect();
    let mut columns = empty(channels.len(), view);
    for (piece, part) in pieces.iter().zip(parts) {
        for (column, part) in columns.iter_mut().zip(part) {
            scatter(column, &part, piece);
        }
    }
    columns
}

/// Indices of channels that lie close together, ascending in wavenumber.
fn pieces(channels: &[Channel]) -> Vec<Vec<usize>> {
    let mut order: Vec<usize> = (0..channels.len()).collect();
    order.sort_by(|a, b| channels[*a].wavenumber.total_cmp(&channels[*b].wavenumber));
    let mut pieces: Vec<Vec<usize>> = Vec::new();
    let mut start = f64::NEG_INFINITY;
    for index in order {
        let wavenumber = channels[index].wavenumber;
        match pieces.last_mut() {
            Some(piece) if wavenumber - start < PIECE => piece.push(index),
            _ => {
                start = wavenumber;
                pieces.push(vec![index]);
            }
        }
    }
    pieces
}

fn empty(channels: usize, view: &View) -> Vec<Column> {
    let zeros = || vec![0.0; channels];
    let above = Above { emission: zeros(), transmittance: zeros() };
    let column = Column {
        emission: zeros(),
        transmittance: zeros(),
        sky: zeros(),
        sun: if view.sun_zenith.is_some() { zeros() } else { Vec::new() },
        above: vec![above; view.cloud_heights.len()],
    };
    vec![column; view.zenith_angles.len()]
}

fn scatter(whole: &mut Column, part: &Column, piece: &[usize]) {
    let copy = |to: &mut [f32], from: &[f32]| {
        for (index, value) in piece.iter().zip(from) {
            to[*index] = *value;
        }
    };
    copy(&mut whole.emission, &part.emission);
    copy(&mut whole.transmittance, &part.transmittance);
    copy(&mut whole.sky, &part.sky);
    if !part.sun.is_empty() {
        copy(&mut whole.sun, &part.sun);
    }
    for (to, from) in whole.above.iter_mut().zip(&part.above) {
        copy(&mut to.emission, &from.emission);
        copy(&mut to.transmittance, &from.transmittance);
    }
}

/// Fine-grid state of one piece of the spectrum.
struct Piece {
    /// Optical depth of each layer along the vertical.
    depths: Vec<Vec<f32>>,
    /// Planck radiance of each layer's mean temperature and of each level.
    layer_source: Vec<Vec<f32>>,
    level_source: Vec<Vec<f32>>,
    weights: Vec<Weights>,
    points: usize,
}

fn piece_columns(
    air: &Atmosphere,
    channels: &[Channel],
    piece: &[usize],
    view: &View,
) -> Vec<Column> {
    let reach = |index: &usize| {
        let channel = &channels[*index];
        let reach = channel.response.reach(channel.wavenumber);
        (channel.wavenumber - reach, channel.wavenumber + reach)
    };
    let low = piece.iter().map(|index| reach(index).0).fold(f64::INFINITY, f64::min);
    let high = piece.iter().map(|index| reach(index).1).fold(0.0, f64::max);
    let stratosphere = low < FINEST.1 && high > FINEST.0;
    let step = if stratosphere { FINEST_STEP } else { FINE_STEP };
    let grid = Grid::covering(low, high, step);
    let layers = air.layers();
    let state = Piece {
        depths: layers.iter().map(|layer| optical_depth(&grid, layer)).collect(),
        layer_source: layers.iter().map(|layer| source(&grid, layer.temperature)).collect(),
        level_source: air.levels().iter().map(|level| source(&grid, level.temperature)).collect(),
        weights: piece
            .iter()
            .map(|index| {
                Weights::new(&channels[*index].response, channels[*index].wavenumber, &grid)
            })
            .collect(),
        points: grid.count,
    };
    let sky = state.sky();
    view.zenith_angles.iter().map(|angle| state.column(air, *angle, &sky, view)).collect()
}

/// Planck radiance on the grid; smooth enough to be interpolated from every 0.4 cm-1.
fn source(grid: &Grid, temperature: f64) -> Vec<f32> {
    const FACTOR: usize = 32;
    let coarse = grid.coarser(FACTOR);
    let values: Vec<f32> =
        (0..coarse.count).map(|i| planck(coarse.at(i), temperature) as f32).collect();
    let mut fine = vec![0.0; grid.count];
    grid.add_interpolated(FACTOR, &values, &mut fine);
    fine
}

impl Piece {
    /// Radiance that the air sends down to the ground.
    fn sky(&self) -> Vec<f32> {
        let mut radiance = vec![0.0f32; self.points];
        for layer in (0..self.depths.len()).rev() {
            let (mean, exit) = (&self.layer_source[layer], &self.level_source[layer]);
            for (i, radiance) in radiance.iter_mut().enumerate() {
                let depth = self.depths[layer][i] * DIFFUSE_SECANT as f32;
                let transmittance = exp(-depth);
                *radiance = *radiance * transmittance
                    + (1.0 - transmittance) * toward(mean[i], exit[i], depth);
            }
        }
        radiance
    }

    fn column(&self, air: &Atmosphere, angle: f64, sky: &[f32], view: &View) -> Column {
        let mut column = Column::default();
        let mut emission = vec![0.0f32; self.points];
        let mut transmittance = vec![1.0f32; self.points];
        let levels = air.levels();
        let mut above: Vec<Above> = Vec::new();
        for layer in (0..self.depths.len()).rev() {
            // A cloud top between two levels is put at the upper one; heights are given at levels.
            for height in view.cloud_heights.iter().rev().skip(above.len()) {
                if *height < levels[layer + 1].height - 1e-6 {
                    break;
                }
                above.push(self.above(&emission, &transmittance));
            }
            let secant = slant(&levels[layer], angle);
            self.descend(layer, secant, &mut emission, &mut transmittance);
        }
        while above.len() < view.cloud_heights.len() {
            above.push(self.above(&emission, &transmittance));
        }
        above.reverse();
        column.above = above;
        column.emission = self.convolve(&emission);
        column.transmittance = self.convolve(&transmittance);
        let reflected: Vec<f32> = sky.iter().zip(&transmittance).map(|(a, b)| a * b).collect();
        column.sky = self.convolve(&reflected);
        if let Some(sun) = view.sun_zenith {
            column.sun = self.convolve(&self.sunlit(&transmittance, sun));
        }
        column
    }

    /// Adds one layer below those already counted.
    fn descend(&self, layer: usize, secant: f64, emission: &mut [f32], transmittance: &mut [f32]) {
        let (mean, exit) = (&self.layer_source[layer], &self.level_source[layer + 1]);
        let depths = &self.depths[layer];
        let secant = secant as f32;
        for i in 0..self.points {
            let depth = depths[i] * secant;
            let passes = exp(-depth);
            emission[i] += transmittance[i] * (1.0 - passes) * toward(mean[i], exit[i], depth);
            transmittance[i] *= passes;
        }
    }

    /// Two-way transmittance of sunlight that the ground reflects.
    fn sunlit(&self, upward: &[f32], sun_zenith: f64) -> Vec<f32> {
        // Spherical air: a low sun's path stays finite.
        let secant = (1.0 / sun_zenith.to_radians().cos().max(0.05)).min(12.0) as f32;
        let mut depth = vec![0.0f32; self.points];
        for layer in &self.depths {
            for (sum, value) in depth.iter_mut().zip(layer) {
                *sum += value;
            }
        }
        depth.iter().zip(upward).map(|(depth, up)| exp(-depth * secant) * up).collect()
    }

    fn above(&self, emission: &[f32], transmittance: &[f32]) -> Above {
        Above { emission: self.convolve(emission), transmittance: self.convolve(transmittance) }
    }

    fn convolve(&self, values: &[f32]) -> Vec<f32> {
        self.weights.iter().map(|weights| weights.apply(values)).collect()
    }
}

/// Source of a layer that is not isothermal: the mean where it is thin, the side that faces the
/// viewer where it is thick. Source: Clough, Iacono & Moncet 1992, JGR 97, 15761.
#[inline(always)]
fn toward(mean: f32, exit: f32, depth: f32) -> f32 {
    let lean = 0.193 * depth + 0.013 * depth * depth;
    (mean + lean * exit) / (1.0 + lean)
}

/// Secant of the ray at a level, for a view zenith angle at the ground (degrees); round Earth.
fn slant(level: &Level, zenith_angle: f64) -> f64 {
    let sine = zenith_angle.to_radians().sin() * EARTH_RADIUS / (EARTH_RADIUS + level.height);
    1.0 / (1.0 - sine * sine).sqrt()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::forward::{Changes, Standard};

    fn window(wavenumbers: &[f64]) -> Vec<Channel> {
        wavenumbers
            .iter()
            .map(|nu| Channel { wavenumber: *nu, response: Response::Box { width: 1.0 } })
            .collect()
    }

    fn night(angles: &[f64]) -> View {
        View { zenith_angles: angles.to_vec(), sun_zenith: None, cloud_heights: vec![2.0, 10.0] }
    }

    #[test]
    fn channels_in_any_order_give_the_same() {
        let air = Atmosphere::new(Standard::UsStandard, &Changes::default());
        let forward = columns(&air, &window(&[700.0, 720.0, 760.0]), &night(&[0.0]));
        let backward = columns(&air, &window(&[760.0, 720.0, 700.0]), &night(&[0.0]));
        // Pieces start elsewhere, so that f32 sums may differ in the last digits.
        for (a, b) in [(0, 2), (1, 1), (2, 0)] {
            assert!((forward[0].emission[a] / backward[0].emission[b] - 1.0).abs() < 1e-4);
        }
    }

    #[test]
    fn an_isothermal_closed_box_is_a_black_body() {
        // Emission plus transmittance times the same Planck radiance is that radiance again
        // (Kirchhoff); 1e-4 covers f32 sums over 50 layers and 80 points.
        let mut air = Atmosphere::new(Standard::UsStandard, &Changes::default());
        air.make_isothermal(260.0);
        let channels = window(&[667.5, 900.0, 1306.0, 2350.0]);
        for column in columns(&air, &channels, &night(&[0.0, 50.0])) {
            for (index, channel) in channels.iter().enumerate() {
                let black = planck(channel.wavenumber, 260.0) as f32;
                let total = column.emission[index] + column.transmittance[index] * black;
                assert!((total / black - 1.0).abs() < 5e-4, "{}", channel.wavenumber);
            }
        }
    }

    #[test]
    fn air_above_a_cloud_is_part_of_the_whole() {
        let air = Atmosphere::new(Standard::Tropical, &Changes::default());
        let column = &columns(&air, &window(&[720.0, 900.0]), &night(&[30.0]))[0];
        for index in 0..2 {
            assert!(column.above[1].transmittance[index] >= column.above[0].transmittance[index]);
            assert!(column.above[0].transmittance[index] >= column.transmittance[index]);
            assert!(column.above[1].emission[index] <= column.emission[index]);
        }
    }
}
