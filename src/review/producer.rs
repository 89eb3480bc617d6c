//! The producer's word on quality, taken as the campaign says: it comes before any test.

use std::collections::BTreeMap;

use crate::flags::{FootprintSet, PRODUCER, QualityMap, Treatment};
use crate::granule::{FlagMeaning, FootprintVariable, Granule, VariableRole};
use crate::system::clean_text;

/// Footprints that the producer's quality rejects.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Rejection {
    /// The quality variable.
    pub variable: String,
    /// The flag that the campaign gives them.
    pub flag: String,
    /// Which.
    pub footprints: FootprintSet,
    /// The meanings that hold, with the number of footprints of each.
    pub why: String,
}

/// What the producer's quality variables say, in the campaign's reading.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Producer {
    /// Who is rejected, in the order of the map.
    pub rejections: Vec<Rejection>,
    /// For each footprint whether it is rejected; empty where none is.
    pub left_out: Vec<bool>,
    /// What the campaign's map does not cover or cannot have, in words that are safe to show.
    pub problems: Vec<String>,
    /// Variables of the map that could not be read: what they said before stays.
    pub unread: Vec<String>,
    /// Meanings that are not to be shown: variable and word.
    ignored: Vec<(String, String)>,
}

impl Producer {
    /// Reads the quality variables of a granule and takes them as the map says.
    pub fn of(granule: &Granule, map: &QualityMap) -> Self {
        let mut producer = Self::default();
        let mut covered = Vec::new();
        for (name, meanings) in map.variables() {
            let shown = clean_text(name);
            let own = granule.variable(name).filter(|found| is_own(granule, found));
            let Some(variable) = own else {
                producer.problems.push(format!(
                    "the campaign's quality map names `{shown}`, which the granule does not have"
                ));
                producer.unread.push(shown);
                continue;
            };
            covered.push(variable.name.clone());
            match granule.read_variable(&variable.name) {
                Ok(values) => producer.take(variable, &values, meanings),
                Err(error) => {
                    let problem = format!("the producer's `{shown}` cannot be read: {error}");
                    producer.problems.push(problem);
                    producer.unread.push(clean_text(&variable.name));
                }
            }
        }
        let others = granule.variables().iter().filter(|variable| {
            variable.role == VariableRole::Quality && !covered.contains(&variable.name)
        });
        for variable in others {
            let words: Vec<&str> =
                variable.meanings.iter().map(|meaning| meaning.meaning.as_str()).collect();
            let words = if words.is_empty() { "no meanings given" } else { &words.join(", ") };
            producer.problems.push(format!(
                "the campaign's quality map does not cover the producer's `{}` ({words})",
                clean_text(&variable.name)
            ));
        }
        producer
    }

    fn take(
        &mut self,
        variable: &FootprintVariable,
        values: &[f64],
        map: &BTreeMap<String, Treatment>,
    ) {
        let name = clean_text(&variable.name);
        let mut flags: BTreeMap<&str, (Vec<usize>, Vec<String>)> = BTreeMap::new();
        for (word, treatment) in map {
            let Some(condition) = Condition::of(variable, word) else {
                let words: Vec<&str> =
                    variable.meanings.iter().map(|meaning| meaning.meaning.as_str()).collect();
                self.problems.push(format!(
                    "the campaign's quality map names `{}` of `{name}`, which gives {}",
                    clean_text(word),
                    words.join(", ")
                ));
                continue;
            };
            match treatment {
                Treatment::Show => {}
                Treatment::Ignore => self.ignored.push((variable.name.clone(), word.clone())),
                Treatment::Reject { flag } => {
                    let found: Vec<usize> =
                        (0..values.len()).filter(|at| condition.holds(values[*at])).collect();
                    if !found.is_empty() {
                        let entry = flags.entry(flag).or_default();
                        entry.1.push(format!("{} ({})", clean_text(word), found.len()));
                        entry.0.extend(found);
                    }
                }
            }
        }
        for (flag, (found, why)) in flags {
            self.left_out.resize(values.len(), false);
            found.iter().for_each(|at| self.left_out[*at] = true);
            self.rejections.push(Rejection {
                variable: name.clone(),
                flag: flag.to_owned(),
                footprints: found.into_iter().collect(),
                why: why.join(", "),
            });
        }
        self.note_uncovered(variable, &name, values, map);
    }

    /// Meanings that the map has no word for, and values that even the file has none for.
    fn note_uncovered(
        &mut self,
        variable: &FootprintVariable,
        name: &str,
        values: &[f64],
        map: &BTreeMap<String, Treatment>,
    ) {
        let words = variable.meanings.iter().map(|meaning| meaning.meaning.as_str());
        let mut lacking: Vec<String> =
            words.filter(|word| !map.contains_key(*word)).map(str::to_owned).collect();
        let conditions: Vec<Condition<'_>> =
            map.keys().filter_map(|word| Condition::of(variable, word)).collect();
        let mut unknown: BTreeMap<i64, usize> = BTreeMap::new();
        let mut missing = 0;
        for &value in values {
            let covered = conditions.iter().any(|condition| condition.holds(value));
            match value.is_nan() {
                true => missing += usize::from(!covered),
                false => {
                    let rest = rest_of(value as i64, &variable.meanings);
                    if let Some(rest) = rest.filter(|_| !covered) {
                        *unknown.entry(rest).or_default() += 1;
                    }
                }
            }
        }
        let counted =
            unknown.iter().take(8).map(|(value, count)| format!("value {value} ({count})"));
        lacking.extend(counted);
        if missing > 0 {
            lacking.push(format!("missing ({missing})"));
        }
        if !lacking.is_empty() {
            self.problems.push(format!(
                "the campaign's quality map does not cover {} of the producer's `{name}`",
                lacking.join(", ")
            ));
        }
    }

    /// Whether a footprint is rejected.
    pub fn rejects(&self, footprint: usize) -> bool {
        self.left_out.get(footprint).copied().unwrap_or(false)
    }

    /// Why a footprint is rejected, if it is: the variables and their words.
    pub fn why(&self, footprint: usize) -> Option<String> {
        let speaking = self.rejections.iter().filter(|one| one.footprints.contains(footprint));
        let words: Vec<String> =
            speaking.map(|one| format!("{}{}: {}", PRODUCER, one.variable, one.flag)).collect();
        (!words.is_empty()).then(|| words.join("; "))
    }

    /// The meanings of a quality variable's value that are to be shown.
    pub fn shown<'v>(&self, variable: &'v FootprintVariable, value: f64) -> Vec<&'v str> {
        let ignored = |word: &&str| {
            self.ignored.iter().any(|(name, meaning)| *name == variable.name && meaning == word)
        };
        variable.meanings_of(value).into_iter().filter(|word| !ignored(word)).collect()
    }
}

/// Lent variables are not the producer's.
fn is_own(granule: &Granule, variable: &FootprintVariable) -> bool {
    granule.variables().iter().any(|own| std::ptr::eq(own, variable))
}

/// What of a value the file gives no meaning for; nothing where all of it is known, or where the
/// value is zero and the file lists bits, none of which is set.
fn rest_of(value: i64, meanings: &[FlagMeaning]) -> Option<i64> {
    let codes = meanings.iter().any(|meaning| meaning.value.is_some());
    if codes || meanings.is_empty() {
        let known = meanings.iter().any(|meaning| meaning.holds(value));
        let says_nothing = meanings.is_empty() && value == 0;
        return Some(value).filter(|_| !known && !says_nothing);
    }
    let known = meanings.iter().fold(0, |bits, meaning| bits | meaning.mask);
    let rest = value & !known;
    (rest != 0).then_some(rest)
}

/// When a key of the map holds.
enum Condition<'v> {
    Meanings(Vec<&'v FlagMeaning>),
    Bit(u32),
    Value(i64),
    Missing,
}

impl<'v> Condition<'v> {
    /// The words of the file first; nothing where the key means nothing for this variable.
    fn of(variable: &'v FootprintVariable, word: &str) -> Option<Self> {
        let meanings: Vec<&FlagMeaning> =
            variable.meanings.iter().filter(|meaning| meaning.meaning == word).collect();
        if !meanings.is_empty() {
            return Some(Self::Meanings(meanings));
        }
        match word.split_whitespace().collect::<Vec<_>>().as_slice() {
            ["missing"] => Some(Self::Missing),
            ["bit", number] => number.parse().ok().filter(|bit| *bit < 63).map(Self::Bit),
            ["value", number] => number.parse().ok().map(Self::Value),
            _ => None,
        }
    }

    fn holds(&self, value: f64) -> bool {
        match self {
            Self::Missing => value.is_nan(),
            _ if value.is_nan() => false,
            Self::Meanings(meanings) => meanings.iter().any(|one| one.holds(value as i64)),
            Self::Bit(bit) => (value as i64) & (1 << bit) != 0,
            Self::Value(wanted) => value == *wanted as f64,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn meaning(mask: i64, value: Option<i64>, word: &str) -> FlagMeaning {
        FlagMeaning { mask, value, meaning: word.into() }
    }

    #[test]
    fn what_the_file_gives_no_meaning_for_is_found() {
        let bits = [meaning(1, None, "a"), meaning(4, None, "b")];
        assert_eq!(rest_of(5, &bits), None);
        assert_eq!(rest_of(0, &bits), None);
        assert_eq!(rest_of(2 + 4, &bits), Some(2));
        let codes = [meaning(-1, Some(0), "good"), meaning(-1, Some(1), "bad")];
        assert_eq!(rest_of(1, &codes), None);
        assert_eq!(rest_of(7, &codes), Some(7));
        assert_eq!((rest_of(0, &[]), rest_of(3, &[])), (None, Some(3)));
    }
}
