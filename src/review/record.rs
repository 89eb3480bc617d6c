//! What was decided about one granule: everybody's decisions, and the ledger that ours go to.

use std::collections::{BTreeMap, HashSet};
use std::time::Duration;

use jiff::Timestamp;

use crate::flags::{
    Act, Author, Campaign, CampaignError, Counts, Decision, DecisionId, FlagState, GranuleIdentity,
    LedgerEvent, LedgerReading, LedgerWriter, Loss, NotKept, Origin, OwnTimes, Replay, SpotCheck,
    Vocabulary, own_times, read_ledgers, standing,
};

/// The decisions about a granule, their sum, and the writer of our own.
pub struct Record {
    identity: GranuleIdentity,
    vocabulary: Vocabulary,
    person: String,
    footprints: usize,
    writer: LedgerWriter,
    decisions: Vec<Decision>,
    problems: Vec<String>,
    replay: Replay,
    state: FlagState,
    standing: Vec<bool>,
    counts: Counts,
    failure: Option<String>,
}

impl Record {
    /// Reads what was decided and makes ready to write. The ledger file itself is made with the
    /// first decision. `now` and `program` (name and version) go into its head.
    ///
    /// # Errors
    /// The campaign folder cannot be read.
    pub fn open(
        campaign: &Campaign,
        identity: GranuleIdentity,
        author: &Author,
        program: &str,
        now: Timestamp,
    ) -> Result<Record, CampaignError> {
        let LedgerReading { decisions, problems, .. } = read_ledgers(campaign, &identity);
        // Decisions by two ways of counting footprints would keep each other from counting.
        if let Some(other) = problems.iter().find(|one| one.loss == Loss::OtherFootprints) {
            return Err(CampaignError::OtherFootprints(other.to_string()));
        }
        let mut writer = LedgerWriter::start(campaign, &identity, author, program, now)?;
        writer.saw(&decisions);
        let footprints = identity.footprint_count();
        let vocabulary = campaign.settings().vocabulary.clone();
        let replay = Replay::of(footprints, &identity.bands, &decisions, &vocabulary);
        let mut record = Record {
            identity,
            person: author.person.clone(),
            footprints,
            writer,
            decisions,
            problems: problems.iter().map(ToString::to_string).collect(),
            state: replay.state(),
            replay,
            standing: Vec::new(),
            counts: Counts::default(),
            vocabulary,
            failure: None,
        };
        record.sum_up();
        Ok(record)
    }

    /// Hands a decision to the writer and folds it in: the one way to change anything.
    pub(super) fn decide(&mut self, act: Act, why: Option<String>, now: Timestamp) {
        let decision = self.writer.append(Origin::Person, act, why, now);
        let added = self.replay.add(&decision);
        self.decisions.push(decision);
        // The writer tries everything that is pending once more: what it says next counts.
        self.failure = None;
        if added {
            self.standing.push(true);
            self.take_state();
        } else {
            self.fold();
        }
    }

    /// What is decided from now on is a part of this step, or of none.
    pub(super) fn set_step(&mut self, step: Option<String>) {
        self.writer.in_step(step);
    }

    /// Decides as a test, by its name; the caller folds when all is said.
    pub(super) fn decide_as_test(
        &mut self,
        test: &str,
        act: Act,
        why: Option<String>,
        now: Timestamp,
    ) {
        let decision = self.writer.append(Origin::Test(test.to_owned()), act, why, now);
        self.decisions.push(decision);
    }

    /// Folds all decisions anew.
    pub(super) fn fold(&mut self) {
        self.replay =
            Replay::of(self.footprints, &self.identity.bands, &self.decisions, &self.vocabulary);
        self.sum_up();
    }

    fn sum_up(&mut self) {
        self.standing = standing(&self.decisions);
        self.take_state();
    }

    fn take_state(&mut self) {
        self.state = self.replay.state();
        self.counts = self.state.counts(&self.vocabulary);
    }

    /// Takes over what the ledgers hold by now: others may have decided meanwhile. Returns
    /// who, with the number of decisions that were not known here.
    pub fn take_over(&mut self, reading: LedgerReading) -> BTreeMap<String, usize> {
        let known: HashSet<&DecisionId> = self.decisions.iter().map(|one| &one.id).collect();
        let new: Vec<Decision> =
            reading.decisions.into_iter().filter(|one| !known.contains(&one.id)).collect();
        self.problems = reading.problems.iter().map(ToString::to_string).collect();
        let mut whose: BTreeMap<String, usize> = BTreeMap::new();
        for decision in &new {
            *whose.entry(decision.speaker()).or_default() += 1;
        }
        if !new.is_empty() {
            self.writer.saw(&new);
            self.decisions.extend(new);
            self.decisions.sort_by(|one, next| one.order().cmp(&next.order()));
            self.fold();
        }
        whose
    }

    /// Takes over what another record of the same granule has read. Returns whose decisions were not
    /// known here, as [`Record::take_over`] does.
    pub fn take_over_from(&mut self, other: Record) -> BTreeMap<String, usize> {
        let problems = std::mem::take(&mut self.problems);
        let decisions = other.decisions;
        let whose = self.take_over(LedgerReading { decisions, ..LedgerReading::default() });
        self.problems = if other.problems.is_empty() { problems } else { other.problems };
        whose
    }

    /// When its person last decided here.
    pub fn own_times(&self) -> OwnTimes {
        own_times(&self.decisions, &self.person)
    }

    /// Hears what the writer reports. Returns whether anything changed.
    pub fn listen(&mut self) -> bool {
        let events = self.writer.try_events();
        for event in &events {
            self.failure = match event {
                LedgerEvent::Failed { message, .. } => Some(message.clone()),
                LedgerEvent::Kept(_) => None,
            };
        }
        !events.is_empty()
    }

    /// Decisions that are not known to be on the disk.
    pub fn pending(&self) -> usize {
        self.writer.pending().len()
    }

    /// Why the latest decisions could not be written, if they could not.
    pub fn failure(&self) -> Option<&str> {
        self.failure.as_deref()
    }

    /// Tries again to write what could not be written.
    pub fn retry(&mut self) {
        self.failure = None;
        self.writer.retry();
    }

    /// Waits until all is on the disk, for `limit` at the most.
    ///
    /// # Errors
    /// How many decisions are not, and why.
    pub fn close(self, limit: Duration) -> Result<(), NotKept> {
        self.writer.close(limit)
    }

    /// The granule by its content.
    pub fn identity(&self) -> &GranuleIdentity {
        &self.identity
    }

    /// Whose decisions go to the ledger.
    pub fn person(&self) -> &str {
        &self.person
    }

    /// The flags that there are.
    pub fn vocabulary(&self) -> &Vocabulary {
        &self.vocabulary
    }

    /// The flags as they stand.
    pub fn state(&self) -> &FlagState {
        &self.state
    }

    /// How many footprints are in which state.
    pub fn counts(&self) -> &Counts {
        &self.counts
    }

    /// All decisions in their order, everybody's.
    pub fn decisions(&self) -> &[Decision] {
        &self.decisions
    }

    /// For each of them, whether it stands: not taken back, or taken back and put back again.
    pub fn standing(&self) -> &[bool] {
        &self.standing
    }

    /// The spot checks that stand, in their order.
    pub fn spot_checks(&self) -> impl Iterator<Item = &SpotCheck> {
        let standing = self.decisions.iter().zip(&self.standing).filter(|(_, stands)| **stands);
        standing.filter_map(|(decision, _)| match &decision.act {
            Act::SpotCheck(check) if decision.by_person() => Some(check),
            _ => None,
        })
    }

    /// What was wrong with the ledgers, in words.
    pub fn problems(&self) -> &[String] {
        &self.problems
    }
}
