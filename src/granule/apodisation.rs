//! How a file says that its spectra are apodised.

use super::band::Apodisation;
use super::problem::Problem;
use crate::netcdf_files::{Attribute, FileIndex, Variable};
use crate::system::clean_text;

/// Free texts in which a producer may mention it.
const FREE_TEXTS: [&str; 6] =
    ["comment", "long_name", "description", "processing", "summary", "title"];

/// What the file says about a band: on the variable, its axis, their groups, the file, in this order.
pub fn find(
    index: &FileIndex,
    variable: &Variable,
    axis: &Variable,
    problems: &mut Vec<Problem>,
) -> Apodisation {
    let mut places: Vec<&[Attribute]> = vec![&variable.attributes, &axis.attributes];
    let mut around = Some(variable.group);
    while let Some(group) = around {
        places.push(&index.groups[group].attributes);
        around = index.groups[group].parent;
    }
    if let Some(found) = places.iter().find_map(|attributes| from_attributes(attributes)) {
        return found;
    }
    problems.push(Problem::missing(
        "the file does not say how the spectra are apodised",
        &variable.path,
        "give it as attribute `apodization` (none, Hamming, …) of the variable or the file",
    ));
    Apodisation::Unknown
}

fn from_attributes(attributes: &[Attribute]) -> Option<Apodisation> {
    let text =
        |attribute: &Attribute| attribute.value.text().filter(|text| !text.trim().is_empty());
    let named = attributes.iter().filter(|attribute| {
        let name = attribute.name.to_lowercase();
        name.contains("apodization") || name.contains("apodisation")
    });
    if let Some(words) = named.filter_map(text).next() {
        return Some(from_words(&words));
    }
    let free = attributes
        .iter()
        .filter(|attribute| FREE_TEXTS.contains(&attribute.name.to_lowercase().as_str()));
    free.filter_map(text).find_map(|words| mentioned(&words))
}

/// The value of an attribute that is about nothing else.
pub fn from_words(words: &str) -> Apodisation {
    let lower = words.trim().to_lowercase();
    if says_none(&lower) || ["none", "no", "off", "boxcar", "sinc"].contains(&lower.as_str()) {
        Apodisation::None
    } else if lower.contains("hamming") {
        Apodisation::Hamming
    } else if ["unknown", ""].contains(&lower.as_str()) {
        Apodisation::Unknown
    } else {
        Apodisation::Other(clean_text(words.trim()))
    }
}

/// A free text counts only where it speaks of it in so many words.
fn mentioned(words: &str) -> Option<Apodisation> {
    let lower = words.to_lowercase();
    if says_none(&lower) {
        Some(Apodisation::None)
    } else if lower.contains("apodi") && lower.contains("hamming") {
        Some(Apodisation::Hamming)
    } else {
        None
    }
}

fn says_none(lower: &str) -> bool {
    ["unapodi", "not apodi", "no apodi", "non-apodi", "without apodi"]
        .iter()
        .any(|words| lower.contains(words))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn said(name: &str, words: &str) -> Option<Apodisation> {
        from_attributes(&[Attribute { name: name.into(), value: words.into() }])
    }

    #[test]
    fn an_attribute_of_its_own_counts_in_any_spelling() {
        assert_eq!(said("apodization", "Hamming"), Some(Apodisation::Hamming));
        assert_eq!(said("Apodisation_function", "none"), Some(Apodisation::None));
        assert_eq!(said("apodization", "unapodized"), Some(Apodisation::None));
        let other = Apodisation::Other("Gaussian, FWHM 0.5 cm-1".into());
        assert_eq!(said("apodization", "Gaussian, FWHM 0.5 cm-1"), Some(other));
    }

    #[test]
    fn free_text_counts_only_where_it_is_plain() {
        assert_eq!(said("comment", "Unapodized calibrated spectra"), Some(Apodisation::None));
        assert_eq!(said("comment", "Hamming apodization was applied"), Some(Apodisation::Hamming));
        assert_eq!(said("comment", "made at the Hamming institute"), None);
        assert_eq!(said("comment", "apodised"), None);
    }

    #[test]
    fn its_text_is_made_safe() {
        assert_eq!(
            said("apodization", "x\x1b[2J"),
            Some(Apodisation::Other("x\u{FFFD}[2J".into()))
        );
    }
}
