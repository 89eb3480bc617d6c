//! One absorption line, and the list of all lines of the model.

use std::sync::OnceLock;

use super::gas::Gas;
use super::linear_bands;
use super::methane;
use super::pseudo_lines;
use crate::spectral::constants::C2;

/// Reference temperature of line strengths, K.
pub const REFERENCE_TEMPERATURE: f64 = 296.0;

/// An absorption line.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Line {
    /// The absorber.
    pub gas: Gas,
    /// Centre, cm-1.
    pub centre: f64,
    /// Strength at 296 K, cm-1/(molecule cm-2).
    pub strength: f64,
    /// Energy of the lower state, cm-1.
    pub lower_energy: f64,
    /// Lorentz half width in air at 296 K, cm-1/atm.
    pub width: f64,
    /// Exponent of the half width's temperature dependence.
    pub width_exponent: f64,
}

impl Line {
    /// Strength at another temperature.
    ///
    /// `S(T) = S(T0) Q(T0)/Q(T) exp(-c2 E"/T)/exp(-c2 E"/T0) (1-exp(-c2 nu/T))/(1-exp(-c2 nu/T0))`.
    /// Source: Rothman et al. 1998, JQSRT 60, 665, appendix A.
    pub fn strength_at(&self, temperature: f64) -> f64 {
        let t0 = REFERENCE_TEMPERATURE;
        let partition = (t0 / temperature).powf(self.gas.partition_exponent());
        let population = (C2 * self.lower_energy * (1.0 / t0 - 1.0 / temperature)).exp();
        let emission =
            (-C2 * self.centre / temperature).exp_m1() / (-C2 * self.centre / t0).exp_m1();
        self.strength * partition * population * emission
    }

    /// Lorentz half width at half maximum, cm-1, at a pressure (atm) and temperature (K).
    pub fn lorentz_half_width(&self, pressure: f64, temperature: f64) -> f64 {
        self.width * pressure * (REFERENCE_TEMPERATURE / temperature).powf(self.width_exponent)
    }

    /// Doppler half width at half maximum, cm-1: `3.581e-7 nu sqrt(T/M)`.
    pub fn doppler_half_width(&self, temperature: f64) -> f64 {
        3.581e-7 * self.centre * (temperature / self.gas.molar_mass()).sqrt()
    }
}

/// All lines of the model, ascending in wavenumber; made once.
pub fn all() -> &'static [Line] {
    static LINES: OnceLock<Vec<Line>> = OnceLock::new();
    LINES.get_or_init(|| {
        let mut lines = linear_bands::lines();
        lines.extend(methane::lines());
        lines.extend(pseudo_lines::ozone());
        lines.extend(pseudo_lines::water());
        lines.sort_by(|a, b| a.centre.total_cmp(&b.centre));
        lines
    })
}

/// The lines whose centres lie between two wavenumbers (cm-1).
pub fn between(low: f64, high: f64) -> &'static [Line] {
    let lines = all();
    let start = lines.partition_point(|line| line.centre < low);
    let end = lines.partition_point(|line| line.centre <= high);
    &lines[start..end.max(start)]
}

#[cfg(test)]
mod tests {
    use super::*;

    fn total(gas: Gas, low: f64, high: f64) -> f64 {
        between(low, high).iter().filter(|l| l.gas == gas).map(|l| l.strength).sum()
    }

    #[test]
    fn band_strengths_are_those_of_the_table() {
        // HITRAN band strengths at 296 K (Rothman et al. 2005, JQSRT 96, 139), good to 10 %; the
        // sums also hold the hot and isotopic bands that lie inside the interval.
        let nu2 = total(Gas::Co2, 550.0, 800.0);
        assert!((nu2 / 9.1e-18 - 1.0).abs() < 0.1, "{nu2:e}");
        let nu3 = total(Gas::Co2, 2200.0, 2420.0);
        assert!((nu3 / 1.0e-16 - 1.0).abs() < 0.1, "{nu3:e}");
        let ozone = total(Gas::O3, 970.0, 1080.0);
        assert!((ozone / 1.4e-17 - 1.0).abs() < 0.1, "{ozone:e}");
        let water = total(Gas::H2o, 1150.0, 2300.0);
        assert!((water / 1.06e-17 - 1.0).abs() < 0.1, "{water:e}");
    }

    #[test]
    fn a_hot_line_weakens_in_the_cold() {
        let line = Line {
            gas: Gas::Co2,
            centre: 720.81,
            strength: 1e-20,
            lower_energy: 667.38,
            width: 0.072,
            width_exponent: 0.72,
        };
        assert!((line.strength_at(296.0) / 1e-20 - 1.0).abs() < 1e-12);
        assert!(line.strength_at(220.0) < 0.5e-20);
        // Ground-state lines gain instead, because fewer molecules are excited: Q(T0)/Q(T) > 1.
        let ground = Line { lower_energy: 0.0, ..line };
        assert!(ground.strength_at(220.0) > 1.2e-20);
    }

    #[test]
    fn widths_follow_pressure_and_temperature() {
        let line = all()[0];
        let narrow = line.lorentz_half_width(0.1, 250.0);
        assert!((line.lorentz_half_width(1.0, 250.0) / narrow - 10.0).abs() < 1e-9);
        // CO2 at 667 cm-1 and 250 K: 3.581e-7 * 667.38 * sqrt(250/44.009) = 5.70e-4 cm-1.
        let co2 = Line { gas: Gas::Co2, centre: 667.38, ..line };
        assert!((co2.doppler_half_width(250.0) - 5.70e-4).abs() < 1e-6);
    }
}
