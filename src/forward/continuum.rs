//! Absorption that varies slowly: the water-vapour continuum and heavy molecules whose lines are
//! too many to tell apart.

use super::atmosphere::{AVOGADRO, Layer};
use super::gas::Gas;
use super::grid::Grid;

/// Optical depth along the vertical at every point of a grid of about 0.1 cm-1.
pub(super) fn optical_depth(grid: &Grid, layer: &Layer) -> Vec<f32> {
    let water_mass = layer.column[Gas::H2o.index()] * Gas::H2o.molar_mass() / AVOGADRO;
    (0..grid.count)
        .map(|index| {
            let wavenumber = grid.at(index);
            let water = water_mass * water_coefficient(wavenumber, layer);
            let heavy: f64 = SMOOTH
                .iter()
                .map(|band| layer.column[band.gas.index()] * band.cross_section(wavenumber))
                .sum();
            (water + heavy) as f32
        })
        .collect()
}

/// Absorption coefficient of the water continuum, cm2 g-1.
///
/// `k = C(nu) exp[1800 (1/T - 1/296)] (e + 0.002 (p - e))`, e and p in atm.
/// Source: Roberts, Selby & Biberman 1976, Appl. Opt. 15, 2085.
fn water_coefficient(wavenumber: f64, layer: &Layer) -> f64 {
    let self_part = layer.water_pressure;
    let foreign_part = 0.002 * (layer.pressure - layer.water_pressure);
    continuum_strength(wavenumber)
        * (1800.0 * (1.0 / layer.temperature - 1.0 / 296.0)).exp()
        * (self_part + foreign_part)
}

/// C(nu), cm2 g-1 atm-1: `4.18 + 5578 exp(-0.00787 nu)` up to 1250 cm-1 where it was measured; from
/// there a logarithmic slope to about 0.07 near 4 um, where the continuum is weak but not zero.
fn continuum_strength(wavenumber: f64) -> f64 {
    const LAST: f64 = 1250.0;
    const SHORT_WAVE: (f64, f64) = (2000.0, 0.07);
    let roberts = |nu: f64| 4.18 + 5578.0 * (-0.00787 * nu).exp();
    if wavenumber <= LAST {
        return roberts(wavenumber);
    }
    let share = ((wavenumber - LAST) / (SHORT_WAVE.0 - LAST)).min(1.0);
    (roberts(LAST).ln() * (1.0 - share) + SHORT_WAVE.1.ln() * share).exp()
}

/// A band without visible lines: one Gaussian lobe.
struct SmoothBand {
    gas: Gas,
    /// Centre of the lobe, cm-1.
    centre: f64,
    /// Standard deviation of the lobe, cm-1.
    width: f64,
    /// Integrated cross-section, cm-1/(molecule cm-2).
    strength: f64,
}

impl SmoothBand {
    fn cross_section(&self, wavenumber: f64) -> f64 {
        let distance = (wavenumber - self.centre) / self.width;
        if distance.abs() > 6.0 {
            return 0.0;
        }
        self.strength / (self.width * (2.0 * std::f64::consts::PI).sqrt())
            * (-0.5 * distance * distance).exp()
    }
}

const fn smooth(gas: Gas, centre: f64, width: f64, strength: f64) -> SmoothBand {
    SmoothBand { gas, centre, width, strength }
}

/// Lobes, after HITRAN band strengths. SO2: P and R lobes of nu3 (1362.06), nu1 (1151.7) and
/// nu1+nu3 (2499.9); HNO3: lobes of nu5 and 2nu9 with their Q spikes at 879.1 and 896.4.
const SMOOTH: &[SmoothBand] = &[
    smooth(Gas::So2, 1349.0, 7.0, 1.40e-17),
    smooth(Gas::So2, 1373.0, 7.0, 1.40e-17),
    smooth(Gas::So2, 1138.0, 9.0, 1.75e-18),
    smooth(Gas::So2, 1165.0, 9.0, 1.75e-18),
    smooth(Gas::So2, 2491.0, 7.0, 1.9e-19),
    smooth(Gas::So2, 2507.0, 7.0, 1.9e-19),
    smooth(Gas::Hno3, 867.0, 7.0, 5.5e-18),
    smooth(Gas::Hno3, 888.0, 7.0, 8.0e-18),
    smooth(Gas::Hno3, 906.0, 6.0, 6.5e-18),
    smooth(Gas::Hno3, 879.1, 0.5, 2.4e-18),
    smooth(Gas::Hno3, 896.4, 0.5, 1.6e-18),
    smooth(Gas::Cfc11, 847.0, 10.6, 7.0e-17),
    smooth(Gas::Cfc12, 922.0, 4.2, 5.5e-17),
];

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_continuum_has_the_published_strength_in_the_window() {
        // C(900) = 8.86 cm2 g-1 atm-1 (Roberts et al. 1976), to the digits given.
        assert!((continuum_strength(900.0) - 8.86).abs() < 0.005);
    }

    #[test]
    fn the_continuum_does_not_jump() {
        for wavenumber in [1250.0, 2000.0] {
            let before = continuum_strength(wavenumber - 1e-6);
            let after = continuum_strength(wavenumber + 1e-6);
            assert!((before / after - 1.0).abs() < 1e-6);
        }
        assert!((0.05..0.1).contains(&continuum_strength(2600.0)));
    }

    #[test]
    fn smooth_bands_hold_their_band_strength() {
        // SO2 nu3 2.8e-17 and HNO3 2.4e-17 cm-1/(molecule cm-2), HITRAN, good to 10 %.
        let total = |gas: Gas, low: f64, high: f64| -> f64 {
            let steps = ((high - low) * 10.0) as usize;
            (0..steps)
                .map(|step| low + step as f64 * 0.1)
                .map(|nu| {
                    SMOOTH.iter().filter(|b| b.gas == gas).map(|b| b.cross_section(nu)).sum::<f64>()
                })
                .sum::<f64>()
                * 0.1
        };
        assert!((total(Gas::So2, 1300.0, 1420.0) / 2.8e-17 - 1.0).abs() < 0.02);
        assert!((total(Gas::Hno3, 820.0, 960.0) / 2.4e-17 - 1.0).abs() < 0.02);
    }
}
