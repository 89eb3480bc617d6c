//! Scale factors kept as `mantissa * 10^power`, so that prefixes multiply without rounding.

/// A positive factor. Prefixes only touch `power`; only numbers written out touch `mantissa`.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Decimal {
    /// What is left when powers of ten are taken out.
    pub mantissa: f64,
    /// The power of ten.
    pub power: i32,
}

impl Decimal {
    /// `10^power`.
    pub const fn power_of_ten(power: i32) -> Self {
        Self { mantissa: 1.0, power }
    }

    /// The product.
    pub fn times(self, other: Self) -> Self {
        Self { mantissa: self.mantissa * other.mantissa, power: self.power + other.power }
    }

    /// The factor raised to a small integer.
    pub fn raised(self, exponent: i32) -> Self {
        Self { mantissa: self.mantissa.powi(exponent), power: self.power * exponent }
    }

    /// The factor as a number. Powers up to 22 are exact in f64, and dividing by an exact power
    /// rounds once, where multiplying by its inverse would round twice.
    pub fn value(self) -> f64 {
        if self.power >= 0 {
            self.mantissa * 10f64.powi(self.power)
        } else {
            self.mantissa / 10f64.powi(-self.power)
        }
    }

    /// Whether the factor is `10^power`, however it was written.
    pub fn is_power_of_ten(self, power: i32) -> bool {
        // A mantissa typed as decimal digits carries at most a few roundings of 1e-16.
        let ratio = Self { mantissa: self.mantissa, power: self.power.saturating_sub(power) };
        (ratio.value() - 1.0).abs() < 1e-12
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn prefixes_multiply_exactly() {
        let milli = Decimal::power_of_ten(-3);
        let per_centimetre = Decimal::power_of_ten(-2).raised(-1);
        assert_eq!(milli.times(per_centimetre.raised(-1)).value(), 1e-5);
    }

    #[test]
    fn a_written_number_is_recognised_as_a_power_of_ten() {
        assert!(Decimal { mantissa: 0.001, power: 0 }.is_power_of_ten(-3));
        assert!(!Decimal { mantissa: 0.0011, power: 0 }.is_power_of_ten(-3));
    }
}
