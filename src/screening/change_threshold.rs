//! One threshold changed in the text of a rulebook, everything else left as it was written.

use toml::Value;

use super::Rulebook;

/// The text with the threshold of a test changed: a number becomes `to`, a table or an expression is
/// moved by it. `way` counts the test itself as 0 and its substitutes from 1. Returns the text, and
/// the old and the new threshold as written.
///
/// # Errors
/// In words: no such test, a threshold written over several lines, or a rulebook that would not be
/// read afterwards.
pub fn with_threshold(
    text: &str,
    test: &str,
    way: usize,
    to: f64,
) -> Result<(String, String, String), String> {
    let line = line_of(text, test, way).ok_or_else(|| {
        format!("the threshold of {test} is not written on one line: change it in the file")
    })?;
    let mut lines: Vec<String> = text.lines().map(str::to_owned).collect();
    let old: toml::Table = toml::from_str(&lines[line]).map_err(|error| error.to_string())?;
    let old = old.get("threshold").ok_or("no threshold stands there")?;
    let new = changed(old, to)?;
    let (old, new) = (old.to_string(), new.to_string());
    lines[line] = format!("threshold = {new}");
    let changed = lines.join("\n") + "\n";
    Rulebook::parse(&changed, "the changed rulebook").map_err(|error| error.to_string())?;
    Ok((changed, old, new))
}

/// The line that holds the threshold of a way of a test.
fn line_of(text: &str, test: &str, way: usize) -> Option<usize> {
    let (mut found, mut ways, mut inside) = (false, 0, false);
    for (number, line) in text.lines().enumerate() {
        let line = line.trim();
        match line {
            "[[tests]]" => (found, ways, inside) = (false, 0, true),
            "[[tests.substitutes]]" => (ways, inside) = (ways + 1, true),
            _ if line.starts_with('[') => inside = false,
            _ if !inside => {}
            _ => match key_and_value(line) {
                Some(("name", value)) if ways == 0 => {
                    found = string(value).as_deref() == Some(test)
                }
                Some(("threshold", _)) if found && ways == way => return Some(number),
                _ => {}
            },
        }
    }
    None
}

fn key_and_value(line: &str) -> Option<(&str, &str)> {
    let (key, value) = line.split_once('=')?;
    Some((key.trim(), value.trim()))
}

fn string(value: &str) -> Option<String> {
    let table: toml::Table = toml::from_str(&format!("it = {value}")).ok()?;
    table.get("it")?.as_str().map(str::to_owned)
}

fn changed(old: &Value, to: f64) -> Result<Value, String> {
    match old {
        Value::Integer(_) | Value::Float(_) => Ok(Value::Float(to)),
        Value::String(text) if to < 0.0 => Ok(Value::String(format!("({text}) - {}", -to))),
        Value::String(text) => Ok(Value::String(format!("({text}) + {to}"))),
        Value::Table(table) => {
            let mut table = table.clone();
            let values = table.get_mut("values").ok_or("the table has no values")?;
            *values = moved(values, to);
            Ok(Value::Table(table))
        }
        _ => Err("a threshold of this kind can't be moved".to_owned()),
    }
}

fn moved(values: &Value, by: f64) -> Value {
    match values {
        Value::Array(values) => Value::Array(values.iter().map(|value| moved(value, by)).collect()),
        Value::Integer(value) => Value::Float(to_decimals(*value as f64 + by)),
        Value::Float(value) => Value::Float(to_decimals(value + by)),
        other => other.clone(),
    }
}

/// Sums of decimal fractions without the digits that binary ones leave behind.
fn to_decimals(value: f64) -> f64 {
    format!("{value:.9}").parse().unwrap_or(value)
}

#[cfg(test)]
mod tests {
    use super::super::{BUILTIN_TEXT, Threshold, builtin};
    use super::*;

    fn threshold(rulebook: &Rulebook, test: &str, way: usize) -> String {
        let test = rulebook.tests.iter().find(|one| one.name == test).unwrap();
        format!("{:?}", test.ways[way].threshold)
    }

    /// Every threshold of the built-in rulebook that stands on one line can be changed, and no other
    /// threshold changes with it.
    #[test]
    fn one_threshold_changes_and_no_other() {
        let before = builtin().unwrap();
        let mut changed = 0;
        for test in &before.tests {
            for way in 0..test.ways.len() {
                let Ok((text, old, new)) = with_threshold(BUILTIN_TEXT, &test.name, way, 0.2517)
                else {
                    assert!(
                        matches!(test.ways[way].threshold, Threshold::Table(_)),
                        "{}",
                        test.name
                    );
                    continue;
                };
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
                changed += 1;
            }
        }
        assert!(changed > before.tests.len() / 2);
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
    fn what_is_not_there_is_refused() {
        assert!(with_threshold(BUILTIN_TEXT, "T99", 0, 1.0).is_err());
        assert!(with_threshold(BUILTIN_TEXT, "T01 gross window", 7, 1.0).is_err());
    }
}
