//! What a layer's numbers are measured in, followed roughly through an expression.

use std::fmt;

/// The unit of a layer, for legends and table heads.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum LayerUnit {
    /// A temperature, K.
    Kelvin,
    /// A difference of temperatures, K.
    KelvinDifference,
    /// mW m-2 sr-1 (cm-1)-1.
    Radiance,
    /// An angle, degrees.
    Degree,
    /// A pressure, hPa.
    Hectopascal,
    /// A pure number.
    One,
    /// 1 for true, 0 for false.
    Truth,
    /// Seconds since 1970-01-01T00:00:00Z.
    Time,
    /// A zero-based index.
    Index,
    /// Not followed.
    Unknown,
}

impl LayerUnit {
    /// As written in a legend; empty where there is nothing to write.
    pub fn label(self) -> &'static str {
        match self {
            Self::Kelvin | Self::KelvinDifference => "K",
            Self::Radiance => "mW m-2 sr-1 (cm-1)-1",
            Self::Degree => "degrees",
            Self::Hectopascal => "hPa",
            Self::Time => "s since 1970-01-01 UTC",
            Self::Truth => "1 true, 0 false",
            Self::One | Self::Index | Self::Unknown => "",
        }
    }

    /// Of a sum or a difference.
    pub fn of_sum(self, other: Self, subtracted: bool) -> Self {
        use LayerUnit::{Kelvin, KelvinDifference, One};
        match (self, other) {
            (Kelvin, Kelvin) if subtracted => KelvinDifference,
            // Two temperatures added are on the way to a mean.
            (Kelvin, Kelvin | KelvinDifference | One) => Kelvin,
            (KelvinDifference, One) => KelvinDifference,
            (KelvinDifference | One, Kelvin) if !subtracted => Kelvin,
            // A number from which a temperature is taken is one itself.
            (One, Kelvin) => KelvinDifference,
            (One, unit) => unit,
            (unit, One) => unit,
            (unit, other) if unit == other => unit,
            _ => Self::Unknown,
        }
    }

    /// Whether a sum, a difference or a comparison with `other` hardly means anything, as that of
    /// a temperature with an angle.
    pub fn mixes_badly_with(self, other: Self) -> bool {
        match (self.dimension(), other.dimension()) {
            (Some(own), Some(other)) => own != other,
            _ => false,
        }
    }

    /// What is measured, in a word; `None` for pure numbers, which go with everything.
    fn dimension(self) -> Option<&'static str> {
        match self {
            Self::Kelvin | Self::KelvinDifference => Some("temperature"),
            Self::Radiance => Some("radiance"),
            Self::Degree => Some("angle"),
            Self::Hectopascal => Some("pressure"),
            Self::Time => Some("time"),
            Self::One | Self::Truth | Self::Index | Self::Unknown => None,
        }
    }

    /// What is measured, for messages.
    pub fn thing(self) -> &'static str {
        self.dimension().unwrap_or("number")
    }

    /// Of a product.
    pub fn of_product(self, other: Self) -> Self {
        match (self, other) {
            (Self::One, unit) | (unit, Self::One) => unit,
            _ => Self::Unknown,
        }
    }

    /// Of a quotient.
    pub fn of_quotient(self, other: Self) -> Self {
        match (self, other) {
            (unit, Self::One) => unit,
            (unit, other) if unit == other && unit != Self::Unknown => Self::One,
            _ => Self::Unknown,
        }
    }

    /// Of a choice among values, such as the smallest.
    pub fn of_choice(self, other: Self) -> Self {
        if self == other || other == Self::One {
            self
        } else if self == Self::One {
            other
        } else {
            Self::Unknown
        }
    }

    /// Of a spread: a difference of values.
    pub fn of_spread(self) -> Self {
        self.of_sum(self, true)
    }
}

impl fmt::Display for LayerUnit {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        out.write_str(self.label())
    }
}

#[cfg(test)]
mod tests {
    use super::LayerUnit::{Degree, Kelvin, KelvinDifference, One, Radiance, Unknown};

    #[test]
    fn temperatures_and_their_differences_are_told_apart() {
        assert_eq!(Kelvin.of_sum(Kelvin, true), KelvinDifference);
        assert_eq!(Kelvin.of_sum(KelvinDifference, true), Kelvin);
        assert_eq!(One.of_sum(Kelvin, true), KelvinDifference, "300 - bt(900)");
        assert_eq!(Kelvin.of_sum(One, true), Kelvin, "bt(900) - 3");
        assert_eq!(KelvinDifference.of_sum(KelvinDifference, false), KelvinDifference);
        assert_eq!(KelvinDifference.of_sum(Kelvin, true), Unknown);
        assert_eq!(Kelvin.of_spread(), KelvinDifference);
        assert_eq!(Kelvin.of_sum(One, true), Kelvin);
    }

    #[test]
    fn only_what_is_measured_differently_mixes_badly() {
        assert!(Kelvin.mixes_badly_with(Degree) && Degree.mixes_badly_with(Radiance));
        for other in [Kelvin, KelvinDifference, One, Unknown] {
            assert!(!Kelvin.mixes_badly_with(other), "{other:?}");
        }
    }

    #[test]
    fn what_does_not_fit_is_unknown() {
        assert_eq!(Kelvin.of_sum(Radiance, false), Unknown);
        assert_eq!(Radiance.of_quotient(Radiance), One);
        assert_eq!(Kelvin.of_product(One), Kelvin);
        assert_eq!(Degree.of_product(Degree), Unknown);
        assert_eq!(Unknown.of_quotient(Unknown), Unknown);
    }
}
