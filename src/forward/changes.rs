//! What may be changed about a standard atmosphere.

use super::atmosphere::Level;
use super::gas::Gas;

/// What is changed about a standard atmosphere.
#[derive(Debug, Clone, PartialEq)]
pub struct Changes {
    /// Added to the temperature at the ground, K; fades with height.
    pub warming: f64,
    /// Height over which the warming falls to 1/e, km.
    pub warming_depth: f64,
    /// How much colder than the air above it the ground layer is, K.
    pub inversion: f64,
    /// Height over which the inversion fades to 1/e, km.
    pub inversion_depth: f64,
    /// Amplitude of a wave in temperature with height, K; it fades towards the ground.
    pub wave: f64,
    /// Its length, km.
    pub wave_length: f64,
    /// Its phase at the ground, radians.
    pub wave_phase: f64,
    /// Factor on water vapour.
    pub water: f64,
    /// One more factor on water vapour that holds from 6 km upward and fades to 1 at the ground.
    pub water_aloft: f64,
    /// Factor on ozone.
    pub ozone: f64,
    /// Carbon dioxide, ppmv.
    pub co2_ppmv: f64,
    /// Methane at the ground, ppmv.
    pub ch4_ppmv: f64,
    /// Nitrous oxide at the ground, ppmv.
    pub n2o_ppmv: f64,
    /// Factor on carbon monoxide.
    pub co: f64,
    /// Sulphur dioxide, Dobson units.
    pub so2_dobson: f64,
    /// Height of the sulphur dioxide, km.
    pub so2_height: f64,
}

impl Default for Changes {
    /// Present amounts of the well-mixed gases (NOAA Global Monitoring Laboratory, rounded).
    fn default() -> Self {
        Changes {
            warming: 0.0,
            warming_depth: 8.0,
            inversion: 0.0,
            inversion_depth: 0.6,
            wave: 0.0,
            wave_length: 10.0,
            wave_phase: 0.0,
            water: 1.0,
            water_aloft: 1.0,
            ozone: 1.0,
            co2_ppmv: 422.0,
            ch4_ppmv: 1.92,
            n2o_ppmv: 0.337,
            co: 1.0,
            so2_dobson: 0.0,
            so2_height: 10.0,
        }
    }
}

/// AFGL ground amounts that the tables are rescaled from, ppmv.
const AFGL_CH4: f64 = 1.7;
const AFGL_N2O: f64 = 0.32;
/// Height over which a wave in temperature fades towards the ground, km.
const WAVE_FROM: f64 = 2.0;
/// Height from which `water_aloft` holds, km.
const ALOFT: f64 = 6.0;

impl Changes {
    /// A level of a standard atmosphere with these changes; pressures stay as they are.
    pub(super) fn applied(&self, level: &Level) -> Level {
        let mut level = *level;
        level.temperature += self.warming * (-level.height / self.warming_depth).exp()
            - self.inversion * (-level.height / self.inversion_depth).exp()
            + self.wave_at(level.height);
        let aloft = self.water_aloft.powf((level.height / ALOFT).min(1.0));
        let amount = &mut level.mixing_ratio;
        amount[Gas::H2o.index()] *= self.water * aloft;
        amount[Gas::O3.index()] *= self.ozone;
        amount[Gas::Co2.index()] = self.co2_ppmv * 1e-6;
        amount[Gas::Ch4.index()] *= self.ch4_ppmv / AFGL_CH4;
        amount[Gas::N2o.index()] *= self.n2o_ppmv / AFGL_N2O;
        amount[Gas::Co.index()] *= self.co;
        level
    }

    fn wave_at(&self, height: f64) -> f64 {
        let phase = 2.0 * std::f64::consts::PI * height / self.wave_length + self.wave_phase;
        self.wave * phase.sin() * (1.0 - (-height / WAVE_FROM).exp())
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::forward::standard::Standard;

    #[test]
    fn a_wave_leaves_the_ground_alone_and_stays_within_its_amplitude() {
        let changes = Changes { wave: 2.0, wave_phase: 1.0, ..Changes::default() };
        let mut largest = 0.0_f64;
        for level in Standard::UsStandard.levels() {
            let change = changes.applied(level).temperature - level.temperature;
            if level.height == 0.0 {
                assert_eq!(change, 0.0);
            }
            largest = largest.max(change.abs());
        }
        assert!((1.5..=2.0).contains(&largest), "{largest}");
    }

    #[test]
    fn water_aloft_is_changed_aloft() {
        let changes = Changes { water_aloft: 0.5, ..Changes::default() };
        for level in Standard::Tropical.levels() {
            let water = |level: &Level| level.mixing_ratio[Gas::H2o.index()];
            let factor = water(&changes.applied(level)) / water(level);
            // 0.5^(h/6) up to 6 km, by hand: 0.5 beyond, 0.5^0.5 at 3 km.
            let expected = match level.height {
                height if height >= 6.0 => 0.5,
                3.0 => 0.5_f64.sqrt(),
                0.0 => 1.0,
                _ => continue,
            };
            assert!((factor - expected).abs() < 1e-12, "{}", level.height);
        }
    }
}
