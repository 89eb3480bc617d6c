//! Folding decisions into the current flags.
//!
//! The result depends on the set of decisions alone, not on the order in which files were read:
//! decisions are sorted by (time, writer, sequence), and revocations count wherever they stand.

use std::collections::BTreeMap;

use jiff::Timestamp;

use super::granule_state::{granule_state, granule_state_after};
use super::history::Ordered;
use super::plane::Plane;
use super::protected_parts::protected_parts;
use super::{
    Act, ChannelName, Decision, FlagAt, FlagState, FootprintSet, GranuleState, ReviewState, Scope,
    Vocabulary,
};
use crate::system::clean_text;

/// More bands than any sounder has; a damaged ledger must not make one plane for each odd name.
const MOST_BANDS: usize = 64;
/// More channels than any sounder has in a band.
const MOST_CHANNELS: usize = 1 << 20;

impl FlagState {
    /// The flags of a granule with `footprints` footprints and these `bands` after all `decisions`, in
    /// any order.
    ///
    /// Rules: a person's word about a flag at a footprint stands against every test, whenever it
    /// was spoken; after a person has assessed a footprint, no later test changes it, and a test
    /// that takes back its own flag does not take it from under a person's assessment; a
    /// withdrawal makes a footprint decided only where the flag stood. A flag alone makes no footprint
    /// assessed, only a person's that excludes it as a whole: whoever calls a footprint unusual, or
    /// one of its bands bad, has not said that the rest can be used. Flags limited to bands that are
    /// together all of the granule's are flags of the whole footprint.
    pub fn replay(
        footprints: usize,
        bands: &[String],
        decisions: &[Decision],
        vocabulary: &Vocabulary,
    ) -> Self {
        Replay::of(footprints, bands, decisions, vocabulary).state()
    }
}

/// Decisions folded so far, to which later ones can be added without beginning anew.
pub struct Replay {
    fold: Fold,
    granule: GranuleState,
    /// The place of the latest decision in the order of all.
    latest: Option<(Timestamp, String, u64)>,
}

impl Replay {
    /// Folds all decisions about a granule, in any order, by the rules of [`FlagState::replay`].
    pub fn of(
        footprints: usize,
        bands: &[String],
        decisions: &[Decision],
        vocabulary: &Vocabulary,
    ) -> Self {
        let ordered = Ordered::new(decisions);
        let protected = protected_parts(footprints, &ordered);
        let mut fold = Fold::new(footprints, bands.to_vec(), vocabulary.clone());
        for (at, decision) in ordered.decisions.iter().enumerate() {
            if ordered.standing[at] {
                fold.apply(decision, None);
            } else if let Some(part) = protected.get(&at) {
                fold.apply(decision, Some(part));
            }
        }
        let latest = ordered.decisions.last().map(|decision| place(decision));
        Self { fold, granule: granule_state(&ordered), latest }
    }

    /// Folds one more decision on top. False, and nothing is folded, where only beginning anew
    /// tells what comes of it: it takes another back, or belongs before one that is folded already.
    pub fn add(&mut self, decision: &Decision) -> bool {
        let place = place(decision);
        let revokes = matches!(decision.act, Act::Revoke { .. });
        if revokes || self.latest.as_ref().is_some_and(|latest| *latest >= place) {
            return false;
        }
        self.fold.apply(decision, None);
        self.granule = granule_state_after(self.granule, decision);
        self.latest = Some(place);
        true
    }

    /// The flags as they stand.
    pub fn state(&self) -> FlagState {
        self.fold.state(self.granule)
    }
}

fn place(decision: &Decision) -> (Timestamp, String, u64) {
    let (at, writer, sequence) = decision.order();
    (at, writer.to_owned(), sequence)
}

struct Fold {
    vocabulary: Vocabulary,
    whole: Plane,
    bands: BTreeMap<String, Plane>,
    /// The names of all bands that the granule has.
    all_bands: Vec<String>,
    review: Vec<ReviewState>,
    /// Footprints that a person assessed: later tests change nothing there.
    settled: Vec<bool>,
    /// Footprints that a person gave a flag which says nothing about the rest of them.
    heard: Vec<bool>,
    /// Flags, and about which of them persons spoke.
    channels: BTreeMap<String, BTreeMap<usize, (super::ChannelFlags, u32)>>,
    problems: BTreeMap<String, usize>,
}

impl Fold {
    fn new(footprints: usize, all_bands: Vec<String>, vocabulary: Vocabulary) -> Self {
        Self {
            vocabulary,
            all_bands,
            whole: Plane::new(footprints),
            bands: BTreeMap::new(),
            review: vec![ReviewState::NotAssessed; footprints],
            settled: vec![false; footprints],
            heard: vec![false; footprints],
            channels: BTreeMap::new(),
            problems: BTreeMap::new(),
        }
    }

    /// Folds one decision, or the part of it at the footprints of `only`.
    fn apply(&mut self, decision: &Decision, only: Option<&FootprintSet>) {
        let person = decision.by_person();
        match &decision.act {
            Act::Flag { flag, footprints, bands } => {
                let Some(bit) = self.bit(flag, Scope::Footprint) else { return };
                let footprints = self.inside(only.unwrap_or(footprints));
                self.flag(bit, &footprints, bands.as_deref(), person);
            }
            Act::Withdraw { flag, footprints, bands } => {
                let Some(bit) = self.bit(flag, Scope::Footprint) else { return };
                let footprints = self.inside(only.unwrap_or(footprints));
                self.withdraw(bit, &footprints, bands.as_deref(), person);
            }
            Act::FlagChannels { flag, channels } => self.channels(flag, channels, true, person),
            Act::WithdrawChannels { flag, channels } => {
                self.channels(flag, channels, false, person);
            }
            Act::Assess { footprints } => {
                let footprints = self.inside(only.unwrap_or(footprints));
                self.assess(&footprints, person);
            }
            // Only a person can rule on what tests suggest.
            Act::Judge { given, withdrawn, footprints, .. } if person => {
                self.judge(given, withdrawn, footprints);
            }
            // Only a person can answer for a granule.
            Act::SignOff { rest_assessed, .. } if person => {
                let footprints = self.inside(rest_assessed);
                self.assess(&footprints, person);
            }
            Act::Unknown { kind } => {
                self.problem(format!("act `{kind}` is unknown to this version"));
            }
            _ => {}
        }
    }

    fn judge(&mut self, given: &[FlagAt], withdrawn: &[FlagAt], judged: &FootprintSet) {
        for part in given {
            if let Some(bit) = self.bit(&part.flag, Scope::Footprint) {
                let footprints = self.inside(&part.footprints);
                self.flag(bit, &footprints, None, true);
            }
        }
        for part in withdrawn {
            if let Some(bit) = self.bit(&part.flag, Scope::Footprint) {
                let footprints = self.inside(&part.footprints);
                self.withdraw(bit, &footprints, None, true);
            }
        }
        let judged = self.inside(judged);
        self.assess(&judged, true);
    }

    fn flag(&mut self, bit: u32, at: &FootprintSet, bands: Option<&[String]>, person: bool) {
        for name in planes(bands) {
            let settled = &self.settled;
            let Some(plane) = plane(&mut self.whole, &mut self.bands, name) else {
                self.problem(format!("more than {MOST_BANDS} bands named"));
                return;
            };
            for run in at.runs() {
                plane.flag(run.clone(), bit, (!person).then_some(settled));
            }
        }
        let excludes = bands.is_none() && bit & self.vocabulary.excluding_mask() != 0;
        if person && excludes {
            self.reach(at, true);
        } else if person {
            at.runs().iter().for_each(|run| self.heard[run.clone()].fill(true));
        }
    }

    fn withdraw(&mut self, bit: u32, at: &FootprintSet, bands: Option<&[String]>, person: bool) {
        let named = |name: &String| bands.is_none_or(|names| names.contains(name));
        let whole = bands.is_none().then_some(&mut self.whole);
        let limited = self.bands.iter_mut().filter(|(name, _)| named(name)).map(|(_, plane)| plane);
        for plane in whole.into_iter().chain(limited) {
            for run in at.runs() {
                if person {
                    plane.withdraw_for_person(run.clone(), bit, &mut self.review);
                } else {
                    plane.withdraw_for_test(run.clone(), bit, &self.settled);
                }
            }
        }
    }

    fn assess(&mut self, at: &FootprintSet, person: bool) {
        self.reach(at, person);
        if person {
            at.runs().iter().for_each(|run| self.settled[run.clone()].fill(true));
        }
    }

    /// Notes who has assessed footprints; a person's word is never lowered.
    fn reach(&mut self, at: &FootprintSet, person: bool) {
        let reached =
            if person { ReviewState::DecidedByPerson } else { ReviewState::AssessedByTest };
        for run in at.runs() {
            self.review[run.clone()].iter_mut().for_each(|state| *state = (*state).max(reached));
        }
    }

    fn channels(&mut self, flag: &str, channels: &[ChannelName], set: bool, person: bool) {
        let Some(bit) = self.bit(flag, Scope::Channel) else { return };
        for channel in channels {
            let too_many =
                self.channels.len() >= MOST_BANDS && !self.channels.contains_key(&channel.band);
            if channel.index >= MOST_CHANNELS || too_many {
                self.problem("a channel beyond any band named".to_owned());
                continue;
            }
            let band = self.channels.entry(channel.band.clone()).or_default();
            let (flags, spoken) = band.entry(channel.index).or_default();
            if !person && *spoken & bit != 0 {
                continue;
            }
            flags.flags = if set { flags.flags | bit } else { flags.flags & !bit };
            flags.wavenumber = channel.wavenumber;
            if person {
                *spoken |= bit;
            }
        }
    }

    fn bit(&mut self, flag: &str, scope: Scope) -> Option<u32> {
        let kind = self.vocabulary.by_name(flag);
        let bit = kind.filter(|kind| kind.scope == scope).map(super::FlagKind::mask);
        if bit.is_none() {
            let what = if scope == Scope::Channel { "channel flag" } else { "flag" };
            self.problem(format!("{what} `{flag}` is not in this campaign's vocabulary"));
        }
        bit
    }

    fn inside(&mut self, footprints: &FootprintSet) -> FootprintSet {
        let inside = footprints.clipped(self.review.len());
        if inside.len() != footprints.len() {
            self.problem("footprints beyond the granule named".to_owned());
        }
        inside
    }

    fn problem(&mut self, what: String) {
        *self.problems.entry(clean_text(&what)).or_default() += 1;
    }

    /// The flags of the whole footprint: those given to it, and those that stand in every band.
    fn whole_flags(&self) -> Vec<u32> {
        let mut flags = self.whole.flags.clone();
        let planes: Option<Vec<&Plane>> =
            self.all_bands.iter().map(|name| self.bands.get(name)).collect();
        let Some(planes) = planes.filter(|planes| !planes.is_empty()) else { return flags };
        for (at, flags) in flags.iter_mut().enumerate() {
            *flags |= planes.iter().fold(u32::MAX, |all, plane| all & plane.flags[at]);
        }
        flags
    }

    /// Who has assessed the footprints. Whoever gave one a flag has decided about it, too, where
    /// anything assessed it.
    fn review_states(&self) -> Vec<ReviewState> {
        let both = self.review.iter().zip(&self.heard);
        let state = |(review, heard): (&ReviewState, &bool)| match (review, heard) {
            (ReviewState::AssessedByTest, true) => ReviewState::DecidedByPerson,
            _ => *review,
        };
        both.map(state).collect()
    }

    fn state(&self, granule: GranuleState) -> FlagState {
        let flags_of =
            |(index, (flags, _)): (&usize, &(super::ChannelFlags, u32))| (*index, *flags);
        let channels = self.channels.iter();
        let channels = channels
            .map(|(band, channels)| (band.clone(), channels.iter().map(flags_of).collect()));
        let bands =
            self.bands.iter().filter(|(_, plane)| plane.flags.iter().any(|flags| *flags != 0));
        let problems = self.problems.iter().map(|(what, times)| {
            let decisions = if *times == 1 { "decision" } else { "decisions" };
            format!("{what} ({times} {decisions}): kept in the ledger, not in the flags")
        });
        FlagState {
            footprint_flags: self.whole_flags(),
            band_flags: bands.map(|(name, plane)| (name.clone(), plane.flags.clone())).collect(),
            review: self.review_states(),
            channel_flags: channels.collect(),
            granule,
            problems: problems.collect(),
        }
    }
}

/// The planes that a decision speaks about: `None` is the whole footprint.
fn planes(bands: Option<&[String]>) -> Vec<Option<&str>> {
    match bands {
        None => vec![None],
        Some(names) => names.iter().map(|name| Some(name.as_str())).collect(),
    }
}

fn plane<'p>(
    whole: &'p mut Plane,
    bands: &'p mut BTreeMap<String, Plane>,
    name: Option<&str>,
) -> Option<&'p mut Plane> {
    let Some(name) = name else { return Some(whole) };
    if bands.len() >= MOST_BANDS && !bands.contains_key(name) {
        return None;
    }
    // A person's word about the whole footprint holds in bands of which nobody has spoken, too.
    Some(bands.entry(name.to_owned()).or_insert_with(|| whole.without_flags()))
}
