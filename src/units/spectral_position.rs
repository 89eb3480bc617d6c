//! Units of spectral axes: wavenumbers, wavelengths and frequencies.

use super::dimension::Dimension;
use super::error::{UnitError, excerpt};
use super::light_speed::LIGHT_SPEED_CENTIMETRES;
use super::product;

/// The unit of a spectral axis. Wavelengths are in vacuum.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum SpectralUnit {
    /// cm-1
    PerCentimetre,
    /// m-1
    PerMetre,
    /// um
    Micrometre,
    /// nm
    Nanometre,
    /// m
    Metre,
    /// Hz
    Hertz,
    /// GHz
    Gigahertz,
    /// THz
    Terahertz,
}

use SpectralUnit::{
    Gigahertz, Hertz, Metre, Micrometre, Nanometre, PerCentimetre, PerMetre, Terahertz,
};

/// Dimension, power of ten in SI, and label of each unit.
const UNITS: &[(SpectralUnit, Dimension, i32, &str)] = &[
    (PerCentimetre, Dimension::WAVENUMBER, 2, "cm-1"),
    (PerMetre, Dimension::WAVENUMBER, 0, "m-1"),
    (Micrometre, Dimension::LENGTH, -6, "um"),
    (Nanometre, Dimension::LENGTH, -9, "nm"),
    (Metre, Dimension::LENGTH, 0, "m"),
    (Hertz, Dimension::FREQUENCY, 0, "Hz"),
    (Gigahertz, Dimension::FREQUENCY, 9, "GHz"),
    (Terahertz, Dimension::FREQUENCY, 12, "THz"),
];

const ACCEPTED: &str = "accepted are cm-1, m-1, um, nm, m, Hz, GHz and THz";
const ACCEPTED_POSITIONS: &str = "accepted are 900, 900cm-1, 11.1um and the like, in cm-1, m-1, \
     um, nm, m, Hz, GHz or THz; a bare number is in cm-1";

impl SpectralUnit {
    /// Reads a unit string as CF files spell it.
    ///
    /// # Errors
    /// Text that is no unit, a unit of another quantity, and sizes that no axis uses.
    pub fn parse(text: &str) -> Result<Self, UnitError> {
        if text.trim().is_empty() {
            return Err(UnitError::Empty { accepted: ACCEPTED });
        }
        let product = product::parse(text).map_err(|fault| UnitError::Malformed {
            text: excerpt(text),
            position: fault.position,
            reason: fault.reason,
            accepted: ACCEPTED,
        })?;
        let same_dimension = || UNITS.iter().filter(|row| row.1 == product.dimension);
        if let Some(row) = same_dimension().find(|row| product.scale.is_power_of_ten(row.2)) {
            return Ok(row.0);
        }
        Err(match same_dimension().next() {
            Some(_) => UnitError::OtherSize { text: excerpt(text), accepted: ACCEPTED },
            None => UnitError::OtherQuantity {
                text: excerpt(text),
                found: product.dimension.described(),
                accepted: ACCEPTED,
            },
        })
    }

    /// The wavenumber in cm-1 of a position in this unit.
    pub fn to_wavenumber(self, position: f64) -> f64 {
        match self {
            PerCentimetre => position,
            PerMetre => position / 100.0,
            Micrometre => 1e4 / position,
            Nanometre => 1e7 / position,
            Metre => 0.01 / position,
            Hertz => position / LIGHT_SPEED_CENTIMETRES,
            Gigahertz => position * 1e9 / LIGHT_SPEED_CENTIMETRES,
            Terahertz => position * 1e12 / LIGHT_SPEED_CENTIMETRES,
        }
    }

    /// The unit in one spelling, whatever the file's was.
    pub fn label(self) -> &'static str {
        UNITS.iter().find(|row| row.0 == self).map_or("", |row| row.3)
    }
}

/// The wavenumber in cm-1 of a position as a person types it: `900`, `900cm-1`, `11.1um`, `27 THz`.
///
/// # Errors
/// No number, a number that is not positive and finite, or a unit that is none.
pub fn wavenumber_from_text(text: &str) -> Result<f64, UnitError> {
    let refused = |reason| UnitError::NoPosition {
        text: excerpt(text),
        reason,
        accepted: ACCEPTED_POSITIONS,
    };
    let (number, unit) = number_and_unit(text.trim());
    let Ok(position) = number.parse::<f64>() else {
        return Err(refused("it does not begin with a number"));
    };
    let unit = if unit.is_empty() { PerCentimetre } else { SpectralUnit::parse(unit)? };
    let wavenumber = unit.to_wavenumber(position);
    if position > 0.0 && wavenumber.is_normal() {
        Ok(wavenumber)
    } else {
        Err(refused("it must be positive and finite"))
    }
}

/// Splits `1e-5m` into `1e-5` and `m`: the number is the longest beginning that reads as one.
fn number_and_unit(text: &str) -> (&str, &str) {
    let letters = |character: char| !character.is_ascii_digit() && !"+-.eE".contains(character);
    let longest = text.find(letters).unwrap_or(text.len());
    let end = (0..=longest)
        .rev()
        .filter(|end| text.is_char_boundary(*end))
        .find(|end| text[..*end].parse::<f64>().is_ok())
        .unwrap_or(0);
    (&text[..end], text[end..].trim())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn axis_units_are_understood_in_every_spelling() {
        for (unit, spellings) in [
            (PerCentimetre, "cm-1|cm^-1|1/cm|cm⁻¹|cm**-1|(cm)-1|centimeter^-1|100 m-1|1 per cm"),
            (PerMetre, "m-1|m^-1|1/m|1 m-1|meter-1"),
            (Micrometre, "um|µm|μm|micrometer|micrometers|micron|microns|Microns|1e-6 m"),
            (Nanometre, "nm|nanometers|nanometre"),
            (Metre, "m|meters|metre"),
            (Hertz, "Hz|hertz|s-1|1/s"),
            (Gigahertz, "GHz|gigahertz"),
            (Terahertz, "THz"),
        ] {
            for text in spellings.split('|') {
                assert_eq!(SpectralUnit::parse(text), Ok(unit), "{text}");
            }
        }
    }

    #[test]
    fn refused_units_are_told_what_is_accepted() {
        for (text, word) in
            [("", "no unit"), ("mm-1", "size"), ("K", "temperature"), ("furlong", "no unit known")]
        {
            let message = SpectralUnit::parse(text).unwrap_err().to_string();
            assert!(message.contains(word) && message.contains("THz"), "{message}");
        }
    }

    #[test]
    fn labels_read_back() {
        for row in UNITS {
            assert_eq!(SpectralUnit::parse(row.0.label()), Ok(row.0));
        }
    }

    #[test]
    fn one_place_in_the_spectrum_in_every_unit() {
        // 1000 cm-1 is 10 um and, with c exact, 29.9792458 THz.
        for (unit, position) in [
            (PerCentimetre, 1000.0),
            (PerMetre, 1e5),
            (Micrometre, 10.0),
            (Nanometre, 1e4),
            (Metre, 1e-5),
            (Hertz, 29.979_245_8e12),
            (Gigahertz, 29_979.245_8),
            (Terahertz, 29.979_245_8),
        ] {
            let wavenumber = unit.to_wavenumber(position);
            // Two roundings at the most.
            assert!((wavenumber - 1000.0).abs() < 3e-13, "{unit:?}: {wavenumber}");
        }
    }

    #[test]
    fn positions_as_people_type_them() {
        for (text, wavenumber) in [
            ("900", 900.0),
            (" 900.3125 ", 900.3125),
            ("900cm-1", 900.0),
            ("900 cm^-1", 900.0),
            ("9e2", 900.0),
            ("12.5um", 800.0),
            ("12.5µm", 800.0),
            ("12500 nm", 800.0),
            ("1.25e-5m", 800.0),
        ] {
            let read = wavenumber_from_text(text).unwrap_or_else(|error| panic!("{error}"));
            assert!((read / wavenumber - 1.0).abs() < 1e-15, "{text}: {read}");
        }
    }

    #[test]
    fn senseless_positions_are_refused() {
        for text in ["", "um", "0", "-900", "nan", "inf", "900K", "900 900", "1e400", "é9"] {
            assert!(wavenumber_from_text(text).is_err(), "{text}");
        }
    }

    proptest::proptest! {
        #[test]
        fn no_text_makes_the_reading_fail(text in "\\PC{0,20}") {
            let _ = wavenumber_from_text(&text);
        }
    }
}
