//! Decisions about the campaign's rulebook: who changed which threshold, when, from what to what.
//!
//! Every writer has a file of its own, to which lines are only added.

use std::fs::OpenOptions;
use std::io::{self, Write};
use std::path::PathBuf;

use jiff::Timestamp;
use serde::{Deserialize, Serialize};

use super::{Author, Campaign, CampaignError, file_name_part};
use crate::system::write_whole;

/// One change of one threshold.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct RulebookChange {
    /// When.
    pub at: Timestamp,
    /// Who.
    pub person: String,
    /// The test.
    pub test: String,
    /// 0 for the test itself, from 1 for its substitutes.
    pub way: usize,
    /// The threshold before, as written.
    pub old: String,
    /// The threshold after, as written.
    pub new: String,
    /// Why, if that was said.
    pub why: Option<String>,
    /// Names the rulebook before.
    pub before: String,
    /// Names the rulebook after.
    pub after: String,
}

/// The folder of the changes in the campaign folder.
const CHANGES: &str = "rulebook-changes";

impl Campaign {
    /// Writes down a change, then puts the changed rulebook in place: whole or not at all.
    ///
    /// # Errors
    /// The campaign folder cannot be written to.
    pub fn change_rulebook(
        &self,
        text: &str,
        change: &RulebookChange,
        author: &Author,
    ) -> Result<(), CampaignError> {
        let unwritable =
            |source| CampaignError::Unwritable { path: self.folder().to_owned(), source };
        self.append_change(change, author).map_err(unwritable)?;
        let write = |path: &std::path::Path| std::fs::write(path, text);
        write_whole(&self.rulebook_path(), write)
            .map_err(|error| unwritable(io::Error::other(error.to_string())))
    }

    fn append_change(&self, change: &RulebookChange, author: &Author) -> io::Result<()> {
        let folder = self.folder().join(CHANGES);
        std::fs::create_dir_all(&folder)?;
        let (person, host) = (file_name_part(&author.person), file_name_part(&author.host));
        let name = format!("{person}-{host}-{}.jsonl", author.process);
        let mut line = serde_json::to_vec(change)?;
        line.push(b'\n');
        let mut file = OpenOptions::new().create(true).append(true).open(folder.join(name))?;
        file.write_all(&line)?;
        file.sync_all()
    }

    /// All changes, the earliest first, and what could not be read, in words.
    pub fn rulebook_changes(&self) -> (Vec<RulebookChange>, Vec<String>) {
        let (mut changes, mut problems) = (Vec::new(), Vec::new());
        let mut paths: Vec<PathBuf> = match std::fs::read_dir(self.folder().join(CHANGES)) {
            Ok(entries) => entries.flatten().map(|entry| entry.path()).collect(),
            Err(_) => Vec::new(),
        };
        paths.sort();
        for path in paths {
            let name = path.file_name().unwrap_or_default().to_string_lossy().into_owned();
            match std::fs::read_to_string(&path) {
                Ok(text) => {
                    for (number, line) in text.lines().enumerate() {
                        match serde_json::from_str(line) {
                            Ok(change) => changes.push(change),
                            Err(error) => problems
                                .push(format!("{CHANGES}/{name}, line {}: {error}", number + 1)),
                        }
                    }
                }
                Err(error) => problems.push(format!("{CHANGES}/{name}: {error}")),
            }
        }
        changes.sort_by_key(|change: &RulebookChange| change.at);
        (changes, problems)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn change(person: &str, at: &str) -> RulebookChange {
        RulebookChange {
            at: at.parse().unwrap(),
            person: person.to_owned(),
            test: "T01".to_owned(),
            way: 0,
            old: "270".to_owned(),
            new: "268.5".to_owned(),
            why: Some("cold water".to_owned()),
            before: "a".to_owned(),
            after: "b".to_owned(),
        }
    }

    #[test]
    fn changes_of_all_writers_come_back_in_order_and_damage_is_told() {
        let folder = tempfile::tempdir().unwrap();
        let campaign = Campaign::open_or_create(folder.path()).unwrap();
        assert_eq!(campaign.rulebook_changes(), (Vec::new(), Vec::new()));
        let author = |person: &str| Author { person: person.into(), host: "h".into(), process: 1 };
        let (late, early) =
            (change("bo", "2026-03-01T12:00:00Z"), change("ada", "2026-03-01T11:00:00Z"));
        campaign.change_rulebook("first", &late, &author("bo")).unwrap();
        campaign.change_rulebook("second", &early, &author("ada")).unwrap();
        assert_eq!(campaign.rulebook_text().unwrap().as_deref(), Some("second"));
        assert_eq!(campaign.rulebook_changes(), (vec![early.clone(), late.clone()], Vec::new()));
        std::fs::write(folder.path().join(CHANGES).join("x.jsonl"), "{half").unwrap();
        let (changes, problems) = campaign.rulebook_changes();
        assert_eq!(changes.len(), 2);
        assert!(problems[0].contains("x.jsonl, line 1"), "{problems:?}");
    }
}
