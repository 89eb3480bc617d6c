//! The granules in hand, in the order in which they were named.

use std::collections::BTreeSet;
use std::path::{Path, PathBuf};

use jiff::Timestamp;

use crate::flags::{Campaign, OwnTimes, file_name_part};
use crate::system::clean_text;

use super::entry::{Entry, Standing, names};

/// The granules in hand.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Tray {
    entries: Vec<Entry>,
}

impl Tray {
    /// A Tray of these files, in this order.
    pub fn new(paths: Vec<PathBuf>) -> Tray {
        let names = names(&paths);
        let entry = |(path, name)| Entry { path, name, standing: None, error: None };
        Tray { entries: paths.into_iter().zip(names).map(entry).collect() }
    }

    /// All entries.
    pub fn entries(&self) -> &[Entry] {
        &self.entries
    }

    /// How many granules there are.
    pub fn len(&self) -> usize {
        self.entries.len()
    }

    /// Whether there is none.
    pub fn is_empty(&self) -> bool {
        self.entries.is_empty()
    }

    /// One entry.
    pub fn entry(&self, number: usize) -> Option<&Entry> {
        self.entries.get(number)
    }

    /// Takes down what a granule's ledgers say.
    pub fn set_standing(&mut self, number: usize, standing: Standing) {
        if let Some(entry) = self.entries.get_mut(number) {
            entry.standing = Some(standing);
        }
    }

    /// Takes granules for untouched that no ledger of the campaign can be about: none goes by the
    /// name, and none under another name is about a file of this size, as it would be if the file
    /// had been renamed since. Of the others only their content tells.
    pub fn take_for_untouched(&mut self, campaign: &Campaign) {
        let stems = campaign.ledger_stems();
        let own: BTreeSet<String> = self.entries.iter().map(|entry| stem(&entry.path)).collect();
        let renamed = campaign.sizes_under_other_stems(&own);
        let size = |path: &Path| std::fs::metadata(path).map(|data| data.len());
        for entry in self.entries.iter_mut().filter(|entry| entry.standing.is_none()) {
            let may_be_renamed =
                !renamed.is_empty() && size(&entry.path).is_ok_and(|size| renamed.contains(&size));
            if !stems.contains(&stem(&entry.path)) && !may_be_renamed {
                entry.standing = Some(Standing::default());
            }
        }
    }

    /// Takes down why a granule can't be used, or that it can after all. Its path, with which
    /// messages about files begin, is left out: the row names the file.
    pub fn set_error(&mut self, number: usize, error: Option<String>) {
        if let Some(entry) = self.entries.get_mut(number) {
            let path = format!("{}: ", clean_text(&entry.path.to_string_lossy()));
            let without_path =
                |why: String| why.strip_prefix(&path).map(str::to_owned).unwrap_or(why);
            entry.error = error.map(without_path);
        }
    }

    /// The next entry after `number` (from the beginning where there is none) that can be used, as
    /// far as is known.
    pub fn next(&self, number: Option<usize>) -> Option<usize> {
        let start = number.map_or(0, |number| number + 1);
        (start..self.len()).find(|next| self.is_usable(*next))
    }

    /// The next entry before `number` that can be used, as far as is known.
    pub fn previous(&self, number: usize) -> Option<usize> {
        (0..number.min(self.len())).rev().find(|next| self.is_usable(*next))
    }

    /// The next entry after `number` that can be used and is not known to be signed off; behind
    /// the last one it goes on from the beginning.
    pub fn next_unsigned(&self, number: Option<usize>) -> Option<usize> {
        let start = number.map_or(0, |number| number + 1);
        let round = (start..self.len()).chain(0..start.min(self.len()));
        round
            .filter(|next| Some(*next) != number)
            .find(|next| self.is_usable(*next) && !self.entries[*next].is_signed_off())
    }

    /// The next entry after `number` that can be used and may be in doubt; behind the last one it
    /// goes on from the beginning.
    pub fn next_in_doubt(&self, number: usize) -> Option<usize> {
        let round = (number + 1..self.len()).chain(0..number.min(self.len()));
        let mut open = round.filter(|next| self.is_usable(*next));
        open.find(|next| self.entries[*next].may_be_in_doubt())
    }

    /// The entry beside `number` with the latest moment of those that `moment` picks out of what
    /// the person decided there.
    pub fn latest(
        &self,
        number: usize,
        moment: impl Fn(&OwnTimes) -> Option<Timestamp>,
    ) -> Option<(usize, Timestamp)> {
        let others = self.entries.iter().enumerate().filter(|(other, _)| *other != number);
        others
            .filter_map(|(other, entry)| Some((other, moment(&entry.standing.as_ref()?.own)?)))
            .max_by_key(|(_, at)| *at)
    }

    fn is_usable(&self, number: usize) -> bool {
        self.entries.get(number).is_some_and(|entry| entry.error.is_none())
    }
}

/// A file's stem as the names of ledger folders have it.
fn stem(path: &Path) -> String {
    file_name_part(&path.file_stem().unwrap_or_default().to_string_lossy())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::flags::GranuleState;

    fn tray() -> Tray {
        let mut tray = Tray::new(["a.nc", "b.nc", "c.nc", "d.nc"].map(PathBuf::from).to_vec());
        tray.set_error(1, Some("b.nc: no spectra".to_owned()));
        assert_eq!(tray.entry(1).unwrap().error.as_deref(), Some("no spectra"));
        for signed in [0, 2] {
            let state = GranuleState::SignedOff;
            tray.set_standing(signed, Standing { state, ..Standing::default() });
        }
        tray
    }

    #[test]
    fn a_file_that_cannot_be_used_is_stepped_over() {
        let tray = tray();
        assert_eq!(tray.next(None), Some(0));
        assert_eq!(tray.next(Some(0)), Some(2));
        assert_eq!(tray.next(Some(3)), None);
        assert_eq!(tray.previous(2), Some(0));
        assert_eq!(tray.previous(0), None);
    }

    #[test]
    fn doubt_is_looked_for_all_around() {
        let mut tray = tray();
        assert_eq!(tray.next_in_doubt(0), Some(3), "not known to be plain");
        assert_eq!(tray.next_in_doubt(3), None);
        let open = |in_doubt| Standing { in_doubt, ..Standing::default() };
        tray.set_standing(3, open(Some(0)));
        tray.set_standing(0, open(Some(7)));
        assert_eq!(tray.next_in_doubt(2), Some(0));
        assert_eq!(tray.next_in_doubt(0), None);
    }

    #[test]
    fn the_first_that_is_not_signed_off_is_found_all_around() {
        let mut tray = tray();
        assert_eq!(tray.next_unsigned(None), Some(3));
        assert_eq!(tray.next_unsigned(Some(3)), None);
        tray.set_error(1, None);
        assert_eq!(tray.next_unsigned(Some(3)), Some(1));
        assert_eq!(Tray::default().next_unsigned(None), None);
    }
}
