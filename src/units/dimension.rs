//! What kind of quantity a unit measures: exponents of the base units.

/// Exponents of m, kg, s, K, sr and rad. The solid angle is kept apart although SI counts it as 1:
/// without it a radiance could not be told from an irradiance.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Dimension {
    pub metre: i32,
    pub kilogram: i32,
    pub second: i32,
    pub kelvin: i32,
    pub steradian: i32,
    pub radian: i32,
}

const NONE: Dimension =
    Dimension { metre: 0, kilogram: 0, second: 0, kelvin: 0, steradian: 0, radian: 0 };

impl Dimension {
    pub const NUMBER: Self = NONE;
    pub const LENGTH: Self = Self { metre: 1, ..NONE };
    pub const MASS: Self = Self { kilogram: 1, ..NONE };
    pub const TIME: Self = Self { second: 1, ..NONE };
    pub const TEMPERATURE: Self = Self { kelvin: 1, ..NONE };
    pub const SOLID_ANGLE: Self = Self { steradian: 1, ..NONE };
    pub const ANGLE: Self = Self { radian: 1, ..NONE };
    pub const FREQUENCY: Self = Self { second: -1, ..NONE };
    pub const WAVENUMBER: Self = Self { metre: -1, ..NONE };
    pub const ENERGY: Self = Self { metre: 2, kilogram: 1, second: -2, ..NONE };
    pub const POWER: Self = Self { metre: 2, kilogram: 1, second: -3, ..NONE };
    pub const IRRADIANCE: Self = Self { kilogram: 1, second: -3, ..NONE };
    pub const RADIANCE: Self = Self { kilogram: 1, second: -3, steradian: -1, ..NONE };
    pub const RADIANCE_PER_WAVENUMBER: Self = Self { metre: 1, ..Self::RADIANCE };
    pub const RADIANCE_PER_WAVELENGTH: Self = Self { metre: -1, ..Self::RADIANCE };
    pub const RADIANCE_PER_FREQUENCY: Self = Self { second: -2, ..Self::RADIANCE };

    /// The dimension of a product.
    pub fn times(self, other: Self) -> Self {
        Self {
            metre: self.metre + other.metre,
            kilogram: self.kilogram + other.kilogram,
            second: self.second + other.second,
            kelvin: self.kelvin + other.kelvin,
            steradian: self.steradian + other.steradian,
            radian: self.radian + other.radian,
        }
    }

    /// The dimension of a power.
    pub fn raised(self, exponent: i32) -> Self {
        Self {
            metre: self.metre * exponent,
            kilogram: self.kilogram * exponent,
            second: self.second * exponent,
            kelvin: self.kelvin * exponent,
            steradian: self.steradian * exponent,
            radian: self.radian * exponent,
        }
    }

    /// What it measures in words, for messages.
    pub fn described(self) -> &'static str {
        NAMED
            .iter()
            .find(|(dimension, _)| *dimension == self)
            .map_or("another quantity", |(_, w)| w)
    }
}

/// Quantities met in files where another one was expected.
const NAMED: &[(Dimension, &str)] = &[
    (Dimension::NUMBER, "a plain number"),
    (Dimension::LENGTH, "a length"),
    (Dimension::WAVENUMBER, "a wavenumber"),
    (Dimension::FREQUENCY, "a frequency"),
    (Dimension::TIME, "a time"),
    (Dimension::TEMPERATURE, "a temperature"),
    (Dimension::ANGLE, "an angle"),
    (Dimension::IRRADIANCE, "an irradiance, which has no sr-1"),
    (Dimension::RADIANCE, "a radiance summed over the spectrum, not per wavenumber, length or Hz"),
    (Dimension::RADIANCE_PER_WAVENUMBER, "a radiance per wavenumber"),
    (Dimension::RADIANCE_PER_WAVELENGTH, "a radiance per wavelength"),
    (Dimension::RADIANCE_PER_FREQUENCY, "a radiance per frequency"),
    (
        Dimension { metre: 1, ..Dimension::IRRADIANCE },
        "an irradiance per wavenumber: sr-1 is missing",
    ),
    (
        Dimension { metre: -1, ..Dimension::IRRADIANCE },
        "an irradiance per wavelength: sr-1 is missing",
    ),
    (
        Dimension { second: -2, ..Dimension::IRRADIANCE },
        "an irradiance per frequency: sr-1 is missing",
    ),
];
