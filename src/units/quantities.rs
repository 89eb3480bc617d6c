//! Numbers that carry their unit in their type.

/// A vacuum wavenumber in cm-1: finite and greater than zero.
#[derive(Debug, Clone, Copy, PartialEq, PartialOrd)]
pub struct Wavenumber(f64);

/// A temperature in K: finite and greater than zero.
#[derive(Debug, Clone, Copy, PartialEq, PartialOrd)]
pub struct Kelvin(f64);

/// A spectral radiance in mW m-2 sr-1 (cm-1)-1: finite. Zero and less are valid measurements,
/// because noise around a faint scene falls on both sides of zero.
#[derive(Debug, Clone, Copy, PartialEq, PartialOrd)]
pub struct Radiance(f64);

impl Wavenumber {
    /// The wavenumber, or none where `per_centimetre` is not finite or not positive.
    pub fn new(per_centimetre: f64) -> Option<Self> {
        positive(per_centimetre).map(Self)
    }

    /// In cm-1.
    pub fn value(self) -> f64 {
        self.0
    }

    /// The vacuum wavelength in um, `10000 / nu`.
    pub fn wavelength_micrometres(self) -> f64 {
        1e4 / self.0
    }
}

impl Kelvin {
    /// The temperature, or none where `kelvin` is not finite or not positive.
    pub fn new(kelvin: f64) -> Option<Self> {
        positive(kelvin).map(Self)
    }

    /// In K.
    pub fn value(self) -> f64 {
        self.0
    }
}

impl Radiance {
    /// The radiance, or none where it is not finite.
    pub fn new(milliwatts: f64) -> Option<Self> {
        milliwatts.is_finite().then_some(Self(milliwatts))
    }

    /// In mW m-2 sr-1 (cm-1)-1.
    pub fn value(self) -> f64 {
        self.0
    }
}

fn positive(value: f64) -> Option<f64> {
    (value.is_finite() && value > 0.0).then_some(value)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn senseless_numbers_are_no_quantities() {
        for senseless in [0.0, -1.0, f64::NAN, f64::INFINITY] {
            assert_eq!(Wavenumber::new(senseless), None);
            assert_eq!(Kelvin::new(senseless), None);
        }
        assert_eq!(Radiance::new(f64::NAN), None);
    }

    #[test]
    fn a_negative_radiance_is_a_measurement() {
        assert_eq!(Radiance::new(-0.002).map(Radiance::value), Some(-0.002));
    }

    #[test]
    fn wavelength_is_ten_thousand_over_wavenumber() {
        assert_eq!(Wavenumber::new(900.0).unwrap().wavelength_micrometres(), 1e4 / 900.0);
    }
}
