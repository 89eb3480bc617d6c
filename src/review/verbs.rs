//! The verbs by which anything is decided about a granule; keys use them, and batches will.

use jiff::Timestamp;

use super::record::Record;
use crate::flags::{
    Act, Decision, DecisionId, FootprintSet, GranuleState, Scope, SpotCheck, redo_target,
    undo_target,
};

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
    /// The tests say nothing about any of them.
    #[error("the tests could assess none of them: nothing is suggested")]
    NothingSuggested,
    /// The tests suggest no flag for any of them.
    #[error("the tests suggest no flag here: give one instead")]
    NothingToOverrule,
    /// No channel is selected.
    #[error("no channel is selected")]
    NoChannels,
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
            footprints.iter().filter(|one| self.state().any_flags(*one) & mask != 0).collect();
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
        let target = undo_target(self.decisions(), self.person()).ok_or(Refusal::NothingToUndo)?;
        let undone = self.named(&target).ok_or(Refusal::NothingToUndo)?;
        self.as_part_of(undone.step.clone(), |record| {
            record.decide(Act::Revoke { decision: target }, None, now);
            Ok(undone)
        })
    }

    /// Takes back the person's latest undo. Returns the decision that stands again.
    ///
    /// # Errors
    /// There is none, or something else was decided since.
    pub fn redo(&mut self, now: Timestamp) -> Result<Decision, Refusal> {
        let target = redo_target(self.decisions(), self.person()).ok_or(Refusal::NothingToRedo)?;
        let undo = self.named(&target).ok_or(Refusal::NothingToRedo)?;
        let Act::Revoke { decision } = &undo.act else { return Err(Refusal::NothingToRedo) };
        let again = self.named(decision).ok_or(Refusal::NothingToRedo)?;
        self.as_part_of(again.step.clone(), |record| {
            record.decide(Act::Revoke { decision: target }, None, now);
            Ok(again)
        })
    }

    /// Signs the granule off. With `rest_looked_at`, the footprints without flag and assessment
    /// count as looked at and usable from now on.
    ///
    /// # Errors
    /// It is signed off already.
    pub fn sign_off(&mut self, rest_looked_at: bool, now: Timestamp) -> Result<(), Refusal> {
        if self.state().granule == GranuleState::SignedOff {
            return Err(Refusal::Already(GranuleState::SignedOff.name()));
        }
        let rest_assessed = if rest_looked_at {
            self.state().rest(self.vocabulary())
        } else {
            FootprintSet::empty()
        };
        let counts = self.counts();
        // Those with a flag that excludes nothing are counted as flagged already.
        let unflagged = rest_assessed.iter().filter(|at| self.state().any_flags(*at) == 0).count();
        let summary = format!(
            "{} footprints: {} flagged, {} no flag, {} not assessed; {} decided by persons, {} by \
             tests alone, {} in doubt",
            counts.footprints,
            counts.flagged,
            counts.no_flag + unflagged,
            counts.not_assessed - unflagged.min(counts.not_assessed),
            counts.by_person + rest_assessed.len(),
            counts.by_test,
            counts.in_doubt
        );
        self.decide(Act::SignOff { rest_assessed, summary }, None, now);
        Ok(())
    }

    /// Keeps what a spot check showed.
    pub fn spot_check(&mut self, check: SpotCheck, now: Timestamp) {
        self.decide(Act::SpotCheck(check), None, now);
    }

    /// Sets the granule aside.
    ///
    /// # Errors
    /// No reason, or it is set aside already.
    pub fn set_aside(&mut self, why: &str, now: Timestamp) -> Result<(), Refusal> {
        if self.state().granule == GranuleState::SetAside {
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
        match self.state().granule {
            GranuleState::SignedOff | GranuleState::SetAside => {
                self.decide(Act::Reopen, None, now);
                Ok(())
            }
            state => Err(Refusal::Already(state.name())),
        }
    }

    fn mask_of(&self, flag: &str) -> Result<u32, Refusal> {
        match self.vocabulary().by_name(flag) {
            Some(kind) if kind.scope == Scope::Footprint => Ok(kind.mask()),
            _ => {
                let kinds = self.vocabulary().of_scope(Scope::Footprint);
                let names: Vec<&str> = kinds.iter().map(|kind| kind.name.as_str()).collect();
                Err(Refusal::UnknownFlag { name: flag.to_owned(), known: names.join(", ") })
            }
        }
    }

    /// Takes a decision back, whoever made it, or puts back one that was taken back. Returns whether
    /// it was taken back, and the decision.
    ///
    /// # Errors
    /// There is no such decision.
    pub fn turn(&mut self, id: &DecisionId, now: Timestamp) -> Result<(bool, Decision), Refusal> {
        let named = self.decisions().iter().zip(self.standing()).rev();
        let found = named.clone().find(|(one, _)| one.id == *id);
        let Some((decision, stands)) = found.map(|(one, stands)| (one.clone(), *stands)) else {
            return Err(Refusal::NothingToUndo);
        };
        if stands {
            self.decide(Act::Revoke { decision: id.clone() }, None, now);
            return Ok((true, decision));
        }
        // All undos of it that stand have to go, or it would stay taken back.
        let undos: Vec<DecisionId> = named
            .filter(|(_, stands)| **stands)
            .filter(|(one, _)| matches!(&one.act, Act::Revoke { decision } if decision == id))
            .map(|(one, _)| one.id.clone())
            .collect();
        for undo in undos {
            self.decide(Act::Revoke { decision: undo }, None, now);
        }
        Ok((false, decision))
    }

    /// The decision that an undo or a redo takes back or puts back; another decision itself.
    pub fn meant_by<'d>(&'d self, decision: &'d Decision) -> Option<&'d Decision> {
        let mut meant = decision;
        // An undo, or a redo of an undo; longer chains nobody makes.
        for _ in 0..2 {
            let Act::Revoke { decision } = &meant.act else { break };
            meant = self.decisions().iter().rev().find(|one| one.id == *decision)?;
        }
        Some(meant)
    }

    fn named(&self, id: &DecisionId) -> Option<Decision> {
        self.decisions().iter().rev().find(|decision| decision.id == *id).cloned()
    }
}

fn some(footprints: &FootprintSet) -> Result<(), Refusal> {
    if footprints.is_empty() { Err(Refusal::NoFootprints) } else { Ok(()) }
}

fn reason(words: &str, what: &'static str) -> Result<String, Refusal> {
    let words = words.trim();
    if words.is_empty() { Err(Refusal::NoReason(what)) } else { Ok(words.to_owned()) }
}
