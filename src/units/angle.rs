//! Units of angle: geolocation, view and solar angles.

use super::error::{UnitError, excerpt};

/// The unit of an angle.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum AngleUnit {
    /// Degrees
    Degree,
    /// Radians
    Radian,
}

const ACCEPTED: &str = "accepted are degree, degrees_north, degrees_east (and the like) and radian";

/// Spellings that UDUNITS and CF (sections 4.1 and 4.2) take, in lower case without separators.
/// Degrees south or west are not among them: CF has no such unit, and the sign would be turned.
const DEGREE: &[&str] = &[
    "degree",
    "degrees",
    "deg",
    "degs",
    "°",
    "degreenorth",
    "degreesnorth",
    "degreen",
    "degreesn",
    "degreeeast",
    "degreeseast",
    "degreee",
    "degreese",
    "degreetrue",
    "degreestrue",
    "degreet",
    "degreest",
    "arcdegree",
    "arcdegrees",
    "angulardegree",
    "angulardegrees",
];
const RADIAN: &[&str] = &["radian", "radians", "rad"];

impl AngleUnit {
    /// Reads a unit string as CF files spell it.
    ///
    /// # Errors
    /// Everything else.
    pub fn parse(text: &str) -> Result<Self, UnitError> {
        if text.trim().is_empty() {
            return Err(UnitError::Empty { accepted: ACCEPTED });
        }
        let word = text.trim().replace(['_', ' '], "").to_lowercase();
        if DEGREE.contains(&word.as_str()) {
            Ok(Self::Degree)
        } else if RADIAN.contains(&word.as_str()) {
            Ok(Self::Radian)
        } else {
            Err(UnitError::OtherQuantity {
                text: excerpt(text),
                found: "no angle known here",
                accepted: ACCEPTED,
            })
        }
    }

    /// The angle in degrees of a value in this unit.
    pub fn to_degrees(self, value: f64) -> f64 {
        match self {
            Self::Degree => value,
            Self::Radian => value.to_degrees(),
        }
    }

    /// The unit in one spelling.
    pub fn label(self) -> &'static str {
        match self {
            Self::Degree => "degree",
            Self::Radian => "radian",
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn angles_are_understood() {
        for text in ["degree", "degrees", "deg", "degrees_north", "degree_east", "degrees_E", "°"]
        {
            assert_eq!(AngleUnit::parse(text), Ok(AngleUnit::Degree), "{text}");
        }
        for text in ["rad", "radian", "radians"] {
            assert_eq!(AngleUnit::parse(text), Ok(AngleUnit::Radian), "{text}");
        }
        assert_eq!(AngleUnit::Radian.to_degrees(std::f64::consts::PI), 180.0);
    }

    #[test]
    fn other_units_are_refused() {
        for text in ["", "degrees_south", "degC", "m", "1"] {
            assert!(AngleUnit::parse(text).is_err(), "{text}");
        }
    }
}
