//! Expressions for a first look at a granule, and what a command line may offer.

use super::indices::INDICES;
use super::syntax::{DERIVED_NAMES, FRIENDLY_NAMES, functions};

/// Expression and short label of what is shown for a footprint at first: window temperatures and
/// the differences that tell cloud, dust and ozone. Wavenumbers are those of clean windows in
/// common use; a file that lacks a channel goes without its row.
pub const FIRST_LOOK: &[(&str, &str)] = &[
    ("bt(900)", "window 11 um"),
    ("bt(1231)", "window 8 um"),
    ("bt(2616)", "window 3.8 um"),
    ("bt(900) - bt(831)", "split window"),
    ("bt(961) - bt(1231)", "dust"),
    ("bt(1042) - bt(900)", "ozone - window"),
    ("bt(710..720)", "CO2 14 um"),
    ("sd3(bt(900))", "spread 3x3"),
];

/// What to offer where a layer is typed: the first look, the catalogue, the geolocation, the
/// functions.
pub fn suggestions() -> impl Iterator<Item = &'static str> {
    FIRST_LOOK
        .iter()
        .map(|(expression, _)| *expression)
        .chain(INDICES.iter().map(|index| index.name))
        .chain(FRIENDLY_NAMES.iter().chain(DERIVED_NAMES).map(|field| field.name))
        .chain(functions().map(|(_, example)| example))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::layers::Expression;

    #[test]
    fn every_suggestion_can_be_read() {
        for text in suggestions() {
            assert!(Expression::parse(text).is_ok(), "{text}");
        }
    }

    #[test]
    fn labels_fit_a_narrow_pane() {
        for (expression, label) in FIRST_LOOK {
            assert!(label.len() <= 14, "{label}");
            assert_eq!(Expression::parse(expression).unwrap().to_string(), *expression);
        }
    }
}
