//! Keys that settings change: the table `[keys]` of the campaign's settings and of a person's own.

use std::collections::BTreeMap;

use toml::Spanned;

/// One line of the table: these keys for an action. What the names mean the screen knows.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct KeySetting {
    /// The action, by the name that it has on the command line.
    pub action: String,
    /// The keys, as the help writes them; none takes the action's keys away.
    pub keys: Vec<String>,
    /// Where it stands: `campaign.toml, line 12`.
    pub place: String,
}

/// All of a settings file that is read here.
#[derive(serde::Deserialize)]
struct Typed {
    #[serde(default)]
    keys: BTreeMap<Spanned<String>, OneOrMore>,
}

#[derive(serde::Deserialize)]
#[serde(untagged)]
enum OneOrMore {
    One(String),
    More(Vec<String>),
}

impl KeySetting {
    /// The table `[keys]` out of the text of a settings file, in the order of its lines.
    ///
    /// # Errors
    /// In words: what is wrong and where.
    pub fn parse(text: &str, file: &str) -> Result<Vec<KeySetting>, String> {
        let typed: Typed = toml::from_str(text).map_err(|error| format!("{file}: {error}"))?;
        let mut rows: Vec<(usize, KeySetting)> = typed
            .keys
            .into_iter()
            .map(|(action, keys)| {
                let start = action.span().start;
                let before = text.get(..start).unwrap_or_default();
                let line = before.matches('\n').count() + 1;
                let keys = match keys {
                    OneOrMore::One(key) => vec![key],
                    OneOrMore::More(keys) => keys,
                };
                let place = format!("{file}, line {line}");
                (start, KeySetting { action: action.into_inner(), keys, place })
            })
            .collect();
        rows.sort_by_key(|(start, _)| *start);
        Ok(rows.into_iter().map(|(_, row)| row).collect())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn keys_come_with_their_lines() {
        let text = "title = 'x'\n\n[keys]\nundo = 'U'\nbox = ['V', 'F5']\nredo = []\n";
        let found = KeySetting::parse(text, "campaign.toml").unwrap();
        let row = |action: &str, keys: &[&str], line: usize| KeySetting {
            action: action.to_owned(),
            keys: keys.iter().map(ToString::to_string).collect(),
            place: format!("campaign.toml, line {line}"),
        };
        assert_eq!(
            found,
            [row("undo", &["U"], 4), row("box", &["V", "F5"], 5), row("redo", &[], 6)]
        );
        assert_eq!(KeySetting::parse("format = 1", "campaign.toml"), Ok(Vec::new()));
        let wrong = KeySetting::parse("[keys]\nundo = 3\n", "settings.toml").unwrap_err();
        assert!(wrong.contains("settings.toml") && wrong.contains("line 2"), "{wrong}");
    }
}
