//! A starting map of the producer's quality, for the settings of a campaign.

use std::fmt::Write;

use crate::granule::{FlagMeaning, FootprintVariable, Granule, VariableRole};
use crate::system::clean_text;

/// TOML to be put into `campaign.toml` and looked through: a line for each meaning of each quality
/// variable. Meanings that give a footprint up are proposed as reject, all others as show.
pub fn quality_map_text(granule: &Granule) -> String {
    let variables = granule.variables().iter();
    let quality: Vec<&FootprintVariable> =
        variables.filter(|variable| variable.role == VariableRole::Quality).collect();
    let mut text = format!(
        "# The producer's quality in {}, for campaign.toml. Each line is a proposal:\n\
         # reject, reject as FLAG, ignore, show.\n",
        granule.name()
    );
    if quality.is_empty() {
        text.push_str("# The file has no quality variables that are known as such.\n");
    }
    for variable in quality {
        // Writing to a string cannot fail.
        let _ = writeln!(text, "\n[quality.{}]", quoted(&variable.name));
        if variable.meanings.is_empty() {
            let note = "# No meanings given: write \"bit N\" or \"value N\", as in";
            let _ = writeln!(text, "{note}\n# \"bit 0\" = \"reject\"");
        }
        for meaning in unique(&variable.meanings) {
            let word = if meaning.gives_up() { "reject" } else { "show" };
            let _ = writeln!(text, "{} = \"{word}\"", quoted(&meaning.meaning));
        }
    }
    text
}

/// A word may stand for several codes; it is one line.
fn unique(meanings: &[FlagMeaning]) -> Vec<&FlagMeaning> {
    let mut found: Vec<&FlagMeaning> = Vec::new();
    for meaning in meanings {
        if found.iter().all(|other| other.meaning != meaning.meaning) {
            found.push(meaning);
        }
    }
    found
}

/// A key of TOML, in quotes unless it is a plain word.
fn quoted(key: &str) -> String {
    let plain = |one: char| one.is_ascii_alphanumeric() || one == '_' || one == '-';
    match !key.is_empty() && key.chars().all(plain) {
        true => key.to_owned(),
        false => toml::Value::String(clean_text(key)).to_string(),
    }
}
