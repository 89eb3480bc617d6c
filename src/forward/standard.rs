//! The six AFGL standard atmospheres (Anderson et al. 1986).

use std::sync::OnceLock;

use super::atmosphere::Level;
use super::gas::Gas;

/// One of the AFGL standard atmospheres.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Standard {
    /// Tropical, 15 N.
    Tropical,
    /// Mid-latitude summer.
    MidlatitudeSummer,
    /// Mid-latitude winter.
    MidlatitudeWinter,
    /// Subarctic summer.
    SubarcticSummer,
    /// Subarctic winter.
    SubarcticWinter,
    /// US Standard 1976.
    UsStandard,
}

impl Standard {
    fn name(self) -> &'static str {
        match self {
            Standard::Tropical => "tropical",
            Standard::MidlatitudeSummer => "midlatitude_summer",
            Standard::MidlatitudeWinter => "midlatitude_winter",
            Standard::SubarcticSummer => "subarctic_summer",
            Standard::SubarcticWinter => "subarctic_winter",
            Standard::UsStandard => "us_standard",
        }
    }

    /// Its tabulated levels from the ground upward.
    pub(super) fn levels(self) -> impl Iterator<Item = &'static Level> {
        table().iter().filter(move |row| row.name == self.name()).map(|row| &row.level)
    }
}

struct Row {
    name: &'static str,
    level: Level,
}

/// The digitised tables, read once.
fn table() -> &'static [Row] {
    static TABLE: OnceLock<Vec<Row>> = OnceLock::new();
    TABLE.get_or_init(|| include_str!("afgl_profiles.csv").lines().filter_map(row).collect())
}

/// One line of the table; comments and the heading are not numbers and fall out.
fn row(line: &'static str) -> Option<Row> {
    let (name, rest) = line.split_once(',')?;
    let numbers: Vec<f64> =
        rest.split(',').map(|cell| cell.trim().parse().ok()).collect::<Option<_>>()?;
    let [height, pressure, temperature, _density, h2o, o3, n2o, co, ch4] = numbers[..] else {
        return None;
    };
    let mut mixing_ratio = [0.0; Gas::ALL.len()];
    for (gas, ppmv) in
        [(Gas::H2o, h2o), (Gas::O3, o3), (Gas::N2o, n2o), (Gas::Co, co), (Gas::Ch4, ch4)]
    {
        mixing_ratio[gas.index()] = ppmv * 1e-6;
    }
    // Halocarbons are well mixed below the tropopause and decay above; nitric acid forms a layer.
    let stratospheric_decay = (-(height - 12.0).max(0.0) / 6.0).exp();
    mixing_ratio[Gas::Cfc11.index()] = 0.22e-9 * stratospheric_decay;
    mixing_ratio[Gas::Cfc12.index()] = 0.49e-9 * stratospheric_decay;
    mixing_ratio[Gas::Hno3.index()] = 7e-9 * (-((height - 22.0) / 5.0).powi(2)).exp();
    Some(Row { name, level: Level { height, pressure, temperature, mixing_ratio } })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_level_of_six_atmospheres_is_read() {
        // 50 levels each: Anderson et al. 1986.
        assert_eq!(table().len(), 300);
        for standard in [
            Standard::Tropical,
            Standard::MidlatitudeSummer,
            Standard::MidlatitudeWinter,
            Standard::SubarcticSummer,
            Standard::SubarcticWinter,
            Standard::UsStandard,
        ] {
            assert_eq!(standard.levels().count(), 50);
        }
    }
}
