//! Optical depth of a layer on the fine grid: line by line, plus what varies slowly.
//!
//! A line's core is summed on the fine grid, its wings on a coarser one that is interpolated:
//! between the two the wing is continued inwards by a parabola that meets it in value and slope,
//! and the core is what is left. That is about ten times cheaper than wings on the fine grid.

use super::atmosphere::Layer;
use super::continuum;
use super::gas::Gas;
use super::grid::Grid;
use super::line::{self, Line};

/// Spacing of the wings' grid, cm-1.
const WING_STEP: f64 = 0.1;
/// An absorber whose optical depth at the line centre stays below this is left out.
const NEGLIGIBLE: f64 = 1e-6;

/// Optical depth along the vertical of one layer at every point of the grid.
pub fn optical_depth(grid: &Grid, layer: &Layer) -> Vec<f32> {
    let factor = wing_factor(grid);
    let coarse_grid = grid.coarser(factor);
    let mut coarse = continuum::optical_depth(&coarse_grid, layer);
    let mut fine = vec![0.0f32; grid.count];
    let reach = LONGEST_REACH;
    for line in line::between(grid.start - reach, coarse_grid.end() + reach) {
        add_line(line, layer, grid, &coarse_grid, &mut fine, &mut coarse);
    }
    grid.add_interpolated(factor, &coarse, &mut fine);
    for value in &mut fine {
        // Cores are differences; rounding may leave a trace below zero.
        *value = value.max(0.0);
    }
    fine
}

/// How much coarser the wings' grid is.
fn wing_factor(grid: &Grid) -> usize {
    (WING_STEP / grid.step).round().max(1.0) as usize
}

/// Wings are cut here, cm-1 (Clough, Kneizys & Davies 1989 for water).
const LONGEST_REACH: f64 = 25.0;

fn reach(gas: Gas) -> f64 {
    match gas {
        Gas::H2o | Gas::Co2 => LONGEST_REACH,
        _ => 12.0,
    }
}

/// Far wings of CO2 fall faster than a Lorentz line: factor on the wing at a distance (cm-1).
fn wing_decay(gas: Gas, distance: f64) -> f64 {
    const FROM: f64 = 2.0;
    const SCALE: f64 = 4.0;
    if gas == Gas::Co2 && distance > FROM { ((FROM - distance) / SCALE).exp() } else { 1.0 }
}

fn add_line(
    line: &Line,
    layer: &Layer,
    grid: &Grid,
    coarse_grid: &Grid,
    fine: &mut [f32],
    coarse: &mut [f32],
) {
    let amount = layer.column[line.gas.index()];
    let lorentz = line.lorentz_half_width(layer.pressure, layer.temperature);
    let area = line.strength_at(layer.temperature) * amount;
    let shape = Voigt::new(lorentz, line.doppler_half_width(layer.temperature), grid.step);
    if area * shape.peak() < NEGLIGIBLE {
        return;
    }
    let core = (20.0 * lorentz).clamp(0.2, 1.0);
    let edge = area * lorentz / std::f64::consts::PI / (core * core + lorentz * lorentz);
    if edge > NEGLIGIBLE {
        add_wing(line, area, lorentz, core, edge, coarse_grid, coarse);
    }
    add_core(
        line.centre,
        area,
        &shape,
        core,
        if edge > NEGLIGIBLE { edge } else { 0.0 },
        grid,
        fine,
    );
}

/// The wing outside `core`, and inside it the parabola that continues it.
fn add_wing(
    line: &Line,
    area: f64,
    lorentz: f64,
    core: f64,
    edge: f64,
    grid: &Grid,
    values: &mut [f32],
) {
    let reach = reach(line.gas);
    let scale = area * lorentz / std::f64::consts::PI;
    let square = lorentz * lorentz;
    // The wing reaches zero at its cut, so that no step is left there.
    let pedestal = scale / (reach * reach + square) * wing_decay(line.gas, reach);
    let range = grid.around(line.centre, reach);
    for (offset, value) in values[range.clone()].iter_mut().enumerate() {
        let distance = (grid.at(range.start + offset) - line.centre).abs();
        let wing = if distance < core {
            let inside = distance / core;
            edge * (2.0 - inside * inside)
        } else {
            scale / (distance * distance + square) * wing_decay(line.gas, distance)
        };
        *value += (wing - pedestal) as f32;
    }
}

/// What the parabola lacks to the Voigt profile inside `core`.
fn add_core(
    centre: f64,
    area: f64,
    shape: &Voigt,
    core: f64,
    edge: f64,
    grid: &Grid,
    values: &mut [f32],
) {
    let range = grid.around(centre, core);
    if range.is_empty() {
        return;
    }
    let first = (grid.at(range.start) - centre) as f32;
    let step = grid.step as f32;
    let width = (shape.half_width * shape.half_width) as f32;
    let scale = (area * shape.lorentz_share * shape.half_width / std::f64::consts::PI) as f32;
    let (edge, inverse_core) = (edge as f32, 1.0 / (core * core) as f32);
    for (index, value) in values[range.clone()].iter_mut().enumerate() {
        let distance = first + step * index as f32;
        let square = distance * distance;
        *value += scale / (square + width) - edge * (2.0 - square * inverse_core);
    }
    // The Gaussian part is gone four half widths from the centre.
    let near = grid.around(centre, (4.0 * shape.half_width).min(core));
    let gauss = area * (1.0 - shape.lorentz_share) * shape.gauss_peak();
    for (offset, value) in values[near.clone()].iter_mut().enumerate() {
        let distance = (grid.at(near.start + offset) - centre) / shape.half_width;
        *value += (gauss * (-std::f64::consts::LN_2 * distance * distance).exp()) as f32;
    }
}

/// A Voigt profile as a sum of a Lorentz and a Gauss curve of one common width.
///
/// Source: Thompson, Cox & Hastings 1987, J. Appl. Cryst. 20, 79.
struct Voigt {
    /// Common half width at half maximum, cm-1.
    half_width: f64,
    lorentz_share: f64,
}

impl Voigt {
    /// From both half widths (cm-1). A line narrower than the grid would be hit or missed by
    /// chance, so the Gaussian width is held at 0.6 grid steps or more: same area, wider core.
    fn new(lorentz: f64, doppler: f64, step: f64) -> Voigt {
        let gauss = doppler.max(0.6 * step);
        let (g, l) = (gauss, lorentz);
        let half_width = (g.powi(5)
            + 2.69269 * g.powi(4) * l
            + 2.42843 * g.powi(3) * l.powi(2)
            + 4.47163 * g.powi(2) * l.powi(3)
            + 0.07842 * g * l.powi(4)
            + l.powi(5))
        .powf(0.2);
        let ratio = l / half_width;
        let lorentz_share = 1.36603 * ratio - 0.47719 * ratio.powi(2) + 0.11116 * ratio.powi(3);
        Voigt { half_width, lorentz_share }
    }

    fn gauss_peak(&self) -> f64 {
        (std::f64::consts::LN_2 / std::f64::consts::PI).sqrt() / self.half_width
    }

    /// Value at the centre for unit area, cm.
    fn peak(&self) -> f64 {
        self.lorentz_share / (std::f64::consts::PI * self.half_width)
            + (1.0 - self.lorentz_share) * self.gauss_peak()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_width_is_that_of_a_voigt_profile() {
        // 0.5346 gL + sqrt(0.2166 gL^2 + gD^2), good to 0.02 % (Olivero & Longbothum 1977,
        // JQSRT 17, 233); the sum of curves is good to about 1 %.
        for (lorentz, doppler) in [(0.07f64, 0.01f64), (0.02, 0.02), (0.01, 0.05)] {
            let expected = 0.5346 * lorentz + (0.2166 * lorentz.powi(2) + doppler.powi(2)).sqrt();
            let found = Voigt::new(lorentz, doppler, 1e-4).half_width;
            assert!((found / expected - 1.0).abs() < 0.01, "{found} {expected}");
        }
    }

    #[test]
    fn a_line_keeps_its_area() {
        let line = Line {
            gas: Gas::Co,
            centre: 2143.3031,
            strength: 1e-19,
            lower_energy: 0.0,
            width: 0.06,
            width_exponent: 0.7,
        };
        for pressure in [1.0, 0.1, 0.005] {
            let mut column = [0.0; Gas::ALL.len()];
            column[Gas::Co.index()] = 1e18;
            let layer = Layer { pressure, temperature: 296.0, water_pressure: 0.0, column };
            let grid = Grid::covering(2123.0, 2163.0, 0.0125);
            let coarse_grid = grid.coarser(wing_factor(&grid));
            let (mut fine, mut coarse) = (vec![0.0; grid.count], vec![0.0; coarse_grid.count]);
            add_line(&line, &layer, &grid, &coarse_grid, &mut fine, &mut coarse);
            grid.add_interpolated(wing_factor(&grid), &coarse, &mut fine);
            let area: f64 = fine.iter().map(|v| f64::from(*v)).sum::<f64>() * grid.step;
            // Beyond 12 cm-1 lies 2 gamma/(12 pi) = 0.3 % of the area at 1 atm, and as much again
            // goes with the pedestal; interpolating the wings adds less than 1 %.
            assert!((area / 0.1 - 1.0).abs() < 0.015, "{pressure} {area}");
        }
    }
}
