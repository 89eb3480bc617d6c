//! A column of air: levels from the ground upward and the layers between them.

use super::changes::Changes;
use super::gas::Gas;
use super::standard::Standard;

/// Air molecules per cm3 at 1 hPa and 1 K: 100 / (k * 1e6) with k in J K-1.
const MOLECULES_PER_HPA: f64 = 1e-4 / crate::spectral::constants::BOLTZMANN;

/// State of the air at one height.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Level {
    /// Height, km.
    pub height: f64,
    /// Pressure, hPa.
    pub pressure: f64,
    /// Temperature, K.
    pub temperature: f64,
    /// Volume mixing ratio of each gas, by [`Gas::index`].
    pub mixing_ratio: [f64; Gas::ALL.len()],
}

impl Level {
    /// Molecules of air per cm3, from pressure and temperature (one digitised density of the
    /// tables does not fit its own pressure, so none is used).
    fn density(&self) -> f64 {
        self.pressure * MOLECULES_PER_HPA / self.temperature
    }
}

/// A column of air: levels from the ground upward and the layers between them.
#[derive(Debug, Clone, PartialEq)]
pub struct Atmosphere {
    levels: Vec<Level>,
}

/// The air between two levels.
#[derive(Debug, Clone, PartialEq)]
pub struct Layer {
    /// Mean pressure weighted by mass, atm.
    pub pressure: f64,
    /// Mean temperature weighted by mass, K.
    pub temperature: f64,
    /// Partial pressure of water vapour, atm.
    pub water_pressure: f64,
    /// Molecules per cm2 of each gas, vertical, by [`Gas::index`].
    pub column: [f64; Gas::ALL.len()],
}

/// Above this height the air adds nothing that the channels of a sounder see.
const TOP_KM: f64 = 75.0;

impl Atmosphere {
    /// A standard atmosphere with changes.
    pub fn new(standard: Standard, changes: &Changes) -> Atmosphere {
        let mut levels: Vec<Level> = standard
            .levels()
            .filter(|level| level.height <= TOP_KM)
            .map(|level| changes.applied(level))
            .collect();
        levels = with_half_levels(&levels);
        add_so2(&mut levels, changes);
        Atmosphere { levels }
    }

    /// Air of levels that are complete, from the ground upward.
    pub(super) fn from_levels(levels: Vec<Level>) -> Atmosphere {
        Atmosphere { levels }
    }

    /// The air at a pressure (hPa): linear in the logarithm of the pressure.
    pub(super) fn level_at_pressure(&self, pressure: f64) -> Level {
        let above = self.levels.partition_point(|level| level.pressure > pressure);
        let upper = above.clamp(1, self.levels.len() - 1);
        let (low, high) = (&self.levels[upper - 1], &self.levels[upper]);
        let share =
            ((low.pressure / pressure).ln() / (low.pressure / high.pressure).ln()).clamp(0.0, 1.0);
        let mix = |low: f64, high: f64| low + share * (high - low);
        let mut level = *low;
        level.height = mix(low.height, high.height);
        level.pressure = pressure;
        level.temperature = mix(low.temperature, high.temperature);
        let amounts = low.mixing_ratio.iter().zip(&high.mixing_ratio);
        for (amount, (low, high)) in level.mixing_ratio.iter_mut().zip(amounts) {
            *amount = mix(*low, *high);
        }
        level
    }

    /// Levels from the ground upward.
    pub fn levels(&self) -> &[Level] {
        &self.levels
    }

    /// Layers from the ground upward, one fewer than levels.
    pub fn layers(&self) -> Vec<Layer> {
        self.levels.windows(2).map(|pair| layer(&pair[0], &pair[1])).collect()
    }

    /// Gives all levels one temperature, for checks against closed forms.
    #[cfg(test)]
    pub(super) fn make_isothermal(&mut self, temperature: f64) {
        for level in &mut self.levels {
            level.temperature = temperature;
        }
    }

    /// Temperature at a height (km), K.
    pub fn temperature_at(&self, height: f64) -> f64 {
        self.interpolated(height, |level| level.temperature)
    }

    /// Pressure at a height (km), hPa.
    pub fn pressure_at(&self, height: f64) -> f64 {
        self.interpolated(height, |level| level.pressure.ln()).exp()
    }

    /// Water vapour above the ground, g cm-2.
    pub fn precipitable_water(&self) -> f64 {
        let molecules: f64 = self.layers().iter().map(|layer| layer.column[0]).sum();
        molecules * Gas::H2o.molar_mass() / AVOGADRO
    }

    /// Ozone above the ground, Dobson units (1 DU = 2.6868e16 molecules cm-2).
    pub fn ozone_dobson(&self) -> f64 {
        let molecules: f64 = self.layers().iter().map(|layer| layer.column[Gas::O3.index()]).sum();
        molecules / DOBSON
    }

    fn interpolated(&self, height: f64, value: impl Fn(&Level) -> f64) -> f64 {
        let above = self.levels.partition_point(|level| level.height < height);
        let upper = above.clamp(1, self.levels.len() - 1);
        let (low, high) = (&self.levels[upper - 1], &self.levels[upper]);
        let share = ((height - low.height) / (high.height - low.height)).clamp(0.0, 1.0);
        value(low) + share * (value(high) - value(low))
    }
}

/// Molecules per mole (exact since 2019).
pub(super) const AVOGADRO: f64 = 6.022_140_76e23;
/// Molecules per cm2 in one Dobson unit.
const DOBSON: f64 = 2.6868e16;

/// Levels halfway between the tabulated ones below 6 km, where clouds lie and water changes fast.
fn with_half_levels(levels: &[Level]) -> Vec<Level> {
    let mut finer = Vec::with_capacity(levels.len() + 6);
    for pair in levels.windows(2) {
        finer.push(pair[0]);
        if pair[0].height < 6.0 {
            finer.push(between(&pair[0], &pair[1]));
        }
    }
    finer.extend(levels.last());
    finer
}

/// Temperature is linear in height; pressure and amounts are exponential.
fn between(low: &Level, high: &Level) -> Level {
    let mut level = *low;
    level.height = 0.5 * (low.height + high.height);
    level.temperature = 0.5 * (low.temperature + high.temperature);
    level.pressure = (low.pressure * high.pressure).sqrt();
    for (middle, (a, b)) in
        level.mixing_ratio.iter_mut().zip(low.mixing_ratio.iter().zip(&high.mixing_ratio))
    {
        *middle = (a * b).sqrt();
    }
    level
}

/// A plume that is 2 km thick, scaled to its column.
fn add_so2(levels: &mut [Level], changes: &Changes) {
    if changes.so2_dobson <= 0.0 {
        return;
    }
    let shape = |height: f64| (-((height - changes.so2_height) / 1.0).powi(2)).exp();
    for level in levels.iter_mut() {
        level.mixing_ratio[Gas::So2.index()] = shape(level.height);
    }
    let column: f64 =
        levels.windows(2).map(|pair| layer(&pair[0], &pair[1]).column[Gas::So2.index()]).sum();
    for level in levels.iter_mut() {
        level.mixing_ratio[Gas::So2.index()] *= changes.so2_dobson * DOBSON / column;
    }
}

fn layer(low: &Level, high: &Level) -> Layer {
    let thickness_cm = (high.height - low.height) * 1e5;
    let column_of = |a: f64, b: f64| thickness_cm * logarithmic_mean(a, b);
    let (density_low, density_high) = (low.density(), high.density());
    let mut column = [0.0; Gas::ALL.len()];
    for (index, amount) in column.iter_mut().enumerate() {
        *amount = column_of(
            density_low * low.mixing_ratio[index],
            density_high * high.mixing_ratio[index],
        );
    }
    let weight = density_low / (density_low + density_high);
    let mean = |a: f64, b: f64| weight * a + (1.0 - weight) * b;
    Layer {
        pressure: mean(low.pressure, high.pressure) / 1013.25,
        temperature: mean(low.temperature, high.temperature),
        water_pressure: mean(
            low.pressure * low.mixing_ratio[Gas::H2o.index()],
            high.pressure * high.mixing_ratio[Gas::H2o.index()],
        ) / 1013.25,
        column,
    }
}

/// Mean of an exponential between two values; the arithmetic mean where it is flat or zero.
fn logarithmic_mean(a: f64, b: f64) -> f64 {
    if a <= 0.0 || b <= 0.0 || (a / b - 1.0).abs() < 1e-6 {
        0.5 * (a + b)
    } else {
        (a - b) / (a / b).ln()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    const SIX: [Standard; 6] = [
        Standard::Tropical,
        Standard::MidlatitudeSummer,
        Standard::MidlatitudeWinter,
        Standard::SubarcticSummer,
        Standard::SubarcticWinter,
        Standard::UsStandard,
    ];

    #[test]
    fn columns_agree_with_the_published_totals() {
        // Totals of the same tables, integrated elsewhere with a plain trapezoid: water in g cm-2,
        // ozone in Dobson units. 4 % covers the difference between trapezoid and exponential.
        let totals = [
            (4.12, 282.0),
            (2.93, 334.0),
            (0.85, 378.0),
            (2.11, 348.0),
            (0.42, 376.0),
            (1.42, 344.0),
        ];
        for (standard, (water, ozone)) in SIX.into_iter().zip(totals) {
            let air = Atmosphere::new(standard, &Changes::default());
            assert!(
                (air.precipitable_water() / water - 1.0).abs() < 0.04,
                "{standard:?} water {}",
                air.precipitable_water()
            );
            assert!(
                (air.ozone_dobson() / ozone - 1.0).abs() < 0.04,
                "{standard:?} ozone {}",
                air.ozone_dobson()
            );
        }
    }

    #[test]
    fn changes_do_what_they_say() {
        let plain = Atmosphere::new(Standard::UsStandard, &Changes::default());
        let changes = Changes {
            water: 0.5,
            ozone: 1.2,
            warming: 3.0,
            so2_dobson: 40.0,
            ..Changes::default()
        };
        let other = Atmosphere::new(Standard::UsStandard, &changes);
        // Exact factors: the column is linear in the amount.
        assert!((other.precipitable_water() / plain.precipitable_water() - 0.5).abs() < 0.01);
        assert!((other.ozone_dobson() / plain.ozone_dobson() - 1.2).abs() < 0.01);
        assert!((other.temperature_at(0.0) - plain.temperature_at(0.0) - 3.0).abs() < 1e-9);
        let so2: f64 = other.layers().iter().map(|layer| layer.column[Gas::So2.index()]).sum();
        assert!((so2 / DOBSON - 40.0).abs() < 1e-6);
    }

    #[test]
    fn an_inversion_makes_the_ground_colder_than_the_air_above() {
        let changes = Changes { inversion: 15.0, ..Changes::default() };
        let air = Atmosphere::new(Standard::SubarcticWinter, &changes);
        assert!(air.temperature_at(0.0) < air.temperature_at(1.0) - 5.0);
    }

    #[test]
    fn pressure_between_levels_is_exponential() {
        let air = Atmosphere::new(Standard::Tropical, &Changes::default());
        // 559 and 492 hPa at 5 and 6 km: the geometric mean at 5.5 km.
        assert!((air.pressure_at(5.5) - (559.0f64 * 492.0).sqrt()).abs() < 0.5);
    }
}
