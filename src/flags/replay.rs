//! Folding decisions into the current flags.
//!
//! The result depends on the set of decisions alone, not on the order in which files were read:
//! decisions are sorted by (time, writer, sequence), and revocations count wherever they stand.

use std::collections::{BTreeMap, HashMap};

use super::history::Ordered;
use super::{
    Act, ChannelName, Decision, DecisionId, FlagState, FootprintSet, GranuleState, ReviewState,
    Scope, Vocabulary,
};
use crate::system::clean_text;

/// More bands than any sounder has; a damaged ledger must not make one plane for each odd name.
const MOST_BANDS: usize = 64;
/// More channels than any sounder has in a band.
const MOST_CHANNELS: usize = 1 << 20;

impl FlagState {
    /// The flags of a granule with `footprints` footprints after all `decisions`, in any order.
    ///
    /// Rules: a person's word about a flag at a footprint stands against every test, whenever it
    /// was spoken; after a person has assessed a footprint, no later test changes it, and a test
    /// that takes back its own flag does not take it from under a person's assessment; a
    /// withdrawal makes a footprint decided only where the flag stood.
    pub fn replay(footprints: usize, decisions: &[Decision], vocabulary: &Vocabulary) -> Self {
        let ordered = Ordered::new(decisions);
        let protected = ProtectedParts::new(&ordered);
        let mut fold = Fold::new(footprints, vocabulary);
        for (at, decision) in ordered.decisions.iter().enumerate() {
            if ordered.standing[at] {
                fold.apply(decision, None);
            } else if let Some(part) = protected.part(at, &ordered) {
                fold.apply(decision, Some(&part));
            }
        }
        fold.finish(granule_state(&ordered))
    }
}

/// What stays of a test's decision that a test revoked: the footprints that a person had assessed
/// in between, with the flag before their eyes.
struct ProtectedParts<'a> {
    /// Position and footprints of persons' standing assessments, in order.
    assessments: Vec<(usize, &'a FootprintSet)>,
    /// Per revoked decision: its first standing revocation, if only tests revoked it.
    revoked_at: HashMap<&'a DecisionId, Option<usize>>,
}

impl<'a> ProtectedParts<'a> {
    fn new(ordered: &Ordered<'a>) -> Self {
        let mut assessments = Vec::new();
        let mut revoked_at = HashMap::new();
        for (at, decision) in ordered.standing_ones() {
            match &decision.act {
                Act::Assess { footprints } | Act::SignOff { rest_assessed: footprints, .. }
                    if decision.by_person() =>
                {
                    assessments.push((at, footprints));
                }
                Act::Revoke { decision: target } => {
                    let first = revoked_at.entry(target).or_insert(Some(at));
                    if decision.by_person() {
                        *first = None;
                    }
                }
                _ => {}
            }
        }
        Self { assessments, revoked_at }
    }

    fn part(&self, at: usize, ordered: &Ordered<'a>) -> Option<FootprintSet> {
        let decision = ordered.decisions[at];
        let footprints = decision.act.footprints()?;
        if decision.by_person() || self.assessments.is_empty() {
            return None;
        }
        let until = (*self.revoked_at.get(&decision.id)?)?;
        let between = self.assessments.iter().filter(|(when, _)| (at..until).contains(when));
        let parts = between.flat_map(|(_, set)| set.intersection(footprints).runs().to_vec());
        let part = FootprintSet::from_ranges(parts);
        (!part.is_empty()).then_some(part)
    }
}

/// Flags of one plane (the whole footprint, or one band), and about which of them persons spoke.
#[derive(Clone)]
struct Plane {
    flags: Vec<u32>,
    spoken: Vec<u32>,
}

impl Plane {
    fn new(footprints: usize) -> Self {
        Self { flags: vec![0; footprints], spoken: vec![0; footprints] }
    }
}

struct Fold<'a> {
    vocabulary: &'a Vocabulary,
    whole: Plane,
    bands: BTreeMap<String, Plane>,
    review: Vec<ReviewState>,
    /// Footprints that a person assessed: later tests change nothing there.
    settled: Vec<bool>,
    /// Flags, and about which of them persons spoke.
    channels: BTreeMap<String, BTreeMap<usize, (super::ChannelFlags, u32)>>,
    problems: BTreeMap<String, usize>,
}

impl<'a> Fold<'a> {
    fn new(footprints: usize, vocabulary: &'a Vocabulary) -> Self {
        Self {
            vocabulary,
            whole: Plane::new(footprints),
            bands: BTreeMap::new(),
            review: vec![ReviewState::NotAssessed; footprints],
            settled: vec![false; footprints],
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

    fn flag(&mut self, bit: u32, at: &FootprintSet, bands: Option<&[String]>, person: bool) {
        for name in planes(bands) {
            let settled = &self.settled;
            let Some(plane) = plane(&mut self.whole, &mut self.bands, name) else {
                self.problem(format!("more than {MOST_BANDS} bands named"));
                return;
            };
            for footprint in at.iter() {
                if person {
                    plane.flags[footprint] |= bit;
                    plane.spoken[footprint] |= bit;
                } else if !settled[footprint] && plane.spoken[footprint] & bit == 0 {
                    plane.flags[footprint] |= bit;
                }
            }
        }
        let reached = reached(person);
        for footprint in at.iter() {
            self.review[footprint] = self.review[footprint].max(reached);
        }
    }

    fn withdraw(&mut self, bit: u32, at: &FootprintSet, bands: Option<&[String]>, person: bool) {
        let mut touched: Vec<&mut Plane> = Vec::new();
        match bands {
            None => {
                touched.push(&mut self.whole);
                touched.extend(self.bands.values_mut());
            }
            Some(names) => {
                let named = self.bands.iter_mut().filter(|(name, _)| names.contains(name));
                touched.extend(named.map(|(_, plane)| plane));
            }
        }
        for plane in touched {
            for footprint in at.iter() {
                let held = plane.spoken[footprint] & bit != 0 || self.settled[footprint];
                if !person && held {
                    continue;
                }
                let stood = plane.flags[footprint] & bit != 0;
                plane.flags[footprint] &= !bit;
                if person {
                    plane.spoken[footprint] |= bit;
                    // Where nothing stood, nothing was judged: a box drawn over footprints that
                    // nobody assessed must not make them usable.
                    if stood {
                        self.review[footprint] = ReviewState::DecidedByPerson;
                    }
                }
            }
        }
    }

    fn assess(&mut self, at: &FootprintSet, person: bool) {
        let reached = reached(person);
        for footprint in at.iter() {
            self.review[footprint] = self.review[footprint].max(reached);
            self.settled[footprint] |= person;
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

    fn finish(self, granule: GranuleState) -> FlagState {
        let strip = |(flags, _spoken)| flags;
        let channels = self.channels.into_iter().map(|(band, channels)| {
            (band, channels.into_iter().map(|(index, entry)| (index, strip(entry))).collect())
        });
        let bands = self.bands.into_iter().map(|(name, plane)| (name, plane.flags));
        let problems = self.problems.into_iter().map(|(what, times)| {
            let decisions = if times == 1 { "decision" } else { "decisions" };
            format!("{what} ({times} {decisions}): kept in the ledger, not in the flags")
        });
        FlagState {
            footprint_flags: self.whole.flags,
            band_flags: bands.filter(|(_, flags)| flags.iter().any(|&flags| flags != 0)).collect(),
            review: self.review,
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
    let footprints = whole.flags.len();
    Some(bands.entry(name.to_owned()).or_insert_with(|| Plane::new(footprints)))
}

fn reached(person: bool) -> ReviewState {
    if person { ReviewState::DecidedByPerson } else { ReviewState::AssessedByTest }
}

/// How far the granule has come: what the latest standing sign-off, setting aside or reopening
/// says, unless a person changed flags since.
fn granule_state(ordered: &Ordered<'_>) -> GranuleState {
    let mut last = None;
    for (at, decision) in ordered.standing_ones().filter(|(_, decision)| decision.by_person()) {
        match decision.act {
            Act::SignOff { .. } => last = Some((at, GranuleState::SignedOff)),
            Act::SetAside => last = Some((at, GranuleState::SetAside)),
            Act::Reopen => last = Some((at, GranuleState::InHand)),
            _ => {}
        }
    }
    match last {
        Some((at, _)) if changed_since(ordered, at) => GranuleState::InHand,
        Some((_, state)) => state,
        None if touched(ordered) => GranuleState::InHand,
        None => GranuleState::Untouched,
    }
}

/// Whether a person has decided anything that stands. Undoing one's own decisions leaves a granule
/// as untouched as before; taking back a test's is a decision.
fn touched(ordered: &Ordered<'_>) -> bool {
    let mut persons = ordered.standing_ones().filter(|(_, decision)| decision.by_person());
    persons.any(|(_, decision)| match &decision.act {
        Act::Revoke { decision: target } => {
            ordered.decisions.iter().any(|one| one.id == *target && !one.by_person())
        }
        _ => true,
    })
}

/// Whether a person changed flags after the decision at `since`, by a new decision or by taking
/// back, or putting back, an old one.
fn changed_since(ordered: &Ordered<'_>, since: usize) -> bool {
    let changes = |at: usize| ordered.decisions[at].act.changes_flags();
    let by_person = |at: usize| ordered.decisions[at].by_person();
    let count = ordered.decisions.len();
    if (since + 1..count).any(|at| ordered.standing[at] && changes(at) && by_person(at)) {
        return true;
    }
    let mut revokers = (since + 1..count)
        .filter(|&at| by_person(at) && matches!(ordered.decisions[at].act, Act::Revoke { .. }));
    if revokers.next().is_none() {
        return false;
    }
    let before = super::history::standing_among(&ordered.decisions[..=since]);
    (0..since).any(|at| changes(at) && before[at] != ordered.standing[at])
}
