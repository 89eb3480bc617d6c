//! One granule of the Tray.

use std::collections::BTreeSet;
use std::path::{Path, PathBuf};

use crate::flags::{
    Counts, Decision, FlagState, GranuleIdentity, GranuleState, OwnTimes, SpotCheck, Vocabulary,
    own_steps, own_times, screened_by, spot_checks,
};
use crate::system::clean_text;

/// How far a granule's review has come, as its ledgers say.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Standing {
    /// The state.
    pub state: GranuleState,
    /// How many footprints are in which state, where their number is known.
    pub counts: Option<Counts>,
    /// Footprints that tests leave in doubt and no person has settled, where tests have run.
    pub in_doubt: Option<usize>,
    /// The rulebook whose decisions stand, by name and fingerprint, if any does.
    pub tests: Option<String>,
    /// The spot checks that stand.
    pub spot_checks: Vec<SpotCheck>,
    /// When the person last decided about it; kept up while it is not on the table.
    pub own: OwnTimes,
    /// The steps over several granules that the person's decisions are parts of, likewise.
    pub steps: BTreeSet<String>,
}

/// One granule of the Tray.
#[derive(Debug, Clone, PartialEq)]
pub struct Entry {
    /// The file.
    pub path: PathBuf,
    /// Its name for the screen: cleaned, with so much of its folder as tells it from the others.
    pub name: String,
    /// What its ledgers say, once that is known.
    pub standing: Option<Standing>,
    /// Why it can't be used, where that has turned out.
    pub error: Option<String>,
}

impl Standing {
    /// What decisions about a granule amount to, for `person`.
    pub fn of(
        granule: &GranuleIdentity,
        decisions: &[Decision],
        vocabulary: &Vocabulary,
        person: &str,
    ) -> Standing {
        let footprints = granule.footprint_count();
        let state = FlagState::replay(footprints, &granule.bands, decisions, vocabulary);
        let counts = state.counts(vocabulary);
        let screened = decisions.iter().any(|decision| !decision.by_person());
        Standing {
            state: state.granule,
            in_doubt: screened.then_some(counts.in_doubt),
            counts: Some(counts),
            tests: screened_by(decisions),
            spot_checks: spot_checks(decisions).into_iter().cloned().collect(),
            own: own_times(decisions, person),
            steps: own_steps(decisions, person),
        }
    }
}

impl Entry {
    /// Whether it is known to be signed off.
    pub fn is_signed_off(&self) -> bool {
        self.standing.as_ref().is_some_and(|standing| standing.state == GranuleState::SignedOff)
    }
}

impl Entry {
    /// Whether something may be left to decide: it is in hand or untouched, and tests left something
    /// in doubt or have not run.
    pub fn may_be_in_doubt(&self) -> bool {
        let Some(standing) = &self.standing else { return true };
        let open = matches!(standing.state, GranuleState::Untouched | GranuleState::InHand);
        open && standing.in_doubt != Some(0)
    }
}

/// A name for each path: the file's own, or as many folders before it as it takes for no two to
/// be the same. Equal paths keep equal names.
pub fn names(paths: &[PathBuf]) -> Vec<String> {
    let most = paths.iter().map(|path| path.components().count()).max().unwrap_or(0);
    let mut names: Vec<String> = paths.iter().map(|path| tail(path, 1)).collect();
    for parts in 2..=most {
        let mut sorted = names.clone();
        sorted.sort();
        let doubled = |name: &String| {
            let first = sorted.partition_point(|other| other < name);
            sorted.get(first + 1).is_some_and(|next| next == name)
        };
        let again: Vec<bool> = names.iter().map(doubled).collect();
        if !again.contains(&true) {
            break;
        }
        for ((name, path), _) in names.iter_mut().zip(paths).zip(again).filter(|(_, again)| *again)
        {
            *name = tail(path, parts);
        }
    }
    names
}

fn tail(path: &Path, parts: usize) -> String {
    let components: Vec<_> = path.components().collect();
    let start = components.len().saturating_sub(parts);
    let tail: PathBuf = components.iter().skip(start).collect();
    clean_text(&tail.to_string_lossy())
}

#[cfg(test)]
mod tests {
    use super::*;

    fn names_of(paths: &[&str]) -> Vec<String> {
        names(&paths.iter().map(PathBuf::from).collect::<Vec<_>>())
    }

    #[test]
    fn names_are_as_long_as_it_takes() {
        assert_eq!(names_of(&["a/x.nc", "a/y.nc"]), ["x.nc", "y.nc"]);
        assert_eq!(names_of(&["a/x.nc", "b/x.nc", "b/y.nc"]), ["a/x.nc", "b/x.nc", "y.nc"]);
        assert_eq!(
            names_of(&["1/a/x.nc", "2/a/x.nc", "3/b/x.nc"]),
            ["1/a/x.nc", "2/a/x.nc", "b/x.nc"]
        );
        assert_eq!(names_of(&["x.nc", "x.nc"]), ["x.nc", "x.nc"]);
    }

    #[test]
    fn control_characters_do_not_reach_the_screen() {
        assert!(!names_of(&["a\u{1b}[2Jb.nc"])[0].contains('\u{1b}'));
    }
}
