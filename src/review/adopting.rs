//! A threshold that was tried becomes the campaign's.

use jiff::Timestamp;

use super::rulebook_of;
use crate::flags::{Author, Campaign, RulebookChange};
use crate::screening::{BUILTIN_TEXT, Rulebook, with_threshold, with_threshold_as};

/// A threshold to be taken over into the campaign's rulebook.
#[derive(Debug, Clone, PartialEq)]
pub struct ThresholdChange {
    /// The test.
    pub test: String,
    /// 0 for the test itself, from 1 for its substitutes.
    pub way: usize,
    /// What becomes of it.
    pub to: NewThreshold,
    /// Why, if that was said.
    pub why: Option<String>,
    /// The moment.
    pub now: Timestamp,
}

/// What becomes of a threshold.
#[derive(Debug, Clone, PartialEq)]
pub enum NewThreshold {
    /// What was tried.
    Tried {
        /// The new number; a table or an expression is moved by it.
        to: f64,
        /// Names the rulebook that it was tried with.
        fingerprint: String,
    },
    /// What it was before a change, as written then.
    Before {
        /// The threshold before the change.
        old: String,
        /// The threshold after it, which has to be there still.
        new: String,
    },
}

impl ThresholdChange {
    /// A change taken back.
    pub fn taking_back(change: &RulebookChange, why: Option<String>, now: Timestamp) -> Self {
        let to = NewThreshold::Before { old: change.old.clone(), new: change.new.clone() };
        Self { test: change.test.clone(), way: change.way, to, why, now }
    }
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
    if let NewThreshold::Tried { fingerprint, .. } = &change.to
        && in_force.fingerprint != *fingerprint
    {
        return Err("the campaign's rulebook was changed meanwhile: run the tests anew".to_owned());
    }
    let own = campaign.rulebook_text().map_err(|error| error.to_string())?;
    let text = own.as_deref().unwrap_or(BUILTIN_TEXT);
    let (test, way) = (&change.test, change.way);
    let (text, old, new) = match &change.to {
        NewThreshold::Tried { to, .. } => with_threshold(text, test, way, *to)?,
        NewThreshold::Before { old, .. } => with_threshold_as(text, test, way, old)?,
    };
    if let NewThreshold::Before { new, .. } = &change.to
        && old != *new
    {
        return Err(format!("it was changed again since and is {old} now"));
    }
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
        before: in_force.fingerprint,
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
        let before = rulebook_of(&campaign).unwrap().fingerprint;
        let mut change = ThresholdChange {
            test: "T01 gross window".to_owned(),
            way: 0,
            to: NewThreshold::Tried { to: 268.5, fingerprint: before.clone() },
            why: Some("cold water".to_owned()),
            now: "2026-03-01T12:00:00Z".parse().unwrap(),
        };
        let words = adopt_threshold(&campaign, &author, &change).unwrap();
        assert!(words.contains("268.5 in place of 270"), "{words}");
        let after = rulebook_of(&campaign).unwrap().fingerprint;
        let (changes, _) = campaign.rulebook_changes();
        assert_eq!((&changes[0].before, &changes[0].after), (&before, &after));
        let error = adopt_threshold(&campaign, &author, &change).unwrap_err();
        assert!(error.contains("changed meanwhile"), "{error}");
        change.to = NewThreshold::Tried { to: 267.0, fingerprint: after.clone() };
        assert!(adopt_threshold(&campaign, &author, &change).is_ok());
        let (changes, _) = campaign.rulebook_changes();
        // The second one is in force: the first can't be taken back before it.
        let back = |one: &RulebookChange| ThresholdChange::taking_back(one, None, change.now);
        let error = adopt_threshold(&campaign, &author, &back(&changes[0])).unwrap_err();
        assert_eq!(error, "it was changed again since and is 267.0 now");
        adopt_threshold(&campaign, &author, &back(&changes[1])).unwrap();
        assert_eq!(rulebook_of(&campaign).unwrap().fingerprint, after);
        adopt_threshold(&campaign, &author, &back(&changes[0])).unwrap();
        assert_eq!(rulebook_of(&campaign).unwrap().fingerprint, before);
        assert_eq!(campaign.rulebook_changes().0.len(), 4, "nothing written is ever changed");
    }
}
