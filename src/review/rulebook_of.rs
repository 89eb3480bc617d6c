//! Which rulebook a campaign goes by.

use crate::flags::{Campaign, CampaignError};
use crate::screening::{Rulebook, RulebookError, builtin};
use crate::system::clean_text;

/// Why there is no rulebook to screen by.
#[derive(Debug, thiserror::Error)]
pub enum NoRulebook {
    /// The campaign's own can't be read.
    #[error(transparent)]
    Unreadable(#[from] CampaignError),
    /// It has mistakes.
    #[error("{file} has mistakes (radsieve rules check finds them)\n{mistakes}")]
    Mistaken {
        /// The file.
        file: String,
        /// All of them.
        mistakes: RulebookError,
    },
}

/// The campaign's own rulebook where it has one, else the built-in one.
///
/// # Errors
/// The campaign's own can't be read or has mistakes. The built-in one does not take its place: what
/// was decided by the one must not silently go on by the other.
pub fn rulebook_of(campaign: &Campaign) -> Result<Rulebook, NoRulebook> {
    let file = clean_text(&campaign.rulebook_path().display().to_string());
    let parsed = match campaign.rulebook_text()? {
        Some(text) => Rulebook::parse(&text, &file),
        None => builtin(),
    };
    parsed.map_err(|mistakes| NoRulebook::Mistaken { file, mistakes })
}

/// The name and fingerprint of the campaign's rulebook, as ledgers and spot checks name it.
///
/// # Errors
/// As for [`rulebook_of`].
pub fn rulebook_name(campaign: &Campaign) -> Result<String, NoRulebook> {
    Ok(name_of(&rulebook_of(campaign)?))
}

/// A rulebook's name and fingerprint.
pub fn name_of(rulebook: &Rulebook) -> String {
    format!("{} ({})", rulebook.name, rulebook.fingerprint)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::screening::BUILTIN_TEXT;

    #[test]
    fn a_campaigns_own_rulebook_comes_first_and_its_mistakes_are_told() {
        let folder = tempfile::tempdir().unwrap();
        let campaign = Campaign::open_or_create(folder.path()).unwrap();
        let fingerprint = rulebook_of(&campaign).unwrap().fingerprint;
        assert_eq!(fingerprint, builtin().unwrap().fingerprint);
        let own = format!("{BUILTIN_TEXT}\n# changed\n");
        std::fs::write(campaign.rulebook_path(), own).unwrap();
        assert_ne!(rulebook_of(&campaign).unwrap().fingerprint, fingerprint);
        std::fs::write(campaign.rulebook_path(), "name = 3").unwrap();
        let error = rulebook_of(&campaign).unwrap_err().to_string();
        assert!(error.contains("rulebook.toml has mistakes"), "{error}");
    }
}
