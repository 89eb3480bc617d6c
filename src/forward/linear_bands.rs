//! Vibration-rotation bands of the linear molecules CO2, N2O and CO, line by line.
//!
//! Constants: Herzberg 1945; B of CO2 from Klarenaar et al. 2017; CO from Guelachvili et al.
//! 1983; strengths after the HITRAN compilations (Rothman et al. 2005, JQSRT 96, 139), good to
//! about 10 % and 0.02 cm-1.

use super::gas::Gas;
use super::line::{Line, REFERENCE_TEMPERATURE};
use crate::spectral::constants::C2;

/// Which transitions a band has, and their Hönl-London factors.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Shape {
    /// P and R branches; no Q.
    Parallel,
    /// P, Q and R branches.
    Perpendicular,
}

/// Which rotational levels of the lower state exist.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Levels {
    /// Sigma levels of CO2: oxygen without spin allows even J only.
    Even,
    /// Everything else.
    All,
}

struct Band {
    gas: Gas,
    shape: Shape,
    levels: Levels,
    /// Band centre, cm-1.
    centre: f64,
    /// Vibrational energy of the lower state, cm-1.
    energy: f64,
    /// Rotational constant of the lower and upper state, cm-1.
    rotation: (f64, f64),
    /// Centrifugal constant, cm-1.
    distortion: f64,
    /// Sum of all line strengths at 296 K, cm-1/(molecule cm-2).
    strength: f64,
    width: f64,
    width_exponent: f64,
}

const CO2_D: f64 = 1.33e-7;
const N2O_D: f64 = 1.76e-7;

const fn co2(
    shape: Shape,
    levels: Levels,
    centre: f64,
    energy: f64,
    rotation: (f64, f64),
    strength: f64,
) -> Band {
    Band {
        gas: Gas::Co2,
        shape,
        levels,
        centre,
        energy,
        rotation,
        distortion: CO2_D,
        strength,
        width: 0.078,
        width_exponent: 0.72,
    }
}

const fn n2o(centre: f64, energy: f64, rotation: (f64, f64), strength: f64) -> Band {
    Band {
        gas: Gas::N2o,
        shape: Shape::Parallel,
        levels: Levels::All,
        centre,
        energy,
        rotation,
        distortion: N2O_D,
        strength,
        width: 0.075,
        width_exponent: 0.75,
    }
}

use Levels::{All, Even};
use Shape::{Parallel, Perpendicular};

/// The bands of science: fundamental, hot, isotopic and "laser" bands.
const BANDS: &[Band] = &[
    co2(Perpendicular, Even, 667.380, 0.0, (0.39022, 0.39064), 8.0e-18),
    co2(Perpendicular, All, 667.75, 667.38, (0.39064, 0.39120), 6.4e-19),
    co2(Perpendicular, All, 618.03, 667.38, (0.39064, 0.39048), 1.4e-19),
    co2(Perpendicular, All, 720.81, 667.38, (0.39064, 0.38971), 1.9e-19),
    co2(Perpendicular, Even, 648.48, 0.0, (0.39024, 0.39060), 8.2e-20),
    co2(Perpendicular, All, 741.70, 1335.0, (0.39167, 0.38970), 7.6e-21),
    co2(Perpendicular, Even, 791.45, 1285.4, (0.39048, 0.38930), 1.2e-21),
    co2(Parallel, Even, 960.96, 1388.2, (0.39020, 0.38714), 2.2e-22),
    co2(Parallel, Even, 1063.73, 1285.4, (0.39048, 0.38714), 2.6e-22),
    co2(Parallel, Even, 2349.14, 0.0, (0.39022, 0.38714), 9.2e-17),
    co2(Parallel, All, 2336.63, 667.38, (0.39064, 0.38760), 7.1e-18),
    co2(Parallel, Even, 2283.49, 0.0, (0.39024, 0.38730), 9.6e-19),
    n2o(1284.90, 0.0, (0.41901, 0.41726), 8.3e-18),
    n2o(2223.76, 0.0, (0.41901, 0.41556), 5.0e-17),
    Band {
        gas: Gas::Co,
        shape: Parallel,
        levels: All,
        centre: 2143.27,
        energy: 0.0,
        rotation: (1.92253, 1.90503),
        distortion: 6.12e-6,
        strength: 9.8e-18,
        width: 0.060,
        width_exponent: 0.70,
    },
];

/// Highest rotational level; beyond it the population is below 1e-9 of the strongest.
const HIGHEST_J: u32 = 130;

/// The lines of all bands.
pub(super) fn lines() -> Vec<Line> {
    BANDS.iter().flat_map(band_lines).collect()
}

fn band_lines(band: &Band) -> Vec<Line> {
    let mut lines: Vec<Line> = (0..=HIGHEST_J)
        .filter(|j| band.levels == All || j % 2 == 0)
        .flat_map(|j| [-1, 0, 1].map(|step| transition(band, j, step)))
        .flatten()
        .collect();
    let sum: f64 = lines.iter().map(|line| line.strength).sum();
    for line in &mut lines {
        line.strength *= band.strength / sum;
    }
    lines
}

/// The line from lower level `j` by `step` (-1 P, 0 Q, +1 R); its strength not yet normalised.
fn transition(band: &Band, j: u32, step: i32) -> Option<Line> {
    let weight = hoenl_london(band.shape, f64::from(j), step)?;
    let upper = f64::from(i32::try_from(j).ok()? + step);
    // A bending state has one quantum of angular momentum: no upper level with J = 0.
    let lowest = if band.shape == Perpendicular { 1.0 } else { 0.0 };
    if upper < lowest || weight <= 0.0 {
        return None;
    }
    let term = |b: f64, j: f64| b * j * (j + 1.0) - band.distortion * (j * (j + 1.0)).powi(2);
    let lower_term = term(band.rotation.0, f64::from(j));
    let centre = band.centre + term(band.rotation.1, upper) - lower_term;
    let population = (-C2 * lower_term / REFERENCE_TEMPERATURE).exp();
    Some(Line {
        gas: band.gas,
        centre,
        strength: weight * population * centre / band.centre,
        lower_energy: band.energy + lower_term,
        width: band.width,
        width_exponent: band.width_exponent,
    })
}

/// Hönl-London factors, which sum to 2J+1. Source: Herzberg 1945.
fn hoenl_london(shape: Shape, j: f64, step: i32) -> Option<f64> {
    match (shape, step) {
        (Parallel, -1) => Some(j),
        (Parallel, 1) => Some(j + 1.0),
        (Perpendicular, -1) => Some((j - 1.0) / 2.0),
        (Perpendicular, 0) => Some((2.0 * j + 1.0) / 2.0),
        (Perpendicular, 1) => Some((j + 2.0) / 2.0),
        _ => None,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn band(centre: f64) -> &'static Band {
        BANDS.iter().find(|band| band.centre == centre).unwrap()
    }

    #[test]
    fn factors_sum_to_the_degeneracy() {
        for j in [1.0, 2.0, 17.0, 40.0] {
            for shape in [Parallel, Perpendicular] {
                let sum: f64 =
                    [-1, 0, 1].iter().filter_map(|step| hoenl_london(shape, j, *step)).sum();
                assert!((sum - (2.0 * j + 1.0)).abs() < 1e-12);
            }
        }
    }

    #[test]
    fn lines_of_the_fifteen_micrometre_band_lie_four_b_apart() {
        // 4 B = 1.56 cm-1 for even J (Herzberg 1945); B changes by 0.1 % between the states.
        let lines = band_lines(band(667.380));
        let at = |j: f64, side: f64| {
            let energy = j * (j + 1.0) * 0.39022 - CO2_D * (j * (j + 1.0)).powi(2);
            lines
                .iter()
                .find(|l| (l.lower_energy - energy).abs() < 1e-6 && (l.centre - 667.4) * side > 2.0)
                .unwrap()
                .centre
        };
        let (r_side, p_side) = (at(12.0, 1.0) - at(10.0, 1.0), at(10.0, -1.0) - at(12.0, -1.0));
        // B' > B" spreads the R branch and crowds the P branch alike, by 48 (B' - B") = 0.02.
        assert!((0.5 * (r_side + p_side) - 1.56).abs() < 0.005, "{r_side} {p_side}");
        assert!((r_side - 1.56).abs() < 0.03 && (p_side - 1.56).abs() < 0.03);
    }

    #[test]
    fn the_q_branch_stands_at_the_band_centre() {
        let lines = band_lines(band(720.81));
        let near: f64 =
            lines.iter().filter(|l| (l.centre - 720.4).abs() < 1.0).map(|l| l.strength).sum();
        // Half of a perpendicular band is its Q branch.
        assert!(near > 0.4 * 1.9e-19, "{near:e}");
    }

    #[test]
    fn the_four_micrometre_band_has_its_head_near_2397() {
        // Band head about 2397 cm-1 (HITRAN); D and the next order move it by less than 2 cm-1.
        let head = band_lines(band(2349.14)).iter().map(|l| l.centre).fold(0.0, f64::max);
        assert!((head - 2397.0).abs() < 2.0, "{head}");
    }

    #[test]
    fn carbon_monoxide_lines_lie_where_they_are_measured() {
        // R(0) 2147.08 and P(1) 2139.43 cm-1 (Guelachvili et al. 1983), to 0.05 cm-1.
        let lines = band_lines(band(2143.27));
        for known in [2147.08, 2139.43] {
            assert!(lines.iter().any(|l| (l.centre - known).abs() < 0.05), "{known}");
        }
    }
}
