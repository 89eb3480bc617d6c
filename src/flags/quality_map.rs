//! What a campaign makes of the producer's word on quality.

use std::collections::BTreeMap;

use super::{Scope, Vocabulary};

/// What is done where a meaning holds.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Treatment {
    /// The footprint gets the flag, and no test looks at it.
    Reject {
        /// The flag's name.
        flag: String,
    },
    /// Nothing, and it is not shown.
    Ignore,
    /// It is shown beside the footprint.
    Show,
}

/// For each quality variable, by its name in the granules, what is done about each of its meanings.
///
/// Besides the words that a file gives, `bit N` and `value N` stand for what it gives no words for,
/// and `missing` for footprints without a value.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct QualityMap(BTreeMap<String, BTreeMap<String, Treatment>>);

/// The flag of a rejected footprint where the map names none.
const USUAL_FLAG: &str = "bad_spectrum";

impl QualityMap {
    /// From the tables of the settings: variables, their meanings, and a word for each.
    ///
    /// # Errors
    /// In words: what is written for a meaning is none of the words, or names no flag.
    pub(super) fn read(
        tables: BTreeMap<String, BTreeMap<String, String>>,
        vocabulary: &Vocabulary,
    ) -> Result<Self, String> {
        let mut map = Self::default();
        for (variable, meanings) in tables {
            let mut treatments = BTreeMap::new();
            for (meaning, word) in meanings {
                let treatment = treatment(&word, vocabulary)
                    .map_err(|what| format!("quality.{variable}.{meaning}: {what}"))?;
                treatments.insert(meaning, treatment);
            }
            map.0.insert(variable, treatments);
        }
        Ok(map)
    }

    /// Whether the campaign says nothing.
    pub fn is_empty(&self) -> bool {
        self.0.is_empty()
    }

    /// The variables, and what is done about their meanings.
    pub fn variables(&self) -> impl Iterator<Item = (&str, &BTreeMap<String, Treatment>)> {
        self.0.iter().map(|(variable, meanings)| (variable.as_str(), meanings))
    }

    /// Those meanings that reject, as in `quality: calibration_degraded (bad_spectrum)`, for masks.
    pub fn words(&self) -> String {
        let all = self.variables().flat_map(|(variable, meanings)| {
            meanings.iter().filter_map(move |(meaning, treatment)| match treatment {
                Treatment::Reject { flag } => Some(format!("{variable}: {meaning} ({flag})")),
                _ => None,
            })
        });
        all.collect::<Vec<_>>().join(", ")
    }
}

fn treatment(word: &str, vocabulary: &Vocabulary) -> Result<Treatment, String> {
    match word.split_whitespace().collect::<Vec<_>>().as_slice() {
        ["ignore"] => Ok(Treatment::Ignore),
        ["show"] => Ok(Treatment::Show),
        ["reject"] => Ok(Treatment::Reject { flag: USUAL_FLAG.to_owned() }),
        ["reject", "as", flag] => match vocabulary.by_name(flag) {
            Some(kind) if kind.scope == Scope::Footprint && kind.excludes => {
                Ok(Treatment::Reject { flag: (*flag).to_owned() })
            }
            Some(kind) if kind.scope == Scope::Footprint => Err(format!(
                "a footprint that carries {flag:?} can be used: take a flag that excludes, such as \
                 {USUAL_FLAG}"
            )),
            _ => Err(format!("there is no flag of footprints called {flag:?}")),
        },
        _ => Err(format!("{word:?} is none of reject, reject as FLAG, ignore, show")),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::flags::CampaignSettings;

    fn read(text: &str) -> Result<QualityMap, String> {
        CampaignSettings::parse(text).map(|settings| settings.quality)
    }

    #[test]
    fn every_word_is_understood() {
        let map = read(
            "[quality.scene]\nmoon = 'reject'\nlost = 'reject as bad_geolocation'\n\
             day = 'ignore'\nglint = 'show'\n[quality.\"a/b\"]\n\"bit 3\" = 'reject'\n",
        )
        .unwrap();
        assert_eq!(
            map.words(),
            "a/b: bit 3 (bad_spectrum), scene: lost (bad_geolocation), scene: moon (bad_spectrum)"
        );
        assert!(!map.is_empty() && read("").unwrap().is_empty());
    }

    #[test]
    fn mistakes_are_named_with_their_place() {
        let wrong = |text: &str| read(text).unwrap_err();
        let word = wrong("[quality.scene]\nmoon = 'rejct'\n");
        assert!(word.starts_with("quality.scene.moon: \"rejct\" is none of reject"), "{word}");
        let flag = wrong("[quality.scene]\nmoon = 'reject as dead'\n");
        assert!(flag.contains("no flag of footprints called \"dead\""), "{flag}");
        let mild = wrong("[quality.scene]\nmoon = 'reject as unusual'\n");
        assert!(mild.contains("\"unusual\" can be used"), "{mild}");
        assert!(wrong("[quality]\nscene = 'reject'\n").contains("line 2"));
    }
}
