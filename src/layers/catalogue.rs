//! Named indices: what is known about each, and names that expressions may use.

use std::collections::BTreeMap;
use std::sync::OnceLock;

use super::syntax::Expression;

/// A named index.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Index {
    /// As written in an expression.
    pub name: &'static str,
    /// What it stands for.
    pub expression: &'static str,
    /// Unit; empty for a pure number or a truth.
    pub unit: &'static str,
    /// The range in which it usually lies.
    pub usual: Option<(f64, f64)>,
    /// What it shows.
    pub shows: &'static str,
    /// When it misleads.
    pub fails: &'static str,
    /// Where it comes from.
    pub source: &'static str,
}

/// The index of a name.
pub fn index(name: &str) -> Option<&'static Index> {
    super::indices::INDICES.iter().find(|index| index.name == name)
}

/// What a name of the catalogue stands for.
pub fn index_expression(name: &str) -> Option<&'static Expression> {
    static READ: OnceLock<BTreeMap<&str, Expression>> = OnceLock::new();
    let read = READ.get_or_init(|| {
        let indices = super::indices::INDICES.iter();
        indices
            .filter_map(|one| Some((one.name, Expression::parse(one.expression).ok()?)))
            .collect()
    });
    read.get(name)
}

/// The catalogue as the table of `docs/layers.md`.
pub fn indices_as_markdown() -> String {
    let mut text = String::from(
        "| name | expression | usual | shows | misleads | source |\n| --- | --- | --- | --- | --- | --- |\n",
    );
    for index in super::indices::INDICES {
        let Index { name, expression, shows, fails, source, .. } = index;
        let usual = index.usual_words();
        text +=
            &format!("| `{name}` | `{expression}` | {usual} | {shows} | {fails} | {source} |\n");
    }
    text
}

impl Index {
    /// Usual range and unit in words; empty where there is none.
    pub fn usual_words(&self) -> String {
        let words = self.usual.map(|(low, high)| format!("{low} to {high} {}", self.unit));
        words.unwrap_or_default().trim_end().to_owned()
    }
}

#[cfg(test)]
mod tests {
    use super::super::indices::INDICES;
    use super::super::syntax::{DERIVED_NAMES, FRIENDLY_NAMES, functions};
    use super::*;
    use crate::layers::{FakeNames, evaluate};

    #[test]
    fn every_index_can_be_read_and_says_what_must_be_known() {
        for index in INDICES {
            let read =
                Expression::parse(index.expression).unwrap_or_else(|error| panic!("{error}"));
            assert_eq!(read.to_string(), index.expression, "written in the plain form");
            for words in [index.shows, index.fails, index.source] {
                assert!(!words.is_empty() && !words.contains('|'), "{}", index.name);
            }
            assert!(index.usual.is_none_or(|(low, high)| low < high), "{}", index.name);
        }
    }

    #[test]
    fn names_are_taken_once_and_none_hides_a_word_of_the_language() {
        for (place, index) in INDICES.iter().enumerate() {
            let mut fields = FRIENDLY_NAMES.iter().chain(DERIVED_NAMES);
            let taken = fields.any(|field| field.name == index.name)
                || functions().any(|(name, _)| name == index.name)
                || INDICES[..place].iter().any(|other| other.name == index.name);
            assert!(!taken, "{}", index.name);
            assert_eq!(Expression::parse(index.name).unwrap().names(), [index.name]);
        }
    }

    /// Every index has numbers where the file gives what it asks for: no name in it is unknown, no
    /// definition leads in a circle.
    #[test]
    fn every_index_comes_to_something() {
        let mut names = FakeNames::black_bodies(&[3, 3, 9]);
        // Sea and land are both there, by fraction.
        let values: Vec<f64> = (0..81).map(|at| if at < 40 { 0.05 } else { 1.0 }).collect();
        for field in FRIENDLY_NAMES.iter().chain(DERIVED_NAMES) {
            names = names.with(field.name, &values);
        }
        for index in INDICES {
            let layer = evaluate(&Expression::parse(index.name).unwrap(), &names);
            let layer = layer.unwrap_or_else(|error| panic!("{}: {error}", index.name));
            assert!(layer.values.iter().any(|value| value.is_finite()), "{}", index.name);
        }
    }

    #[test]
    fn a_definition_comes_before_an_index_of_the_same_name() {
        let names = FakeNames::black_bodies(&[2]).defining("bt11", "1 + 1");
        let value =
            |text: &str| evaluate(&Expression::parse(text).unwrap(), &names).unwrap().values[0];
        assert_eq!(value("bt11"), 2.0);
        assert_eq!(value("bt11 - 1"), 1.0);
    }

    #[test]
    fn the_document_has_the_catalogue() {
        let document = include_str!("../../docs/layers.md");
        assert!(
            document.contains(&indices_as_markdown()),
            "the catalogue in docs/layers.md is not that of the code; it ought to be\n{}",
            indices_as_markdown()
        );
    }
}
