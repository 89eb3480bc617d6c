//! What was decided about one granule: everybody's decisions, and the ledger that ours go to.

use std::time::Duration;

use jiff::Timestamp;

use crate::flags::{
    Act, Author, Campaign, CampaignError, Counts, Decision, DecisionId, FlagState, FootprintSet,
    GranuleIdentity, GranuleState, LedgerEvent, LedgerReading, LedgerWriter, NotKept, Origin,
    Vocabulary, read_ledgers, redo_target, undo_target,
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
    state: FlagState,
    counts: Counts,
    failure: Option<String>,
}

/// Why something was not decided.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
pub enum Refusal {
    /// A flag that the vocabulary does not have.
    #[error("no flag {name}; there are {known}")]
    UnknownFlag {
        /// What was asked for.
        name: String,
        /// What there is.
        known: String,
    },
    /// The selection is empty.
    #[error("nothing is selected")]
    NoFootprints,
    /// None of the footprints carries the flag.
    #[error("none of them carries {0}")]
    NotFlagged(String),
    /// There is nothing to undo.
    #[error("nothing of yours to undo here")]
    NothingToUndo,
    /// There is nothing to redo.
    #[error("nothing to redo")]
    NothingToRedo,
    /// Words are needed and there are none.
    #[error("say why: {0} needs a reason")]
    NoReason(&'static str),
    /// The granule is in that state already.
    #[error("the granule is {0} already")]
    Already(&'static str),
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
        let mut writer = LedgerWriter::start(campaign, &identity, author, program, now)?;
        writer.saw(&decisions);
        let footprints = identity.footprints.iter().map(|(_, length)| length).product();
        let mut record = Record {
            identity,
            vocabulary: campaign.settings().vocabulary.clone(),
            person: author.person.clone(),
            footprints,
            writer,
            decisions,
            problems: problems.iter().map(ToString::to_string).collect(),
            state: FlagState::untouched(footprints),
            counts: Counts::default(),
            failure: None,
        };
        record.fold();
        Ok(record)
    }

    /// Flags footprints.
    ///
    /// # Errors
    /// An unknown flag, or no footprints.
    pub fn flag(
        &mut self,
        flag: &str,
        footprints: &FootprintSet,
        why: Option<String>,
        now: Timestamp,
    ) -> Result<(), Refusal> {
        self.mask_of(flag)?;
        some(footprints)?;
        let footprints = footprints.clone();
        self.decide(Act::Flag { flag: flag.to_owned(), footprints, bands: None }, why, now);
        Ok(())
    }

    /// Withdraws a flag from those of the footprints that carry it. Returns how many those were.
    ///
    /// # Errors
    /// An unknown flag, no footprints, or none that carries the flag.
    pub fn withdraw(
        &mut self,
        flag: &str,
        footprints: &FootprintSet,
        why: Option<String>,
        now: Timestamp,
    ) -> Result<usize, Refusal> {
        let mask = self.mask_of(flag)?;
        some(footprints)?;
        let carrying: FootprintSet =
            footprints.iter().filter(|one| self.state.any_flags(*one) & mask != 0).collect();
        if carrying.is_empty() {
            return Err(Refusal::NotFlagged(flag.to_owned()));
        }
        let count = carrying.len();
        let act = Act::Withdraw { flag: flag.to_owned(), footprints: carrying, bands: None };
        self.decide(act, why, now);
        Ok(count)
    }

    /// Writes down that footprints were looked at and stand as they are.
    ///
    /// # Errors
    /// No footprints.
    pub fn assess(
        &mut self,
        footprints: &FootprintSet,
        why: Option<String>,
        now: Timestamp,
    ) -> Result<(), Refusal> {
        some(footprints)?;
        self.decide(Act::Assess { footprints: footprints.clone() }, why, now);
        Ok(())
    }

    /// Writes down words about footprints, or about the whole granule where there are none.
    ///
    /// # Errors
    /// No words.
    pub fn comment(
        &mut self,
        footprints: &FootprintSet,
        words: &str,
        now: Timestamp,
    ) -> Result<(), Refusal> {
        let words = reason(words, "a remark")?;
        self.decide(Act::Comment { footprints: footprints.clone() }, Some(words), now);
        Ok(())
    }

    /// Takes back the person's latest decision that stands. Returns it.
    ///
    /// # Errors
    /// There is none.
    pub fn undo(&mut self, now: Timestamp) -> Result<Decision, Refusal> {
        let target = undo_target(&self.decisions, &self.person).ok_or(Refusal::NothingToUndo)?;
        let undone = self.named(&target).ok_or(Refusal::NothingToUndo)?;
        self.decide(Act::Revoke { decision: target }, None, now);
        Ok(undone)
    }

    /// Takes back the person's latest undo. Returns the decision that stands again.
    ///
    /// # Errors
    /// There is none, or something else was decided since.
    pub fn redo(&mut self, now: Timestamp) -> Result<Decision, Refusal> {
        let target = redo_target(&self.decisions, &self.person).ok_or(Refusal::NothingToRedo)?;
        let undo = self.named(&target).ok_or(Refusal::NothingToRedo)?;
        let Act::Revoke { decision } = &undo.act else { return Err(Refusal::NothingToRedo) };
        let again = self.named(decision).ok_or(Refusal::NothingToRedo)?;
        self.decide(Act::Revoke { decision: target }, None, now);
        Ok(again)
    }

    /// Signs the granule off. With `rest_looked_at`, the footprints without flag and assessment
    /// count as looked at and usable from now on.
    ///
    /// # Errors
    /// It is signed off already.
    pub fn sign_off(&mut self, rest_looked_at: bool, now: Timestamp) -> Result<(), Refusal> {
        if self.state.granule == GranuleState::SignedOff {
            return Err(Refusal::Already(GranuleState::SignedOff.name()));
        }
        let rest_assessed = if rest_looked_at { self.state.rest() } else { FootprintSet::empty() };
        let counts = &self.counts;
        let summary = format!(
            "{} footprints: {} flagged, {} no flag, {} not assessed",
            counts.footprints,
            counts.flagged,
            counts.no_flag + rest_assessed.len(),
            counts.not_assessed - rest_assessed.len().min(counts.not_assessed)
        );
        self.decide(Act::SignOff { rest_assessed, summary }, None, now);
        Ok(())
    }

    /// Sets the granule aside.
    ///
    /// # Errors
    /// No reason, or it is set aside already.
    pub fn set_aside(&mut self, why: &str, now: Timestamp) -> Result<(), Refusal> {
        if self.state.granule == GranuleState::SetAside {
            return Err(Refusal::Already(GranuleState::SetAside.name()));
        }
        let why = reason(why, "setting aside")?;
        self.decide(Act::SetAside, Some(why), now);
        Ok(())
    }

    /// Takes a granule that was signed off or set aside in hand again.
    ///
    /// # Errors
    /// It is in hand, or nothing was decided yet.
    pub fn reopen(&mut self, now: Timestamp) -> Result<(), Refusal> {
        match self.state.granule {
            GranuleState::SignedOff | GranuleState::SetAside => {
                self.decide(Act::Reopen, None, now);
                Ok(())
            }
            state => Err(Refusal::Already(state.name())),
        }
    }

    fn decide(&mut self, act: Act, why: Option<String>, now: Timestamp) {
        let decision = self.writer.append(Origin::Person, act, why, now);
        self.decisions.push(decision);
        self.fold();
    }

    fn fold(&mut self) {
        self.state = FlagState::replay(self.footprints, &self.decisions, &self.vocabulary);
        self.counts = self.state.counts(&self.vocabulary);
    }

    fn mask_of(&self, flag: &str) -> Result<u32, Refusal> {
        use crate::flags::Scope::Footprint;
        match self.vocabulary.by_name(flag) {
            Some(kind) if kind.scope == Footprint => Ok(kind.mask()),
            _ => {
                let kinds = self.vocabulary.of_scope(Footprint);
                let names: Vec<&str> = kinds.iter().map(|kind| kind.name.as_str()).collect();
                Err(Refusal::UnknownFlag { name: flag.to_owned(), known: names.join(", ") })
            }
        }
    }

    fn named(&self, id: &DecisionId) -> Option<Decision> {
        self.decisions.iter().rev().find(|decision| decision.id == *id).cloned()
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

    /// What was wrong with the ledgers, in words.
    pub fn problems(&self) -> &[String] {
        &self.problems
    }
}

fn some(footprints: &FootprintSet) -> Result<(), Refusal> {
    if footprints.is_empty() { Err(Refusal::NoFootprints) } else { Ok(()) }
}

fn reason(words: &str, what: &'static str) -> Result<String, Refusal> {
    let words = words.trim();
    if words.is_empty() { Err(Refusal::NoReason(what)) } else { Ok(words.to_owned()) }
}
