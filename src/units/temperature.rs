//! Units of temperature.

use super::error::{UnitError, excerpt};

/// The unit of a temperature.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum TemperatureUnit {
    /// K
    Kelvin,
    /// Degrees Celsius
    Celsius,
}

const ACCEPTED: &str = "accepted are K (kelvin) and degree_Celsius (degC)";

/// Spellings that UDUNITS takes, in lower case and without separators.
const KELVIN: &[&str] =
    &["kelvin", "kelvins", "degk", "degreek", "degreesk", "degreekelvin", "degreeskelvin", "°k"];
const CELSIUS: &[&str] =
    &["celsius", "degc", "degreec", "degreesc", "degreecelsius", "degreescelsius", "°c", "℃"];

impl TemperatureUnit {
    /// Reads a unit string as CF files spell it.
    ///
    /// # Errors
    /// Everything else; `C` alone is the coulomb and is not taken for Celsius.
    pub fn parse(text: &str) -> Result<Self, UnitError> {
        let trimmed = text.trim();
        if trimmed.is_empty() {
            return Err(UnitError::Empty { accepted: ACCEPTED });
        }
        let word = trimmed.replace(['_', ' '], "").to_lowercase();
        // The symbol is a capital: `k` would be a prefix.
        if trimmed == "K" || KELVIN.contains(&word.as_str()) {
            Ok(Self::Kelvin)
        } else if CELSIUS.contains(&word.as_str()) {
            Ok(Self::Celsius)
        } else {
            Err(UnitError::OtherQuantity {
                text: excerpt(text),
                found: "no temperature known here",
                accepted: ACCEPTED,
            })
        }
    }

    /// The temperature in K of a value in this unit.
    pub fn to_kelvin(self, value: f64) -> f64 {
        match self {
            Self::Kelvin => value,
            // 0 degrees Celsius is 273.15 K by definition.
            Self::Celsius => value + 273.15,
        }
    }

    /// The unit in one spelling.
    pub fn label(self) -> &'static str {
        match self {
            Self::Kelvin => "K",
            Self::Celsius => "degree_Celsius",
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn temperatures_are_understood() {
        for text in
            ["K", "kelvin", "Kelvin", "degK", "degrees_K", "degree_kelvin", "degrees Kelvin"]
        {
            assert_eq!(TemperatureUnit::parse(text), Ok(TemperatureUnit::Kelvin), "{text}");
        }
        for text in ["degC", "degree_Celsius", "celsius", "°C", "degrees_C", "degree_C"] {
            assert_eq!(TemperatureUnit::parse(text), Ok(TemperatureUnit::Celsius), "{text}");
        }
        assert_eq!(TemperatureUnit::Celsius.to_kelvin(15.0), 288.15);
    }

    #[test]
    fn other_units_are_refused() {
        for text in ["", "C", "k", "F", "mK", "W"] {
            assert!(TemperatureUnit::parse(text).is_err(), "{text}");
        }
    }
}
