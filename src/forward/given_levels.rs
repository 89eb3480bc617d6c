//! Air as somebody else knows it: pressures and temperatures, and perhaps water vapour and ozone.

use super::atmosphere::{Atmosphere, Level};
use super::changes::Changes;
use super::gas::Gas;
use super::standard::Standard;

/// What is given at one level.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct GivenLevel {
    /// Pressure, hPa.
    pub pressure: f64,
    /// Temperature, K.
    pub temperature: f64,
    /// Water vapour, ppmv, if known.
    pub water_ppmv: Option<f64>,
    /// Ozone, ppmv, if known.
    pub ozone_ppmv: Option<f64>,
}

/// Gas constant of dry air over standard gravity, m K-1: 287.053 / 9.80665.
const SCALE_PER_KELVIN: f64 = 29.271;

impl Atmosphere {
    /// Air of given levels, from the ground upward; pressures fall. Amounts that are not given, and
    /// the air above the last level, are those of the US Standard Atmosphere at the same pressure.
    pub fn of_levels(given: &[GivenLevel]) -> Atmosphere {
        let standard = Atmosphere::new(Standard::UsStandard, &Changes::default());
        let mut levels: Vec<Level> = given.iter().map(|one| level(one, &standard)).collect();
        let top = levels.last().map_or(f64::INFINITY, |level| level.pressure);
        levels.extend(standard.levels().iter().filter(|level| level.pressure < 0.9 * top));
        let mut height = 0.0;
        for at in 0..levels.len() {
            if at > 0 {
                height += thickness(&levels[at - 1], &levels[at]);
            }
            levels[at].height = height;
        }
        Atmosphere::from_levels(levels)
    }
}

fn level(given: &GivenLevel, standard: &Atmosphere) -> Level {
    let mut level = standard.level_at_pressure(given.pressure);
    level.pressure = given.pressure;
    level.temperature = given.temperature;
    let amounts = [(Gas::H2o, given.water_ppmv), (Gas::O3, given.ozone_ppmv)];
    for (gas, ppmv) in amounts {
        if let Some(ppmv) = ppmv {
            level.mixing_ratio[gas.index()] = ppmv * 1e-6;
        }
    }
    level
}

/// Kilometres between two levels: the hypsometric equation for dry air.
fn thickness(low: &Level, high: &Level) -> f64 {
    let mean = 0.5 * (low.temperature + high.temperature);
    1e-3 * SCALE_PER_KELVIN * mean * (low.pressure / high.pressure).ln()
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The tropical atmosphere of [Anderson et al. 1986], given as levels, comes back: its heights
    /// are hydrostatic to 1 % below 30 km.
    #[test]
    fn a_standard_atmosphere_comes_back_from_its_own_levels() {
        let tropical = Atmosphere::new(Standard::Tropical, &Changes::default());
        let low = tropical.levels().iter().filter(|level| level.height <= 30.0);
        let given: Vec<GivenLevel> = low
            .map(|level| GivenLevel {
                pressure: level.pressure,
                temperature: level.temperature,
                water_ppmv: Some(level.mixing_ratio[Gas::H2o.index()] * 1e6),
                ozone_ppmv: None,
            })
            .collect();
        let back = Atmosphere::of_levels(&given);
        for height in [2.0, 5.0, 10.0, 16.0, 25.0] {
            let (one, other) = (tropical.pressure_at(height), back.pressure_at(height));
            // 1 % of the height is 1.3 % of the pressure for each kilometre of 8.
            assert!((other / one - 1.0).abs() < 0.0015 * height + 0.01, "{height}: {one} {other}");
        }
        // Within the error of the heights; moist air is 1 % lighter than dry.
        let share = back.precipitable_water() / tropical.precipitable_water();
        assert!((share - 1.0).abs() < 0.02, "{share}");
        assert!(back.levels().last().is_some_and(|level| level.height > 60.0));
    }
}
