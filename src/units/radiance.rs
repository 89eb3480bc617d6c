//! Units of spectral radiance, and the factor that brings one to mW m-2 sr-1 (cm-1)-1.

use super::decimal::Decimal;
use super::dimension::Dimension;
use super::error::{UnitError, excerpt};
use super::light_speed::LIGHT_SPEED_CENTIMETRES;
use super::product::{self, Malformed, Product};

/// What a spectral radiance is counted per. These are different quantities: going from one to
/// another takes the Jacobian, which depends on the wavenumber.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum SpectralDensity {
    /// Per wavenumber.
    Wavenumber,
    /// Per wavelength.
    Wavelength,
    /// Per frequency.
    Frequency,
}

/// A unit of spectral radiance.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct RadianceUnit {
    density: SpectralDensity,
    /// Size in W m-2 sr-1 per m-1, per m or per Hz.
    scale: Decimal,
}

const ACCEPTED: &str = "accepted is a radiance per wavenumber such as mW m-2 sr-1 (cm-1)-1, \
     per wavelength such as W m-2 sr-1 um-1, or per frequency such as W m-2 sr-1 Hz-1";

impl RadianceUnit {
    /// mW m-2 sr-1 (cm-1)-1, in which the program works.
    pub const WORKING: Self =
        Self { density: SpectralDensity::Wavenumber, scale: Decimal::power_of_ten(-5) };

    /// Reads a unit string as CF files spell it.
    ///
    /// # Errors
    /// Text that is no unit, a unit of another quantity (also where sr-1 is missing), and a
    /// radiance "per centimetre", which is meant per cm-1 as often as it is meant literally.
    pub fn parse(text: &str) -> Result<Self, UnitError> {
        if text.trim().is_empty() {
            return Err(UnitError::Empty { accepted: ACCEPTED });
        }
        let product = product::parse(text).map_err(|fault| malformed(text, fault))?;
        let density = match product.dimension {
            Dimension::RADIANCE_PER_WAVENUMBER => SpectralDensity::Wavenumber,
            Dimension::RADIANCE_PER_WAVELENGTH if is_per_centimetre(&product) => {
                return Err(ambiguous(text));
            }
            Dimension::RADIANCE_PER_WAVELENGTH => SpectralDensity::Wavelength,
            Dimension::RADIANCE_PER_FREQUENCY => SpectralDensity::Frequency,
            other => {
                return Err(UnitError::OtherQuantity {
                    text: excerpt(text),
                    found: other.described(),
                    accepted: ACCEPTED,
                });
            }
        };
        Ok(Self { density, scale: product.scale })
    }

    /// What the radiance is counted per.
    pub fn per(&self) -> SpectralDensity {
        self.density
    }

    /// Multiply a value in this unit by this to get mW m-2 sr-1 (cm-1)-1, at `wavenumber` in cm-1.
    ///
    /// Per wavelength the Jacobian is `|d lambda / d nu| = 1 / nu^2`, per frequency it is c.
    /// Source: dimensional analysis; factors as in docs/physics.md, "Units".
    pub fn factor_at(&self, wavenumber: f64) -> f64 {
        let milliwatts_per = |power| self.scale.times(Decimal::power_of_ten(power)).value();
        match self.density {
            // 1 W = 1e3 mW and 1 m-1 = 0.01 cm-1.
            SpectralDensity::Wavenumber => milliwatts_per(5),
            // 1 W = 1e3 mW; a step of 1 cm-1 is 0.01 / nu^2 metres with nu in cm-1.
            SpectralDensity::Wavelength => milliwatts_per(1) / (wavenumber * wavenumber),
            // 1 W = 1e3 mW; a step of 1 cm-1 is 100 c hertz.
            SpectralDensity::Frequency => milliwatts_per(3) * LIGHT_SPEED_CENTIMETRES,
        }
    }

    /// The unit in one spelling, whatever the file's was.
    pub fn label(&self) -> String {
        let known = LABELS.iter().find(|(density, power, _)| {
            *density == self.density && self.scale.is_power_of_ten(*power)
        });
        match known {
            Some((_, _, label)) => (*label).to_owned(),
            None => format!("{:e} {}", self.scale.value(), self.unscaled()),
        }
    }

    fn unscaled(&self) -> &'static str {
        match self.density {
            SpectralDensity::Wavenumber => "W m-2 sr-1 (m-1)-1",
            SpectralDensity::Wavelength => "W m-2 sr-1 m-1",
            SpectralDensity::Frequency => "W m-2 sr-1 Hz-1",
        }
    }
}

impl std::fmt::Display for RadianceUnit {
    fn fmt(&self, formatter: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        formatter.write_str(&self.label())
    }
}

const LABELS: &[(SpectralDensity, i32, &str)] = &[
    (SpectralDensity::Wavenumber, -5, "mW m-2 sr-1 (cm-1)-1"),
    (SpectralDensity::Wavenumber, 0, "W m-2 sr-1 (m-1)-1"),
    (SpectralDensity::Wavenumber, -2, "W m-2 sr-1 (cm-1)-1"),
    (SpectralDensity::Wavenumber, 2, "W cm-2 sr-1 (cm-1)-1"),
    (SpectralDensity::Wavelength, 0, "W m-2 sr-1 m-1"),
    (SpectralDensity::Wavelength, 6, "W m-2 sr-1 um-1"),
    (SpectralDensity::Wavelength, 3, "mW m-2 sr-1 um-1"),
    (SpectralDensity::Wavelength, 9, "W m-2 sr-1 nm-1"),
    (SpectralDensity::Frequency, 0, "W m-2 sr-1 Hz-1"),
];

/// `W cm-2 sr-1 um-1` has an even number of centimetres: an area, and nothing to doubt.
fn is_per_centimetre(product: &Product) -> bool {
    product.centimetres % 2 != 0
}

fn ambiguous(text: &str) -> UnitError {
    UnitError::Ambiguous {
        text: excerpt(text),
        reason: "read strictly it is per centimetre of wavelength, but it is often written for \
             per cm-1, which is spelt (cm-1)-1",
        accepted: ACCEPTED,
    }
}

fn malformed(text: &str, fault: Malformed) -> UnitError {
    UnitError::Malformed {
        text: excerpt(text),
        position: fault.position,
        reason: fault.reason,
        accepted: ACCEPTED,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    // Radiance of a 280 K black body at 900 cm-1 in four units; facts computed with 50 digits
    // for docs/physics.md, "Units". They carry 12 digits, hence the tolerance of 2e-12.
    const WORKING_VALUE: f64 = 85.996_261_536_1;

    fn check(text: &str, value: f64) {
        let unit = RadianceUnit::parse(text).unwrap_or_else(|error| panic!("{error}"));
        let working = value * unit.factor_at(900.0);
        assert!((working / WORKING_VALUE - 1.0).abs() < 2e-12, "{text}: {working}");
    }

    #[test]
    fn the_working_unit_is_understood_in_every_spelling() {
        for text in [
            "mW m-2 sr-1 (cm-1)-1",
            "mW/(m2 sr cm-1)",
            "mW/m2/sr/cm-1",
            "mW m-2 sr-1 cm",
            "mW.m-2.sr-1.(cm-1)-1",
            "erg s-1 cm-2 sr-1 (cm-1)-1",
            "mW/(m^2 sr cm^-1)",
            "mW m^-2 sr^-1 (cm^-1)^-1",
            "mW/(m²·sr·cm⁻¹)",
            "mW / (m**2 * sr * cm**-1)",
            "milliwatts per meter^2 per steradian per (1/cm)",
            "1e-3 W m-2 sr-1 cm",
            "1e-5 W m-2 sr-1 (m-1)-1",
            " mW  m-2 sr-1 (cm-1)-1\n",
        ] {
            let unit = RadianceUnit::parse(text).unwrap_or_else(|error| panic!("{error}"));
            assert_eq!(unit, RadianceUnit::WORKING, "{text}");
            assert_eq!(unit.factor_at(900.0), 1.0, "{text}");
        }
    }

    #[test]
    fn one_radiance_in_four_units() {
        check("mW m-2 sr-1 (cm-1)-1", WORKING_VALUE);
        check("W m-2 sr-1 (m-1)-1", 8.599_626_153_61e-4);
        check("W m-2 sr-1 um-1", 6.965_697_184_42);
        check("W m-2 sr-1 m-1", 6.965_697_184_42e6);
        check("W m-3 sr-1", 6.965_697_184_42e6);
        check("W/m2/sr/µm", 6.965_697_184_42);
        check("mW cm-2 sr-1 um-1", 0.696_569_718_442);
        check("W m-2 sr-1 Hz-1", 2.868_526_516_97e-12);
        check("W m-2 sr-1 GHz-1", 2.868_526_516_97e-3);
    }

    #[test]
    fn factors_between_units() {
        let factor = |text| RadianceUnit::parse(text).unwrap().factor_at(900.0);
        assert_eq!(factor("W m-2 sr-1 (m-1)-1"), 1e5);
        assert_eq!(factor("W cm-2 sr-1 (cm-1)-1"), 1e7);
        assert_eq!(factor("nW cm-2 sr-1 (cm-1)-1"), 0.01);
        // The factor is given with 10 digits.
        let per_hertz = 1.0 / factor("W m-2 sr-1 Hz-1");
        assert!((per_hertz / 3.335_640_952e-14 - 1.0).abs() < 1e-9);
    }

    #[test]
    fn other_quantities_are_refused_by_name() {
        for (text, found) in [
            ("mW m-2 (cm-1)-1", "sr-1 is missing"),
            ("W m-2 sr-1", "summed over the spectrum"),
            ("K", "a temperature"),
            ("1", "a plain number"),
            ("W/m2-sr-um", "another quantity"),
        ] {
            let message = RadianceUnit::parse(text).unwrap_err().to_string();
            assert!(message.contains(found), "{message}");
            assert!(message.contains("mW m-2 sr-1 (cm-1)-1"), "{message}");
        }
    }

    #[test]
    fn per_centimetre_is_not_guessed() {
        for text in ["mW m-2 sr-1 cm-1", "mW/m2/sr/cm", "mW/m2/sr cm-1", "W cm-3 sr-1"] {
            let refused = RadianceUnit::parse(text);
            assert!(matches!(refused, Err(UnitError::Ambiguous { .. })), "{text}: {refused:?}");
        }
    }

    #[test]
    fn hostile_text_is_escaped_and_cut() {
        let message = RadianceUnit::parse("\u{1b}[31mW\u{202e}").unwrap_err().to_string();
        assert!(!message.contains('\u{1b}') && !message.contains('\u{202e}'), "{message}");
        let message = RadianceUnit::parse(&"x".repeat(100_000)).unwrap_err().to_string();
        assert!(message.len() < 1000);
    }

    #[test]
    fn labels_read_back_as_the_same_unit() {
        for text in ["mW m-2 sr-1 cm", "W/m2/sr/nm", "2.5 W m-2 sr-1 um-1", "kW m-2 sr-1 Hz-1"] {
            let unit = RadianceUnit::parse(text).unwrap();
            let again = RadianceUnit::parse(&unit.label()).unwrap();
            assert_eq!(again.per(), unit.per());
            // Digits written out and read back may differ in the last one.
            assert!((again.factor_at(900.0) / unit.factor_at(900.0) - 1.0).abs() < 1e-15);
        }
    }

    proptest::proptest! {
        /// The Jacobian there and back: what a factor does, its inverse undoes.
        #[test]
        fn per_wavelength_and_back(wavenumber in 100.0..4000.0f64, radiance in -1.0..300.0f64) {
            let unit = RadianceUnit::parse("W m-2 sr-1 um-1").unwrap();
            let per_micrometre = radiance / unit.factor_at(wavenumber);
            // Jacobian nu^2 * 1e-7 written out; two roundings each way.
            let expected = radiance * wavenumber * wavenumber * 1e-7;
            proptest::prop_assert!((per_micrometre - expected).abs() <= 1e-15 * expected.abs());
        }
    }
}
