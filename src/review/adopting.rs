//! A threshold that was tried becomes the campaign's.

use jiff::Timestamp;

use super::rulebook_of;
use crate::flags::{Author, Campaign, RulebookChange};
use crate::screening::{BUILTIN_TEXT, Rulebook, with_threshold};

/// A threshold to be taken over into the campaign's rulebook.
#[derive(Debug, Clone, PartialEq)]
pub struct ThresholdChange {
    /// The test.
    pub test: String,
    /// 0 for the test itself, from 1 for its substitutes.
    pub way: usize,
    /// The new number; a table or an expression is moved by it.
    pub to: f64,
    /// Names the rulebook that it was tried with.
    pub fingerprint: String,
    /// Why, if that was said.
    pub why: Option<String>,
    /// The moment.
    pub now: Timestamp,
}

/// Takes a threshold over into the campaign's own rulebook, which begins as a copy of the one in
/// force, and writes down the change. Returns what was done, in words.
///
/// # Errors
/// In words: the rulebook was changed meanwhile, the threshold can't be changed, or the campaign
/// folder can't be written to.
pub fn adopt_threshold(
    campaign: &Campaign,
    author: &Author,
    change: &ThresholdChange,
) -> Result<String, String> {
    let in_force = rulebook_of(campaign).map_err(|error| error.to_string())?;
    if in_force.fingerprint != change.fingerprint {
        return Err("the campaign's rulebook was changed meanwhile: run the tests anew".to_owned());
    }
    let own = campaign.rulebook_text().map_err(|error| error.to_string())?;
    let text = own.as_deref().unwrap_or(BUILTIN_TEXT);
    let (text, old, new) = with_threshold(text, &change.test, change.way, change.to)?;
    let after =
        Rulebook::parse(&text, "the changed rulebook").map_err(|error| error.to_string())?;
    let line = RulebookChange {
        at: change.now,
        person: author.person.clone(),
        test: change.test.clone(),
        way: change.way,
        old,
        new,
        why: change.why.clone(),
        before: change.fingerprint.clone(),
        after: after.fingerprint,
    };
    campaign.change_rulebook(&text, &line, author).map_err(|error| error.to_string())?;
    Ok(format!("{}: {} in place of {}, in the campaign's rulebook", line.test, line.new, line.old))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_campaigns_rulebook_begins_as_a_copy_and_keeps_who_changed_it() {
        let folder = tempfile::tempdir().unwrap();
        let campaign = Campaign::open_or_create(folder.path()).unwrap();
        let author = Author { person: "ada".into(), host: "desk".into(), process: 1 };
        let mut change = ThresholdChange {
            test: "T01 gross window".to_owned(),
            way: 0,
            to: 268.5,
            fingerprint: rulebook_of(&campaign).unwrap().fingerprint,
            why: Some("cold water".to_owned()),
            now: "2026-03-01T12:00:00Z".parse().unwrap(),
        };
        let words = adopt_threshold(&campaign, &author, &change).unwrap();
        assert!(words.contains("268.5 in place of 270"), "{words}");
        let after = rulebook_of(&campaign).unwrap().fingerprint;
        let (changes, _) = campaign.rulebook_changes();
        assert_eq!(
            (changes[0].before.clone(), changes[0].after.clone()),
            (change.fingerprint.clone(), after.clone())
        );
        let error = adopt_threshold(&campaign, &author, &change).unwrap_err();
        assert!(error.contains("changed meanwhile"), "{error}");
        change.fingerprint = after;
        change.to = 267.0;
        assert!(adopt_threshold(&campaign, &author, &change).is_ok());
        assert_eq!(campaign.rulebook_changes().0.len(), 2);
    }
}
