//! The nu4 band of methane as manifolds of pseudo-lines.
//!
//! A spherical top: each level J carries the weight (2J+1)^2; Coriolis coupling (zeta about 0.46)
//! narrows the spacing of the manifolds to 2B(1-zeta), about 5.7 cm-1; centrifugal distortion
//! splits each into about 1.2 J components. Source: Herzberg 1945.

use super::gas::Gas;
use super::line::{Line, REFERENCE_TEMPERATURE};
use crate::spectral::constants::C2;

const CENTRE: f64 = 1310.76;
const ROTATION: f64 = 5.241;
const SPACING: f64 = 5.7;
/// Band strength at 296 K, cm-1/(molecule cm-2).
const STRENGTH: f64 = 5.4e-18;
/// The Q branch runs from the centre towards 1300: the band is usually quoted by it, 1306.
const Q_DRIFT: f64 = 0.05425;
const HIGHEST_J: u32 = 22;

pub(super) fn lines() -> Vec<Line> {
    let mut lines: Vec<Line> =
        (0..=HIGHEST_J).flat_map(|j| [-1, 0, 1].map(|step| manifold(j, step))).flatten().collect();
    let sum: f64 = lines.iter().map(|line| line.strength).sum();
    for line in &mut lines {
        line.strength *= STRENGTH / sum;
    }
    lines
}

fn manifold(j: u32, step: i32) -> Vec<Line> {
    let level = f64::from(j);
    let upper = level + f64::from(step);
    if upper < 0.0 || (j == 0 && step < 1) {
        return Vec::new();
    }
    let energy = ROTATION * level * (level + 1.0);
    let population = (2.0 * level + 1.0).powi(2) * (-C2 * energy / REFERENCE_TEMPERATURE).exp();
    let share = population * (2.0 * upper + 1.0) / (3.0 * (2.0 * level + 1.0));
    let centre = match step {
        -1 => CENTRE - SPACING * level,
        0 => CENTRE - Q_DRIFT * level * (level + 1.0) / 2.0,
        _ => CENTRE + SPACING * (level + 1.0),
    };
    let count = (1.2 * level).round().max(1.0);
    let half_spread = 0.05 + 0.12 * level;
    (0..count as u32)
        .map(|component| {
            let place =
                if count > 1.0 { 2.0 * f64::from(component) / (count - 1.0) - 1.0 } else { 0.0 };
            Line {
                gas: Gas::Ch4,
                // Components crowd towards one edge as real manifolds do.
                centre: centre + half_spread * place * place.abs().sqrt(),
                strength: share / count,
                lower_energy: energy,
                width: 0.058,
                width_exponent: 0.75,
            }
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_band_lies_where_it_is_quoted() {
        // 1200 to 1380 cm-1, strongest near its Q branch at 1306 (HITRAN).
        let lines = lines();
        let mean = lines.iter().map(|l| l.strength * l.centre).sum::<f64>() / STRENGTH;
        assert!((mean - CENTRE).abs() < 6.0, "{mean}");
        let inside: f64 =
            lines.iter().filter(|l| (1200.0..1400.0).contains(&l.centre)).map(|l| l.strength).sum();
        assert!(inside > 0.97 * STRENGTH);
        let q_branch: f64 =
            lines.iter().filter(|l| (1301.0..1312.0).contains(&l.centre)).map(|l| l.strength).sum();
        assert!(q_branch > 0.25 * STRENGTH, "{q_branch:e}");
    }
}
