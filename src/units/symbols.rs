//! The units and prefixes that the parser knows, under the names that UDUNITS gives them.

use super::decimal::Decimal;
use super::dimension::Dimension;

/// One unit: what it measures and its size in SI base units.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Symbol {
    pub dimension: Dimension,
    pub scale: Decimal,
}

/// Symbols are read as they stand: `mW` and `MW` differ.
const SYMBOLS: &[(&str, Dimension, i32)] = &[
    ("m", Dimension::LENGTH, 0),
    ("g", Dimension::MASS, -3),
    ("s", Dimension::TIME, 0),
    ("K", Dimension::TEMPERATURE, 0),
    ("sr", Dimension::SOLID_ANGLE, 0),
    ("rad", Dimension::ANGLE, 0),
    ("Hz", Dimension::FREQUENCY, 0),
    ("J", Dimension::ENERGY, 0),
    ("W", Dimension::POWER, 0),
];

/// Names are read without regard to case, alone or in the plural.
const NAMES: &[(&str, Dimension, i32)] = &[
    ("metre", Dimension::LENGTH, 0),
    ("meter", Dimension::LENGTH, 0),
    ("micron", Dimension::LENGTH, -6),
    ("gram", Dimension::MASS, -3),
    ("second", Dimension::TIME, 0),
    ("sec", Dimension::TIME, 0),
    ("kelvin", Dimension::TEMPERATURE, 0),
    ("steradian", Dimension::SOLID_ANGLE, 0),
    ("radian", Dimension::ANGLE, 0),
    ("hertz", Dimension::FREQUENCY, 0),
    ("joule", Dimension::ENERGY, 0),
    ("erg", Dimension::ENERGY, -7),
    ("watt", Dimension::POWER, 0),
];

const SYMBOL_PREFIXES: &[(&str, i32)] = &[
    ("f", -15),
    ("p", -12),
    ("n", -9),
    ("u", -6),
    // The micro sign and the Greek letter look alike and are both written.
    ("\u{b5}", -6),
    ("\u{3bc}", -6),
    ("m", -3),
    ("c", -2),
    ("d", -1),
    ("h", 2),
    ("k", 3),
    ("M", 6),
    ("G", 9),
    ("T", 12),
];

const NAME_PREFIXES: &[(&str, i32)] = &[
    ("femto", -15),
    ("pico", -12),
    ("nano", -9),
    ("micro", -6),
    ("milli", -3),
    ("centi", -2),
    ("deci", -1),
    ("hecto", 2),
    ("kilo", 3),
    ("mega", 6),
    ("giga", 9),
    ("tera", 12),
];

/// The unit that `word` means, with or without a prefix; none where it means nothing here.
pub fn symbol(word: &str) -> Option<Symbol> {
    let lower = word.to_lowercase();
    plain(SYMBOLS, word)
        .or_else(|| prefixed(SYMBOL_PREFIXES, word, |rest| plain(SYMBOLS, rest)))
        .or_else(|| name(&lower))
        .or_else(|| prefixed(NAME_PREFIXES, &lower, name))
}

fn plain(table: &[(&str, Dimension, i32)], word: &str) -> Option<Symbol> {
    let (_, dimension, power) = table.iter().find(|(text, _, _)| *text == word)?;
    Some(Symbol { dimension: *dimension, scale: Decimal::power_of_ten(*power) })
}

fn name(word: &str) -> Option<Symbol> {
    plain(NAMES, word).or_else(|| plain(NAMES, word.strip_suffix('s')?))
}

fn prefixed(
    prefixes: &[(&str, i32)],
    word: &str,
    unit: impl Fn(&str) -> Option<Symbol>,
) -> Option<Symbol> {
    prefixes.iter().find_map(|(prefix, power)| {
        let symbol = unit(word.strip_prefix(prefix)?)?;
        Some(Symbol { scale: symbol.scale.times(Decimal::power_of_ten(*power)), ..symbol })
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn size(word: &str) -> Option<f64> {
        symbol(word).map(|symbol| symbol.scale.value())
    }

    #[test]
    fn case_matters_in_symbols_and_not_in_names() {
        assert_eq!(size("mW"), Some(1e-3));
        assert_eq!(size("MW"), Some(1e6));
        assert_eq!(size("MilliWatts"), Some(1e-3));
        assert_eq!(size("w"), None);
    }

    #[test]
    fn a_unit_wins_over_a_prefix() {
        assert_eq!(symbol("m").unwrap().dimension, Dimension::LENGTH);
        assert_eq!(size("mm"), Some(1e-3));
    }

    #[test]
    fn micrometres_are_spelt_in_many_ways() {
        for word in
            ["um", "µm", "μm", "micrometer", "micrometers", "Micrometre", "micron", "microns"]
        {
            assert_eq!(size(word), Some(1e-6), "{word}");
        }
    }
}
