//! What lies behind the screen: the granules, what the tests say of them, the truth, the ledgers.

use std::path::Path;

use radsieve::flags::{
    Campaign, FlagState, GranuleIdentity, ReviewState, Vocabulary, read_ledgers,
};
use radsieve::granule::Opening;
use radsieve::netcdf_files::ReaderProgram;
use radsieve::review::{Case, Review};
use radsieve::screening::{Rulebook, Screened};
use radsieve::system::Cancel;

use crate::Mishap;
use crate::agreement::Table;
use crate::reviewer::Seen;
use crate::truth::{FLAGS, Sight};

/// One granule with all that is known of it.
pub struct Granule {
    /// Its name.
    pub name: String,
    review: Review,
    screened: Screened,
    identity: GranuleIdentity,
    truth: Vec<Sight>,
    window: Vec<f64>,
}

impl Granule {
    /// Opens and screens a granule.
    pub fn open(file: &Path, rulebook: &Rulebook) -> Result<Granule, Mishap> {
        let opening = Opening::new(ReaderProgram::new(env!("CARGO_BIN_EXE_radsieve")));
        let review = Review::open(&opening, file)?;
        let screened = review.screen(rulebook, &Cancel::new())?;
        let (identity, truth) = (review.identify()?, Sight::of(&review)?);
        let window = match review.first_look().first() {
            Some((text, _)) => review.layer(text, &Cancel::new())?.values,
            None => Vec::new(),
        };
        Ok(Granule { name: review.granule().name(), review, screened, identity, truth, window })
    }

    /// What the ledgers of a campaign come to.
    pub fn state(&self, campaign: &Campaign) -> FlagState {
        let decisions = read_ledgers(campaign, &self.identity).decisions;
        let bands = &self.identity.bands;
        FlagState::replay(self.truth.len(), bands, &decisions, &Vocabulary::released())
    }

    /// The cases that are left.
    pub fn cases(&self, state: &FlagState) -> Vec<Case> {
        let settled = |at: usize| state.review[at] == ReviewState::DecidedByPerson;
        self.review.cases(&self.screened, settled, &self.window)
    }

    /// The case whose most doubtful footprint has this index.
    pub fn case_at(&self, state: &FlagState, index: &[usize]) -> Option<Case> {
        let lengths = self.review.granule().footprints().lengths();
        let place = index.iter().zip(lengths).fold(0, |place, (one, length)| place * length + one);
        self.cases(state).into_iter().find(|case| case.worst == place)
    }

    /// Flags that the tests suggest at a footprint and that keep a retrieval away.
    pub fn suggested(&self, at: usize) -> Vec<&str> {
        let set = self.screened.flags.iter().filter(|flag| flag.is_set(at));
        set.map(|flag| flag.flag.as_str()).filter(|flag| FLAGS.contains(flag)).collect()
    }

    /// Looks at every footprint of a case.
    pub fn look<T>(&self, case: &Case, with: impl FnOnce(&[Seen<'_>]) -> T) -> T {
        let footprints: Vec<usize> = case.footprints.iter().collect();
        let suggested: Vec<Vec<&str>> = footprints.iter().map(|at| self.suggested(*at)).collect();
        let seen: Vec<Seen<'_>> = footprints
            .iter()
            .zip(&suggested)
            .map(|(at, suggested)| Seen { word: self.truth[*at].word(), suggested })
            .collect();
        with(&seen)
    }

    /// How a flag agrees with the truth, where that is no matter of taste.
    pub fn agreement(&self, state: &FlagState, flag: &str) -> Table {
        let vocabulary = Vocabulary::released();
        let mask = vocabulary.by_name(flag).map_or(0, radsieve::flags::FlagKind::mask);
        let truths = self.truth.iter().enumerate();
        Table::of(truths.filter_map(|(at, truth)| {
            Some((state.any_flags(at) & mask != 0, truth.deserves(flag)?))
        }))
    }

    /// How "usable" agrees with the truth: where that is plain, and everywhere.
    pub fn usable(&self, state: &FlagState) -> (Table, Table) {
        let vocabulary = Vocabulary::released();
        let said = |at: usize| state.usable(at, &vocabulary);
        let truths = || self.truth.iter().enumerate();
        let plain = truths().filter_map(|(at, truth)| Some((said(at), truth.is_usable()?)));
        let all = truths().map(|(at, truth)| (said(at), truth.is_rather_usable()));
        (Table::of(plain), Table::of(all))
    }

    /// How many footprints it has, and how many the tests leave in doubt.
    pub fn footprints(&self) -> (usize, usize) {
        let all = self.screened.footprints();
        (all, (0..all).filter(|at| self.screened.is_doubtful(*at)).count())
    }
}
