//! Variables with one value for each footprint, or for each line or position of them.

use super::channel_quality;
use super::decoder::Decoder;
use super::footprint_dimensions::FootprintDimensions;
use crate::netcdf_files::{FileIndex, Variable};
use crate::system::clean_text;

/// A variable that can be looked at footprint by footprint.
#[derive(Debug, Clone, PartialEq)]
pub struct FootprintVariable {
    /// Its path in the file, which is its name.
    pub name: String,
    /// What the file calls it; safe to show, may be empty.
    pub long_name: String,
    /// Its CF standard name; safe to show, may be empty.
    pub standard_name: String,
    /// Its unit as in the file; safe to show, may be empty.
    pub units: String,
    /// What its codes or bits mean, where the file says so.
    pub meanings: Vec<FlagMeaning>,
    /// What it is for.
    pub role: VariableRole,
    pub(super) place: usize,
}

/// What a variable of the footprints is for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum VariableRole {
    /// The producer's word on the quality of the data.
    Quality,
    /// Where the footprint lies, or how it is seen and lit.
    Geolocation,
    /// Anything else.
    Other,
}

impl VariableRole {
    /// One word for lists.
    pub fn label(self) -> &'static str {
        match self {
            Self::Quality => "quality",
            Self::Geolocation => "geolocation",
            Self::Other => "other",
        }
    }
}

/// What a code or a bit of a flag variable means (CF conventions 3.5).
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct FlagMeaning {
    /// The bits looked at; all of them where the file gives codes only.
    pub mask: i64,
    /// What those bits must equal; nothing where any of them suffices.
    pub value: Option<i64>,
    /// One word, safe to show.
    pub meaning: String,
}

impl FlagMeaning {
    /// Whether a value of the variable has this meaning.
    pub fn holds(&self, value: i64) -> bool {
        match self.value {
            Some(wanted) => value & self.mask == wanted,
            None => value & self.mask != 0,
        }
    }

    /// Whether the word says that what has it is not to be used: `bad`, `do_not_use` and their like.
    pub fn gives_up(&self) -> bool {
        channel_quality::gives_up(&self.meaning)
    }
}

impl FootprintVariable {
    /// The meanings that hold for a value, as read. A code that the file does not list has none.
    pub fn meanings_of(&self, value: f64) -> Vec<&str> {
        held(&self.meanings, value).map(|meaning| meaning.meaning.as_str()).collect()
    }
}

/// Those of some meanings that hold for a value; none for a missing one.
pub fn held(meanings: &[FlagMeaning], value: f64) -> impl Iterator<Item = &FlagMeaning> {
    let all = if value.is_finite() { meanings } else { &[] };
    all.iter().filter(move |meaning| meaning.holds(value as i64))
}

/// All variables of the footprints but the bands themselves, in the file's order. `quality` are those
/// that speak of quality, where that is known; otherwise it is told by names and attributes.
pub fn find(
    index: &FileIndex,
    dimensions: &FootprintDimensions,
    bands: &[&Variable],
    quality: Option<&[usize]>,
    is_geolocation: impl Fn(usize) -> bool,
) -> Vec<FootprintVariable> {
    let ancillary: Vec<String> =
        bands.iter().filter_map(|band| band.text("ancillary_variables")).collect();
    let is_ancillary = |variable: &Variable| {
        ancillary.iter().any(|names| names.split_whitespace().any(|name| name == variable.name))
    };
    let found = index.variables.iter().enumerate().filter(|(_, variable)| {
        variable.kind.is_number() && dimensions.spread(index, variable).is_some()
    });
    found
        .map(|(place, variable)| {
            let text = |name| clean_text(&variable.text(name).unwrap_or_default());
            let meanings = meanings(variable);
            let role = if is_geolocation(place) {
                VariableRole::Geolocation
            } else if quality.map_or_else(
                || speaks_of_quality(variable, !meanings.is_empty(), is_ancillary(variable)),
                |quality| quality.contains(&place),
            ) {
                VariableRole::Quality
            } else {
                VariableRole::Other
            };
            FootprintVariable {
                name: variable.path.clone(),
                long_name: text("long_name"),
                standard_name: text("standard_name"),
                units: text("units"),
                meanings,
                role,
                place,
            }
        })
        .collect()
}

fn speaks_of_quality(variable: &Variable, has_meanings: bool, is_ancillary: bool) -> bool {
    let standard_name = variable.text("standard_name").unwrap_or_default();
    // "<name> status_flag" is the older form of it, no longer written but to be read.
    let named = standard_name
        .split_whitespace()
        .any(|word| ["quality_flag", "status_flag", "aggregate_quality_flag"].contains(&word));
    let lower = variable.name.to_lowercase();
    let sounds_so = ["qual", "flag", "qc", "qa_", "_qa", "status", "invalid", "valid"]
        .iter()
        .any(|part| lower.contains(part));
    named || (is_ancillary && (has_meanings || sounds_so)) || (has_meanings && sounds_so)
}

/// The meanings of codes and bits; none where the three attributes do not agree.
pub fn meanings(variable: &Variable) -> Vec<FlagMeaning> {
    let words = variable.text("flag_meanings").unwrap_or_default();
    let words: Vec<&str> = words.split_whitespace().collect();
    let decoder = Decoder::of(variable);
    let integers = |name: &str| {
        let numbers = variable.attribute(name).and_then(|value| value.numbers());
        // Codes and bits given as signed mean the same bits as the values do.
        let unsigned = |number: f64| decoder.unsigned(number) as i64;
        numbers.map(|numbers| numbers.into_iter().map(unsigned).collect::<Vec<_>>())
    };
    let (masks, values) = (integers("flag_masks"), integers("flag_values"));
    let fits = |list: &Option<Vec<i64>>| list.as_ref().is_none_or(|list| list.len() == words.len());
    if (masks.is_none() && values.is_none()) || !fits(&masks) || !fits(&values) {
        return Vec::new();
    }
    let meaning = |(place, word): (usize, &&str)| FlagMeaning {
        mask: masks.as_ref().map_or(-1, |masks| masks[place]),
        value: values.as_ref().map(|values| values[place]),
        meaning: clean_text(word),
    };
    words.iter().enumerate().map(meaning).collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::netcdf_files::{Attribute, AttributeValue, Storage, ValueKind};

    fn variable(attributes: Vec<(&str, AttributeValue)>) -> Variable {
        let attribute =
            |(name, value): (&str, AttributeValue)| Attribute { name: name.into(), value };
        Variable {
            path: "g/v".into(),
            name: "v".into(),
            group: 0,
            dimensions: Vec::new(),
            kind: ValueKind::I8,
            attributes: attributes.into_iter().map(attribute).collect(),
            storage: Storage::default(),
        }
    }

    fn held(attributes: Vec<(&str, AttributeValue)>, value: i64) -> Vec<String> {
        let meanings = meanings(&variable(attributes)).into_iter();
        meanings.filter(|meaning| meaning.holds(value)).map(|meaning| meaning.meaning).collect()
    }

    #[test]
    fn codes_bits_and_fields_of_bits_are_told_apart() {
        let codes = || {
            vec![
                ("flag_values", vec![0_i8, 1, 2].into()),
                ("flag_meanings", "good\n  doubtful bad".into()),
            ]
        };
        assert_eq!(held(codes(), 0), ["good"]);
        assert_eq!(
            held(codes(), 3),
            Vec::<String>::new(),
            "a code that is not listed means nothing"
        );
        let bits = || {
            vec![("flag_masks", vec![1_i8, 2, -128].into()), ("flag_meanings", "a b sign".into())]
        };
        assert_eq!(held(bits(), 0), Vec::<String>::new());
        assert_eq!(held(bits(), 3), ["a", "b"]);
        assert_eq!(held(bits(), -128), ["sign"]);
        // Source: the example of CF conventions 3.5 with both attributes.
        let fields = || {
            vec![
                ("flag_masks", vec![1_i8, 12, 12, 12].into()),
                ("flag_values", vec![1_i8, 4, 8, 12].into()),
                ("flag_meanings", "low_battery warning failure off".into()),
            ]
        };
        assert_eq!(held(fields(), 9), ["low_battery", "failure"]);
    }

    #[test]
    fn lists_of_different_length_mean_nothing() {
        let attributes =
            vec![("flag_values", vec![0_i8, 1].into()), ("flag_meanings", "good".into())];
        assert!(meanings(&variable(attributes)).is_empty());
    }

    #[test]
    fn standard_names_of_quality_are_known_in_both_forms() {
        for name in
            ["quality_flag", "toa_brightness_temperature status_flag", "aggregate_quality_flag"]
        {
            let variable = variable(vec![("standard_name", name.into())]);
            assert!(speaks_of_quality(&variable, false, false), "{name}");
        }
        assert!(!speaks_of_quality(&variable(vec![]), true, false));
        assert!(speaks_of_quality(&variable(vec![]), true, true));
    }
}
