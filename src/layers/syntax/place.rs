//! Places in the spectrum: `900`, `900cm-1`, `11.1um`, `11100nm`.

use crate::units::SpectralUnit;

/// A place in the spectrum, as typed; its value is finite and positive.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Place {
    value: f64,
    unit: SpectralUnit,
}

impl Place {
    /// A place; `None` when the value, or its wavenumber, is not finite and positive.
    pub fn new(value: f64, unit: SpectralUnit) -> Option<Self> {
        let place = Self { value, unit };
        let usable = |number: f64| number.is_finite() && number > 0.0;
        (usable(value) && usable(place.wavenumber())).then_some(place)
    }

    /// The number as typed.
    pub fn value(self) -> f64 {
        self.value
    }

    /// The unit as typed.
    pub fn unit(self) -> SpectralUnit {
        self.unit
    }

    /// Its wavenumber, cm-1.
    pub fn wavenumber(self) -> f64 {
        self.unit.to_wavenumber(self.value)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lengths_become_wavenumbers() {
        let place = |value, unit| Place::new(value, unit).unwrap().wavenumber();
        assert_eq!(place(900.0, SpectralUnit::PerCentimetre), 900.0);
        assert_eq!(place(90_000.0, SpectralUnit::PerMetre), 900.0);
        assert_eq!(place(10.0, SpectralUnit::Micrometre), 1000.0);
        assert_eq!(place(12_500.0, SpectralUnit::Nanometre), 800.0);
    }

    #[test]
    fn senseless_places_are_refused() {
        for value in [0.0, -1.0, f64::NAN, f64::INFINITY, 1e-320] {
            assert_eq!(Place::new(value, SpectralUnit::Micrometre), None, "{value}");
        }
    }
}
