//! Places in the spectrum: `900`, `900cm-1`, `11.1um`, `11100nm`.

/// The units in which a place may be given.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum LengthOrWavenumber {
    /// cm-1, the unit of a bare number.
    PerCentimetre,
    /// m-1.
    PerMetre,
    /// um.
    Micrometre,
    /// nm.
    Nanometre,
}

/// Spellings; the first of each unit is the one that is printed. Longer spellings stand before
/// those that they begin with.
const SPELLINGS: &[(&str, LengthOrWavenumber)] = &[
    ("cm-1", LengthOrWavenumber::PerCentimetre),
    ("cm^-1", LengthOrWavenumber::PerCentimetre),
    ("m-1", LengthOrWavenumber::PerMetre),
    ("m^-1", LengthOrWavenumber::PerMetre),
    ("um", LengthOrWavenumber::Micrometre),
    // Micro sign and Greek mu look alike and both are typed.
    ("\u{b5}m", LengthOrWavenumber::Micrometre),
    ("\u{3bc}m", LengthOrWavenumber::Micrometre),
    ("nm", LengthOrWavenumber::Nanometre),
];

impl LengthOrWavenumber {
    /// The unit at the start of a text, and the length of its spelling in bytes.
    pub fn at_start_of(text: &str) -> Option<(Self, usize)> {
        SPELLINGS.iter().find(|(spelling, _)| text.starts_with(spelling)).and_then(
            |(spelling, unit)| {
                let ends = !text[spelling.len()..].starts_with(|c: char| c.is_alphanumeric());
                ends.then_some((*unit, spelling.len()))
            },
        )
    }

    /// How it is written.
    pub fn label(self) -> &'static str {
        SPELLINGS.iter().find(|(_, unit)| *unit == self).map_or("", |(spelling, _)| spelling)
    }
}

/// A place in the spectrum, as typed; its value is finite and positive.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Place {
    value: f64,
    unit: LengthOrWavenumber,
}

impl Place {
    /// A place; `None` when the value, or its wavenumber, is not finite and positive.
    pub fn new(value: f64, unit: LengthOrWavenumber) -> Option<Self> {
        let place = Self { value, unit };
        let usable = |number: f64| number.is_finite() && number > 0.0;
        (usable(value) && usable(place.wavenumber())).then_some(place)
    }

    /// The number as typed.
    pub fn value(self) -> f64 {
        self.value
    }

    /// The unit as typed.
    pub fn unit(self) -> LengthOrWavenumber {
        self.unit
    }

    /// Its wavenumber, cm-1.
    pub fn wavenumber(self) -> f64 {
        match self.unit {
            LengthOrWavenumber::PerCentimetre => self.value,
            LengthOrWavenumber::PerMetre => self.value / 100.0,
            LengthOrWavenumber::Micrometre => 1e4 / self.value,
            LengthOrWavenumber::Nanometre => 1e7 / self.value,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lengths_become_wavenumbers() {
        let place = |value, unit| Place::new(value, unit).unwrap().wavenumber();
        assert_eq!(place(900.0, LengthOrWavenumber::PerCentimetre), 900.0);
        assert_eq!(place(90_000.0, LengthOrWavenumber::PerMetre), 900.0);
        assert_eq!(place(10.0, LengthOrWavenumber::Micrometre), 1000.0);
        assert_eq!(place(12_500.0, LengthOrWavenumber::Nanometre), 800.0);
    }

    #[test]
    fn senseless_places_are_refused() {
        for value in [0.0, -1.0, f64::NAN, f64::INFINITY, 1e-320] {
            assert_eq!(Place::new(value, LengthOrWavenumber::Micrometre), None, "{value}");
        }
    }

    #[test]
    fn a_unit_ends_where_its_spelling_ends() {
        assert_eq!(
            LengthOrWavenumber::at_start_of("um)"),
            Some((LengthOrWavenumber::Micrometre, 2))
        );
        assert_eq!(
            LengthOrWavenumber::at_start_of("\u{b5}m .."),
            Some((LengthOrWavenumber::Micrometre, 3))
        );
        assert_eq!(LengthOrWavenumber::at_start_of("umm"), None);
        assert_eq!(LengthOrWavenumber::at_start_of("cm-12"), None);
        assert_eq!(LengthOrWavenumber::at_start_of("km"), None);
    }
}
