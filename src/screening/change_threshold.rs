//! One threshold changed in the text of a rulebook, everything else left as it was written: comments,
//! layout, and tables over several lines.

use std::ops::Range;

use toml::de::{DeTable, DeValue};
use toml::{Spanned, Value};

use super::Rulebook;

/// The text with the threshold of a test changed: a number becomes `to`, a table or an expression is
/// moved by it. `way` counts the test itself as 0 and its substitutes from 1. Returns the text, and
/// the old and the new threshold as written; of a table its values.
///
/// # Errors
/// In words: no such test, a threshold of a kind that can't be moved, or a rulebook that would not be
/// read afterwards.
pub fn with_threshold(
    text: &str,
    test: &str,
    way: usize,
    to: f64,
) -> Result<(String, String, String), String> {
    changed(text, test, way, |old| match old {
        Written::Number => Ok(vec![Value::Float(to).to_string()]),
        Written::Expression(old) if to < 0.0 => Ok(vec![quoted(format!("({old}) - {}", -to))]),
        Written::Expression(old) => Ok(vec![quoted(format!("({old}) + {to}"))]),
        Written::Values(values) => {
            let moved = values.iter().map(|value| Value::Float(to_decimals(value + to)));
            Ok(moved.map(|value| value.to_string()).collect())
        }
    })
}

/// The text with the threshold of a test as it was written before, by what [`with_threshold`] returned.
///
/// # Errors
/// In words: no such test, a threshold of another kind or shape, or a rulebook that would not be read
/// afterwards.
pub fn with_threshold_as(
    text: &str,
    test: &str,
    way: usize,
    written: &str,
) -> Result<(String, String, String), String> {
    let other = || format!("the threshold of {test} is of another kind now");
    let line = format!("it = {written}");
    let table: toml::Table = toml::from_str(&line).map_err(|_| other())?;
    let value = table.get("it").ok_or_else(other)?;
    changed(text, test, way, |old| match (old, value) {
        (Written::Number, Value::Integer(_) | Value::Float(_))
        | (Written::Expression(_), Value::String(_)) => Ok(vec![written.to_owned()]),
        (Written::Values(values), Value::Array(array)) => {
            // As they were spelled, which a parsed number has forgotten.
            let leaves = written.trim_matches(['[', ']', ' ']).split(',').map(str::trim);
            let leaves: Vec<String> = leaves.map(str::to_owned).collect();
            let same = leaves.len() == values.len() && array.len() == values.len();
            if same { Ok(leaves) } else { Err(other()) }
        }
        _ => Err(other()),
    })
}

/// A threshold in a rulebook.
enum Written {
    Number,
    Expression(String),
    /// The values of a table, in the order in which they are written.
    Values(Vec<f64>),
}

/// Changes a threshold by what `change` makes of it: one text for each place that is written.
fn changed(
    text: &str,
    test: &str,
    way: usize,
    change: impl FnOnce(&Written) -> Result<Vec<String>, String>,
) -> Result<(String, String, String), String> {
    let (old, places) = find(text, test, way)?;
    let new = change(&old)?;
    let mut changed = text.to_owned();
    for (place, new) in places.iter().zip(&new).rev() {
        changed.replace_range(place.clone(), new);
    }
    Rulebook::parse(&changed, "the changed rulebook").map_err(|error| error.to_string())?;
    let written = |parts: Vec<&str>| match &old {
        Written::Values(_) => format!("[{}]", parts.join(", ")),
        _ => parts.concat(),
    };
    let before = written(places.iter().map(|place| &text[place.clone()]).collect());
    let after = written(new.iter().map(String::as_str).collect());
    Ok((changed, before, after))
}

/// A threshold and the places in the text that have to change with it.
fn find(text: &str, test: &str, way: usize) -> Result<(Written, Vec<Range<usize>>), String> {
    let document = DeTable::parse(text).map_err(|error| error.to_string())?;
    let none = || format!("{test} has no threshold that can be changed");
    let value = threshold_of(document.get_ref(), test, way).ok_or_else(none)?;
    let number = |range: &Range<usize>| text[range.clone()].replace('_', "").parse().ok();
    match value.get_ref() {
        DeValue::Integer(_) | DeValue::Float(_) => Ok((Written::Number, vec![value.span()])),
        DeValue::String(expression) => {
            Ok((Written::Expression(expression.to_string()), vec![value.span()]))
        }
        DeValue::Table(table) => {
            let mut places = Vec::new();
            places_of_numbers(named(table, "values").ok_or_else(none)?, &mut places);
            let values: Option<Vec<f64>> = places.iter().map(number).collect();
            Ok((Written::Values(values.ok_or_else(none)?), places))
        }
        _ => Err(none()),
    }
}

fn threshold_of<'t>(
    document: &'t DeTable<'t>,
    test: &str,
    way: usize,
) -> Option<&'t Spanned<DeValue<'t>>> {
    let is_it = |table: &&DeTable<'_>| {
        let name = named(table, "name").map(Spanned::get_ref);
        matches!(name, Some(DeValue::String(name)) if name == test)
    };
    let test = tables(document, "tests").find(is_it)?;
    let way = match way.checked_sub(1) {
        None => test,
        Some(substitute) => tables(test, "substitutes").nth(substitute)?,
    };
    named(way, "threshold")
}

fn tables<'t>(table: &'t DeTable<'t>, name: &str) -> impl Iterator<Item = &'t DeTable<'t>> {
    let array = match named(table, name).map(Spanned::get_ref) {
        Some(DeValue::Array(array)) => Some(array),
        _ => None,
    };
    array.into_iter().flat_map(|array| array.iter()).filter_map(|value| match value.get_ref() {
        DeValue::Table(table) => Some(table),
        _ => None,
    })
}

fn named<'t>(table: &'t DeTable<'t>, name: &str) -> Option<&'t Spanned<DeValue<'t>>> {
    table.iter().find(|(key, _)| key.get_ref() == name).map(|(_, value)| value)
}

fn places_of_numbers(value: &Spanned<DeValue<'_>>, places: &mut Vec<Range<usize>>) {
    match value.get_ref() {
        DeValue::Array(array) => array.iter().for_each(|one| places_of_numbers(one, places)),
        _ => places.push(value.span()),
    }
}

fn quoted(expression: String) -> String {
    Value::String(expression).to_string()
}

/// Sums of decimal fractions without the digits that binary ones leave behind.
fn to_decimals(value: f64) -> f64 {
    format!("{value:.9}").parse().unwrap_or(value)
}

#[cfg(test)]
mod tests {
    use super::super::{BUILTIN_TEXT, builtin};
    use super::*;

    fn threshold(rulebook: &Rulebook, test: &str, way: usize) -> String {
        let test = rulebook.tests.iter().find(|one| one.name == test).unwrap();
        format!("{:?}", test.ways[way].threshold)
    }

    /// Every threshold of the built-in rulebook can be changed, and no other changes with it; put back
    /// as it was written, the text is what it was.
    #[test]
    fn one_threshold_changes_and_no_other() {
        let before = builtin().unwrap();
        let mut changed = 0;
        for test in &before.tests {
            for way in 0..test.ways.len() {
                let (text, old, new) =
                    with_threshold(BUILTIN_TEXT, &test.name, way, 0.2517).unwrap();
                let after = Rulebook::parse(&text, "test").unwrap();
                assert_ne!(old, new, "{}", test.name);
                for other in &before.tests {
                    for place in 0..other.ways.len() {
                        let same = threshold(&before, &other.name, place)
                            == threshold(&after, &other.name, place);
                        let is_it = (&other.name, place) == (&test.name, way);
                        assert_eq!(same, !is_it, "{} {place} by {}", other.name, test.name);
                    }
                }
                let (back, ..) = with_threshold_as(&text, &test.name, way, &old).unwrap();
                assert!(back == BUILTIN_TEXT, "{}", test.name);
                changed += 1;
            }
        }
        assert!(changed >= before.tests.len());
    }

    #[test]
    fn a_table_is_moved_and_comments_stay() {
        let (text, old, new) = with_threshold(BUILTIN_TEXT, "T04 spread 3x3", 0, 0.1).unwrap();
        assert!(old.contains("[0.75, 0.75, 1.2]"), "{old}");
        assert!(new.contains("[0.85, 0.85, 1.3]"), "{new}");
        let differing = text.lines().zip(BUILTIN_TEXT.lines()).filter(|(one, other)| one != other);
        assert_eq!(differing.count(), 1);
        assert_eq!(text.lines().count(), BUILTIN_TEXT.lines().count());
    }

    #[test]
    fn a_table_over_several_lines_keeps_its_lines_and_comments() {
        let one = BUILTIN_TEXT.find("threshold = { over = \"view_zenith\"").unwrap();
        let end = one + BUILTIN_TEXT[one..].find('\n').unwrap();
        let several = "threshold = { over = \"view_zenith\", at = [0, 30, 60], values = [\n    0.75, # nadir 0.75\n    1,\n    +1_0.5e-1, # edge\n] }";
        let text = format!("{}{several}{}", &BUILTIN_TEXT[..one], &BUILTIN_TEXT[end..]);
        let (moved, old, new) = with_threshold(&text, "T04 spread 3x3", 0, -0.25).unwrap();
        assert_eq!((&*old, &*new), ("[0.75, 1, +1_0.5e-1]", "[0.5, 0.75, 0.8]"));
        let lines = "values = [\n    0.5, # nadir 0.75\n    0.75,\n    0.8, # edge\n] }";
        assert!(moved.contains(lines));
        let (back, ..) = with_threshold_as(&moved, "T04 spread 3x3", 0, &old).unwrap();
        assert!(back.contains("values = [\n    0.75, # nadir 0.75"));
        assert!(with_threshold_as(&moved, "T04 spread 3x3", 0, "[1, 2]").is_err());
        assert!(with_threshold_as(&moved, "T04 spread 3x3", 0, "\"lat\"").is_err());
    }

    #[test]
    fn what_is_not_there_is_refused() {
        assert!(with_threshold(BUILTIN_TEXT, "T99", 0, 1.0).is_err());
        assert!(with_threshold(BUILTIN_TEXT, "T01 gross window", 7, 1.0).is_err());
    }
}
